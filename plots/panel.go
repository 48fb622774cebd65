package plots

import (
	"image/color"
	"math"
	"strings"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// Distances of an axis's parts, in points.
const (
	tickLength  vg.Length = 2.5
	minorLength vg.Length = 1.5
	tickGap     vg.Length = 2   // from a tick to its label
	titleGap    vg.Length = 3.5 // from the labels to the title
	labelSpace  vg.Length = 4   // least between two labels along a horizontal axis
)

// panel is one pair of axes on a sheet.
type panel struct {
	*sheet
	box      vg.Rectangle
	x, y     scale
	overhang vg.Length // that a label of a horizontal axis may hang over the panel's end
}

// pt is where (x, y) lies on the page.
func (p *panel) pt(x, y float64) vg.Point { return vg.Point{X: p.atX(x), Y: p.atY(y)} }

func (p *panel) atX(x float64) vg.Length {
	return p.box.Min.X + vg.Length(p.x.at(x))*(p.box.Max.X-p.box.Min.X)
}

func (p *panel) atY(y float64) vg.Length {
	return p.box.Min.Y + vg.Length(p.y.at(y))*(p.box.Max.Y-p.box.Min.Y)
}

// line draws a named curve, broken where it is not finite and cut at the frame.
func (p *panel) line(name string, x, y []float64, st draw.LineStyle) {
	p.curves = append(p.curves, curve{name, x, y})
	var part []vg.Point
	end := func() {
		for _, l := range p.clip().ClipLinesXY(part) {
			p.StrokeLines(st, l)
			p.lines = append(p.lines, l)
		}
		part = nil
	}
	for i := range x {
		q := p.pt(x[i], y[i])
		if math.IsNaN(float64(q.X+q.Y)) || math.IsInf(float64(q.X+q.Y), 0) {
			end()
			continue
		}
		part = append(part, q)
	}
	if len(part) == 1 {
		if c := p.clip(); c.Contains(part[0]) {
			p.dot(part[0], st.Width*1.3, st.Color)
		}
		return
	}
	end()
}

// clip is the sheet cut to the panel.
func (p *panel) clip() *draw.Canvas { return &draw.Canvas{Canvas: p.Canvas, Rectangle: p.box} }

// area fills a polygon given in the panel's units, cut at the frame.
func (p *panel) area(x, y []float64, c color.Color) {
	pts := make([]vg.Point, len(x))
	for i := range x {
		pts[i] = p.pt(x[i], y[i])
	}
	p.polygon(p.clip().ClipPolygonXY(pts), c)
}

// bandY fills the panel's width from y0 to y1; bandX its height from x0 to x1.
func (p *panel) bandY(y0, y1 float64, c color.Color) {
	p.rect(p.within(vg.Rectangle{Min: vg.Point{X: p.box.Min.X, Y: min(p.atY(y0), p.atY(y1))},
		Max: vg.Point{X: p.box.Max.X, Y: max(p.atY(y0), p.atY(y1))}}), c)
}

func (p *panel) bandX(x0, x1 float64, c color.Color) {
	p.rect(p.within(vg.Rectangle{Min: vg.Point{X: min(p.atX(x0), p.atX(x1)), Y: p.box.Min.Y},
		Max: vg.Point{X: max(p.atX(x0), p.atX(x1)), Y: p.box.Max.Y}}), c)
}

// within cuts r to the panel.
func (p *panel) within(r vg.Rectangle) vg.Rectangle {
	cutX := func(v vg.Length) vg.Length { return min(max(v, p.box.Min.X), p.box.Max.X) }
	cutY := func(v vg.Length) vg.Length { return min(max(v, p.box.Min.Y), p.box.Max.Y) }
	return vg.Rectangle{Min: vg.Point{X: cutX(r.Min.X), Y: cutY(r.Min.Y)}, Max: vg.Point{X: cutX(r.Max.X), Y: cutY(r.Max.Y)}}
}

// hline draws a line across the panel at y, vline one down it at x, if they are on
// the scale; labels keep off them.
func (p *panel) hline(y float64, st draw.LineStyle) {
	if p.y.has(y) {
		l := []vg.Point{{X: p.box.Min.X, Y: p.atY(y)}, {X: p.box.Max.X, Y: p.atY(y)}}
		p.StrokeLines(st, l)
		p.lines = append(p.lines, l)
	}
}

func (p *panel) vline(x float64, st draw.LineStyle) {
	if p.x.has(x) {
		l := []vg.Point{{X: p.atX(x), Y: p.box.Min.Y}, {X: p.atX(x), Y: p.box.Max.Y}}
		p.StrokeLines(st, l)
		p.lines = append(p.lines, l)
	}
}

// frame draws the thin box around the panel.
func (p *panel) frame() {
	a, b := p.box.Min, p.box.Max
	p.StrokeLines(stroke(black, thin, solid),
		[]vg.Point{a, {X: b.X, Y: a.Y}, b, {X: a.X, Y: b.Y}, a, {X: b.X, Y: a.Y}})
}

// letter writes the panel's letter above its upper left corner.
func (p *panel) letter(s string) {
	p.text(vg.Point{X: p.box.Min.X, Y: p.box.Max.Y + 3.5}, s, textStyle{size: letterSize})
}

// xFits reports whether labels of ticks have room side by side on a horizontal axis.
func (p *panel) xFits(ticks []tick) bool {
	end := vg.Length(math.Inf(-1))
	for _, t := range ticks {
		if t.label == "" {
			continue
		}
		x, w := p.labelAt(t)
		if x-w/2 < end+labelSpace {
			return false
		}
		end = x + w/2
	}
	return true
}

// labelAt returns the centre and the width of a horizontal axis's label, which hangs
// over the panel's end by no more than allowed.
func (p *panel) labelAt(t tick) (x, w vg.Length) {
	w, _, _ = extent(t.label, typeSize)
	return min(max(p.atX(t.at), p.box.Min.X-p.overhang+w/2), p.box.Max.X+p.overhang-w/2), w
}

// yFits reports whether labels of ticks have room above one another.
func (p *panel) yFits(ticks []tick) bool {
	for i := 1; i < len(ticks); i++ {
		gap := p.atY(ticks[i].at) - p.atY(ticks[i-1].at)
		if vg.Length(math.Abs(float64(gap))) < 1.9*typeSize {
			return false
		}
	}
	return true
}

// horizontal draws an axis along the bottom (or the top) with its title.
func (p *panel) horizontal(title string, ticks []tick, top bool) {
	y, dir, align := p.box.Min.Y, vg.Length(-1), text.YTop
	if top {
		y, dir, align = p.box.Max.Y, 1, text.YBottom
	}
	p.axes = append(p.axes, title)
	for _, t := range ticks {
		length := tickLength
		if t.label == "" {
			length = minorLength
		}
		x := p.atX(t.at)
		p.segment(vg.Point{X: x, Y: y}, vg.Point{X: x, Y: y + dir*length}, stroke(black, thin, solid))
		at, _ := p.labelAt(t)
		p.text(vg.Point{X: at, Y: y + dir*(tickLength+tickGap)}, t.label, textStyle{x: text.XCenter, y: align})
	}
	_, up, _ := extent("0^{0}", typeSize)
	if one := strings.ReplaceAll(title, "\n", " "); width(one, titleSize) < p.box.Max.X-p.box.Min.X-4 {
		title = one
	}
	mid := (p.box.Min.X + p.box.Max.X) / 2
	p.text(vg.Point{X: mid, Y: y + dir*(tickLength+tickGap+up+titleGap)}, title,
		textStyle{size: titleSize, x: text.XCenter, y: align})
}

// xAxisHeight is the room that an axis with a title of so many lines takes.
func xAxisHeight(titleLines int) vg.Length {
	_, up, _ := extent("0^{0}", typeSize)
	return tickLength + tickGap + up + titleGap + titleSize*vg.Length(capHeight+descent+linePitch*float64(titleLines-1))
}

// vertical draws an axis along the left (or the right) with its title turned.
func (p *panel) vertical(title string, ticks []tick, right bool) {
	x, dir, align := p.box.Min.X, vg.Length(-1), text.XRight
	if right {
		x, dir, align = p.box.Max.X, 1, text.XLeft
	}
	p.axes = append(p.axes, title)
	for _, t := range ticks {
		length := tickLength
		if t.label == "" {
			length = minorLength
		}
		y := p.atY(t.at)
		p.segment(vg.Point{X: x, Y: y}, vg.Point{X: x + dir*length, Y: y}, stroke(black, thin, solid))
		p.text(vg.Point{X: x + dir*(tickLength+tickGap), Y: y}, t.label, textStyle{x: align, y: text.YCenter})
	}
	mid := (p.box.Min.Y + p.box.Max.Y) / 2
	at := vg.Point{X: x + dir*(tickLength+tickGap+labelWidth(ticks)+titleGap), Y: mid}
	if right {
		at.X += titleSize * capHeight
	}
	p.text(at, title, textStyle{size: titleSize, x: text.XCenter, turn: math.Pi / 2})
}

// yAxisWidth is the room that a vertical axis with these ticks and a title takes.
func yAxisWidth(ticks []tick) vg.Length {
	return tickLength + tickGap + labelWidth(ticks) + titleGap + titleSize*(capHeight+descent)
}

// labelWidth is the widest label's width.
func labelWidth(ticks []tick) vg.Length {
	var w vg.Length
	for _, t := range ticks {
		w = max(w, width(t.label, typeSize))
	}
	return w
}
