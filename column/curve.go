package column

import (
	"fmt"
	"math"
	"slices"
	"sort"
)

// Curve is a temperature that depends on pressure: the line Surface + Slope P or, where
// Table is there, what was tabulated.
type Curve struct {
	Surface float64     // K, at P = 0
	Slope   float64     // K/Pa
	Table   *CurveTable // in place of the line
}

// At returns the curve's temperature in K at P in Pa. Beyond a table it is that of the
// table's nearest end, so that a search may pass through; Melt.Covers refuses it.
func (c *Curve) At(P float64) float64 {
	if c.Table != nil {
		T, _ := c.Table.at(P)
		return T
	}
	return c.Surface + c.Slope*P
}

// PerPascal returns dT/dP in K/Pa at P in Pa: at a pressure of a table that of the deeper
// side, beyond a table 0.
func (c *Curve) PerPascal(P float64) float64 {
	if c.Table != nil {
		_, slope := c.Table.at(P)
		return slope
	}
	return c.Slope
}

// Span returns the pressures in Pa between which the curve is known: those of its table,
// all of a line.
func (c *Curve) Span() (least, most float64) {
	if t := c.Table; t != nil {
		return t.p[0], t.p[len(t.p)-1]
	}
	return math.Inf(-1), math.Inf(1)
}

// covers returns an *OutsideError where P in Pa lies beyond the curve's table.
func (c *Curve) covers(P float64) error {
	least, most := c.Span()
	if slack := tableSlack * (most - least); c.Table == nil || P >= least-slack && P <= most+slack {
		return nil
	}
	return &OutsideError{fmt.Sprintf("P = %.6g GPa lies outside the table %s, which covers %.6g to %.6g GPa; nothing is extrapolated", P/1e9, c.Table.Name, least/1e9, most/1e9)}
}

// validate returns what makes the curve unusable.
func (c *Curve) validate(what string) error {
	switch t := c.Table; {
	case t != nil && len(t.p) < 2:
		return fmt.Errorf("melt: the %s is an empty table", what)
	case t != nil && (c.Surface != 0 || c.Slope != 0):
		return fmt.Errorf("melt: the %s is a table and a line, %g K + %g K/Pa; needs one of them", what, c.Surface, c.Slope)
	case !finite(c.Surface, c.Slope):
		return fmt.Errorf("melt: %s %g K + %g K/Pa", what, c.Surface, c.Slope)
	}
	return nil
}

// CurveTable is a temperature tabulated by pressure, straight between its rows.
//
// A smooth curve through the rows was the other choice. Straight pieces won: they claim
// nothing between the rows, never overshoot, keep a solidus below a liquidus wherever it
// is at the rows, and real solidi do have corners, where a mineral or a fluid comes in. The
// price is a slope that jumps at the rows, which meshes have to know: see Melt.Kinks. A
// smooth curve would only move that jump to the second derivative. Rows of a smooth
// solidus miss it between them by at most h²/8 of its second derivative, h their distance
// in pressure.
type CurveTable struct {
	Name string // for messages: the file it came from

	p, t []float64 // Pa, increasing, and K
}

// CurvePoint is one row of a CurveTable: Pa, K.
type CurvePoint struct{ P, T float64 }

// NewCurveTable returns the table of the rows, whose pressures increase strictly from 0
// or more; two at least. Errors are *TableError.
func NewCurveTable(name string, rows []CurvePoint) (*CurveTable, error) {
	out := &CurveTable{Name: name}
	for i, r := range rows {
		switch {
		case !(r.P >= 0) || math.IsInf(r.P, 1):
			return nil, &TableError{i, fmt.Sprintf("pressure %.6g GPa; needs 0 or more", r.P/1e9)}
		case !positive(r.T):
			return nil, &TableError{i, fmt.Sprintf("temperature %.6g K; needs more than 0 K", r.T)}
		case i > 0 && !(r.P > rows[i-1].P):
			return nil, &TableError{i, fmt.Sprintf("pressure %.6g GPa does not lie above that of the row before it, %.6g GPa; pressures increase from row to row", r.P/1e9, rows[i-1].P/1e9)}
		}
		out.p, out.t = append(out.p, r.P), append(out.t, r.T)
	}
	if len(rows) < 2 {
		return nil, &TableError{-1, fmt.Sprintf("rows: %d; needs two at least", len(rows))}
	}
	return out, nil
}

// Rows returns the number of rows.
func (t *CurveTable) Rows() int { return len(t.p) }

// at returns the temperature in K and its slope in K/Pa at P in Pa.
func (t *CurveTable) at(P float64) (T, slope float64) {
	i, share, out := cell(t.p, P)
	rise := t.t[i+1] - t.t[i]
	if T = t.t[i] + share*rise; !out {
		slope = rise / (t.p[i+1] - t.p[i])
	}
	return T, slope
}

// within returns the rows' pressures in Pa from least to most.
func (t *CurveTable) within(least, most float64) []float64 {
	i, j := sort.SearchFloat64s(t.p, least), sort.Search(len(t.p), func(k int) bool { return t.p[k] > most })
	return t.p[i:max(i, j)]
}

// Between returns the pressures in Pa at which to draw the curve from least to most, as
// far as it is known: n in equal steps and those of the table's rows, increasing. None
// where it is known nowhere there.
func (c *Curve) Between(least, most float64, n int) []float64 {
	from, to := c.Span()
	from, to = max(from, least), min(to, most)
	if !(from < to) {
		return nil
	}
	var out []float64
	for i := range n {
		out = append(out, from+(to-from)*float64(i)/float64(n-1))
	}
	out[n-1] = to
	if c.Table == nil {
		return out
	}
	return increasing(append(out, c.Table.within(from, to)...))
}

// increasing sorts what it is given and leaves each value once.
func increasing(x []float64) []float64 {
	slices.Sort(x)
	return slices.Compact(x)
}

// corners returns the pressures in Pa at which the slope of the table jumps by more than
// the round-off of its temperatures: rows on a line are none.
func (t *CurveTable) corners() []float64 {
	var out []float64
	for i := 1; i+1 < len(t.p); i++ {
		a, b := t.p[i]-t.p[i-1], t.p[i+1]-t.p[i]
		on := t.t[i-1] + (t.t[i+1]-t.t[i-1])*(a/(a+b))
		if math.Abs(t.t[i]-on) > straight*t.t[i] {
			out = append(out, t.p[i])
		}
	}
	return out
}

// straight is how far, relative to its temperature, a row may lie off the line through its
// neighbours and still be on it: round-off of units.
const straight = 1e-13
