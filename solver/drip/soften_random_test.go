package drip_test

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/state"
)

// Random columns of up to five layers, strengths six decades apart, n up to 8, strained
// or not: a descent has a time, finite or not. In one of a hundred, strained and with n = 8,
// flow and viscosities may not settle, which is an error that says so; NaN never comes out.
func TestSoftRandomColumns(t *testing.T) {
	if testing.Short() {
		t.Skip("one goroutine, and minutes under the race detector")
	}
	r := rand.New(rand.NewPCG(7, 11))
	unsettled := 0
	for range 60 {
		rock := func() column.Rock {
			n := []float64{1, 2, 3.5, 8}[r.IntN(4)]
			top := math.Pow(10, 18+6*r.Float64())
			return column.Rock{Density: column.Uniform(2700 + 800*r.Float64()),
				Viscosity: column.Viscosity{Top: top, Bottom: top * math.Exp(4*r.NormFloat64()), Exponent: n, Factor: 1}}
		}
		c := &column.Column{Gravity: 9.81, Surface: column.Surface{Boundary: []column.Boundary{column.Free, column.FreeSlip, column.Rigid}[r.IntN(3)]},
			Base: column.Base{Boundary: []column.Boundary{column.HalfSpace, column.Inviscid}[r.IntN(2)], Rock: rock()}}
		n := 1 + r.IntN(5)
		for i := range n {
			c.Layers = append(c.Layers, column.Layer{Name: string(rune('a' + i)), Thickness: 3e3 + 30e3*r.Float64(), Root: i == n-1, Rock: rock()})
		}
		s, err := state.New(c, 1e-15)
		if err != nil {
			t.Fatal(err)
		}
		var b drip.Background
		if r.IntN(3) == 0 {
			b = drip.Background{ExtensionRate: 1e-15 * (2*r.Float64() - 1), AlongStrike: r.IntN(2) == 0}
		}
		f := newSoft(t, s, b)
		for range 3 {
			wavelength := 3e3 * math.Pow(300, r.Float64())
			d, err := f.Time(2*math.Pi/wavelength, 100, 3e3, drip.Horizon)
			if err != nil && b != (drip.Background{}) && strings.Contains(err.Error(), "do not settle") {
				if unsettled++; unsettled > 2 {
					t.Error(err)
				}
				continue
			}
			if err != nil || math.IsNaN(d.Time) || !(d.Time > 0) {
				t.Errorf("%d layers, %+v, %.3g m: %g s, %d steps, %v", n, b, wavelength, d.Time, d.Steps, err)
			}
		}
	}
}
