package drip

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// guess extrapolates the fixed points found to another amplitude, in ln of both.
func (b *softBand) guess(size float64) {
	if b.past[0].x == nil || !(size > 0) {
		return
	}
	copy(b.x, b.past[0].x)
	if b.past[1].x == nil {
		return
	}
	t := (math.Log(size) - b.past[0].lnSize) / (b.past[0].lnSize - b.past[1].lnSize)
	t = math.Min(math.Max(t, -1), 3)
	for i, v := range b.past[1].x {
		b.x[i] += t * (b.past[0].x[i] - v)
	}
}

// set hands x to the flow.
func (b *softBand) set() {
	nodes := len(b.flow.Depth)
	for i := range nodes {
		b.flow.EtaS[i], b.flow.EtaN[i] = math.Exp(b.x[i]), math.Exp(b.x[len(b.laws)+i])
	}
	for i, e := range b.edges {
		eta := math.Exp(b.x[nodes+i])
		if e.above {
			b.flow.Above[e.contact] = eta
		} else {
			b.flow.Below[e.contact] = eta
		}
	}
}

// keep remembers a fixed point, in place of the latest where that is at the same amplitude.
func (b *softBand) keep(size float64) {
	if !(size > 0) {
		return
	}
	ln := math.Log(size)
	if p := &b.past[0]; p.x != nil && math.Abs(ln-p.lnSize) > 0.02 {
		b.past[0], b.past[1] = b.past[1], b.past[0]
	}
	p := &b.past[0]
	p.lnSize = ln
	p.x = append(p.x[:0], b.x...)
	if b.past[1].x == nil && b.past[0].x != nil && !b.begun {
		b.start, b.begun = append(b.start[:0], b.x...), true
	}
}

// forget drops the fixed points, for another undulation: it begins about as the last did.
func (b *softBand) forget() {
	b.past[0].x, b.past[1].x = nil, nil
	if b.start != nil {
		copy(b.x, b.start)
	}
	b.mix.restart()
	b.begun = false
}

// flowing returns dξ/dt at displacements y of all interfaces.
func (f *Soft) flowing(k float64, y []float64) (flowing, error) {
	b, a, err := f.system(k, y)
	if err != nil {
		return flowing{}, err
	}
	n, states := len(y), 0
	m := mat.NewDense(n, n, nil)
	for _, p := range b.flow.Interface {
		if p >= 0 {
			states++
		}
	}
	for i, p := range b.flow.Interface {
		for j, q := range b.flow.Interface {
			if p >= 0 && q >= 0 {
				m.Set(i, j, a[p*states+q])
			}
		}
	}
	out := flowing{a: m, exponent: math.Max(1, b.n), over: b.over}
	_, last, _ := f.state.Column.RootSpan()
	for i, l := range b.flow.Layer {
		if f.layer[l] == last { // the lowest node counts
			out.strain, out.stress = b.own(i)
		}
	}
	return out, nil
}

// own returns the second invariants of the flow's strain rate and stress at a node, each
// the largest along it.
func (b *softBand) own(i int) (strain, stress float64) {
	w := b.flow
	n, s := math.Abs(w.Normal[i]), math.Abs(w.Shear[i])
	return math.Max(n, s/2), math.Max(2*w.EtaN[i]*n, w.EtaS[i]*s)
}

// again takes the last fixed point found as the next guess, after one that was not.
func (f *Soft) again(k float64) {
	if b, err := f.band(k); err == nil {
		b.past[1].x = nil
		b.mix.restart()
	}
}

// depth is how many differences the mixing keeps.
const depth = 8

// anderson accelerates a fixed-point iteration: among the last few steps it takes the
// combination whose residual is least. Source: Anderson 1965, J. ACM 12, 547 (from memory).
type anderson struct {
	dx, dr [depth][]float64
	x, r   []float64 // the step before
	now    []float64
	weight []float64
	kept   int // differences that hold
	at     int
	least  float64
	damp   float64 // of the plain step, halved where it goes astray
}

func (a *anderson) restart() { a.kept, a.at = 0, 0; a.begin() }

// begin starts on another fixed point near the last: how the map answers to differences
// is much the same there, so they are kept.
func (a *anderson) begin() { a.least, a.damp = math.Inf(1), 1; a.x = a.x[:0] }

// slower begins again with half the step.
func (a *anderson) slower() {
	damp := math.Max(a.damp/2, 1.0/32)
	a.restart()
	a.damp = damp
}

// stepFactor is ω of the plain step x + ω (answer − x), x = ln η, where ln η rises by gain
// with ln of the undulation's strain rate, −1 to 0: it multiplies a miss by 1 − ω at a given
// strain rate and by 1 − ω (1 + gain) at a given stress, opposites at ω = 2/(2 + gain). In
// a power law that is 2n/(n + 1), which alone contracts like (n − 1)/(n + 1).
func stepFactor(gain float64) float64 { return 2 / (2 + math.Min(math.Max(gain, -1), 0)) }

// leastShare is what a viscosity counts for in the mixing at least: one that bears no
// dissipation may not decide, nor go astray.
const leastShare = 1e-4

// step replaces x by the next guess, given the map's answer to x. Misses count by the share
// of the dissipation that their viscosity bears.
func (a *anderson) step(x, answer, omega, share []float64) {
	n := len(x)
	a.now, a.weight = slices.Grow(a.now[:0], n)[:n], slices.Grow(a.weight[:0], n)[:n]
	var size float64
	for i := range x {
		a.now[i] = a.damp * omega[i] * (answer[i] - x[i])
		a.weight[i] = math.Max(share[i], leastShare)
		size += a.now[i] * a.now[i] * a.weight[i]
	}
	if size > 16*a.least { // astray: begin again
		a.slower()
	}
	a.least = math.Min(a.least, size)
	if len(a.x) == n {
		d := a.at % depth
		a.dx[d], a.dr[d] = slices.Grow(a.dx[d][:0], n)[:n], slices.Grow(a.dr[d][:0], n)[:n]
		for i := range x {
			a.dx[d][i], a.dr[d][i] = x[i]-a.x[i], a.now[i]-a.r[i]
		}
		a.at++
		a.kept = min(a.kept+1, depth)
	}
	a.x, a.r = append(a.x[:0], x...), append(a.r[:0], a.now...)
	g := a.weights()
	for i := range x {
		v := x[i] + a.now[i]
		for j := range a.kept {
			v -= g[j] * (a.dx[j][i] + a.dr[j][i])
		}
		// what counts little may not go where its own law does not ask it to, nor anything
		// by more than a factor of e¹²
		most := math.Min(12, 1+10*math.Abs(a.now[i]))
		x[i] += math.Min(math.Max(v-x[i], -most), most)
	}
}

// weights solves the small least-squares problem by its normal equations.
func (a *anderson) weights() (g [depth]float64) {
	var m [depth][depth + 1]float64
	for i := range a.kept {
		for j := range i + 1 {
			m[i][j] = a.dot(a.dr[i], a.dr[j])
			m[j][i] = m[i][j]
		}
		m[i][depth] = a.dot(a.dr[i], a.now)
	}
	for i := range a.kept {
		m[i][i] *= 1 + 1e-10
	}
	for i := range a.kept { // Cholesky-like elimination of a positive matrix
		if !(m[i][i] > 0) {
			return [depth]float64{}
		}
		for r := i + 1; r < a.kept; r++ {
			f := m[r][i] / m[i][i]
			for c := i; c <= depth; c++ {
				m[r][c] -= f * m[i][c]
			}
		}
	}
	for i := a.kept - 1; i >= 0; i-- {
		g[i] = m[i][depth]
		for c := i + 1; c < a.kept; c++ {
			g[i] -= m[i][c] * g[c]
		}
		g[i] /= m[i][i]
	}
	return g
}

func dot(a, b []float64) (s float64) {
	for i, v := range a {
		s += v * b[i]
	}
	return s
}

// dot is a product in which everything counts by its weight.
func (a *anderson) dot(u, v []float64) (s float64) {
	for i, w := range a.weight {
		s += w * u[i] * v[i]
	}
	return s
}
