package plots

import (
	"fmt"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// Widths of a journal's column and page.
const (
	ColumnWidth = 85 * vg.Millimeter
	PageWidth   = 180 * vg.Millimeter
)

// least is the narrowest figure in which 7 pt type can be read.
const least = 80 * vg.Millimeter

// Figure is one figure, ready to be drawn any number of times.
type Figure struct {
	Name          string // stem of a file name
	Caption       string // whole sentences, plain text
	Width, Height vg.Length
	draw          func(*sheet)
}

// Draw draws the figure into c's rectangle, which should have the figure's size.
func (f Figure) Draw(c draw.Canvas) { f.sheet(c) }

// sheet draws the figure on a canvas and returns what was put where.
func (f Figure) sheet(c draw.Canvas) *sheet {
	s := &sheet{Canvas: c}
	f.draw(s)
	return s
}

// pageWidth returns width, or the default where it is 0.
func pageWidth(width vg.Length) (vg.Length, error) {
	switch {
	case width == 0:
		return ColumnWidth, nil
	case !(width >= least) || width > 2000*vg.Millimeter:
		return 0, fmt.Errorf("plots: a width of %.3g mm; needs %.3g mm to 2 m", float64(width/vg.Millimeter), float64(least/vg.Millimeter))
	}
	return width, nil
}
