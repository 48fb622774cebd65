package rheology

import (
	"fmt"
	"math"
)

// Test is the geometry of the experiments a prefactor comes from. It decides how
// A in the paper becomes A between the second invariants.
type Test int

// The published rate is the axial shortening rate against the differential stress;
// the shortening rate against the differential stress in plane strain; the
// engineering shear rate against the shear stress; or already ε_II against τ_II.
const (
	AxialCompression Test = iota
	PlaneStrain
	SimpleShear
	Invariant
)

var testNames = [...]string{"axial compression", "plane strain", "simple shear", "invariant"}

// String returns the geometry's name as it stands in a table of laws.
func (t Test) String() string {
	if t < 0 || int(t) >= len(testNames) {
		return fmt.Sprintf("test %d", int(t))
	}
	return testNames[t]
}

// ParseTest reads what String writes: axial compression, plane strain, simple
// shear or invariant.
func ParseTest(s string) (Test, error) {
	for i, n := range testNames {
		if s == n {
			return Test(i), nil
		}
	}
	return 0, fmt.Errorf("rheology: test geometry %q; known are axial compression, plane strain, simple shear, invariant", s)
}

// Factor returns F in A_invariant = F A for a law of stress exponent n.
//
//	axial compression   3^((n+1)/2)/2    ε̇ = A σ_d^n, σ_d = √3 τ_II, ε_II = (√3/2) ε̇
//	plane strain        2^n              ε̇ = A σ_d^n, σ_d = 2 τ_II,  ε_II = ε̇
//	simple shear        1/2              γ̇ = A τ^n,   τ = τ_II,      ε_II = γ̇/2
//
// Derived from the definitions of the invariants.
func (t Test) Factor(n float64) float64 {
	switch t {
	case AxialCompression:
		return math.Pow(3, (n+1)/2) / 2
	case PlaneStrain:
		return math.Pow(2, n)
	case SimpleShear:
		return 0.5
	}
	return 1
}

// Status says where each parameter of a law comes from: seen (read on a public
// page), memory (recalled, not confirmed), choice (a usual choice, not one measured
// value), absent in law (0), not determined (0 assumed), or given (typed by the user);
// empty where nothing is said. Errors is that of the published errors: one word for all of
// them or a list such as "A memory, n seen"; see Law.ErrorStatus.
type Status struct{ A, N, M, R, E, V, Peierls, Test, Errors string }

// Law is one creep law in invariant SI form,
//
//	ε_II = A τ_II^n d^-m f^r exp(-(E + P V)/(R T)),
//
// or, where Peierls is set, of low-temperature plasticity. Valid where its experiments were; anything else is extrapolation, and Cautions
// says what is known about that.
type Law struct {
	Name       string // as in a paper's table, e.g. "wet quartzite Gleason 1995"
	Material   string // what was deformed
	WaterState string // dry, wet, … as the source describes it
	Mechanism  string // dislocation, diffusion, …

	A     float64      // invariant SI: Pa^-n s⁻¹ m^m, times Pa^-r for a fugacity, (H/10⁶ Si)^-r for a content
	N     float64      // stress exponent, > 0; 0 allowed with Peierls.Least
	M     float64      // grain-size exponent, >= 0
	R     float64      // water exponent, >= 0
	E     float64      // activation energy, J/mol
	V     float64      // activation volume, m³/mol; 0 where not determined
	Water WaterMeasure // how the law counts water; NoWater where R is 0

	Peierls Peierls // of low-temperature plasticity; zero in a law of another mechanism
	Errors  Errors  // published
	Tested  Tested  // where the experiments were

	VolumeDetermined bool    // false: V = 0 is a placeholder, not a measurement
	Test             Test    // geometry of the experiments A was converted from
	LaboratoryA      float64 // A as published: MPa^-(n+r) s⁻¹ µm^m (content: MPa^-n)
	Uncertainty      string  // published, in the source's units
	Status           Status
	Confidence       string // of what is recalled from memory: high, medium, low, or empty
	Melt             string // published α in exp(αφ), where the source gives one
	Source, URL      string
	Notes            string
}

// Validate returns an error, with the numbers, for a law that gives no strain rate.
func (l *Law) Validate() error {
	for _, p := range []struct {
		what string
		x    float64
		zero bool
	}{{"prefactor", l.A, false}, {"stress exponent", l.N, l.Peierls != Peierls{}}, {"grain exponent", l.M, true}, {"water exponent", l.R, true}, {"activation energy", l.E, true}} {
		if math.IsNaN(p.x) || math.IsInf(p.x, 0) || p.x < 0 || p.x == 0 && !p.zero {
			return fmt.Errorf("rheology: %s: %s %g", l.Name, p.what, p.x)
		}
	}
	if math.IsNaN(l.V) || math.IsInf(l.V, 0) {
		return fmt.Errorf("rheology: %s: activation volume %g m³/mol", l.Name, l.V)
	}
	if (l.R != 0) != (l.Water != NoWater) {
		return fmt.Errorf("rheology: %s: water exponent %g with water measure %s", l.Name, l.R, l.Water)
	}
	for i, e := range l.Errors.list() {
		if !(e >= 0) || math.IsInf(e, 1) {
			return fmt.Errorf("rheology: %s: error %g of its %s, must be >= 0", l.Name, e, errorNames[i])
		}
	}
	return l.plasticity()
}
