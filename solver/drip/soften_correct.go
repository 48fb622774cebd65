package drip

import "math"

// Correction is how far the closure, carried to a full drip, is from two-dimensional
// solutions made for this project (derived). Uniform rock over fluid without viscosity.
type Correction struct {
	// Closure and Centre are the closure's rate over the two-dimensional one, of the
	// cos kx part of the descent and of the drip's tip.
	Closure, Centre float64
	// Finite is the time that the tip takes to descend by the root's thickness, over what
	// the law of small amplitudes gives for the tip; Low and High allow it to be wrong by
	// as much as it differs from 1, and by 0.05 at least: it is known for a root ten times
	// stronger than what lies below, n of 1 and 3, at its fastest wavelength.
	Finite, FiniteLow, FiniteHigh float64
	// Inside says that n and kh lie within the table, 1 to 5 and 1 to 3; otherwise its
	// edge is used.
	Inside bool
}

var (
	tableN = [4]float64{1, 2, 3, 5}
	// rows n, columns kh = 1, 2, 3; one two-dimensional mode is exact for n = 1
	tableClosure = [4][3]float64{{1, 1, 1}, {0.979, 0.985, 0.994}, {0.934, 0.954, 0.980}, {0.816, 0.877, 0.936}}
	tableCentre  = [4][3]float64{{1, 1, 1}, {0.928, 0.924, 0.960}, {0.841, 0.863, 0.921}, {0.676, 0.760, 0.848}}
	// n = 1 and 3, initial amplitude over root thickness 0.05, 0.1, 0.2
	tableFinite = [2][3]float64{{0.933, 0.916, 0.892}, {1.075, 1.070, 1.060}}
)

// Corrections returns what is known at a stress exponent n, wavenumber × root thickness kh
// and initial amplitude over root thickness: linear in n and in kh, and in ln of the
// amplitude (0 is taken as 0.1). A best estimate of the time of a drip is the
// closure's × Centre × Finite.
func Corrections(n, kh, amplitude float64) Correction {
	c := Correction{Inside: n >= 1 && n <= 5 && kh >= 1 && kh <= 3}
	n = math.Min(math.Max(n, 1), 5)
	kh = math.Min(math.Max(kh, 1), 3)
	i := 0
	for i < 2 && n > tableN[i+1] {
		i++
	}
	t := (n - tableN[i]) / (tableN[i+1] - tableN[i])
	j := min(int(kh-1), 1)
	u := kh - 1 - float64(j)
	mix := func(r *[4][3]float64) float64 {
		return (1-t)*((1-u)*r[i][j]+u*r[i][j+1]) + t*((1-u)*r[i+1][j]+u*r[i+1][j+1])
	}
	c.Closure, c.Centre = mix(&tableClosure), mix(&tableCentre)
	if !(amplitude > 0) {
		amplitude = 0.1
	}
	v := math.Log2(math.Min(math.Max(amplitude, 0.05), 0.2) / 0.05)
	j = min(int(v), 1)
	v -= float64(j)
	row := func(r *[3]float64) float64 { return (1-v)*r[j] + v*r[j+1] }
	// ratios for n beyond 3 are not known: that of 3
	s := (math.Min(n, 3) - 1) / 2
	c.Finite = (1-s)*row(&tableFinite[0]) + s*row(&tableFinite[1])
	wide := math.Max(0.05, math.Abs(c.Finite-1))
	c.FiniteLow, c.FiniteHigh = c.Finite-wide, c.Finite+wide
	return c
}

// strainedCorrections are Corrections in a background: over is the undulation's strain
// rate over the background's, +Inf without one. As over → 0 the closure is exact; at 1 it is
// short by Shortfall, its worst (derived); without background the table holds. Between,
// what is missing is a parabola in u = over²/(1 + over²) on either side of its worst, since
// neither end feels the sign of the other's strain: an interpolation, checked by nothing. The tip's lead over the
// cos kx part is taken to come in as u.
func strainedCorrections(n, kh, amplitude, over float64) Correction {
	c := Corrections(n, kh, amplitude)
	if math.IsInf(over, 1) {
		return c
	}
	u := over * over / (1 + over*over)
	worst, bare, lead := Shortfall(n, true), 1-c.Closure, c.Closure/c.Centre-1
	short := 4 * worst * u * (1 - u)
	if u > 0.5 {
		short += bare * (2*u - 1) * (2*u - 1)
	}
	c.Closure = 1 - short
	c.Centre = c.Closure / (1 + lead*u)
	return c
}

// Shortfall returns by how much, relative to the two-dimensional rate, the closure is too
// slow at most at a stress exponent n: without background in the cos kx part of the
// descent at kh = 1, the worst of the table; with one where its strain rate equals the
// undulation's (0.08, 0.13, 0.19 for n = 2, 3, 5, derived).
func Shortfall(n float64, background bool) float64 {
	if !background {
		return 1 - Corrections(n, 1, 0).Closure
	}
	worst := [4]float64{0, 0.08, 0.13, 0.19}
	n = math.Min(math.Max(n, 1), 5)
	i := 0
	for i < 2 && n > tableN[i+1] {
		i++
	}
	return worst[i] + (worst[i+1]-worst[i])*(n-tableN[i])/(tableN[i+1]-tableN[i])
}
