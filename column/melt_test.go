package column_test

import (
	"math"
	"testing"

	"keelfall/column"
)

// TestMeltingAdiabat: rock that rises without exchanging heat and does not expand keeps
// c_p T + L φ (derived, first law). It starts on its solidus at 3 GPa and has
// melted in part at 1 GPa.
func TestMeltingAdiabat(t *testing.T) {
	r := column.Rock{Density: column.Uniform(3300), HeatCapacity: 1100,
		Melt: &column.Melt{Solidus: &column.Curve{Surface: 1400, Slope: 130e-9}, Liquidus: &column.Curve{Surface: 2000, Slope: 50e-9}, LatentHeat: 5e5}}
	const from, steps = 3e9, 20000
	T := r.Melt.Solidus.At(from)
	start := r.HeatCapacity * T
	h := (1e9 - from) / steps
	for i := range steps { // midpoints
		P := from + h*float64(i)
		mid := T + h/2*r.Adiabat(T, P, 0)
		T += h * r.Adiabat(mid, P+h/2, 0)
	}
	phi, slope := r.Melt.At(T, 1e9)
	if kept := r.HeatCapacity*T + r.Melt.LatentHeat*phi; !(phi > 0.1) || math.Abs(kept-start) > 1e-9*start {
		t.Errorf("φ %g, c_p T + L φ from %.9g to %.9g J/kg", phi, start, kept)
	}
	if got, want := r.ApparentHeatCapacity(T, 1e9), 1100+5e5*slope; got != want {
		t.Errorf("apparent heat capacity %g, want %g J/kg/K", got, want)
	}
	// Without melting, α T/(ρ c_p): McKenzie & Bickle 1988 (form from memory).
	r.Melt, r.Density = nil, column.EquationOfState{Reference: 3300, Expansivity: 3e-5, ReferenceTemperature: 1600}
	if got, want := r.Adiabat(1600, 1e9, 0), 3e-5*1600/(3300*1100.0); math.Abs(got-want) > 1e-12*want {
		t.Errorf("adiabat %g, want %g K/Pa", got, want)
	}
}
