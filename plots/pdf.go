package plots

import (
	"fmt"
	"image"
	"image/color"
	"io"
	"math"
	"time"

	"codeberg.org/go-fonts/liberation/liberationsansregular"
	"codeberg.org/go-pdf/fpdf"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
)

// pdf is a vg.Canvas that writes a one-page PDF with text in Unicode.
type pdf struct {
	doc    *fpdf.Fpdf
	height float64 // pt; the document measures y downward
	pen    pen
	stack  []pen
}

// pen is what a canvas saves and restores besides its transform.
type pen struct {
	color  color.NRGBA
	width  float64
	dashes []float64
	offset float64
}

var _ vg.Canvas = (*pdf)(nil)

// newPDF opens a page of the figure's size. Dates are fixed: the same figure gives
// the same bytes.
func newPDF(f Figure) *pdf {
	size := fpdf.SizeType{Wd: f.Width.Points(), Ht: f.Height.Points()}
	doc := fpdf.NewCustom(&fpdf.InitType{UnitStr: "pt", Size: size})
	day := time.Date(2000, 1, 1, 0, 0, 0, 0, time.UTC)
	doc.SetCreationDate(day)
	doc.SetModificationDate(day)
	doc.SetCatalogSort(true)
	doc.SetTitle(f.Name, true)
	doc.SetSubject(f.Caption, true)
	doc.SetMargins(0, 0, 0)
	doc.SetAutoPageBreak(false, 0)
	// The font's bytes are copied: the document writes into them.
	doc.AddUTF8FontFromBytes("sans", "", append([]byte(nil), liberationsansregular.TTF...))
	doc.AddPage()
	doc.TransformBegin()
	c := &pdf{doc: doc, height: size.Ht}
	vg.Initialize(c)
	return c
}

func (c *pdf) write(w io.Writer) error {
	for range c.stack {
		c.Pop()
	}
	c.doc.TransformEnd()
	return c.doc.Output(w)
}

func (c *pdf) SetLineWidth(w vg.Length) { c.pen.width = w.Points() }

func (c *pdf) SetLineDash(pattern []vg.Length, offset vg.Length) {
	c.pen.dashes = make([]float64, len(pattern))
	for i, d := range pattern {
		c.pen.dashes[i] = d.Points()
	}
	c.pen.offset = offset.Points()
}

func (c *pdf) SetColor(clr color.Color) {
	if clr == nil {
		clr = color.Black
	}
	c.pen.color = color.NRGBAModel.Convert(clr).(color.NRGBA)
}

func (c *pdf) Rotate(rad float64) {
	sin, cos := math.Sincos(rad)
	c.doc.Transform(fpdf.TransformMatrix{A: cos, B: sin, C: -sin, D: cos})
}

func (c *pdf) Translate(pt vg.Point) {
	c.doc.Transform(fpdf.TransformMatrix{A: 1, D: 1, E: pt.X.Points(), F: pt.Y.Points()})
}

func (c *pdf) Scale(x, y float64) { c.doc.Transform(fpdf.TransformMatrix{A: x, D: y}) }

func (c *pdf) Push() {
	c.stack = append(c.stack, c.pen)
	c.doc.TransformBegin()
}

func (c *pdf) Pop() {
	c.doc.TransformEnd()
	c.pen = c.stack[len(c.stack)-1]
	c.stack = c.stack[:len(c.stack)-1]
}

func (c *pdf) Stroke(p vg.Path) {
	if c.pen.width <= 0 {
		return
	}
	c.setAlpha()
	c.doc.SetDrawColor(c.rgb())
	c.doc.SetLineWidth(c.pen.width)
	c.doc.SetDashPattern(c.pen.dashes, c.pen.offset)
	c.path(p)
	c.doc.DrawPath("D")
}

func (c *pdf) Fill(p vg.Path) {
	c.setAlpha()
	c.doc.SetFillColor(c.rgb())
	c.path(p)
	c.doc.DrawPath("F")
}

func (c *pdf) FillString(f font.Face, pt vg.Point, s string) {
	if f.Font.Size <= 0 {
		return
	}
	c.setAlpha()
	c.doc.SetTextColor(c.rgb())
	c.doc.SetFont("sans", "", f.Font.Size.Points())
	c.doc.SetFontUnitSize(f.Font.Size.Points()) // SetFont is silent where it thinks nothing changed
	x, y := c.at(pt)
	c.doc.Text(x, y, s)
}

// DrawImage is part of vg.Canvas; no figure holds an image.
func (c *pdf) DrawImage(vg.Rectangle, image.Image) {
	c.doc.SetError(fmt.Errorf("images are not supported"))
}

func (c *pdf) setAlpha() { c.doc.SetAlpha(float64(c.pen.color.A)/255, "Normal") }

func (c *pdf) rgb() (r, g, b int) {
	return int(c.pen.color.R), int(c.pen.color.G), int(c.pen.color.B)
}

func (c *pdf) at(p vg.Point) (x, y float64) { return p.X.Points(), c.height - p.Y.Points() }

// path adds p to the page; the caller paints it.
func (c *pdf) path(p vg.Path) {
	for _, part := range p {
		x, y := c.at(part.Pos)
		switch part.Type {
		case vg.MoveComp:
			c.doc.MoveTo(x, y)
		case vg.LineComp:
			c.doc.LineTo(x, y)
		case vg.ArcComp:
			const deg = 180 / math.Pi
			r := part.Radius.Points()
			c.doc.ArcTo(x, y, r, r, 0, part.Start*deg, (part.Start+part.Angle)*deg)
		case vg.CurveComp:
			x1, y1 := c.at(part.Control[0])
			if len(part.Control) == 1 {
				c.doc.CurveTo(x1, y1, x, y)
				continue
			}
			x2, y2 := c.at(part.Control[1])
			c.doc.CurveBezierCubicTo(x1, y1, x2, y2, x, y)
		case vg.CloseComp:
			c.doc.ClosePath()
		}
	}
}
