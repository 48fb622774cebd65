package column

import (
	"math"
	"strings"
	"testing"
)

// TestVarying: at every depth it is Of at that place and share, and its gradient is the
// difference quotient of At at fixed T and P. Source: definition.
func TestVarying(t *testing.T) {
	of := Reaction{Protolith: Linear{Top: 2800, Bottom: 3000}, Product: EquationOfState{Reference: 3400, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15}, Cap: 0.9}
	v := Varying{Of: of, Depth: []float64{0, 0.3, 1}, Place: []float64{0.2, 0.4, 1}, Extent: []float64{0, 0.6, 0.8}}
	if err := v.Validate(); err != nil {
		t.Fatal(err)
	}
	const T, P, h = 1100, 1.2e9, 1e-5
	if got, want := v.At(T, P, 0.3), of.AtExtent(T, P, 0.4, 0.6); got != want {
		t.Errorf("ρ = %g, want %g", got, want)
	}
	if a, b := v.Gradient(T, P, 0.3-1e-9), v.Gradient(T, P, 0.3+1e-9); math.Abs(a/b-1) > 1e-6 {
		t.Errorf("the gradient jumps from %g to %g", a, b)
	}
	for _, wrong := range []Varying{{Of: of}, {Of: of, Depth: v.Depth, Place: v.Place}, {Of: of, Depth: []float64{0, 0}, Place: []float64{0, 1}, Extent: []float64{0, 0}}, {Of: Uniform(3000), Depth: v.Depth, Place: v.Place, Extent: v.Extent}} {
		if wrong.Validate() == nil {
			t.Errorf("%+v is taken", wrong)
		}
	}
	for _, x := range []float64{0.1, 0.25, 0.5, 0.9} {
		want := (v.At(T, P, x+h) - v.At(T, P, x-h)) / (2 * h)
		if got := v.Gradient(T, P, x); math.Abs(got/want-1) > 1e-6 {
			t.Errorf("gradient at %g: %g, want %g", x, got, want)
		}
		if got, want := v.PerKelvin(T, P, x), (v.At(T+1, P, x)-v.At(T-1, P, x))/2; math.Abs(got/want-1) > 1e-6 {
			t.Errorf("∂ρ/∂T at %g: %g, want %g", x, got, want)
		}
		if got, want := v.PerPascal(T, P, x), (v.At(T, P+1e6, x)-v.At(T, P-1e6, x))/2e6; math.Abs(got/want-1) > 1e-6 {
			t.Errorf("∂ρ/∂P at %g: %g, want %g", x, got, want)
		}
	}
	if p := Parts(Molten{Solid: v}); len(p) != 2 || p[0] != of.Protolith || p[1] != of.Product {
		t.Errorf("parts %v", p)
	}
	if d, place := v.Here(0.3); d.At(T, P, place) != v.At(T, P, 0.3) || place != 0.4 || math.Abs(d.(Reaction).Extent-0.6) > 1e-15 {
		t.Errorf("at 0.3: %+v at %g", d, place)
	}
	of.Kinetics = &Kinetics{Prefactor: 1, ActivationEnergy: 1e5}
	v.Of = of
	if c := v.Cautions(); len(c) != 1 || !strings.Contains(c[0], "0 to 0.8 of the mass by depth") {
		t.Errorf("cautions %q", c)
	}
	if !v.NeedsTemperature() {
		t.Error("it needs a temperature")
	}
}
