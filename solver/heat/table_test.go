package heat_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"
)

func curveTable(t testing.TB, rows ...column.CurvePoint) *column.Curve {
	t.Helper()
	tab, err := column.NewCurveTable("wet.csv", rows)
	if err != nil {
		t.Fatal(err)
	}
	return &column.Curve{Table: tab}
}

// TestTabulatedStefan: rock at its liquidus freezes under a cold surface. Tables of the
// curves give what the curves give to the last bit: their rows are such that no sum rounds
// otherwise. Less would say nothing: one digit more or less in the last place of a solidus
// makes other cells split and join, and changes λ by 6e-5 at this tolerance (measured).
func TestTabulatedStefan(t *testing.T) {
	const hot, dT, h, end = 1200.0, 500.0, 20e3, 0.5 * myr
	lambda := func(solidus, liquidus *column.Curve) float64 {
		rock := granite("rock", h)
		rock.HeatCapacity, rock.Conductivity = 1000, column.Conductivity{Reference: 3}
		rock.Density = column.Uniform(3000)
		rock.Melt = &column.Melt{Solidus: solidus, Liquidus: liquidus, LatentHeat: 1000 * dT}
		c := cooled(hot, hot, rock)
		isothermal(c, hot)
		c.Surface.Temperature = hot - dT
		ev := begin(t, heat.Plan{Column: c, Tolerance: 0.2})
		advance(t, ev, end)
		balanced(t, ev)
		return math.Erfinv(3 * dT / (ev.SurfaceFlow() * math.Sqrt(math.Pi*3/(3000*1000)*end)))
	}
	const step = 1 << 27 // Pa, so that a share of it is exact
	table := func(c *column.Curve) *column.Curve {
		var rows []column.CurvePoint
		for i := range 8 { // to 0.94 GPa; the column has 0.59
			rows = append(rows, column.CurvePoint{P: step * float64(i), T: c.At(step * float64(i))})
		}
		return curveTable(t, rows...)
	}
	for _, slope := range []float64{0, 1.0 / (1 << 30)} { // K/Pa; 0.9 K/GPa of 2 K of melting
		s, l := &column.Curve{Surface: hot - 2, Slope: slope}, &column.Curve{Surface: hot, Slope: slope}
		line, tabulated := lambda(s, l), lambda(table(s), table(l))
		if tabulated != line {
			t.Errorf("slope %g: λ = %.16g by tables, %.16g by lines", slope, tabulated, line)
		}
		// Stefan, L/(cΔT) = 1: √π λ exp(λ²) erf λ = 1 (derived), and what the 2 K cost.
		if slope == 0 && !close(tabulated, 0.6200626333, 2e-3) {
			t.Errorf("λ = %g", tabulated)
		}
		if slope != 0 && close(tabulated, 0.6200626333, 4e-3) {
			t.Errorf("slope %g: λ = %g; the slope does not count", slope, tabulated)
		}
	}
}

// TestTabulatedAdiabat: rock that hardly conducts, compressed through a corner of its
// solidus while it melts, goes along Rock.Adiabat, integrated apart with a step that ends
// at the corner.
func TestTabulatedAdiabat(t *testing.T) {
	a := granite("a", 100e3)
	a.Conductivity.Reference = 1e-6
	a.Density = column.EquationOfState{Reference: 3300, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15}
	const corner = 2.4e9
	a.Melt = &column.Melt{Solidus: curveTable(t, column.CurvePoint{P: 0, T: 1700}, column.CurvePoint{P: corner, T: 1450}, column.CurvePoint{P: 7e9, T: 1500}),
		Liquidus: &column.Curve{Surface: 2300, Slope: -1e-7}, LatentHeat: 4e5}
	a.Density = column.Molten{Solid: a.Density, Melt: a.Melt}
	c := cooled(1600, 1600, a)
	isothermal(c, 1600)
	ev := begin(t, heat.Plan{Column: c, Tolerance: 0.01, Markers: []heat.Marker{{Name: "m", Depth: 50e3}},
		Events: []heat.Event{{Verb: "stretch", To: myr, Rate: -math.Ln2 / myr}}})
	advance(t, ev, myr)
	p := ev.Paths()[0]
	last := len(p.T) - 1
	T := p.T[0]
	follow := func(from, to float64) {
		const n = 20000
		d := (to - from) / n
		for i := range n {
			P := from + d*float64(i)
			mid := T + d/2*a.Adiabat(T, P, 0)
			T += d * a.Adiabat(mid, P+d/2, 0)
		}
	}
	follow(p.P[0], corner)
	follow(corner, p.P[last])
	phi, _ := a.Melt.At(T, p.P[last])
	if !(p.P[0] < corner && p.P[last] > corner && phi > 0.05 && phi < 0.95) {
		t.Fatalf("%g to %g Pa with φ = %g: the corner is not passed", p.P[0], p.P[last], phi)
	}
	if math.Abs(p.T[last]-T) > 0.05 {
		t.Errorf("%g K, want %g K", p.T[last], T)
	}
	balanced(t, ev)
}

// TestLeavesTheTable: rock that is buried below the last row stops the run, with the time,
// the layer, the pressure and the table, after the first row too.
func TestLeavesTheTable(t *testing.T) {
	for _, c := range []struct {
		event heat.Event
		rows  []column.CurvePoint
		want  string
	}{
		{heat.Event{Verb: "stretch", To: 10 * myr, Rate: -0.1 / myr}, []column.CurvePoint{{P: 0, T: 1200}, {P: 0.8e9, T: 1250}}, "lies outside the table wet.csv, which covers 0 to 0.8 GPa; nothing is extrapolated"},
		{heat.Event{Verb: "erode", To: 10 * myr, Rate: 1e3 / myr}, []column.CurvePoint{{P: 0.12e9, T: 1200}, {P: 1.2e9, T: 1250}}, "lies outside the table wet.csv, which covers 0.12 to 1.2 GPa; nothing is extrapolated"},
	} {
		top, low := granite("top", 10e3), granite("low", 10e3)
		low.Melt = &column.Melt{Solidus: curveTable(t, c.rows...), Liquidus: &column.Curve{Surface: 1500}, LatentHeat: 4e5}
		ev := begin(t, heat.Plan{Column: cooled(300, 900, top, low), Events: []heat.Event{c.event}})
		err := ev.Advance(context.Background(), 10*myr)
		var outside *column.OutsideError
		if err == nil || !errors.As(err, &outside) || !strings.HasPrefix(err.Error(), "heat: low at ") || !strings.HasSuffix(err.Error(), c.want) || strings.Contains(err.Error(), " at 0 Myr") {
			t.Errorf("%s: %v, want %q", c.event.Verb, err, c.want)
		}
	}
}
