package plots

import (
	"image/color"
	"math"
	"sort"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

// shown returns the values of the points above the depth shown, and the half-space's
// value where it is shown.
func (f columnFigure) shown(values []float64, base float64) []float64 {
	var out []float64
	for i, v := range values {
		if f.prof.depth[i] <= f.layers.bottom {
			out = append(out, v)
		}
	}
	if f.hasBase() {
		out = append(out, base)
	}
	return out
}

// hasBase reports whether rock below the column is shown.
func (f columnFigure) hasBase() bool { return f.layers.all[len(f.layers.all)-1].below }

// extended adds the half-space's constant value below the column.
func (f columnFigure) extended(values []float64, base float64) (x, z []float64) {
	x, z = append(x, values...), append(z, f.prof.depth...)
	if f.hasBase() {
		x = append(x, base, base)
		z = append(z, z[len(z)-1], f.layers.bottom)
	}
	return x, z
}

// density draws density, the inverted part filled.
func (f columnFigure) density(p *panel) {
	base := math.NaN() // not drawn
	if v := f.st.Base.Density; v > 0 {
		base = v
	}
	lo, hi, _ := bounds(f.shown(f.prof.density, base))
	p.x = padded(lo, hi, 0.12)
	f.layers.shade(p)
	heavy := f.heavy()
	for _, i := range heavy {
		f.inversion(p, i)
	}
	p.horizontal("Density\n(kg/m³)", linearTicks(p.x, p.xFits), false)
	x, z := f.extended(f.prof.density, base)
	p.line("density", x, z, stroke(black, 1.1, solid))
	// The largest differences are written first; a root's before others.
	sort.SliceStable(heavy, func(a, b int) bool {
		la, lb := f.layers.all[heavy[a]], f.layers.all[heavy[b]]
		if la.root != lb.root {
			return la.root
		}
		return f.excess(heavy[a]) > f.excess(heavy[b])
	})
	for _, i := range heavy[:min(len(heavy), 3)] {
		f.contrast(p, i)
	}
}

// inversion fills what layer i has of density above that of the rock below it.
func (f columnFigure) inversion(p *panel, i int) {
	below := f.foot(i) - f.excess(i)
	var x, z []float64
	for j, q := range f.prof.density {
		if f.prof.layer[j] == i {
			x, z = append(x, math.Max(q, below)), append(z, f.prof.depth[j])
		}
	}
	x, z = append(x, below, below), append(z, z[len(z)-1], z[0])
	p.area(x, z, heavyTint)
}

// contrast writes by how much layer i is denser than the rock below.
func (f columnFigure) contrast(p *panel, i int) {
	l := f.layers.all[i]
	if l.bottom > f.layers.bottom {
		return
	}
	rho := f.foot(i)
	edge := p.atX(rho - f.excess(i))
	mid := (p.atY(l.top) + p.atY(l.bottom)) / 2
	spots := []spot{
		{vg.Point{X: edge - 2.5, Y: mid}, text.XRight, text.YCenter},
		{vg.Point{X: p.atX(rho) + 3, Y: mid}, text.XLeft, text.YCenter},
	}
	for _, d := range []vg.Length{3, 8, 16} {
		for _, x := range []vg.Length{p.atX(rho), p.box.Max.X - 2.5} {
			spots = append(spots, spot{vg.Point{X: x, Y: p.atY(l.bottom) - d}, text.XRight, text.YTop})
		}
		spots = append(spots, spot{vg.Point{X: edge - 2.5, Y: p.atY(l.bottom) - d}, text.XRight, text.YTop},
			spot{vg.Point{X: edge - 2.5, Y: p.atY(l.top) + d}, text.XRight, text.YBottom},
			spot{vg.Point{X: p.box.Max.X - 2.5, Y: p.atY(l.top) + d}, text.XRight, text.YBottom})
	}
	by := "+" + number(f.excess(i), 3)
	p.place(black, p.box, spots, by+" kg/m³", by+"\nkg/m³")
}

// temperature draws temperature in °C.
func (f columnFigure) temperature(p *panel) {
	v := f.prof.temperature
	lo, hi, _ := bounds(f.shown(v, math.NaN()))
	p.x = padded(lo, hi, 0.08)
	f.layers.shade(p)
	p.horizontal("Temperature\n(°C)", linearTicks(p.x, p.xFits), false)
	p.line("temperature", v, f.prof.depth, stroke(black, 1.1, solid))
}

// viscosity draws the logarithm of viscosity, the parts held at a limit on grey.
func (f columnFigure) viscosity(p *panel) {
	logs := make([]float64, len(f.prof.viscosity))
	for i, v := range f.prof.viscosity {
		logs[i] = math.Log10(v)
	}
	base := math.NaN() // not drawn
	if v := f.st.Base.Viscosity; f.hasBase() && v > 0 {
		base = math.Log10(v)
	}
	lo, hi, _ := bounds(f.shown(logs, base))
	if hi-lo < 1 {
		lo, hi = lo-0.5, hi+0.5
	}
	p.x = padded(lo, hi, 0.08)
	f.layers.shade(p)
	p.horizontal("Viscosity\n(log_{10} Pa s)", linearTicks(p.x, p.xFits), false)
	name := f.limits(p, logs)
	x, z := f.extended(logs, base)
	p.line("viscosity", x, z, stroke(black, 1.1, solid))
	name()
}

// limits marks what holds a curve in place of creep and returns what names it once the
// curve is drawn.
func (f columnFigure) limits(p *panel, values []float64) func() {
	friction := f.limit(p, values, f.prof.yielding, frictionTint)
	high := f.limit(p, values, f.prof.capped, lineGrey)
	low := f.limit(p, values, f.prof.floored, lineGrey)
	return func() {
		friction("friction")
		high("upper limit", "upper\nlimit")
		low("lower limit", "lower\nlimit")
	}
}

// limit marks the stretches of a curve that are held and returns what names the longest
// of them once the curve is drawn.
func (f columnFigure) limit(p *panel, values []float64, held []bool, c color.Color) func(wordings ...string) {
	from, longest := 0, -1
	for i := 0; i < len(held); i++ {
		if !held[i] {
			continue
		}
		j := i
		for j+1 < len(held) && held[j+1] {
			j++
		}
		var pts []vg.Point
		for k := i; k <= j; k++ {
			pts = append(pts, p.pt(values[k], f.prof.depth[k]))
		}
		p.ribbon(pts, 2.5, c)
		if j-i > longest {
			from, longest = i, j-i
		}
		i = j
	}
	if longest < 0 {
		return func(...string) {}
	}
	mid := p.pt(values[from+longest/2], (f.prof.depth[from]+f.prof.depth[from+longest])/2)
	return func(wordings ...string) { p.place(darkGrey, p.box, nearby(mid, p.box, 34), wordings...) }
}

// ribbon fills what lies within d of a line on the page, cut at the frame; labels keep
// off it.
func (p *panel) ribbon(pts []vg.Point, d vg.Length, c color.Color) {
	n := len(pts)
	outline := make([]vg.Point, 2*n)
	for i := range pts {
		along := pts[min(i+1, n-1)].Sub(pts[max(i-1, 0)])
		length := vg.Length(math.Hypot(float64(along.X), float64(along.Y)))
		if length == 0 { // a single point: across the page
			along, length = vg.Point{Y: 1}, 1
		}
		side := vg.Point{X: -along.Y, Y: along.X}.Scale(d / length)
		outline[i], outline[2*n-1-i] = pts[i].Add(side), pts[i].Sub(side)
	}
	cut := p.clip().ClipPolygonXY(outline)
	p.polygon(cut, c)
	p.lines = append(p.lines, cut)
}
