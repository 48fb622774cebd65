package drip

import (
	"math"

	"keelfall/solver/state"
)

// The laws' table of ln η against ln ε_II: cells half an e-folding wide.
const (
	lowestLnRate  = -100.0 // 4e-44 1/s
	highestLnRate = 20.0   // 5e8 1/s
	lawCell       = 0.5
	lawCells      = int((highestLnRate - lowestLnRate) / lawCell)
	lawAccuracy   = 2e-7 // of ln η, inside a part of a cell
	lawParts      = 16   // into which a cell is cut at most
)

// nodeLaw is the rock's law at one depth, η(ε_II) from the full law, tabulated where
// it is asked: cubic Hermite pieces through exact values and slopes. A cell is cut until
// the pieces agree with the law; where sixteen parts do not, the law itself is asked.
type nodeLaw struct {
	state *state.State
	layer int
	z     float64
	cells []*lawPiece
	fast  binadeRow
	bits  int      // of the pieces of a binade
	wide  *wideLaw // nil where not coarse
}

// lawPiece is one cell: ln η and its slope times the part's width, at the ends of parts.
type lawPiece struct {
	parts    float64 // 0: the law itself
	y, slope []float64
}

// newNodeLaw makes a law of one depth; a coarse one is good to wideAccuracy and costs less
// to make than to ask a hundred times.
func newNodeLaw(s *state.State, layer int, z float64, coarse bool) nodeLaw {
	if coarse {
		return nodeLaw{state: s, layer: layer, z: z, bits: coarseBits, wide: &wideLaw{}}
	}
	return nodeLaw{state: s, layer: layer, z: z, bits: pieceBits, cells: make([]*lawPiece, lawCells)}
}

// exact returns ln η and d ln η/d ln ε_II from the law.
func (l *nodeLaw) exact(lnRate float64) (lnEta, slope float64, err error) {
	r, err := l.state.ResponseAt(l.layer, l.z, math.Exp(lnRate))
	if err != nil {
		return 0, 0, err
	}
	return math.Log(r.Viscosity), 1/r.Exponent - 1, nil
}

// at returns ln η and d ln η/d ln ε_II at ln ε_II.
func (l *nodeLaw) at(lnRate float64) (lnEta, slope float64, err error) {
	if l.wide != nil {
		return l.wideAt(lnRate)
	}
	x := (math.Min(math.Max(lnRate, lowestLnRate), highestLnRate) - lowestLnRate) / lawCell
	i := min(int(x), lawCells-1)
	p := l.cells[i]
	if p == nil {
		if p, err = l.fill(i); err != nil {
			return 0, 0, err
		}
		l.cells[i] = p
	}
	if p.parts == 0 {
		return l.exact(lnRate)
	}
	t := (x - float64(i)) * p.parts
	j := min(int(t), len(p.y)-2)
	lnEta, slope = hermite(t-float64(j), p.y[j], p.y[j+1], p.slope[j], p.slope[j+1])
	return lnEta, slope * p.parts / lawCell, nil
}

// hermite is the cubic with values a, b and slopes p, q at 0 and 1, and its slope.
func hermite(t, a, b, p, q float64) (y, slope float64) {
	d := b - a
	c2, c3 := 3*d-2*p-q, p+q-2*d
	return a + t*(p+t*(c2+t*c3)), p + t*(2*c2+3*t*c3)
}

// fill tabulates cell i.
func (l *nodeLaw) fill(i int) (*lawPiece, error) {
	left := lowestLnRate + lawCell*float64(i)
	for parts := 1; parts <= lawParts; parts *= 2 {
		h := lawCell / float64(parts)
		p := &lawPiece{parts: float64(parts), y: make([]float64, parts+1), slope: make([]float64, parts+1)}
		for j := range p.y {
			y, s, err := l.exact(left + h*float64(j))
			if err != nil {
				return nil, err
			}
			p.y[j], p.slope[j] = y, s*h
		}
		good := true
		for j := 0; j < parts && good; j++ {
			for _, t := range [2]float64{0.3, 0.7} { // not the middle, where slopes equally wrong cancel
				y, _, err := l.exact(left + h*(float64(j)+t))
				if err != nil {
					return nil, err
				}
				got, _ := hermite(t, p.y[j], p.y[j+1], p.slope[j], p.slope[j+1])
				good = good && math.Abs(got-y) <= lawAccuracy
			}
		}
		if good {
			return p, nil
		}
	}
	return &lawPiece{}, nil
}

// exactly says whether the law itself is asked at ln ε_II, where at has been.
func (l *nodeLaw) exactly(lnRate float64) bool {
	if w := l.wide; w != nil {
		i := int(math.Floor(math.Min(math.Max(lnRate, lowestLnRate), highestLnRate-1e-9)/wideCell)) - w.low
		return w.cells[i].cut != nil && len(w.cells[i].cut) == 0
	}
	i := int((math.Min(math.Max(lnRate, lowestLnRate), highestLnRate) - lowestLnRate) / lawCell)
	return l.cells[min(i, lawCells-1)].parts == 0
}
