package column_test

import (
	"math"
	"strings"
	"testing"

	"keelfall/column"

	"pgregory.net/rapid"
)

// gabbro and garnetRock are invented modes.
func gabbro(t *testing.T) *column.Modes {
	return modes(t, false, column.Mode{Mineral: "anorthite", Share: 0.35}, column.Mode{Mineral: "albite", Share: 0.15}, column.Mode{Mineral: "diopside", Share: 0.3}, column.Mode{Mineral: "enstatite", Share: 0.2})
}

func garnetRock(t *testing.T) *column.Modes {
	return modes(t, false, column.Mode{Mineral: "diopside", Share: 0.5}, column.Mode{Mineral: "pyrope", Share: 0.3}, column.Mode{Mineral: "almandine", Share: 0.2})
}

// TestReactionEnds: nothing reacted is the protolith, all of it the product, and half
// the mass has half of each volume.
func TestReactionEnds(t *testing.T) {
	a, b := gabbro(t), garnetRock(t)
	r := column.Reaction{Protolith: a, Product: b, Cap: 1}
	const T, P = 1073.15, 1.2e9
	at0, at1 := a.At(T, P, 0), b.At(T, P, 0)
	if got := r.At(T, P, 0); got != at0 {
		t.Errorf("X = 0: %g, want %g", got, at0)
	}
	if got := r.WithExtent(1).At(T, P, 0); !close(got, at1, 1e-15) {
		t.Errorf("X = 1: %g, want %g", got, at1)
	}
	if got := r.WithExtent(0.5).At(T, P, 0); !close(1/got, 0.5/at0+0.5/at1, 1e-15) || got != r.AtExtent(T, P, 0, 0.5) {
		t.Errorf("X = 1/2: %g", got)
	}
	if r.PerKelvin(T, P, 0) != a.PerKelvin(T, P, 0) || !close(r.WithExtent(1).PerPascal(T, P, 0), b.PerPascal(T, P, 0), 1e-14) {
		t.Error("derivatives of the end-members")
	}
	if !r.NeedsTemperature() || r.WithExtent(0.4).Gradient(T, P, 0.3) != 0 || r.Validate() != nil {
		t.Error("temperature, gradient or validity")
	}
	// Two compositional gradients mix by volume of mass: d(1/ρ) = Σ X d(1/ρ_i).
	g := column.Reaction{Protolith: column.Linear{Top: 2800, Bottom: 2900}, Product: column.Uniform(3500), Extent: 0.25, Cap: 0.8}
	at := g.At(0, 0, 0.5)
	if want := 0.75 * 100 / (2850 * 2850) * at * at; !close(g.Gradient(0, 0, 0.5), want, 1e-14) || g.NeedsTemperature() {
		t.Errorf("gradient %g, want %g", g.Gradient(0, 0, 0.5), want)
	}
}

// TestReactionKinetics: dX/dt integrated at one T is Cap − (Cap − X₀) exp(−kt); nothing
// happens where the product is not stable, and never backwards.
func TestReactionKinetics(t *testing.T) {
	r := column.Reaction{Protolith: column.Uniform(2900), Product: column.Uniform(3450), Cap: 0.8,
		Field:    &column.StabilityField{Above: 1e9, Slope: 1.2e6, At: 1073.15},
		Kinetics: &column.Kinetics{Prefactor: 2e-5, ActivationEnergy: 210e3}}
	const T, x0 = 1073.15, 0.1
	k := 2e-5 * math.Exp(-210e3/(8.31446261815324*T))
	end := 2 / k
	steps := 400
	X, h := x0, end/float64(steps)
	for range steps { // classical Runge–Kutta: (kh)⁴/120 of a relative step, 5e-12
		a := r.Rate(T, X)
		b := r.Rate(T, X+a*h/2)
		c := r.Rate(T, X+b*h/2)
		d := r.Rate(T, X+c*h)
		X += h / 6 * (a + 2*b + 2*c + d)
	}
	if want := 0.8 - (0.8-x0)*math.Exp(-2); !close(X, want, 1e-11) {
		t.Errorf("X = %.15g, want %.15g", X, want)
	}
	if r.Rate(T, 0.8) != 0 || r.Rate(T, 0.9) != 0 || (column.Reaction{Cap: 1}).Rate(T, 0) != 0 {
		t.Error("a rate at the cap, beyond it, or without kinetics")
	}
	for _, c := range []struct {
		T, P   float64
		stable bool
	}{{1073.15, 1e9, true}, {1073.15, 0.999e9, false}, {1173.15, 1.119e9, false}, {1173.15, 1.121e9, true}, {973.15, 0.881e9, true}} {
		if r.Stable(c.T, c.P) != c.stable {
			t.Errorf("stable at %g K, %g Pa: %v", c.T, c.P, !c.stable)
		}
	}
	if !(column.Reaction{}).Stable(300, 0) {
		t.Error("without a field the product is stable")
	}
	if c := strings.Join(r.Cautions(), ""); !strings.Contains(c, "throughout the layer, stays as it is in spectrum, mode and column; history, the drip and excise follow it") {
		t.Error(c)
	}
	still := r
	still.Kinetics = nil
	if c := strings.Join(still.Cautions(), ""); !strings.Contains(c, "has no effect without a rate") {
		t.Error(c)
	}
	if still.Field = nil; len(still.Cautions()) != 0 {
		t.Error(still.Cautions())
	}
}

func TestReactionInvalid(t *testing.T) {
	good := column.Reaction{Protolith: column.Uniform(2900), Product: column.Uniform(3450), Extent: 0.5, Cap: 0.8}
	for want, spoil := range map[string]func(*column.Reaction){
		"extent 0.9, cap 0.8":                func(r *column.Reaction) { r.Extent = 0.9 },
		"extent NaN":                         func(r *column.Reaction) { r.Extent = math.NaN() },
		"cap 1.2":                            func(r *column.Reaction) { r.Cap = 1.2 },
		"protolith: no density":              func(r *column.Reaction) { r.Protolith = nil },
		"product: density -1 kg/m³":          func(r *column.Reaction) { r.Product = column.Uniform(-1) },
		"prefactor -1 1/s":                   func(r *column.Reaction) { r.Kinetics = &column.Kinetics{Prefactor: -1} },
		"product stable above NaN Pa at 0 K": func(r *column.Reaction) { r.Field = &column.StabilityField{Above: math.NaN()} },
	} {
		r := good
		spoil(&r)
		if err := r.Validate(); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%v, want %q", err, want)
		}
	}
	tab, err := column.NewTable(rows(func(_, _ float64) float64 { return 3300 }))
	if err != nil {
		t.Fatal(err)
	}
	good.Product = tab // to 3 GPa
	if good.Covers(900, 4e9) == nil || good.WithExtent(0).Covers(900, 4e9) != nil || good.Covers(900, 1e9) != nil || len(good.Kinks()) != 2 {
		t.Error("a reaction is where the parts it has are")
	}
	if p := column.Parts(column.Molten{Solid: good}); len(p) != 2 || p[0] != column.Uniform(2900) || p[1] != column.Density(tab) {
		t.Errorf("parts %v", p)
	}
}

// TestMelt: 0 at the solidus, 1 at the liquidus, linear between; a given fraction is
// what it is; no melt is none.
func TestMelt(t *testing.T) {
	m := &column.Melt{Solidus: &column.Curve{Surface: 1300, Slope: 1e-7}, Liquidus: &column.Curve{Surface: 1500, Slope: 8e-8}}
	const P = 1e9 // solidus 1400, liquidus 1580 K
	for _, c := range []struct{ T, phi, perKelvin float64 }{{1399, 0, 0}, {1400, 0, 1 / 180.0}, {1490, 0.5, 1 / 180.0}, {1580, 1, 0}, {1700, 1, 0}} {
		if phi, d := m.At(c.T, P); !close(phi, c.phi, 1e-14) || !close(d, c.perKelvin, 1e-14) {
			t.Errorf("%g K: φ = %g, dφ/dT = %g; want %g, %g", c.T, phi, d, c.phi, c.perKelvin)
		}
	}
	if m.Covers(P) != nil || m.Covers(9.9e9) != nil || m.Covers(10e9) == nil || m.Validate() != nil {
		t.Error("the curves meet at 10 GPa")
	}
	if err := m.Covers(12e9); err == nil || err.Error() != "melt: the solidus, 2226.85 degC, is not below the liquidus, 2186.85 degC, at P = 12 GPa" {
		t.Error(err)
	}
	var none *column.Melt
	if phi, d := none.At(2000, 0); phi != 0 || d != 0 || none.NeedsTemperature() || none.Covers(0) != nil || none.Kinks() != nil {
		t.Error("no melt")
	}
	for want, bad := range map[string]column.Melt{
		"belong together":        {Solidus: m.Solidus},
		"fraction 1.1":           {Fraction: 1.1},
		"is not below the liqui": {Solidus: m.Liquidus, Liquidus: m.Solidus},
		"weakening -1":           {Weakening: -1},
		"solidus NaN K":          {Solidus: &column.Curve{Surface: math.NaN()}, Liquidus: m.Liquidus},
	} {
		if err := bad.Validate(); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%v, want %q", err, want)
		}
	}
}

// TestMoltenEnds: no melt is the solid, all melt the melt, and (1 − φ)ρ_s + φρ_m between.
func TestMoltenEnds(t *testing.T) {
	solid := garnetRock(t)
	of := func(phi float64) column.Molten {
		return column.Molten{Solid: solid, Melt: &column.Melt{Fraction: phi, Density: 2750}}
	}
	const T, P = 1300, 1.5e9
	a := solid.At(T, P, 0)
	if of(0).At(T, P, 0) != a || !close(of(1).At(T, P, 0), 2750, 1e-15) || !close(of(0.1).At(T, P, 0), 0.9*a+275, 1e-15) || of(0.1).AtFraction(T, P, 0, 0) != a {
		t.Error("density")
	}
	if got := of(0.1).PerKelvin(T, P, 0); !close(got, 0.9*solid.PerKelvin(T, P, 0), 1e-14) {
		t.Errorf("∂ρ/∂T %g", got)
	}
	if g := (column.Molten{Solid: column.Linear{Top: 3000, Bottom: 3100}, Melt: of(0.1).Melt}).Gradient(T, P, 0.5); !close(g, 90, 1e-14) {
		t.Errorf("gradient %g", g)
	}
	light := column.Molten{Solid: solid, Melt: &column.Melt{Fraction: 0.5}}
	if light.At(T, P, 0) != a || light.PerKelvin(T, P, 0) != solid.PerKelvin(T, P, 0) || light.PerPascal(T, P, 0) != solid.PerPascal(T, P, 0) || light.Gradient(T, P, 0) != 0 {
		t.Error("a melt without a density changes it")
	}
	if (column.Molten{Solid: solid, Melt: &column.Melt{Fraction: 2}}).Validate() == nil || (column.Molten{}).Validate() == nil || of(0.2).Validate() != nil || len(of(0).Cautions()) != 1 {
		t.Error("validity or cautions")
	}
}

// TestExpansivityAndBulkModulus: those of every kind of density, by central
// differences with Richardson's extrapolation of points that have no kink between them.
func TestExpansivityAndBulkModulus(t *testing.T) {
	tab, err := column.NewTable(rows(func(T, P float64) float64 { return 3300 - 0.1*T + 2e-8*P + 2e-12*T*P }))
	if err != nil {
		t.Fatal(err)
	}
	state := column.EquationOfState{Reference: 3300, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15}
	melt := &column.Melt{Solidus: &column.Curve{Surface: 1000, Slope: 1e-7}, Liquidus: &column.Curve{Surface: 1400, Slope: 8e-8}, Density: 2750}
	reaction := column.Reaction{Protolith: gabbro(t), Product: garnetRock(t), Extent: 0.35, Cap: 1}
	kinds := map[string]column.Density{
		"number": column.Uniform(3300), "gradient": column.Linear{Top: 3000, Bottom: 3100}, "state": state, "modes": garnetRock(t), "table": tab,
		"reaction": reaction, "reaction of a state and a table": column.Reaction{Protolith: state, Product: tab, Extent: 0.6, Cap: 1},
		"melt": column.Molten{Solid: reaction, Melt: melt}, "melt of a number": column.Molten{Solid: column.Uniform(3300), Melt: melt},
	}
	rapid.Check(t, func(t *rapid.T) {
		T := rapid.Float64Range(320, 1500).Draw(t, "T")
		P := rapid.Float64Range(1e8, 2.9e9).Draw(t, "P")
		const dT, dP = 2, 2e7
		for name, d := range kinds {
			smooth := true
			for _, k := range column.Kinks(d) {
				a := k(T-dT, P-dP) < 0
				smooth = smooth && (k(T+dT, P+dP) < 0) == a && (k(T-dT, P+dP) < 0) == a && (k(T+dT, P-dP) < 0) == a
			}
			if !smooth {
				continue
			}
			lnRho := func(T, P float64) float64 { return math.Log(d.At(T, P, 0.3)) }
			slope := func(f func(float64) float64, h float64) float64 {
				c := func(h float64) float64 { return (f(h) - f(-h)) / (2 * h) }
				return (4*c(h/2) - c(h)) / 3
			}
			a := -slope(func(h float64) float64 { return lnRho(T+h, P) }, dT)
			// 1e-6, and the round-off of logarithms near 8 over 4 K.
			if got := column.Expansivity(d, T, P, 0.3); math.Abs(got-a) > 1e-6*math.Abs(a)+4e-15 {
				t.Fatalf("%s at %g K, %g Pa: expansivity %.10g, by differences %.10g", name, T, P, got, a)
			}
			b := slope(func(h float64) float64 { return lnRho(T, P+h) }, dP)
			got := column.BulkModulus(d, T, P, 0.3)
			if b == 0 != math.IsInf(got, 1) || math.Abs(1/got-b) > 1e-6*math.Abs(b)+4e-22 {
				t.Fatalf("%s at %g K, %g Pa: bulk modulus %.10g, by differences %.10g", name, T, P, got, 1/b)
			}
		}
	})
}

// TestGarnet: half garnet by volume; another share keeps what garnets and the rest are
// among themselves.
func TestGarnet(t *testing.T) {
	m := garnetRock(t)
	if g, ok := m.Garnet(); !ok || !close(g, 0.5, 1e-15) {
		t.Errorf("garnet %g, %v", g, ok)
	}
	want := modes(t, false, column.Mode{Mineral: "diopside", Share: 0.8}, column.Mode{Mineral: "pyrope", Share: 0.12}, column.Mode{Mineral: "almandine", Share: 0.08})
	if got := m.WithGarnet(0.2); !close(got.At(1200, 2e9, 0), want.At(1200, 2e9, 0), 1e-14) {
		t.Errorf("density %g, want %g", got.At(1200, 2e9, 0), want.At(1200, 2e9, 0))
	}
	cpx, _ := column.FindMineral("diopside")
	if got := m.WithGarnet(0).At(1200, 2e9, 0); !close(got, cpx.Density(1200, 2e9), 1e-15) {
		t.Errorf("without garnet %g", got)
	}
	if g, _ := m.Garnet(); !close(g, 0.5, 1e-15) {
		t.Error("the rock itself has changed")
	}
	for _, d := range []*column.Modes{gabbro(t), modes(t, false, column.Mode{Mineral: "pyrope", Share: 1})} {
		if _, ok := d.Garnet(); ok {
			t.Error("no garnet, or nothing else, leaves no share to change")
		}
	}
}
