package rheology

import (
	"fmt"
	"math"
)

// Peierls makes a law one of low-temperature plasticity, in which stress lowers the
// barrier:
//
//	ε_II = A τ_II^n d^-m f^r exp[−((E + P V)/RT) (1 − (τ_II/τ_P)^p)^q] · [1 − exp(−(τ_II/τ_0)^8)]
//
// with τ_P = Stress (1 + PerPa P). Source of the form: Kocks, Argon & Ashby 1975, from
// memory. The last factor, with τ_0 = Least, is our own choice: a law without a stress
// in front (Goetze & Evans 1979: n = 0) flows at no stress at all, so it is kept out
// below the stresses it was made for. It is 0.63 at τ_0, 1 to 2e-4 at 1.31 τ_0.
//
// At and above τ_P, where rates are never reached, the curve goes on as a power law of
// the exponent at τ_P, or 1 where that is less, so that every rate has one stress. Where
// n = 0 and q > 1 the curve is flat just below τ_P, and a stress found within a few
// thousandths of it is less precise than Respond promises.
type Peierls struct {
	Stress float64 // τ_P at no pressure, invariant, Pa; 0: the law is not one of plasticity
	PerPa  float64 // relative rise of τ_P with pressure, 1/Pa, >= 0
	P, Q   float64 // 0 < p <= 1 <= q <= 2
	Least  float64 // τ_0, invariant, Pa; 0: no such factor
}

// Plastic says whether the law is one of low-temperature plasticity.
func (l *Law) Plastic() bool { return l.Peierls.Stress != 0 }

// Stress returns the stress that the test of a law measures, over τ_II: √3 for axial
// compression, 2 for plane strain (differential stresses), 1 for the others.
func (t Test) Stress() float64 {
	switch t {
	case AxialCompression:
		return math.Sqrt(3)
	case PlaneStrain:
		return 2
	}
	return 1
}

// plasticity checks what Validate does not check in every law.
func (l *Law) plasticity() error {
	b := l.Peierls
	switch {
	case b == Peierls{}:
		return nil
	case !inRange(b.Stress):
		return fmt.Errorf("rheology: %s: Peierls stress %g Pa, must be > 0", l.Name, b.Stress)
	case !(b.P > 0 && b.P <= 1) || !(b.Q >= 1 && b.Q <= 2):
		return fmt.Errorf("rheology: %s: Peierls exponents p = %g, q = %g, must be 0 < p <= 1 <= q <= 2", l.Name, b.P, b.Q)
	case !(b.PerPa >= 0) || math.IsInf(b.PerPa, 1):
		return fmt.Errorf("rheology: %s: Peierls stress rises by %g 1/Pa, must be >= 0", l.Name, b.PerPa)
	case !(b.Least >= 0 && b.Least < b.Stress):
		return fmt.Errorf("rheology: %s: least stress %g Pa, must be >= 0 and below the Peierls stress, %g Pa", l.Name, b.Least, b.Stress)
	case l.N == 0 && b.Least == 0:
		return fmt.Errorf("rheology: %s: a law of low-temperature plasticity with stress exponent 0 flows at no stress; it needs a least stress", l.Name)
	case !(l.E > 0) || l.V < 0:
		return fmt.Errorf("rheology: %s: low-temperature plasticity needs an activation energy > 0 and a volume >= 0, has %g J/mol and %g m³/mol", l.Name, l.E, l.V)
	}
	return nil
}

// barrier is a law's Peierls, in logarithms, for one rock; p = 0: there is none.
type barrier struct{ p, q, x, perPa, least float64 }

// barrier returns that of the law, for stresses exp(lnFactor) times higher.
func (l *Law) barrier(lnFactor float64) barrier {
	if !l.Plastic() {
		return barrier{}
	}
	b := l.Peierls
	return barrier{b.P, b.Q, math.Log(b.Stress) + lnFactor, b.PerPa, math.Log(b.Least) + lnFactor}
}

// bend is the part of ln ε that is no straight line in x = ln τ: the barrier at one T and
// P, with h = (E + PV)/RT.
type bend struct{ h, p, q, x, least float64 }

// at returns the bend and its first three derivatives; n is the straight line's slope.
func (b *bend) at(x, n float64) (y, d1, d2, d3 float64) {
	if d := x - b.x; d >= 0 {
		d1 = b.beyond(n)
		y = d1 * d
	} else {
		u := math.Exp(b.p * d)
		v, hp := 1-u, b.h*b.p
		switch b.q {
		case 1:
			y, d1, d2, d3 = -b.h*v, hp*u, hp*b.p*u, hp*b.p*b.p*u
		case 2:
			y, d1, d2, d3 = -b.h*v*v, 2*hp*u*v, 2*hp*b.p*u*(v-u), 2*hp*b.p*b.p*u*(v-3*u)
		default:
			if v <= 0 {
				return 0, b.beyond(n), 0, 0
			}
			g, r := b.h*math.Pow(v, b.q), u/v
			d1 = b.p * b.q * r * g
			a := (1 - b.q*u) / v
			y, d2, d3 = -g, d1*b.p*a, d1*b.p*b.p*(a*a+(1-b.q)*r/v)
		}
	}
	if e := x - b.least; e < 0.5 { // exp(−exp(4)) is nothing beside 1
		c, c1, c2, c3 := cutoff(8 * e)
		y, d1, d2, d3 = y+c, d1+8*c1, d2+64*c2, d3+512*c3
	}
	return y, d1, d2, d3
}

// beyond is the bend's slope at and above τ_P.
func (b *bend) beyond(n float64) float64 {
	d := 1 - n
	if b.q == 1 {
		d = max(d, b.h*b.p)
	}
	return max(d, 0)
}

// cutoff returns ln(1 − exp(−e^s)) and its derivatives in s.
func cutoff(s float64) (y, d1, d2, d3 float64) {
	if s < -37 {
		return s, 1, 0, 0
	}
	w := math.Exp(s)
	if w < 1e-3 { // the next terms are of w⁴
		q := w * w / 6
		return s - w/2 + q/4, 1 - w/2 + q/2, q - w/2, 2*q - w/2
	}
	m := math.Expm1(w)
	k := w / m
	r := 1 - w - k // k' = k r
	return math.Log(m / (1 + m)), k, k * r, k * (r*r - w - k*r)
}

// alone returns nearly the x at which a term that bends gives exp(y) by itself: a start.
func (t *term) alone(y float64) float64 {
	b := &t.bend
	u, x := 0.25, b.x-1.4/b.p
	for range 2 { // the stress in front counts less than that in the barrier
		g := (t.lnC + t.n*x - y) / b.h
		if g <= 0 {
			return b.x
		}
		switch b.q {
		case 1:
		case 2:
			g = math.Sqrt(g)
		default:
			g = math.Pow(g, 1/b.q)
		}
		if u = 1 - g; u <= 0 {
			break
		}
		if x = b.x + math.Log(u)/b.p; t.n == 0 {
			break
		}
	}
	if u > 0 && x > b.least {
		return x
	}
	if b.least > math.Inf(-1) { // below the least stress, as τ^(n+8)
		v := 1 - math.Exp(b.p*(b.least-b.x))
		return (y - t.lnC + b.h*math.Pow(v, b.q) + 8*b.least) / (t.n + 8)
	}
	return (y - t.lnC + b.h) / t.n
}
