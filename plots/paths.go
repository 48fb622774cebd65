package plots

import (
	"cmp"
	"fmt"
	"image/color"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/plot/vg"

	"keelfall/solver/heat"
)

// HasPaths reports whether there is anything for Paths to draw.
func (t *Thermal) HasPaths() bool {
	return len(t.History.Paths) > 0 || t.Fit != nil && len(t.Fit.Residuals) > 0
}

// Paths draws pressure, downward, against temperature: a line for every marker with
// times along it, the solidus of markers' rocks that melt by one, samples with their
// errors where the geotherm was fitted to some, and the geotherm at the start. width is
// ColumnWidth where 0; an error where there is neither marker nor sample.
func Paths(t *Thermal, width vg.Length) (Figure, error) {
	width, err := pageWidth(width)
	if err != nil {
		return Figure{}, err
	}
	if err := t.check(); err != nil {
		return Figure{}, err
	}
	if !t.HasPaths() {
		return Figure{}, fmt.Errorf("plots: there is neither a marker nor a sample to draw")
	}
	f := &pathsFigure{Thermal: t}
	for i := range t.History.Paths {
		if p := &t.History.Paths[i]; len(p.Time) > 0 {
			f.paths = append(f.paths, p)
		}
	}
	f.samples = t.samples()
	if err := finite("samples", flatten(f.samples)...); err != nil {
		return Figure{}, err
	}
	f.scales()
	return Figure{Name: "paths", Caption: f.caption(), Width: width, Height: 92 * vg.Millimeter, draw: f.draw}, nil
}

type pathsFigure struct {
	*Thermal
	paths   []*heat.Path
	samples []measured
	x, y    scale // °C, GPa
	solidi  []solidus
}

// scales take in every path and every sample with its errors, and as much of a solidus
// as lies near them.
func (f *pathsFigure) scales() {
	var t, p []float64
	for _, path := range f.paths {
		for i := range path.T {
			t, p = append(t, path.T[i]-zeroCelsius), append(p, path.P[i]/gpa)
		}
	}
	for _, m := range f.samples {
		t, p = append(t, m.t-m.dt, m.t+m.dt), append(p, m.p-m.dp, m.p+m.dp)
	}
	lo, hi, _ := bounds(t)
	f.x = padded(math.Floor(lo/10)*10, math.Ceil(hi/10)*10, 0.12)
	if f.x.hi-f.x.lo < 60 {
		f.x = linear((lo+hi)/2-30, (lo+hi)/2+30)
	}
	if lo >= 0 {
		f.x.lo = math.Max(f.x.lo, 0)
	}
	lo, hi, _ = bounds(p)
	f.y = padded(lo, hi, 0.12)
	if f.y.hi-f.y.lo < 0.2 {
		f.y = linear((lo+hi)/2-0.1, (lo+hi)/2+0.1)
	}
	f.y.lo = math.Max(f.y.lo, 0)
	f.y.down = true
	f.findSolidi()
}

func (f *pathsFigure) caption() string {
	var parts []string
	if len(f.paths) > 0 {
		parts = append(parts, "Pressure and temperature of "+f.markers()+" through time, dots at the times written beside them.")
	}
	if len(f.samples) > 0 {
		parts = append(parts, "Crosses: samples with errors of one standard deviation, to which the geotherm at the start (grey) was fitted.")
	} else {
		parts = append(parts, "Grey: the geotherm at the start.")
	}
	for _, s := range f.solidi {
		if f.crosses(s) {
			parts = append(parts, "Dashed: the solidus of "+plain(s.name)+".")
		}
	}
	for _, p := range f.paths {
		if p.Ended {
			w, _ := f.when(p.Time[len(p.Time)-1])
			parts = append(parts, fmt.Sprintf("%s ends at %s: %s.", literal(p.Name), plain(w), literal(p.Reason)))
		}
	}
	return plain(strings.Join(parts, " "))
}

// markers names up to four markers.
func (f *pathsFigure) markers() string {
	if len(f.paths) > 4 {
		return number(float64(len(f.paths)), 4) + " markers"
	}
	var names []string
	for _, p := range f.paths {
		names = append(names, literal(p.Name))
	}
	return strings.Join(names, ", ")
}

var pathColours = []color.NRGBA{black, blue, green, purple, orange, sky}

func (f *pathsFigure) draw(s *sheet) {
	p := &panel{sheet: s, x: f.x, y: f.y, overhang: 5}
	p.box = vg.Rectangle{Min: vg.Point{Y: s.Min.Y + xAxisHeight(1) + 2}, Max: vg.Point{X: s.Max.X - 8, Y: s.Max.Y - 7}}
	pressures := linearTicks(p.y, p.yFits)
	p.box.Min.X = s.Min.X + yAxisWidth(pressures) + 2
	t, _, pr := geotherm(f.History.Snapshots[0].Profile)
	p.line("geotherm at the start", t, pr, stroke(midGrey, thin, solid))
	ground := len(p.lines)
	after := make([]int, len(f.solidi)) // how many lines there are once each solidus is drawn
	for i, l := range f.solidi {
		p.line("solidus of "+l.name, l.t, l.p, stroke(vermillion, medium, dashed))
		after[i] = len(p.lines)
	}
	for i, path := range f.paths {
		p.line(path.Name, celsius(path.T), divided(path.P, gpa), stroke(pathColours[i%len(pathColours)], 1.1, solid))
	}
	for i, path := range f.paths {
		f.marks(p, path, pathColours[i%len(pathColours)])
	}
	f.crossesOf(p)
	p.frame()
	p.vertical("Pressure (GPa)", pressures, false)
	p.horizontal("Temperature (°C)", linearTicks(p.x, p.xFits), false)
	f.names(p)
	for i, path := range f.paths {
		f.times(p, path, pathColours[i%len(pathColours)])
	}
	for _, m := range f.samples {
		if m.name != "" {
			p.place(darkGrey, p.box, around(p.pt(m.t, m.p), 3)[:24], m.name)
		}
	}
	for i, l := range f.solidi {
		if f.crosses(l) && after[i] > ground {
			p.place(vermillion, p.box, along(p.lines[after[i]-1], 3), "solidus, "+l.name, "solidus")
		}
	}
	if ground > 0 {
		word, _ := f.when(f.History.Snapshots[0].Time)
		p.place(midGrey, p.box, along(p.lines[ground-1], 3), "geotherm, "+word, "geotherm")
	}
}

// labelled are the times in s at which a path is dotted: round ones, its beginning and
// its end.
func (f *pathsFigure) labelled(path *heat.Path) []float64 {
	first, last := path.Time[0], path.Time[len(path.Time)-1]
	out := []float64{first, last}
	step := niceStep((last-first)/myr/6) * myr
	offset := 0.0
	if f.HasTimeZero {
		offset = math.Mod(f.TimeZero, step)
	}
	for t := first - math.Mod(first, step) + offset - step; t < last; t += step {
		if t > first+0.3*step && t < last-0.3*step {
			out = append(out, t)
		}
	}
	return out
}

// marks draws the dots of a path.
func (f *pathsFigure) marks(p *panel, path *heat.Path, c color.Color) {
	for _, t := range f.labelled(path) {
		p.dot(f.point(p, path, t), 1.5, c)
	}
}

// point is where a path is at the time t in s.
func (f *pathsFigure) point(p *panel, path *heat.Path, t float64) vg.Point {
	if len(path.Time) == 1 {
		return p.pt(path.T[0]-zeroCelsius, path.P[0]/gpa)
	}
	return p.pt(interpolate(path.Time, path.T, t)-zeroCelsius, interpolate(path.Time, path.P, t)/gpa)
}

// names writes every marker's name by its path, near where it ends.
func (f *pathsFigure) names(p *panel) {
	for i, path := range f.paths {
		var line []vg.Point
		for j := range path.T {
			line = append(line, p.pt(path.T[j]-zeroCelsius, path.P[j]/gpa))
		}
		spots := append(around(line[len(line)/2], 4)[:16], along(line, 3)...)
		spots = append(spots, nearby(line[len(line)/2], p.box, 60)...)
		p.place(pathColours[i%len(pathColours)], p.box, spots, shorten(literal(path.Name), typeSize, 0.5*(p.box.Max.X-p.box.Min.X)))
	}
}

// times labels a path's dots, the first and the last before those between; a dot close
// to one that has its label goes without.
func (f *pathsFigure) times(p *panel, path *heat.Path, c color.Color) {
	const close = 7
	var done []vg.Point
	for i, t := range f.labelled(path) {
		at := f.point(p, path, t)
		if slices.ContainsFunc(done, func(q vg.Point) bool { return math.Hypot(float64(q.X-at.X), float64(q.Y-at.Y)) < close }) {
			continue
		}
		whole, short := f.when(t)
		put, spots := p.placeClear, around(at, 3.5)[:16]
		if i < 2 && len(f.paths) <= len(pathColours) { // the path's ends, in any case
			put = func(c color.Color, spots []spot, w ...string) bool { return p.place(c, p.box, spots, w...) }
			spots = outward(at, f.inner(p, path, i))
		}
		if put(c, spots, whole, short) {
			done = append(done, at)
		}
	}
}

// inner is the dot next to the path's first (0) or last (1).
func (f *pathsFigure) inner(p *panel, path *heat.Path, end int) vg.Point {
	all := f.labelled(path)
	switch {
	case len(all) == 2:
		return f.point(p, path, all[1-end])
	case end == 0:
		return f.point(p, path, all[2])
	}
	return f.point(p, path, all[len(all)-1])
}

// outward lists the places about a path's end, those away from the dot next to it first.
func outward(at, next vg.Point) []spot {
	const ring = 8 // places at one distance, in around
	spots := around(at, 3.5)[:3*ring]
	away := func(s spot) float64 {
		d := s.at.Sub(at)
		return float64(d.X*(at.X-next.X)+d.Y*(at.Y-next.Y)) / math.Hypot(float64(d.X), float64(d.Y))
	}
	for i := 0; i < len(spots); i += ring {
		slices.SortStableFunc(spots[i:i+ring], func(a, b spot) int { return cmp.Compare(away(b), away(a)) })
	}
	return spots
}

// crossesOf draws the samples' crosses, as long as their errors.
func (f *pathsFigure) crossesOf(p *panel) {
	for _, m := range slices.SortedStableFunc(slices.Values(f.samples), func(a, b measured) int { return cmp.Compare(a.p, b.p) }) {
		st := stroke(darkGrey, thin, solid)
		for _, l := range [][]vg.Point{{p.pt(m.t-m.dt, m.p), p.pt(m.t+m.dt, m.p)}, {p.pt(m.t, m.p-m.dp), p.pt(m.t, m.p+m.dp)}} {
			p.StrokeLines(st, l)
			p.lines = append(p.lines, l)
		}
		p.ring(p.pt(m.t, m.p), 1.9, 0.8, darkGrey)
		p.curves = append(p.curves, curve{"sample " + m.name, []float64{m.t - m.dt, m.t, m.t + m.dt}, []float64{m.p - m.dp, m.p, m.p + m.dp}})
	}
}

func celsius(T []float64) []float64 {
	out := make([]float64, len(T))
	for i, v := range T {
		out[i] = v - zeroCelsius
	}
	return out
}
