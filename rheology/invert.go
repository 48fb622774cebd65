package rheology

import (
	"fmt"
	"math"
)

// term is one mechanism at fixed conditions: ln ε = lnC + n ln τ, plus the bend of
// low-temperature plasticity; held as in mechanism.
type term struct {
	lnC, n, held float64
	bend         bend
}

// terms returns the mechanisms at T and P, in buf, which is zero, where it is long enough.
func terms(buf []term, ms []mechanism, T, P float64) []term {
	if len(buf) < len(ms) {
		buf = make([]term, len(ms))
	}
	buf = buf[:len(ms)]
	for i := range ms {
		m, t := &ms[i], &buf[i]
		h := (m.e + P*m.v) / T
		t.lnC, t.n, t.held = m.c-h, m.n, m.held
		if b := &m.barrier; b.p != 0 {
			t.lnC, t.bend = m.c, bend{h, b.p, b.q, b.x, b.least}
			if b.perPa != 0 {
				t.bend.x += math.Log1p(b.perPa * P)
			}
		}
	}
	return buf
}

// rates is the sum S of ε_i/exp(shift) at x = ln τ, the first four derivatives of ln S
// (the cumulants of the exponents, weighted by the rates) and the last term's share.
type rates struct{ s, mean, k2, k3, k4, last float64 }

func sum(ts []term, x, shift float64) rates {
	var s, m1, m2, m3, m4, w float64
	for i := range ts {
		n := ts[i].n
		w = math.Exp(ts[i].lnC + n*x - shift)
		s += w
		p := n * w
		m1 += p
		p *= n
		m2 += p
		p *= n
		m3 += p
		m4 += p * n
	}
	r := 1 / s
	m1, m2, m3, m4 = m1*r, m2*r, m3*r, m4*r
	q := m1 * m1
	return rates{s, m1, m2 - q, m3 - 3*m1*m2 + 2*m1*q, m4 - 4*m1*m3 - 3*m2*m2 + 12*q*m2 - 6*q*q, w * r}
}

// newtonSteps bounds the iterations; one or two are usual.
const newtonSteps = 100

// lnStress returns x = ln τ at which the mechanisms together give ln ε, the slope
// d ln ε/d ln τ there and the last term's share of the rate. bentStress does the work
// where a term bends; otherwise
//
// y(x) = ln Σ ε_i − ln ε is convex and rising, so Newton's method cannot fail: from
// any start its second step is at or above the root and the next fall onto it. The
// start is the stress of the fastest mechanism alone. The first steps invert the
// series of y to fourth order instead, which needs no further exponentials.
func lnStress(ts []term, lnE float64) (x, slope, last float64, err error) {
	x = math.Inf(1)
	for i := range ts {
		if ts[i].bend.p != 0 {
			return bentStress(ts, lnE)
		}
		x = min(x, (lnE-ts[i].lnC)/ts[i].n)
	}
	if len(ts) == 1 {
		return x, ts[0].n, 1, nil
	}
	for i := range newtonSteps {
		r := sum(ts, x, lnE)
		dx, close := -math.Log(r.s)/r.mean, 1e-7
		a, b, c := r.k2/(2*r.mean), r.k3/(6*r.mean), r.k4/(24*r.mean)
		if q := 1 - dx*(a-dx*(2*a*a-b+dx*(5*a*(b-a*a)-c))); i < 5 && q > 0.3 && q < 3 {
			dx, close = dx*q, 1e-3
		}
		x += dx
		// The error left in x is of order dx⁵ (dx² without the series), that in the
		// slope, by its own series, of order dx⁴.
		if math.Abs(dx) < close {
			n := ts[len(ts)-1].n
			return x, r.mean + dx*(r.k2+dx*(r.k3/2+dx*r.k4/6)), r.last * (1 + (n-r.mean)*dx), nil
		}
	}
	return 0, 0, 0, fmt.Errorf("rheology: no stress found for ln strain rate %g after %d steps", lnE, newtonSteps)
}

// lnSum returns ln Σ ε_i and its slope at x = ln τ.
func lnSum(ts []term, x float64) (ln, slope float64) {
	top := math.Inf(-1)
	for i := range ts {
		if ts[i].bend.p != 0 {
			r := add(ts, x)
			return r.ln, r.d1
		}
		top = max(top, ts[i].lnC+ts[i].n*x)
	}
	r := sum(ts, x, top)
	return top + math.Log(r.s), r.mean
}

// lnRate returns ln ε at the stress exp(lnTau), of which the lowest viscosity, where
// there is one, carries 2 η ε, for terms that do not bend: Newton in y = ln τ_c on τ_c + 2 η ε(τ_c) = τ, again a
// convex sum, from a start at or above the root.
func lnRate(ts []term, lnTau, lowest float64) (float64, error) {
	if lowest <= 0 {
		ln, _ := lnSum(ts, lnTau)
		return ln, nil
	}
	ln2Eta := math.Log(2 * lowest)
	y := lnTau
	for range newtonSteps {
		lnE, n := lnSum(ts, y)
		both := [2]term{{n: 1}, {lnC: ln2Eta + lnE - n*y, n: n}} // the dashpot's branch by its tangent
		ln, slope := lnSum(both[:], y)
		dy := (lnTau - ln) / slope
		y += dy
		if math.Abs(dy) < 1e-7 {
			return lnE + n*dy, nil
		}
	}
	return 0, fmt.Errorf("rheology: no strain rate found for ln stress %g after %d steps", lnTau, newtonSteps)
}
