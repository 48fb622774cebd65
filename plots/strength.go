package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"

	"keelfall/solver/race"
	"keelfall/solver/state"
)

// fourPanels is the least width at which a column's figure takes the stress as a
// fourth panel; in a narrower one it is a figure of its own.
const fourPanels = 150 * vg.Millimeter

// Columns returns the figures of a column: one of all panels where width has room for
// them, else the column and its strength. A state without a strain rate has no stress.
func Columns(st *state.State, width vg.Length) ([]Figure, error) {
	f, err := Column(st, width)
	if err != nil || f.Width >= fourPanels || !(st.StrainRate > 0) {
		return []Figure{f}, err
	}
	s, err := Strength(st, width)
	return []Figure{f, s}, err
}

// Strength draws a column's differential stress against depth, with pressure at right:
// twice the second invariant of the deviatoric stress at the state's strain rate, which
// is σ1 − σ3 in plane strain. Where friction or a viscosity limit decides is marked, and
// so is the stress of the root's weight. width is ColumnWidth where 0.
func Strength(st *state.State, width vg.Length) (Figure, error) {
	f, err := newColumnFigure(st)
	if err != nil {
		return Figure{}, err
	}
	if !(st.StrainRate > 0) {
		return Figure{}, fmt.Errorf("plots: strength: a column without a strain rate bears no stress")
	}
	if width, err = pageWidth(width); err != nil {
		return Figure{}, err
	}
	f.panels = []columnPanel{{"differential stress 2 τ_II", f.stress}}
	s := fmt.Sprintf("Strength: differential stress 2 τ_II (σ1 − σ3 in plane strain) against depth at a strain rate of %s 1/s; pressure at right.",
		plain(number(st.StrainRate, 3)))
	return Figure{Name: "strength", Caption: s + f.remarks(), Width: width, Height: 95 * vg.Millimeter, draw: f.draw}, nil
}

// stresses returns the differential stress in MPa at the points of the profile and in
// the half-space.
func (f columnFigure) stresses() (points []float64, base float64) {
	base = math.NaN() // not drawn
	if v := f.st.Base.Stress; f.hasBase() && v > 0 {
		base = 2 * v / mpa
	}
	return f.prof.stress, base
}

// stress draws the differential stress, the parts that friction or a limit decides on
// grey, and the stress of the root's weight.
func (f columnFigure) stress(p *panel) {
	v, base := f.stresses()
	values := f.shown(v, base)
	pull, hasPull := f.pull()
	if hasPull {
		values = append(values, pull)
	}
	lo, hi, _ := bounds(values)
	p.x = linear(0, 1.08*hi)
	if hi > 100*lo { // two decades
		lo = math.Max(lo, 1e-5*hi)
		p.x = logarithmic(lo/1.5, hi*1.5)
	}
	f.layers.shade(p)
	ticks := linearTicks(p.x, p.xFits)
	if p.x.log {
		ticks = logTicks(p.x, false, p.xFits)
	}
	p.horizontal("Differential\nstress (MPa)", ticks, false)
	name := f.limits(p, v)
	x, z := f.extended(v, base)
	p.line("differential stress", x, z, stroke(black, 1.1, solid))
	if hasPull {
		f.weight(p, pull)
	}
	name()
}

// pull is the stress in MPa with which the root's weight pulls on what lies below.
func (f columnFigure) pull() (mpas float64, ok bool) {
	_, stress, ok := race.Buoyancy(f.st)
	return stress / mpa, ok && stress > 0
}

// weight draws the stress of the root's weight down the root.
func (f columnFigure) weight(p *panel, pull float64) {
	first, last, _ := f.st.Column.RootSpan()
	top, bottom := f.layers.all[first].top, math.Min(f.layers.all[last].bottom, f.layers.bottom)
	p.line("weight of the root", []float64{pull, pull}, []float64{top, bottom}, stroke(vermillion, thick, dashed))
	by := number(pull, 2) + " MPa"
	mid := p.pt(pull, (top+bottom)/2)
	spots := []spot{{vg.Point{X: mid.X + 4, Y: mid.Y}, text.XLeft, text.YCenter}, {vg.Point{X: mid.X - 4, Y: mid.Y}, text.XRight, text.YCenter}}
	p.place(black, p.box, append(spots, nearby(mid, p.box, 70)...), "root's weight\n"+by, "weight\n"+by, by)
}
