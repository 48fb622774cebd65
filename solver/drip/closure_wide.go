package drip

import "math"

// A column that changes needs laws of many depths at many times, each asked a few hundred
// times: they are tabulated with as few exact values as that accuracy allows.
const (
	wideCell     = 1.0  // e-foldings of ε_II
	wideAccuracy = 2e-5 // of ln η, inside a cell
	wideParts    = 16   // into which a cell is cut at most
)

// wideLaw is ln η against ln ε_II by cubic Hermite pieces, in the cells asked so far: those
// from low on.
type wideLaw struct {
	low   int
	cells []wideCells
	ends  []lawEnd // the left ends of cells and, last, one right end
}

type wideCells struct {
	known bool
	cut   []lawEnd // ends of parts, where one part is not enough; empty and not nil: the law itself
}

// wideAt is at of a coarse law.
func (l *nodeLaw) wideAt(lnRate float64) (lawEnd, error) {
	w := l.wide
	x := math.Min(math.Max(lnRate, lowestLnRate), highestLnRate-1e-9) / wideCell
	i := int(math.Floor(x))
	w.reach(i)
	c := &w.cells[i-w.low]
	if !c.known {
		if err := l.fillWide(i); err != nil {
			return lawEnd{}, err
		}
	}
	t, ends := x-float64(i), w.ends[i-w.low:i-w.low+2]
	width := wideCell
	if c.cut != nil {
		n := len(c.cut) - 1
		if n < 1 {
			return l.exact(x * wideCell)
		}
		t *= float64(n)
		j := min(int(t), n-1)
		t, ends, width = t-float64(j), c.cut[j:j+2], wideCell/float64(n)
	}
	return ends[0].toward(&ends[1], t, width), nil
}

// reach makes room for cell i.
func (w *wideLaw) reach(i int) {
	if n := len(w.cells); n == 0 {
		w.low, w.cells, w.ends = i, make([]wideCells, 1, 8), make([]lawEnd, 2, 9)
	} else if i < w.low {
		w.cells = append(make([]wideCells, w.low-i, w.low-i+n+4), w.cells...)
		w.ends = append(make([]lawEnd, w.low-i, w.low-i+n+5), w.ends...)
		w.low = i
	} else if more := i - w.low + 1 - n; more > 0 {
		w.cells = append(w.cells, make([]wideCells, more)...)
		w.ends = append(w.ends, make([]lawEnd, more)...)
	}
}

// fillWide tabulates cell i.
func (l *nodeLaw) fillWide(i int) error {
	w := l.wide
	c, ends := &w.cells[i-w.low], w.ends[i-w.low:i-w.low+2]
	left := wideCell * float64(i)
	ask := func(e *lawEnd, lnRate float64) (err error) {
		if !e.known {
			*e, err = l.exact(lnRate)
		}
		return err
	}
	for j := range ends {
		if err := ask(&ends[j], left+wideCell*float64(j)); err != nil {
			return err
		}
	}
	c.known = true
	parts := []lawEnd{ends[0], ends[1]}
	for n := 1; n <= wideParts; n *= 2 {
		h := wideCell / float64(n)
		good := true
		middle := make([]lawEnd, n)
		for j := range middle { // the middle is the next end; where slopes equally wrong would cancel, they are held against its slope
			if err := ask(&middle[j], left+h*(float64(j)+0.5)); err != nil {
				return err
			}
			got := parts[j].toward(&parts[j+1], 0.5, h)
			off := math.Max(math.Abs(got.y-middle[j].y), math.Abs(got.slope-middle[j].slope)*h/8)
			good = good && off <= wideAccuracy
			if n == 1 && good {
				return nil
			}
		}
		if good {
			c.cut = parts
			return nil
		}
		finer := make([]lawEnd, 0, 2*n+1)
		for j := range middle {
			finer = append(finer, parts[j], middle[j])
		}
		parts = append(finer, parts[n])
	}
	c.cut = []lawEnd{}
	return nil
}
