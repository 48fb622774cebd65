package plots

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/plot/vg"

	"keelfall/column"
	"keelfall/solver/state"
)

// profile is a column's state against depth in the units of the axes. Depth at a
// contact stands twice, upper side first.
type profile struct {
	depth, pressure, density, temperature, viscosity []float64
	stress                                           []float64 // differential, MPa
	layer                                            []int
	capped, floored, yielding                        []bool
}

// newProfile collects a state's points and checks that they can be drawn.
func newProfile(st *state.State) (*profile, error) {
	p := &profile{}
	for i, l := range st.Layers {
		if len(l.Points) == 0 {
			return nil, fmt.Errorf("plots: layer %d of the column has no points", i+1)
		}
		for _, q := range l.Points {
			p.depth = append(p.depth, q.Depth/km)
			p.pressure = append(p.pressure, q.P/gpa)
			p.density = append(p.density, q.Density)
			p.viscosity = append(p.viscosity, q.Viscosity)
			p.temperature = append(p.temperature, q.T-zeroCelsius)
			p.layer = append(p.layer, i)
			p.capped = append(p.capped, q.Capped)
			p.floored = append(p.floored, q.Floored)
			p.yielding = append(p.yielding, q.Yielding && !q.Floored)
			p.stress = append(p.stress, 2*q.Stress/mpa)
		}
	}
	for _, e := range []error{finite("depth", p.depth...), finite("pressure", p.pressure...), finite("density", p.density...),
		finite("viscosity", p.viscosity...), finite("density below the column", st.Base.Density), finite("viscosity below the column", st.Base.Viscosity)} {
		if e != nil {
			return nil, e
		}
	}
	if st.HasTemperature {
		if err := finite("temperature", p.temperature...); err != nil {
			return nil, err
		}
	}
	for i, v := range p.viscosity {
		if v <= 0 {
			return nil, fmt.Errorf("plots: viscosity: %g Pa s at %g km cannot be drawn on a log axis", v, p.depth[i])
		}
		if q := p.stress[i]; st.StrainRate > 0 && !(q > 0 && q <= math.MaxFloat64) {
			return nil, fmt.Errorf("plots: differential stress: %g MPa at %g km cannot be drawn", q, p.depth[i])
		}
	}
	return p, nil
}

// Column draws a column's density, temperature (where it has one), viscosity and, where
// width has room for a fourth panel, differential stress against depth, side by side on
// one depth axis, with pressure at right. The root is tinted; rock denser than the rock
// below it is filled and the difference written. width is ColumnWidth where 0.
func Column(st *state.State, width vg.Length) (Figure, error) {
	width, err := pageWidth(width)
	if err != nil {
		return Figure{}, err
	}
	f, err := newColumnFigure(st)
	if err != nil {
		return Figure{}, err
	}
	f.panels = append(f.panels, columnPanel{"density", f.density})
	if st.HasTemperature {
		f.panels = append(f.panels, columnPanel{"temperature", f.temperature})
	}
	f.panels = append(f.panels, columnPanel{"viscosity", f.viscosity})
	if width >= fourPanels && st.StrainRate > 0 {
		f.panels = append(f.panels, columnPanel{"differential stress 2 τ_II", f.stress})
	}
	return Figure{Name: "column", Caption: f.caption(), Width: width, Height: 95 * vg.Millimeter, draw: f.draw}, nil
}

// columnFigure is a figure of panels on the column's depth axis.
type columnFigure struct {
	st     *state.State
	layers *strata
	prof   *profile
	panels []columnPanel
}

// columnPanel draws one quantity against depth.
type columnPanel struct {
	name string
	draw func(*panel)
}

// newColumnFigure checks a state; the panels are still to be chosen.
func newColumnFigure(st *state.State) (columnFigure, error) {
	if st == nil || st.Column == nil {
		return columnFigure{}, fmt.Errorf("plots: there is no column to draw")
	}
	layers, err := newStrata(st.Column)
	if err != nil {
		return columnFigure{}, err
	}
	if err := sameLength("layers of the column and its state", len(st.Column.Layers), len(st.Layers)); err != nil {
		return columnFigure{}, err
	}
	prof, err := newProfile(st)
	return columnFigure{st: st, layers: layers, prof: prof}, err
}

// drawsStress reports whether stress is among the panels.
func (f columnFigure) drawsStress() bool {
	return strings.HasPrefix(f.panels[len(f.panels)-1].name, "differential")
}

func (f columnFigure) caption() string {
	var names []string
	for i, p := range f.panels {
		names = append(names, fmt.Sprintf("%s (%c)", p.name, 'a'+i))
	}
	last := len(names) - 1
	s := "The column: " + strings.Join(names[:last], ", ") + " and " + names[last] + " against depth; pressure at right."
	if heavy := f.heavy(); len(heavy) > 0 {
		s += " Filled: rock denser than the rock below it"
		if first, last, ok := f.st.Column.RootSpan(); ok && first < last && slices.ContainsFunc(heavy, func(i int) bool { return i >= first && i <= last }) {
			s += "; of the root, than the rock below the root"
		}
		s += "."
	}
	if f.st.StrainRate > 0 {
		what := "Viscosity of creep"
		if f.drawsStress() {
			what = "Viscosity and stress"
		}
		s += fmt.Sprintf(" %s at a strain rate of %s 1/s.", what, plain(number(f.st.StrainRate, 3)))
	}
	return s + f.remarks()
}

// remarks says in a caption what the marks mean and what is left out.
func (f columnFigure) remarks() string {
	var s string
	if _, _, ok := f.st.Column.RootSpan(); ok {
		s = " The root is tinted."
	}
	if f.drawsStress() {
		if _, ok := f.pull(); ok {
			s += " Dashed down the root: the stress of its weight, its excess density times gravity and thickness."
		}
	}
	if slices.Contains(f.prof.capped, true) || slices.Contains(f.prof.floored, true) {
		s += " Grey along a curve: held at a viscosity limit."
	}
	if slices.Contains(f.prof.yielding, true) {
		s += " Blue along a curve: friction decides, not creep."
	} else if f.drawsStress() && f.creeps() {
		s += " No rock yields by friction."
	}
	return s + f.layers.remark()
}

// creeps reports whether a rock flows by a creep law.
func (f columnFigure) creeps() bool {
	return slices.ContainsFunc(f.st.Column.Layers, func(l column.Layer) bool { return l.Viscosity.Creep != nil })
}

// excess is by how much a layer is denser at its base than the rock below it, in kg/m³:
// of the root's layers, than the rock below the root. It is negative where the layer is
// the lighter one, and 0 where there is no rock below.
func (f columnFigure) excess(i int) float64 {
	below := i
	for below+1 < len(f.st.Layers) && f.layers.all[i].root && f.layers.all[below+1].root {
		below++
	}
	base := f.st.Column.Base.Boundary
	if below == len(f.st.Layers)-1 && base != column.HalfSpace && base != column.Inviscid || below+1 >= len(f.st.Jumps) {
		return 0
	}
	return f.foot(i) - f.foot(below) - f.st.Jumps[below+1]
}

// foot is a layer's density at its base.
func (f columnFigure) foot(i int) float64 {
	points := f.st.Layers[i].Points
	return points[len(points)-1].Density
}

// heavy lists the indices of layers denser than what lies below them.
func (f columnFigure) heavy() []int {
	var out []int
	for i := range f.st.Layers {
		if f.excess(i) > 0 {
			out = append(out, i)
		}
	}
	return out
}

// narrowest is the width at which the panels' titles do not yet touch.
const narrowest vg.Length = 41

// draw lays the panels out: depth axis, names, panels, pressure axis.
func (f columnFigure) draw(s *sheet) {
	const gap = 5
	box := vg.Rectangle{Min: vg.Point{Y: s.Min.Y + xAxisHeight(2) + 2}, Max: vg.Point{Y: s.Max.Y - 14}}
	probe := &panel{sheet: s, box: box, y: f.layers.depth()}
	depths := linearTicks(probe.y, probe.yFits)
	pressures := f.pressureTicks(probe)
	n := len(f.panels)
	left := s.Min.X + yAxisWidth(depths) + 2
	strip := f.layers.stripWidth(s.Max.X - s.Min.X)
	right := s.Max.X - yAxisWidth(pressures) - 2
	wide := (right - left - strip - vg.Length(n-1)*gap) / vg.Length(n)
	if short := narrowest - wide; short > 0 { // at the cost of names
		strip, wide = strip-short*vg.Length(n), narrowest
	}

	names := &panel{sheet: s, box: box, x: linear(0, 1), y: probe.y}
	names.box.Min.X, names.box.Max.X = left, left+strip
	f.layers.strip(names)
	names.frame()
	names.vertical("Depth (km)", depths, false)

	for i, part := range f.panels {
		p := &panel{sheet: s, box: box, y: probe.y, overhang: 1}
		p.box.Min.X = left + strip + vg.Length(i)*(wide+gap)
		p.box.Max.X = p.box.Min.X + wide
		part.draw(p)
		p.frame()
		if n > 1 {
			p.letter("(" + string(rune('a'+i)) + ")")
		}
		if i == n-1 {
			p.vertical("Pressure (GPa)", pressures, true)
		}
	}
}

// pressureTicks puts round pressures at their depths.
func (f columnFigure) pressureTicks(p *panel) []tick {
	z, pr := f.prof.depth, f.prof.pressure
	var most float64
	for i := range z {
		if z[i] <= f.layers.bottom {
			most = math.Max(most, pr[i])
		}
	}
	at := func(v float64) float64 {
		for i := 1; i < len(z); i++ {
			if v <= pr[i] && pr[i] > pr[i-1] {
				return z[i-1] + (z[i]-z[i-1])*(v-pr[i-1])/(pr[i]-pr[i-1])
			}
		}
		return z[0]
	}
	place := func(ts []tick) []tick {
		out := make([]tick, len(ts))
		for i, t := range ts {
			out[i] = tick{at(t.at), t.label}
		}
		return out
	}
	return place(linearTicks(linear(0, most), func(ts []tick) bool { return p.yFits(place(ts)) }))
}
