package plots

import (
	"cmp"
	"fmt"
	"image/color"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

// Cover says whether a law was calibrated at a temperature, pressure and stress.
type Cover int

// The temperatures of a law's experiments are not known, its experiments reached the
// conditions as far as they are known, or did not.
const (
	CoverUnknown Cover = iota
	CoverInside
	CoverOutside
)

// MostLaws is how many laws one figure takes.
const MostLaws = 12

// tinted is up to how many laws the published errors are drawn as tints.
const tinted = 3

// highestShown is the log₁₀ of the viscosity in Pa s above which curves are cut: rock
// does not creep there in the age of the Earth.
const highestShown = 26

// LawCurve is one creep law against temperature.
type LawCurve struct {
	Name  string
	T     []float64 // K, increasing, two or more
	Log   []float64 // log₁₀ of the viscosity in Pa s
	Cover []Cover   // one a temperature
	Error []float64 // of Log, one published standard error; nil where none is known

	OffPressure bool   // the experiments were at other pressures
	ErrorNote   string // how Error was found, or why there is none: a sentence or more; may be empty
}

// Laws draws the viscosity of up to MostLaws creep laws against temperature, each named
// at its end. at says in words, for the caption, at what strain rate, pressure, grain
// size and water. width is ColumnWidth where 0.
func Laws(curves []LawCurve, at string, width vg.Length) (Figure, error) {
	width, err := pageWidth(width)
	if err != nil {
		return Figure{}, err
	}
	if len(curves) == 0 || len(curves) > MostLaws {
		return Figure{}, fmt.Errorf("plots: %d creep laws; a figure takes 1 to %d", len(curves), MostLaws)
	}
	for _, c := range curves {
		if err := c.check(); err != nil {
			return Figure{}, err
		}
	}
	f := lawFigure{curves: slices.Clone(curves), at: at}
	slices.SortStableFunc(f.curves, func(a, b LawCurve) int { return cmp.Compare(a.end(), b.end()) }) // the weakest first: upward
	var high, long vg.Length
	for _, c := range f.curves {
		long = max(long, nameWidth(c.Name))
	}
	f.strip = min(0.4*width, long+lawTie+8)
	for _, c := range f.curves {
		f.names = append(f.names, newName(0, literal(c.Name), f.strip-lawTie-6, 4))
		high += f.names[len(f.names)-1].height + 1
	}
	high = max(85*vg.Millimeter, high+xAxisHeight(1)+14)
	return Figure{Name: "laws", Caption: f.caption(), Width: width, Height: high, draw: f.draw}, nil
}

// check refuses what cannot be drawn.
func (c LawCurve) check() error {
	if len(c.T) < 2 || len(c.Log) != len(c.T) || len(c.Cover) != len(c.T) || c.Error != nil && len(c.Error) != len(c.T) {
		return fmt.Errorf("plots: %s: %d temperatures, %d viscosities, %d covers, %d errors", c.Name, len(c.T), len(c.Log), len(c.Cover), len(c.Error))
	}
	for i := 1; i < len(c.T); i++ {
		if !(c.T[i] > c.T[i-1]) {
			return fmt.Errorf("plots: %s: %g K stands after %g K; needs increasing temperatures", c.Name, c.T[i], c.T[i-1])
		}
	}
	for _, err := range []error{finite("temperature of "+c.Name, c.T...), finite("viscosity of "+c.Name, c.Log...), finite("error of "+c.Name, c.Error...)} {
		if err != nil {
			return err
		}
	}
	return nil
}

// nameWidth is the width of a law's name in one line.
func nameWidth(s string) vg.Length { return width(literal(s), typeSize) }

func (c LawCurve) end() float64 { return c.Log[len(c.Log)-1] }

// lawTie is the length of the line from a curve's end to its name.
const lawTie vg.Length = 9

// lawFigure holds the curves, the weakest at the highest temperature first.
type lawFigure struct {
	curves []LawCurve
	names  []name
	at     string
	strip  vg.Length // of the names
}

func (f lawFigure) caption() string {
	s := "Viscosity against temperature by "
	if len(f.curves) == 1 {
		s += f.curves[0].Name
	} else {
		s += fmt.Sprintf("%d creep laws", len(f.curves))
	}
	s += " at " + f.at + "."
	has := func(k Cover) bool {
		return slices.ContainsFunc(f.curves, func(c LawCurve) bool { return slices.Contains(c.Cover, k) })
	}
	if has(CoverOutside) {
		s += " Dashed: outside the temperatures, pressures or stresses of its experiments, as far as those are known."
	}
	if has(CoverUnknown) {
		s += " Thin: the temperatures of its experiments are not known."
	}
	var off []string
	for _, c := range f.curves {
		if c.OffPressure {
			off = append(off, literal(c.Name))
		}
	}
	if len(off) > 0 {
		s += " Measured at other pressures: " + strings.Join(off, ", ") + "."
	}
	if f.tints() {
		s += " Tints: one published standard error."
	}
	if len(f.curves) <= tinted {
		for _, c := range f.curves {
			if c.ErrorNote != "" {
				s += " " + c.ErrorNote
			}
		}
	}
	if lo, hi := f.range10(); hi == highestShown && hi > lo {
		s += fmt.Sprintf(" Above 10^%d Pa s nothing is drawn.", highestShown)
	}
	return s
}

// tints reports whether errors are drawn.
func (f lawFigure) tints() bool {
	return len(f.curves) <= tinted && slices.ContainsFunc(f.curves, func(c LawCurve) bool { return c.Error != nil })
}

// range10 is what is shown of log₁₀ of the viscosity.
func (f lawFigure) range10() (lo, hi float64) {
	lo, hi = math.Inf(1), math.Inf(-1)
	for _, c := range f.curves {
		for i, v := range c.Log {
			e := 0.0
			if c.Error != nil && f.tints() {
				e = c.Error[i]
			}
			lo, hi = math.Min(lo, v-e), math.Max(hi, v+e)
		}
	}
	if lo < highestShown-2 {
		hi = math.Min(hi, highestShown)
	}
	return lo, hi
}

func (f lawFigure) draw(s *sheet) {
	lo, hi := f.range10()
	y := padded(lo, hi, 0.03)
	if hi == highestShown {
		y.hi = highestShown
	}
	p := &panel{sheet: s, y: y, overhang: 6}
	p.box = vg.Rectangle{Min: vg.Point{Y: s.Min.Y + xAxisHeight(1) + 2}, Max: vg.Point{X: s.Max.X - f.strip, Y: s.Max.Y - 6}}
	ticks := linearTicks(p.y, func(ts []tick) bool { // half decades only where there are few
		return p.yFits(ts) && (hi-lo < 4 || len(ts) < 2 || ts[1].at-ts[0].at > 0.9)
	})
	p.box.Min.X = s.Min.X + yAxisWidth(ticks) + 2
	from, to := math.Inf(1), math.Inf(-1)
	for _, c := range f.curves {
		from, to = math.Min(from, c.T[0]-zeroCelsius), math.Max(to, c.T[len(c.T)-1]-zeroCelsius)
	}
	p.x = linear(from, to)
	if f.tints() {
		f.errors(p)
	}
	for i := range f.curves {
		f.curve(p, i)
	}
	p.frame()
	p.horizontal("Temperature (°C)", linearTicks(p.x, p.xFits), false)
	p.vertical("Viscosity (log_{10} Pa s)", ticks, false)
	f.label(p)
}

// errors draws the tints, the widest first, each with its edge.
func (f lawFigure) errors(p *panel) {
	var order []int
	for i, c := range f.curves {
		if c.Error != nil {
			order = append(order, i)
		}
	}
	slices.SortStableFunc(order, func(a, b int) int {
		return cmp.Compare(slices.Max(f.curves[b].Error), slices.Max(f.curves[a].Error))
	})
	for _, i := range order {
		c := f.curves[i]
		var x, y []float64
		for j := range c.T {
			x, y = append(x, c.T[j]-zeroCelsius), append(y, c.Log[j]+c.Error[j])
		}
		for j := len(c.T) - 1; j >= 0; j-- {
			x, y = append(x, c.T[j]-zeroCelsius), append(y, c.Log[j]-c.Error[j])
		}
		ink, _ := lawInk(i)
		p.area(x, y, tint(ink, 0.2))
	}
}

// lawInk is a curve's colour, and which mark it carries besides: 0 none, 1 dots, 2
// rings. Neighbours differ in both, so that they stay apart in grey.
func lawInk(i int) (color.NRGBA, int) {
	inks := []color.NRGBA{black, vermillion, blue, green, purple, shade(orange, 0.85), shade(sky, 0.9)}
	return inks[i%len(inks)], i % 3
}

// curve draws one law: thick where calibrated, dashed outside, thin where not known.
func (f lawFigure) curve(p *panel, i int) {
	c := f.curves[i]
	ink, mark := lawInk(i)
	for from := 0; from < len(c.T)-1; {
		to := from + 1
		for to < len(c.T)-1 && c.Cover[to] == c.Cover[from] {
			to++
		}
		st := stroke(ink, thick, solid)
		switch c.Cover[from] {
		case CoverOutside:
			st = stroke(ink, medium, dashed)
		case CoverUnknown:
			st = stroke(ink, medium, solid)
		}
		var x []float64
		for _, t := range c.T[from : to+1] {
			x = append(x, t-zeroCelsius)
		}
		p.line(c.Name, x, c.Log[from:to+1], st)
		from = to
	}
	for k := range 4 {
		j := (2*k + 1 + i%2) * (len(c.T) - 1) / 9
		at := p.pt(c.T[j]-zeroCelsius, c.Log[j])
		switch {
		case !p.y.has(c.Log[j]) || mark == 0:
		case mark == 1:
			p.dot(at, 1.7, ink)
		default:
			p.ring(at, 2, 0.8, ink)
		}
	}
}

// label names every curve beside its end, as near as there is room.
func (f lawFigure) label(p *panel) {
	centres, heights := make([]vg.Length, len(f.curves)), make([]vg.Length, len(f.curves))
	for i, c := range f.curves {
		centres[i], heights[i] = p.atY(math.Min(c.end(), p.y.hi)), f.names[i].height+1
	}
	at := spread(centres, heights, p.box.Min.Y-8, p.box.Max.Y+2)
	for i, n := range f.names {
		ink, _ := lawInk(i)
		right := p.box.Max.X
		p.StrokeLines(stroke(ink, medium, solid), []vg.Point{{X: right, Y: centres[i]}, {X: right + lawTie - 3, Y: at[i]}, {X: right + lawTie, Y: at[i]}})
		p.text(vg.Point{X: right + lawTie + 2, Y: at[i]}, n.text, textStyle{x: text.XLeft, y: text.YCenter})
	}
}
