package plots

import (
	"image/color"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// Sizes of type, in points.
const (
	typeSize   vg.Length = 7   // tick labels, names, notes
	titleSize  vg.Length = 7.5 // axis titles
	letterSize vg.Length = 8   // panel letters, headline
)

// Widths of lines, in points.
const (
	hair   vg.Length = 0.35
	thin   vg.Length = 0.55
	medium vg.Length = 0.9
	thick  vg.Length = 1.4
)

// Colours by Okabe and Ito, which stay apart for every kind of colour vision.
var (
	black      = color.NRGBA{A: 255}
	orange     = color.NRGBA{R: 230, G: 159, A: 255}
	blue       = color.NRGBA{G: 114, B: 178, A: 255}
	vermillion = color.NRGBA{R: 213, G: 94, A: 255}
	green      = color.NRGBA{G: 158, B: 115, A: 255}
	purple     = color.NRGBA{R: 204, G: 121, B: 167, A: 255}
	sky        = color.NRGBA{R: 86, G: 180, B: 233, A: 255}
	yellow     = color.NRGBA{R: 240, G: 228, B: 66, A: 255}
)

// Greys and tints, all opaque, so that every format draws them alike.
var (
	white     = color.NRGBA{R: 255, G: 255, B: 255, A: 255}
	darkGrey  = color.NRGBA{R: 85, G: 85, B: 85, A: 255}
	midGrey   = color.NRGBA{R: 140, G: 140, B: 140, A: 255}
	lineGrey  = color.NRGBA{R: 190, G: 190, B: 190, A: 255}
	paleGrey  = color.NRGBA{R: 232, G: 232, B: 232, A: 255}
	layerGrey = color.NRGBA{R: 244, G: 244, B: 244, A: 255}
	baseGrey  = color.NRGBA{R: 237, G: 237, B: 237, A: 255}
	rootTint  = tint(orange, 0.3)
	heavyTint = tint(vermillion, 0.55)

	frictionTint = tint(blue, 0.6)
	eventTint    = tint(sky, 0.4)
)

// Dashes, told apart in grey.
var (
	solid  []vg.Length
	dashed = []vg.Length{4, 2}
	dotted = []vg.Length{1, 1.6}
)

// stroke is a line style.
func stroke(c color.Color, w vg.Length, dashes []vg.Length) draw.LineStyle {
	return draw.LineStyle{Color: c, Width: w, Dashes: dashes}
}

// tint mixes share of c with white.
func tint(c color.NRGBA, share float64) color.NRGBA {
	mix := func(v uint8) uint8 { return uint8(255 - share*(255-float64(v)) + 0.5) }
	return color.NRGBA{R: mix(c.R), G: mix(c.G), B: mix(c.B), A: 255}
}

// shade returns share of c mixed with black.
func shade(c color.NRGBA, share float64) color.NRGBA {
	mix := func(v uint8) uint8 { return uint8(share*float64(v) + 0.5) }
	return color.NRGBA{R: mix(c.R), G: mix(c.G), B: mix(c.B), A: 255}
}
