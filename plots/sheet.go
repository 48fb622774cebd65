package plots

import (
	"image/color"
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// sheet is the page a figure is drawn on. It remembers what was put where, so that
// later labels keep clear of it and tests can ask.
type sheet struct {
	draw.Canvas
	texts  []placed
	curves []curve
	axes   []string
	lines  [][]vg.Point // on the page, for labels to keep off
}

// placed is a text on the page.
type placed struct {
	text string
	box  vg.Rectangle
}

// curve is data drawn as a line, in the units of its axes.
type curve struct {
	name string
	x, y []float64
}

// textStyle says how a text is drawn; zero values are the usual ones.
type textStyle struct {
	size  vg.Length // typeSize where 0
	color color.Color
	x     text.XAlignment
	y     text.YAlignment
	turn  float64 // rad, counter-clockwise
}

// text draws txt at pt and remembers its box.
func (s *sheet) text(pt vg.Point, txt string, st textStyle) {
	if txt == "" {
		return
	}
	st = st.complete()
	markup{}.Draw(s.Canvas, txt, text.Style{Color: st.color, Font: sansFont(st.size), Rotation: st.turn,
		XAlign: st.x, YAlign: st.y, Handler: markup{}}, pt)
	s.texts = append(s.texts, placed{txt, textBox(pt, txt, st)})
}

func (st textStyle) complete() textStyle {
	if st.size == 0 {
		st.size = typeSize
	}
	if st.color == nil {
		st.color = black
	}
	return st
}

// textBox is the box that txt takes on the page.
func textBox(pt vg.Point, txt string, st textStyle) vg.Rectangle {
	st = st.complete()
	w, up, down := extent(txt, st.size)
	block := capHeight*st.size + linePitch*st.size*vg.Length(len(markup{}.Lines(txt))-1)
	lo := vg.Point{X: vg.Length(st.x) * w, Y: vg.Length(st.y)*block - down}
	hi := vg.Point{X: lo.X + w, Y: vg.Length(st.y)*block + up}
	return rotatedBox(lo, hi, pt, st.turn)
}

// rect fills a rectangle.
func (s *sheet) rect(r vg.Rectangle, c color.Color) {
	s.polygon([]vg.Point{r.Min, {X: r.Max.X, Y: r.Min.Y}, r.Max, {X: r.Min.X, Y: r.Max.Y}}, c)
}

// polygon fills a polygon.
func (s *sheet) polygon(pts []vg.Point, c color.Color) {
	if len(pts) < 3 {
		return
	}
	var p vg.Path
	p.Move(pts[0])
	for _, q := range pts[1:] {
		p.Line(q)
	}
	p.Close()
	s.SetColor(c)
	s.Fill(p)
}

// segment draws a straight line.
func (s *sheet) segment(a, b vg.Point, st draw.LineStyle) { s.StrokeLines(st, []vg.Point{a, b}) }

// dot draws a filled circle with a white rim.
func (s *sheet) dot(at vg.Point, radius vg.Length, c color.Color) {
	s.disc(at, radius+0.6, white)
	s.disc(at, radius, c)
	s.lines = append(s.lines, []vg.Point{{X: at.X - radius, Y: at.Y}, {X: at.X + radius, Y: at.Y}})
}

// ring draws an open circle.
func (s *sheet) ring(at vg.Point, radius, width vg.Length, c color.Color) {
	s.disc(at, radius, c)
	s.disc(at, radius-width, white)
	s.lines = append(s.lines, []vg.Point{{X: at.X - radius, Y: at.Y}, {X: at.X + radius, Y: at.Y}})
}

func (s *sheet) disc(at vg.Point, radius vg.Length, c color.Color) {
	var p vg.Path
	p.Move(vg.Point{X: at.X + radius, Y: at.Y})
	p.Arc(at, radius, 0, 2*math.Pi)
	p.Close()
	s.SetColor(c)
	s.Fill(p)
}

// arrow draws a line from a to b with a filled head at b.
func (s *sheet) arrow(a, b vg.Point, st draw.LineStyle) {
	d := b.Sub(a)
	length := vg.Length(math.Hypot(float64(d.X), float64(d.Y)))
	if length < 0.5 {
		return
	}
	head := min(3.2, 0.8*length)
	dir := vg.Point{X: d.X / length, Y: d.Y / length}
	foot := b.Sub(dir.Scale(head))
	side := vg.Point{X: -dir.Y, Y: dir.X}.Scale(0.42 * head)
	st.Dashes = solid
	s.segment(a, foot, st)
	s.polygon([]vg.Point{b, foot.Add(side), foot.Sub(side)}, st.Color)
	s.lines = append(s.lines, []vg.Point{a, b})
}
