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
	"gonum.org/v1/plot/vg/draw"

	"keelfall/solver/growth"
)

// branchStyles tell the named branches apart, the fastest first. The yellow is darkened
// to be seen on white.
var branchStyles = []draw.LineStyle{
	stroke(black, 1.1, solid),
	stroke(vermillion, 1.1, []vg.Length{6, 1.8}),
	stroke(blue, 1.1, []vg.Length{3, 1.4}),
	stroke(green, 1.1, []vg.Length{7, 1.6, 1.4, 1.6}),
	stroke(purple, 1.1, []vg.Length{1.5, 1.3}),
	stroke(orange, 1.1, []vg.Length{10, 2.5}),
	stroke(sky, 1.1, []vg.Length{5, 1.5, 1.2, 1.5, 1.2, 1.5}),
	stroke(shade(yellow, 0.72), 1.1, []vg.Length{4, 3}),
}

// restStyle is for the branches that are not named.
var restStyle = stroke(midGrey, thin, solid)

// Branches draws growth rate and e-folding time of every branch against wavelength. The
// branches are numbered in their order and named by labels, one each; of a long list
// only the fastest are. Without a branch the figure says so. width is ColumnWidth
// where 0.
func Branches(all []growth.Branch, labels []string, against Setting, width vg.Length) (Figure, error) {
	width, err := pageWidth(width)
	if err != nil {
		return Figure{}, err
	}
	if err := sameLength("labels and branches", len(labels), len(all)); err != nil {
		return Figure{}, err
	}
	f := branchesFigure{arcLimit: against.limit()}
	if err := finite("arc", f.arc); err != nil {
		return Figure{}, err
	}
	points := 0
	var lambda [][]float64
	for i, b := range all {
		if len(b.Modes) == 0 {
			continue
		}
		l, err := newBranchLine(i+1, labels[i], b)
		if err != nil {
			return Figure{}, err
		}
		f.lines, lambda, points = append(f.lines, l), append(lambda, l.wavelength), max(points, len(l.wavelength))
	}
	if len(f.lines) == 0 {
		return Figure{Name: "branches", Caption: "Growth rate against wavelength: no growing mode was found.",
			Width: width, Height: 20 * vg.Millimeter, draw: noBranch}, nil
	}
	slices.SortStableFunc(f.lines, func(a, b branchLine) int { return cmp.Compare(b.rate[b.top], a.rate[a.top]) })
	lo, hi, _ := bounds(lambda...)
	f.x = logarithmic(lo, hi)
	if points <= fewPoints {
		f.x = logarithmic(f.x.lo/1.1, f.x.hi*1.1) // whole dots at the ends
	}
	height := vg.Length(59+3*f.named()) * vg.Millimeter
	return Figure{Name: "branches", Caption: f.caption(), Width: width, Height: height, draw: f.draw}, nil
}

// branchesFigure is in km and 1/Myr.
type branchesFigure struct {
	arcLimit
	x     scale
	lines []branchLine // the fastest first
}

// branchLine is one branch by increasing wavelength.
type branchLine struct {
	number           int
	label            string
	wavelength, rate []float64
	oscillates       []bool
	top              int // where it is fastest
}

func newBranchLine(number int, label string, b growth.Branch) (branchLine, error) {
	l := branchLine{number: number, label: literal(label)}
	if slices.Contains(b.Modes, nil) {
		return l, fmt.Errorf("plots: branch %d: a mode is missing", number)
	}
	modes := slices.Clone(b.Modes)
	slices.SortStableFunc(modes, func(a, b *growth.Mode) int { return cmp.Compare(a.Wavelength, b.Wavelength) })
	for i, m := range modes {
		if err := finite(fmt.Sprintf("imaginary rate of branch %d", number), m.Imaginary); err != nil {
			return l, err
		}
		l.wavelength, l.rate = append(l.wavelength, m.Wavelength/km), append(l.rate, m.Growth*myr)
		l.oscillates = append(l.oscillates, m.Imaginary != 0)
		if l.rate[i] > l.rate[l.top] {
			l.top = i
		}
	}
	if err := wavelengths(l.wavelength); err != nil {
		return l, err
	}
	return l, finite(fmt.Sprintf("growth rate of branch %d", number), l.rate...)
}

// named is how many branches are named.
func (f branchesFigure) named() int { return min(len(f.lines), len(branchStyles)) }

// style is the line of branch i.
func (f branchesFigure) style(i int) draw.LineStyle {
	if i < f.named() {
		return branchStyles[i]
	}
	return restStyle
}

func (f branchesFigure) caption() string {
	s := "Growth rate of every branch of modes against wavelength; dots: each branch where it is fastest" + f.arcWords() + "."
	if slices.ContainsFunc(f.lines, func(l branchLine) bool { return slices.Contains(l.oscillates, true) }) {
		s += " Open circles: the mode oscillates."
	}
	var names []string
	for _, l := range f.lines[:f.named()] {
		names = append(names, l.words())
	}
	s += " Fastest: " + strings.Join(names, "; ") + "."
	switch rest := len(f.lines) - f.named(); {
	case rest == 1:
		s += " Thin grey: one slower branch."
	case rest > 1:
		s += fmt.Sprintf(" Thin grey: %d slower branches.", rest)
	}
	return s
}

// words tell a branch's number, name and pace.
func (l branchLine) words() string {
	name := []rune(strings.ReplaceAll(plain(l.label), string(unbreakable), ""))
	if len(name) > 60 {
		name = append(name[:59:59], '…')
	}
	s := strings.TrimSpace(fmt.Sprintf("%d %s", l.number, string(name)))
	q := l.rate[l.top]
	pace := "neither grows nor decays"
	switch {
	case q > 0:
		pace = plain(number(1/q, 3)) + " Myr"
	case q < 0:
		pace = "decays by 1/e in " + plain(number(-1/q, 3)) + " Myr"
	}
	return s + " (" + plain(number(l.wavelength[l.top], 3)) + " km, " + pace + ")"
}

// noBranch says that there is none.
func noBranch(s *sheet) {
	at := vg.Point{X: (s.Min.X + s.Max.X) / 2, Y: (s.Min.Y + s.Max.Y) / 2}
	s.text(at, "No growing mode at any wavelength", textStyle{color: darkGrey, x: text.XCenter, y: text.YCenter})
}

func (f branchesFigure) draw(s *sheet) {
	var rates [][]float64
	for _, l := range f.lines {
		rates = append(rates, l.rate)
	}
	seen := make([][][]vg.Point, len(f.lines)) // of each branch, its parts on the page
	axes := rateAxes(rates...)
	axes.back, axes.front = f.arcBand, f.arcLine
	axes.curves = func(p *panel) {
		p.hline(0, stroke(midGrey, thin, solid))
		for i, l := range slices.Backward(f.lines) {
			before := len(p.lines)
			p.line(fmt.Sprintf("branch %d", l.number), l.wavelength, l.rate, f.style(i))
			seen[i] = slices.Clone(p.lines[before:])
			l.rings(p, f.style(i).Color)
		}
		for i, l := range slices.Backward(f.lines) {
			if at := p.pt(l.wavelength[l.top], l.rate[l.top]); p.clip().Contains(at) {
				p.dot(at, 0.9+0.7*f.style(i).Width, f.style(i).Color)
				seen[i] = append(seen[i], []vg.Point{at, at})
			}
		}
	}
	axes.labels = func(p *panel) {
		f.arcLabel(p)
		f.names(p, seen)
	}
	s.stack([]part{axes}, f.x, s.Min.Y+xAxisHeight(1)+2, s.Max.Y-6, "Wavelength (km)", func(p *panel) []tick { return logTicks(p.x, true, p.xFits) })
}

// rings marks the stretches where the branch oscillates, evenly along the line.
func (l branchLine) rings(p *panel, c color.Color) {
	const every, least = 5, 3.2
	last := vg.Point{X: vg.Length(math.Inf(-1))}
	mark := func(at vg.Point) {
		if apart(at, last) >= least && p.clip().Contains(at) {
			p.ring(at, 1.2, 0.55, c)
			last = at
		}
	}
	left := vg.Length(0) // to the next mark
	for i := range l.wavelength {
		if !l.oscillates[i] {
			continue
		}
		at := p.pt(l.wavelength[i], l.rate[i])
		if i == 0 || !l.oscillates[i-1] {
			mark(at)
			left = every
			continue
		}
		from := p.pt(l.wavelength[i-1], l.rate[i-1])
		long := apart(from, at)
		if long > 1e4 { // far off the panel
			continue
		}
		for ; left <= long; left += every {
			mark(from.Add(at.Sub(from).Scale(left / long)))
		}
		left -= long
	}
}

// apart is the distance of two points.
func apart(a, b vg.Point) vg.Length { return vg.Length(math.Hypot(float64(a.X-b.X), float64(a.Y-b.Y))) }

// names writes each named branch's number and label: where it is fastest, else beside
// its line, else with a leader to it, else the number alone. seen is where each line is
// on the page; one off the panel has no name.
func (f branchesFigure) names(p *panel, seen [][][]vg.Point) {
	done := make([]bool, f.named())
	for step := range 6 {
		for i, l := range f.lines[:f.named()] {
			if done[i] || len(seen[i]) == 0 {
				continue
			}
			others := slices.Concat(slices.Concat(seen[:i]...), slices.Concat(seen[i+1:]...))
			c := nameColor(branchStyles[i].Color)
			var beside []spot
			anchors := []vg.Point{p.pt(l.wavelength[l.top], l.rate[l.top])}
			if at := anchors[0]; p.clip().Contains(at) {
				beside = append([]spot{{at.Add(vg.Point{Y: 4.5}), text.XCenter, text.YBottom}}, around(at, 4.5)[:8]...)
			} else {
				anchors = nil
			}
			if step > 0 {
				for _, part := range seen[i] {
					beside = append(beside, along(part, 3)...)
					anchors = append(anchors, part[len(part)/2], part[len(part)/4], part[3*len(part)/4])
				}
			}
			near := func(w string) bool { return p.beside(w, c, beside, seen[i], others) }
			lead := func(w string) bool {
				return slices.ContainsFunc(anchors, func(at vg.Point) bool { return p.lead(at, w, c, others) })
			}
			words, alone := l.wordings(p.box.Max.X-p.box.Min.X), []string{fmt.Sprint(l.number)}
			switch step {
			case 0, 1:
				done[i] = slices.ContainsFunc(words, near)
			case 2:
				done[i] = slices.ContainsFunc(words, lead)
			case 3:
				done[i] = slices.ContainsFunc(alone, near)
			case 4:
				done[i] = slices.ContainsFunc(alone, lead)
			default:
				p.place(c, p.box, beside, alone...)
			}
		}
	}
}

// nameColor darkens light colours: thin type needs more contrast than a line.
func nameColor(c color.Color) color.Color {
	if v, ok := c.(color.NRGBA); ok && v.G > 110 {
		return shade(v, 0.8)
	}
	return c
}

// beside writes txt at the first of spots that is clear of all and clearly next to own.
func (p *panel) beside(txt string, c color.Color, spots []spot, own, others [][]vg.Point) bool {
	for _, sp := range spots {
		st := textStyle{color: c, x: sp.x, y: sp.y}
		if _, n := p.best(txt, p.box, []spot{sp}); n == 0 && nearest(textBox(sp.at, txt, st), own, others) {
			p.text(sp.at, txt, st)
			return true
		}
	}
	return false
}

// nearest reports whether box lies close to one of the lines own and clearly closer
// than to any of others.
func nearest(box vg.Rectangle, own, others [][]vg.Point) bool {
	touched := func(lines [][]vg.Point, room vg.Rectangle) bool {
		return (&sheet{lines: lines}).crossed(room) > 0
	}
	for d := vg.Length(1); d < 10; d++ {
		if touched(own, grown(box, d)) {
			return !touched(others, grown(box, d+1.5))
		}
	}
	return false
}

// wordings are the number and label on more and more lines, for a panel so wide.
func (l branchLine) wordings(room vg.Length) []string {
	whole := strings.TrimSpace(fmt.Sprintf("%d %s", l.number, l.label))
	w := width(whole, typeSize)
	return slices.Compact([]string{wrap(whole, typeSize, 0.6*room, 1), wrap(whole, typeSize, min(0.36*room, max(0.65*w, 30)), 2),
		wrap(whole, typeSize, min(0.25*room, max(0.5*w, 30)), 3)})
}

// lead writes txt where it is clear of all, with a thin line to at that crosses no text,
// few of others and none of their dots.
func (p *panel) lead(at vg.Point, txt string, c color.Color, others [][]vg.Point) bool {
	const reach, most = 85, 2
	for _, sp := range nearby(at, p.box, reach) {
		st := textStyle{color: c, x: sp.x, y: sp.y}
		box := textBox(sp.at, txt, st)
		if room := grown(box, 1.4); !inside(room, p.box) || p.taken(room) || p.crossed(room) > 0 {
			continue
		}
		near := grown(box, 1)
		foot := vg.Point{X: min(max(at.X, near.Min.X), near.Max.X), Y: min(max(at.Y, near.Min.Y), near.Max.Y)}
		if slices.ContainsFunc(p.texts, func(t placed) bool { return crosses(foot, at, t.box) }) || met(foot, at, others) > most {
			continue
		}
		p.text(sp.at, txt, st)
		p.segment(foot, at, stroke(c, hair, solid))
		p.lines = append(p.lines, []vg.Point{foot, at})
		return true
	}
	return false
}

// met counts the lines that the segment from a to b meets; a dot short of b counts for
// many.
func met(a, b vg.Point, lines [][]vg.Point) int {
	n := 0
	side := func(a, b, c vg.Point) bool { return (b.X-a.X)*(c.Y-a.Y) > (b.Y-a.Y)*(c.X-a.X) }
	for _, l := range lines {
		if len(l) == 2 && l[0] == l[1] && l[0] != b && crosses(a, b, grown(vg.Rectangle{Min: l[0], Max: l[0]}, 4)) {
			n += 10
		}
		for i := 1; i < len(l); i++ {
			if side(a, b, l[i-1]) != side(a, b, l[i]) && side(l[i-1], l[i], a) != side(l[i-1], l[i], b) {
				n++
			}
		}
	}
	return n
}
