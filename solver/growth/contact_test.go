package growth

import (
	"errors"
	"math"
	"testing"
)

func contactColumn(top, base Boundary, h, eta, etaBase float64) *Column {
	return &Column{Gravity: 9.81, Top: top, Base: base, Jumps: []float64{3400, -100}, EtaS: etaBase, EtaN: etaBase,
		Layers: []Layer{{Thickness: h, Viscosity: func(float64) (float64, float64) { return eta, eta }}}}
}

// Two half-spaces: a contact displaced by ξ moves with W = Δρ g ξ/(2k(η₁ + η₂))
// (Chandrasekhar 1961, viscous limit), and each of them resists W and U apart, so that
// neither U nor S is driven (derived). A layer under a rigid top over a fluid: W = A(sinh x
// − x cosh x) + C x sinh x with x = kz and A X cosh X = C (cosh X + X sinh X) at its base,
// kU = −W', S = 0 there, and W = q ξ with q of Houseman & Molnar 1997 (derived).
func TestContact(t *testing.T) {
	const eta, lambda, xi = 3e20, 10e3, 40.0
	k, load := 2*math.Pi/lambda, 100*9.81*xi
	solve := func(c *Column, i int) Contact {
		t.Helper()
		s, err := NewSolver(c, 0)
		if err != nil {
			t.Fatal(err)
		}
		at, err := s.Contact(lambda, []float64{xi}, i)
		if err != nil {
			t.Fatal(err)
		}
		form, err := NewTemplate(c, 0)
		if err != nil {
			t.Fatal(err)
		}
		again, err := form.Contact(lambda, [][]float64{nil}, []float64{xi}, i)
		if err != nil || math.Abs(again.W/at.W-1) > 1e-8 || math.Abs(again.U-at.U) > 1e-8*at.W || math.Abs(again.Shear-at.Shear) > 1e-7*eta*k*at.W {
			t.Errorf("by a template %+v (%v), by the solver %+v", again, err, at)
		}
		return at
	}
	at := solve(contactColumn(Rigid, HalfSpace, 200e3, eta, 1e20), 1)
	want := load / (2 * k * (eta + 1e20))
	if math.Abs(at.W/want-1) > 1e-9 || math.Abs(at.U) > 1e-9*want || math.Abs(at.Shear) > 1e-8*eta*k*want {
		t.Errorf("half-spaces: %+v, want W %g", at, want)
	}
	const h = 4e3
	at = solve(contactColumn(Rigid, Inviscid, h, eta, 0), 1)
	x := k * h
	a, c := math.Cosh(x)+x*math.Sinh(x), x*math.Cosh(x)
	w, slope := a*(math.Sinh(x)-x*math.Cosh(x))+c*x*math.Sinh(x), -a*x*math.Sinh(x)+c*(math.Sinh(x)+x*math.Cosh(x))
	want = load / xi * h / eta * (math.Sinh(2*x) - 2*x) / (2 * x * (math.Cosh(2*x) + 1 + 2*x*x)) * xi
	if math.Abs(at.W/want-1) > 1e-8 || math.Abs(at.U/(-want*slope/w)-1) > 1e-7 || math.Abs(at.Shear) > 1e-7*eta*k*want {
		t.Errorf("over a fluid: %+v, want W %g, U %g", at, want, -want*slope/w)
	}
	rate, stress := at.Invariants()
	if math.Abs(rate/math.Abs(k*at.U)-1) > 1e-12 || math.Abs(stress/(2*eta*rate)-1) > 1e-12 {
		t.Errorf("rate %g, stress %g", rate, stress)
	}
}

func TestContactRefused(t *testing.T) {
	s, err := NewSolver(contactColumn(Rigid, HalfSpace, 10e3, 1e20, 1e20), 0)
	if err != nil {
		t.Fatal(err)
	}
	for name, call := range map[string]func() (Contact, error){
		"states":     func() (Contact, error) { return s.Contact(1e4, []float64{1, 2}, 1) },
		"interface":  func() (Contact, error) { return s.Contact(1e4, []float64{1}, 2) },
		"surface":    func() (Contact, error) { return s.Contact(1e4, []float64{1}, 0) },
		"not finite": func() (Contact, error) { return s.Contact(1e4, []float64{math.Inf(1)}, 1) },
	} {
		if _, err := call(); err == nil {
			t.Errorf("%s: accepted", name)
		}
	}
	if _, err := s.Contact(-1, []float64{1}, 1); !errors.Is(err, ErrWavelength) {
		t.Errorf("wavelength: %v", err)
	}
}
