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

// lawEnd is the law at one ε_II.
type lawEnd struct {
	known   bool
	y       float64 // ln η
	slope   float64 // d ln η/d ln ε_II, as ln η has it: what tables are made with
	tangent float64 // 1/n − 1: the same but where n is limited or at a grain size held
}

// lawPiece is one cell: the law at the ends of parts.
type lawPiece struct {
	parts float64 // 0: the law itself
	ends  []lawEnd
}

// newNodeLaw makes a law of one depth; a coarse one is good to wideAccuracy and costs less
// to make than to ask a hundred times.
func newNodeLaw(s *state.State, layer int, z float64, coarse bool) nodeLaw {
	if coarse {
		return nodeLaw{state: s, layer: layer, z: z, bits: coarseBits, wide: &wideLaw{}}
	}
	return nodeLaw{state: s, layer: layer, z: z, bits: pieceBits, cells: make([]*lawPiece, lawCells)}
}

// exact asks the law at ln ε_II.
func (l *nodeLaw) exact(lnRate float64) (lawEnd, error) {
	r, err := l.state.ResponseAt(l.layer, l.z, math.Exp(lnRate))
	if err != nil {
		return lawEnd{}, err
	}
	return lawEnd{true, math.Log(r.Viscosity), r.Slope - 1, 1/r.Exponent - 1}, nil
}

// at returns the law at ln ε_II.
func (l *nodeLaw) at(lnRate float64) (lawEnd, error) {
	if l.wide != nil {
		return l.wideAt(lnRate)
	}
	x := (math.Min(math.Max(lnRate, lowestLnRate), highestLnRate) - lowestLnRate) / lawCell
	i := min(int(x), lawCells-1)
	p := l.cells[i]
	if p == nil {
		var err error
		if p, err = l.fill(i); err != nil {
			return lawEnd{}, err
		}
		l.cells[i] = p
	}
	if p.parts == 0 {
		return l.exact(lnRate)
	}
	t := (x - float64(i)) * p.parts
	j := min(int(t), len(p.ends)-2)
	return p.ends[j].toward(&p.ends[j+1], t-float64(j), lawCell/p.parts), nil
}

// toward is the law at t, 0 to 1, between two ends that are h apart in ln ε_II.
func (a *lawEnd) toward(b *lawEnd, t, h float64) lawEnd {
	y, s := hermite(t, a.y, b.y, a.slope*h, b.slope*h)
	return lawEnd{true, y, s / h, a.tangent + t*(b.tangent-a.tangent)}
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
		p := &lawPiece{float64(parts), make([]lawEnd, parts+1)}
		for j := range p.ends {
			e, err := l.exact(left + h*float64(j))
			if err != nil {
				return nil, err
			}
			p.ends[j] = e
		}
		good := true
		for j := 0; j < parts && good; j++ {
			for _, t := range [2]float64{0.3, 0.7} { // not the middle, where slopes equally wrong cancel
				e, err := l.exact(left + h*(float64(j)+t))
				if err != nil {
					return nil, err
				}
				got := p.ends[j].toward(&p.ends[j+1], t, h)
				good = good && math.Abs(got.y-e.y) <= lawAccuracy
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
