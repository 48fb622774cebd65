package rheology

import (
	"fmt"
	"math"
)

// Creep is a rock's creep laws and mixtures, acting in parallel at one stress: their
// strain rates add, those of low-temperature plasticity among them. Factor multiplies the viscosity that follows (at its grain size),
// before the limits; 0 means 1. A list that counts one mechanism of one rock twice is
// too weak by up to a factor two: Cautions says so.
type Creep struct {
	Laws       []Law
	Mixtures   []Mixture
	Factor     float64
	Limits     Limits
	Friction   *Friction   // caps the stress of creep, upper limit included; nil: no yield
	Piezometer *Piezometer // the grain size follows the stress; nil: it is given

	// Melt is the volume fraction φ of melt at T in K and P in Pa, 0 to 1; nil: none. It
	// multiplies every rate of creep by exp(α φ), α = Weakening, and neither limits nor
	// friction. Source of the form: Hirth & Kohlstedt 2003, from memory, where α is 25 to
	// 30 for diffusion and 30 to 45 for dislocation creep of olivine; it holds to about a
	// quarter of melt (common practice, no source), which Cautions watches.
	Melt      func(T, P float64) float64
	Weakening float64 // α, >= 0; 0: melt does not weaken
}

// NeedsError says what a law needs and the rock does not give.
type NeedsError struct{ Law, What string }

func (e *NeedsError) Error() string {
	return fmt.Sprintf("rheology: %s needs %s", e.Law, e.What)
}

// Flow is a Creep made ready for one rock: grain size and water are put in, so that
// only strain rate, temperature and pressure are left. It gives what the Creep gives,
// faster. It may be used by several goroutines at once.
type Flow struct {
	ms         []mechanism
	nodes      []node
	limits     Limits
	piezo      *Piezometer
	follows    bool // a law's grain size follows the stress
	bent       bool // there is low-temperature plasticity
	melt       func(T, P float64) float64
	weakening  float64
	frictional bool
	yield      float64 // Pa, at P = 0
	yieldPerPa float64
}

// For returns the rock's flow at the grain size, water and sense of at, whose T and P
// are not used. Errors: a NeedsError where a law lacks its grain size or water.
func (c *Creep) For(at Conditions) (*Flow, error) {
	f, err := c.compile(nil, nil, &at)
	if err != nil {
		return nil, err
	}
	return &f, nil
}

// Respond returns the stress, the secant viscosity and the tangent exponent at the
// strain rate eII in 1/s, > 0.
//
//	ε = Σ ε_i(τ_c),  τ = (τ_c^−8 + τ_y^−8)^(−1/8) + 2 η_lowest ε,  n = d ln ε/d ln τ
//
// with Mixture's rules in place of the sum where there are mixtures, and τ_c for the
// bracket where there is no Friction; n = Σ n_i ε_i/Σ ε_i. The upper limit is one more ε_i = τ_c/(2 η_highest)
// of the whole rock; the lower one also bounds a rock that yields. The exponent of yield,
// n_c (τ_c/τ)^8, is limited to MaxExponent, a kink in n alone: η stays smooth. Cold rock
// in low-temperature plasticity may have a larger n_c, which is left as it is.
//
// Where a Piezometer gives the grain size, stress and grain size agree with each other:
// d ∝ τ^−p makes ε_i ∝ τ^(n + m p), so no second iteration is needed. The exponent is
// that at a grain size that is held: a perturbation of the flow is faster than grains
// grow. The stress is thus that of a rock long deformed at eII, and n is smaller than
// the slope between two such rocks.
//
// Melt weakens at the T and P it is evaluated at; a fraction outside 0 to 1 is an error.
//
// The stress is good to 1e-12, with low-temperature plasticity to 1e-10 (Peierls says
// where not). It works in logarithms, for rates of 1e-40 to 1 per second and 250 to
// 2500 K; a result beyond the range of a float64 is an error, as are a
// temperature <= 0 and a missing grain size or water value (NeedsError). It does not
// allocate for up to seven laws. Derived from the laws' definition; mechanisms at one
// stress add rates.
func (c *Creep) Respond(eII float64, at Conditions) (Response, error) {
	var ms [many]mechanism
	var nodes [many]node
	f, err := c.compile(ms[:], nodes[:], &at)
	if err != nil {
		return Response{}, err
	}
	return f.Respond(eII, at.T, at.P)
}

// StrainRate returns ε_II in 1/s at the stress tau in Pa, > 0: the inverse of
// Respond, with the same limits and errors, and one more: without a lowest viscosity, no
// rate belongs to a stress at or above yield.
func (c *Creep) StrainRate(tau float64, at Conditions) (float64, error) {
	var ms [many]mechanism
	var nodes [many]node
	f, err := c.compile(ms[:], nodes[:], &at)
	if err != nil {
		return 0, err
	}
	return f.StrainRate(tau, at.T, at.P)
}

// check refuses conditions no law can be evaluated at.
func check(T, P float64) error {
	if !(T > 0) || math.IsInf(T, 1) {
		return fmt.Errorf("rheology: T = %g K, must be > 0", T)
	}
	if !(P >= 0) || math.IsInf(P, 1) {
		return fmt.Errorf("rheology: P = %g Pa, must be >= 0", P)
	}
	return nil
}

func inRange(x float64) bool { return x > 0 && !math.IsInf(x, 1) }
