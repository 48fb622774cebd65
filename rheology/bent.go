package rheology

import (
	"fmt"
	"math"
)

// rate returns ln ε of the term at x = ln τ and its first three derivatives.
func (t *term) rate(x float64) (ln, d1, d2, d3 float64) {
	ln, d1 = t.lnC+t.n*x, t.n
	if t.bend.p != 0 {
		y, b1, b2, b3 := t.bend.at(x, t.n)
		return ln + y, d1 + b1, b2, b3
	}
	return ln, d1, 0, 0
}

// nothing is the logarithm of a share that does not count beside 1: 1e-13.
const nothing = -30

// total is ln Σ ε_i at one x, its first three derivatives and the last term's share.
type total struct{ ln, d1, d2, d3, last float64 }

// add sums terms of any shape, scaled by the fastest so far.
func add(ts []term, x float64) total {
	top, n, c, e := ts[0].rate(x)
	s, m1, m2, m3, w := 1.0, n, n*n+c, n*(n*n+3*c)+e, 1.0
	for i := 1; i < len(ts); i++ {
		ln, n, c, e := ts[i].rate(x)
		d := ln - top
		switch {
		case d > 0:
			r := math.Exp(-d)
			s, m1, m2, m3, top, w = s*r, m1*r, m2*r, m3*r, ln, 1
		case d < nothing:
			w = 0
			continue
		default:
			w = math.Exp(d)
		}
		s += w
		m1 += w * n
		m2 += w * (n*n + c)
		m3 += w * (n*(n*n+3*c) + e)
	}
	r := 1 / s
	m1, m2, m3 = m1*r, m2*r, m3*r
	return total{top + math.Log(s), m1, m2 - m1*m1, m3 - m1*(3*m2-2*m1*m1), w * r}
}

// bentStress is lnStress where a term bends: the sum rises but is not convex, so the
// iteration keeps what is known to hold the root. Its steps invert the series of ln Σ ε_i
// to third order; what is left of a step of 1e-5 is of its fourth power in x, and of its
// third in the slope.
func bentStress(ts []term, lnE float64) (x, slope, last float64, err error) {
	x = math.Inf(1)
	for i := range ts {
		if ts[i].bend.p == 0 {
			x = min(x, (lnE-ts[i].lnC)/ts[i].n)
		}
	}
	// The root is at x or below, where the terms that bend are slower than at x.
	most := math.Inf(-1)
	start := x
	for i := range ts {
		if ts[i].bend.p != 0 {
			ln := math.Inf(1)
			if x < math.Inf(1) {
				ln, _, _, _ = ts[i].rate(x)
			}
			if most = max(most, ln-lnE); ln-lnE > -1 {
				start = min(start, ts[i].alone(lnE))
			}
		}
	}
	if most < nothing && len(ts) <= many {
		var buf [many]term
		return lnStress(straight(buf[:0], ts), lnE)
	}
	x = start
	var s search
	for s.begin(); s.more(); x += s.dx {
		r := add(ts, x)
		f := r.ln - lnE
		done := s.try(x, f, r.d1)
		if dx := -f / r.d1; !done && s.dx == dx {
			a, b := r.d2/(2*r.d1), r.d3/(6*r.d1)
			if q := 1 - dx*(a-dx*(2*a*a-b)); q > 0.5 && q < 2 && x+dx*q > s.low && x+dx*q < s.high {
				s.dx = dx * q
				done = math.Abs(dx) < 1e-5
			}
		}
		if done {
			return x + s.dx, r.d1 + s.dx*(r.d2+s.dx*r.d3/2), r.last, nil
		}
	}
	return 0, 0, 0, fmt.Errorf("rheology: no stress found for ln strain rate %g after %d steps", lnE, newtonSteps)
}

// straight appends the terms that do not bend.
func straight(to, ts []term) []term {
	for i := range ts {
		if ts[i].bend.p == 0 {
			to = append(to, ts[i])
		}
	}
	return to
}
