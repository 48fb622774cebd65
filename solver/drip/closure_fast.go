package drip

import "math"

// The means of the closure ask for η millions of times. Between powers of two of
// ε_II² lie equal pieces, in which η is a cubic of ε_II² itself, found from the bits of
// the number: no logarithm, no exponential. They are filled from nodeLaw.at.
const (
	pieceBits    = 4
	coarseBits   = 2    // of a coarse law
	lowestBinade = -290 // of ε_II²: e⁻²⁰⁰ is above
	binades      = 290 + 60
	fastAccuracy = 1e-6 // of η; of a coarse law 64 times that
)

// binade is η at the ends of the pieces, with its slope per piece, and 1/n − 1.
type binade struct {
	node     []binadeEnd
	perPiece float64 // 1/ε_II² of a piece
	rough    bool    // the cubics are not good enough here
}

type binadeEnd struct{ eta, step, tangent float64 }

// eta returns η, dη/d(ε_II²) and about 1/n − 1 at ε_II² = e2, which must lie between the
// table's ends.
func (l *nodeLaw) eta(e2 float64) (eta, rise, tangent float64, err error) {
	bits := math.Float64bits(e2)
	i := int(bits>>52) - 1023 - lowestBinade
	if i < 0 || i >= binades {
		return l.plain(e2)
	}
	b := l.fast.at(i)
	if b == nil {
		if b, err = l.fillBinade(i); err != nil {
			return 0, 0, 0, err
		}
		l.fast.put(i, b)
	}
	if b.rough {
		return l.plain(e2)
	}
	shift := 52 - l.bits
	j := int(bits>>shift) & (1<<l.bits - 1)
	rest := uint64(1)<<shift - 1
	t := float64(bits&rest) / float64(rest+1)
	a, c := &b.node[j], &b.node[j+1]
	d := c.eta - a.eta
	c2, c3 := 3*d-2*a.step-c.step, a.step+c.step-2*d
	return a.eta + t*(a.step+t*(c2+t*c3)), (a.step + t*(2*c2+3*t*c3)) * b.perPiece, a.tangent, nil
}

// plain is eta without the pieces.
func (l *nodeLaw) plain(e2 float64) (eta, rise, tangent float64, err error) {
	e, err := l.at(0.5 * math.Log(e2))
	eta = math.Exp(e.y)
	return eta, eta * e.slope / (2 * e2), e.tangent, err
}

// fillBinade tabulates one power of two. Cubics over two pieces at a time miss the value
// between them by sixteen times what one piece misses.
func (l *nodeLaw) fillBinade(i int) (*binade, error) {
	left := math.Ldexp(1, lowestBinade+i)
	n := 1 << l.bits
	b := &binade{node: make([]binadeEnd, n+1), perPiece: float64(n) / left}
	for j := range n + 1 {
		e2 := left * (1 + float64(j)/float64(n))
		eta, rise, tangent, err := l.plain(e2)
		if err != nil {
			return nil, err
		}
		b.rough = b.rough || l.exactly(0.5*math.Log(e2))
		b.node[j] = binadeEnd{eta, rise / b.perPiece, tangent}
	}
	accuracy := fastAccuracy
	if l.wide != nil {
		accuracy *= 64
	}
	for j := 0; j+2 <= n; j++ {
		n := b.node[j : j+3]
		y, _ := hermite(0.5, n[0].eta, n[2].eta, 2*n[0].step, 2*n[2].step)
		b.rough = b.rough || math.Abs(y-n[1].eta) > 16*accuracy*n[1].eta
	}
	return b, nil
}

// binadeRow holds the binades from low on that were asked.
type binadeRow struct {
	low  int
	list []*binade
}

func (r *binadeRow) at(i int) *binade {
	if i -= r.low; i >= 0 && i < len(r.list) {
		return r.list[i]
	}
	return nil
}

func (r *binadeRow) put(i int, b *binade) {
	if len(r.list) == 0 {
		r.low, r.list = i, make([]*binade, 0, 8)
	}
	if i < r.low {
		r.list = append(make([]*binade, r.low-i, r.low-i+len(r.list)+4), r.list...)
		r.low = i
	}
	for len(r.list) <= i-r.low {
		r.list = append(r.list, nil)
	}
	r.list[i-r.low] = b
}
