package drip

import "math"

// stride is one step of a pair as drips looks into it: the first (second false) or the
// second, from y e^log, with A at the pair's three nodes.
type stride struct {
	from, to         *node
	second           bool
	y                []float64
	log              float64
	a0, a1, a2       []float64
	before, end, fix float64     // ln |base| at the start and at the end; what extrapolation adds at the start
	curve            *[4]float64 // ln |base| as a cubic of the fraction of the step; nil: the step is taken again
}

// mean fills dst with the mean of A over the fraction x of the step, A quadratic in time
// through the three nodes.
func (d *stride) mean(dst []float64, x float64) []float64 {
	from, curve := d.a0, x*x/6-x/4
	if d.second {
		from, curve = d.a1, x*x/6+x/4
	}
	dst = dst[:0]
	for i, v := range from {
		dst = append(dst, v+x/2*(d.a1[i]-d.a0[i])+curve*(d.a2[i]-2*d.a1[i]+d.a0[i]))
	}
	return dst
}

// drips times the drips within one step. The step is taken again to the moment looked
// for, and its end shifted to the extrapolated one.
func (f *follower) drips(s *stepper, set Settings, d stride, base int) {
	h := d.to.t - d.from.t
	target := func(x, m float64) float64 { // at the fraction x of the step
		return math.Log(set.Criterion/(f.size*m)) + (1-x)*math.Log(d.from.root) + x*math.Log(d.to.root)
	}
	var at, out []float64
	value := func(x float64) float64 {
		at = d.mean(at, x)
		s.set(at, len(out), x*h, f.most)
		l := s.apply(out, d.y)
		return d.log + l + logSize(out[base])
	}
	shift := math.NaN()
	if c := d.curve; c != nil {
		shift, d.fix = 0, 0
		value = func(x float64) float64 { return c[0] + x*(c[1]+x*(c[2]+x*c[3])) }
	}
	for j, m := range amplitudes {
		if !math.IsInf(f.times[j], 1) || !(d.end >= target(1, m)) {
			continue
		}
		if math.IsNaN(shift) {
			out = make([]float64, len(d.y))
			if shift = d.end - value(1) - d.fix; math.IsNaN(shift) || math.IsInf(shift, 0) {
				shift = 0
			}
		}
		lo, hi := 0.0, 1.0
		low, high := d.before-target(0, m), d.end-target(1, m)
		if low >= 0 {
			f.times[j] = d.from.t
			continue
		}
		for i := 0; i < 60 && hi-lo > 1e-9; i++ { // secants, and bisection where they stall
			x := lo + (hi-lo)*low/(low-high)
			if i%3 == 2 || !(x > lo && x < hi) {
				x = (lo + hi) / 2
			}
			if v := value(x) + d.fix + x*shift - target(x, m); v >= 0 {
				hi, high = x, v
			} else {
				lo, low = x, v
			}
		}
		f.times[j] = d.from.t + hi*h
	}
}

// smooth is how far the cubic over a pair may miss ln |base| in the middle for the cubics
// over its halves, sixteen times closer, to be used.
const smooth = 5e-4

// curves gives the two steps of a pair their cubics, with the slopes d ln |base|/dt that
// A has at the three nodes, where a step would cost much to take again.
func (f *follower) curves(one, two *stride, b int) {
	n := len(f.y)
	if n <= few {
		return
	}
	slope := func(a, y []float64) float64 {
		var sum float64
		for j, v := range a[b*n : b*n+n] {
			sum += v * y[j]
		}
		return sum / y[b]
	}
	h := one.to.t - one.from.t
	s0, s1, s2 := h*slope(f.a, f.y), h*slope(f.a1, f.y1), h*slope(f.a2, f.y2)
	mid := (one.before+two.end)/2 + (s0-s2)/4
	if !(math.Abs(mid-one.end) < smooth) {
		return
	}
	cubic := func(a, s, b, t float64) *[4]float64 {
		return &[4]float64{a, s, 3*(b-a) - 2*s - t, 2*(a-b) + s + t}
	}
	one.curve, two.curve = cubic(one.before, s0, one.end, s1), cubic(two.before, s1, two.end, s2)
}
