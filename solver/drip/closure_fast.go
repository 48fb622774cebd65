package drip

import "math"

// The means of the closure ask for η millions of times. Between powers of two of
// ε_II² lie equal pieces, in which η is a cubic of ε_II² itself, found from the bits of
// the number: no logarithm, no exponential. They are filled from nodeLaw.at.
const (
	pieceBits    = 4
	pieces       = 1 << pieceBits
	lowestBinade = -290 // of ε_II²: e⁻²⁰⁰ is above
	binades      = 290 + 60
	fastAccuracy = 1e-6
)

// binade is η at the ends of the pieces, with its slope per piece, and d ln η/d ln ε_II.
type binade struct {
	node  [pieces + 1]struct{ eta, step float64 }
	slope [pieces + 1]float64
	rough bool // the cubics are not good enough here
}

// eta returns η and about d ln η/d ln ε_II at ε_II² = e2, which must lie between the
// table's ends.
func (l *nodeLaw) eta(e2 float64) (eta, slope float64, err error) {
	bits := math.Float64bits(e2)
	i := int(bits>>52) - 1023 - lowestBinade
	if i < 0 || i >= binades {
		return l.slow(e2)
	}
	b := l.fast[i]
	if b == nil {
		if b, err = l.fillBinade(i); err != nil {
			return 0, 0, err
		}
		l.fast[i] = b
	}
	if b.rough {
		return l.slow(e2)
	}
	j := int(bits>>(52-pieceBits)) & (pieces - 1)
	const rest = 1<<(52-pieceBits) - 1
	t := float64(bits&rest) * (1.0 / (rest + 1))
	a, c := &b.node[j], &b.node[j+1]
	d := c.eta - a.eta
	return a.eta + t*(a.step+t*(3*d-2*a.step-c.step+t*(a.step+c.step-2*d))), b.slope[j], nil
}

func (l *nodeLaw) slow(e2 float64) (eta, slope float64, err error) {
	lnEta, slope, err := l.at(0.5 * math.Log(e2))
	return math.Exp(lnEta), slope, err
}

// fillBinade tabulates one power of two. Cubics over two pieces at a time miss the value
// between them by sixteen times what one piece misses.
func (l *nodeLaw) fillBinade(i int) (*binade, error) {
	b := new(binade)
	left := math.Ldexp(1, lowestBinade+i)
	for j := range b.node {
		e2 := left * (1 + float64(j)/pieces)
		eta, slope, err := l.slow(e2)
		if err != nil {
			return nil, err
		}
		cell := int((math.Min(math.Max(0.5*math.Log(e2), lowestLnRate), highestLnRate) - lowestLnRate) / lawCell)
		if p := l.cells[min(cell, lawCells-1)]; p.parts == 0 {
			b.rough = true // the law's own exponent may be held at a limit
		}
		b.node[j].eta, b.node[j].step, b.slope[j] = eta, eta*slope/(2*e2)*left/pieces, slope
	}
	for j := 0; j+2 <= pieces; j++ {
		n := b.node[j : j+3]
		y, _ := hermite(0.5, n[0].eta, n[2].eta, 2*n[0].step, 2*n[2].step)
		b.rough = b.rough || math.Abs(y-n[1].eta) > 16*fastAccuracy*n[1].eta
	}
	return b, nil
}
