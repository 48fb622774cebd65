package heat

import "math"

// Node is one depth of a profile.
type Node struct {
	Depth float64 // m
	T     float64 // K; 0 where the column has no temperature
	P     float64 // Pa
	Flow  float64 // upward heat flow κ_c dT/dz, W/m²
}

// Layer is the profile in one layer: its nodes, top to bottom, ends included, and
// smooth curves between them.
type Layer struct {
	Top, Bottom float64 // m
	Nodes       []Node
	Kinks       []float64 // depths inside the layer where a given geotherm's slope jumps, m
	Worn        float64   // of Evolution: mass that has gone from its top, less what came there, kg per m² of the present area
	spans       []span
}

// Profile is temperature and pressure down the whole column.
type Profile struct {
	HasTemperature bool
	Layers         []Layer
	SurfaceFlow    float64 // upward heat flow at the surface, W/m²
	BaseFlow       float64 // upward heat flow at the base, W/m²
	Residual       float64 // see Steady; 0 for a given geotherm
	Iterations     int     // integrations needed for a basal temperature
}

// span interpolates between two nodes: T by the quintic with the values, slopes and
// curvatures of the equations at both ends, P by the cubic with values and slopes.
// Powers of s = (z − z0)/h.
type span struct {
	z, h float64
	t    [6]float64
	p    [4]float64
}

// At returns temperature in K, pressure in Pa and dT/dz in K/m at the depth z in m,
// which is taken to the nearest depth in the layer. At a kink the slope is the
// lower side's.
func (l *Layer) At(z float64) (T, P, slope float64) {
	n := len(l.spans)
	i := int((z - l.Top) / (l.Bottom - l.Top) * float64(n))
	i = min(max(i, 0), n-1)
	for i+1 < n && z >= l.spans[i+1].z {
		i++
	}
	for i > 0 && z < l.spans[i].z {
		i--
	}
	sp := &l.spans[i]
	s := min(max((z-sp.z)/sp.h, 0), 1)
	t, p := &sp.t, &sp.p
	T = t[0] + s*(t[1]+s*(t[2]+s*(t[3]+s*(t[4]+s*t[5]))))
	slope = (t[1] + s*(2*t[2]+s*(3*t[3]+s*(4*t[4]+s*5*t[5])))) / sp.h
	P = p[0] + s*(p[1]+s*(p[2]+s*p[3]))
	return T, P, slope
}

// quintic returns the polynomial in s with values a, b, slopes av, bv and second
// derivatives aw, bw (all with respect to s) at s = 0 and 1.
func quintic(a, av, aw, b, bv, bw float64) [6]float64 {
	d := b - a
	return [6]float64{a, av, aw / 2,
		10*d - 6*av - 4*bv - 1.5*aw + 0.5*bw,
		-15*d + 8*av + 7*bv + 1.5*aw - bw,
		6*d - 3*(av+bv) - 0.5*(aw-bw)}
}

// cubic is quintic without the second derivatives.
func cubic(a, av, b, bv float64) [4]float64 {
	d := b - a
	return [4]float64{a, av, 3*d - 2*av - bv, av + bv - 2*d}
}

// The grid of a layer: steps of at most maxStep, at least minSteps and at most
// maxSteps of them, and stepsPerDecay steps in the decay length of its heat
// production. With the sixth-order integration round-off dominates at these sizes
// (TestOrderOfAccuracy).
const (
	maxStep       = 250.0 // m
	minSteps      = 8
	maxSteps      = 400
	stepsPerDecay = 8
)

func steps(thickness, decay float64) int {
	n := math.Ceil(thickness / maxStep)
	if decay > 0 {
		n = max(n, math.Ceil(stepsPerDecay*thickness/decay))
	}
	return int(min(max(n, minSteps), maxSteps))
}
