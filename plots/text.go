package plots

import (
	"math"
	"strings"
	"sync"
	"unicode"

	"codeberg.org/go-fonts/liberation/liberationsansregular"
	"golang.org/x/image/font/opentype"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

// Shape of a line of text in units of the type size.
const (
	capHeight  = 0.73 // of capitals and digits above the baseline
	descent    = 0.21 // of p and q below it
	linePitch  = 1.14 // from baseline to baseline
	smallScale = 0.72 // size of a raised or lowered run
	raise      = 0.36 // of a superscript's baseline
	lower      = 0.16 // of a subscript's baseline
)

// minus is the sign of a negative number; a hyphen is too short for it.
const minus = "−"

// unbreakable is drawn as nothing; [literal] puts it where ordinary text would
// otherwise be read as markup.
const unbreakable = '\u2060'

var sans = sync.OnceValue(func() *font.Cache {
	face, err := opentype.Parse(liberationsansregular.TTF)
	if err != nil {
		panic(err) // the font is part of the program
	}
	return font.NewCache(font.Collection{{Font: font.Font{Typeface: "Liberation", Variant: "Sans"}, Face: face}})
})

// sansFont describes the one typeface of all figures at a size.
func sansFont(size vg.Length) font.Font {
	return font.Font{Typeface: "Liberation", Variant: "Sans", Size: size}
}

// markup is a text.Handler for one line or more of text in which ^{…} is raised and
// _{…} lowered, both in ordinary digits, which every font has. A hyphen inside
// becomes a minus sign. Alignment is by what is seen: the top is the first line's
// capitals, the bottom the last line's baseline.
type markup struct{}

var _ text.Handler = markup{}

// Cache returns the cache that holds the one typeface.
func (markup) Cache() *font.Cache { return sans() }

// Extents returns the metrics by which lines are stacked.
func (markup) Extents(f font.Font) font.Extents {
	return font.Extents{Ascent: capHeight * f.Size, Descent: descent * f.Size, Height: linePitch * f.Size}
}

// Lines splits at line ends.
func (markup) Lines(txt string) []string { return strings.Split(strings.TrimRight(txt, "\n"), "\n") }

// Box returns a line's width, its height above and its depth below the baseline.
func (markup) Box(line string, f font.Font) (width, height, depth vg.Length) {
	height, depth = capHeight*f.Size, descent*f.Size
	for _, r := range runs(line) {
		size := f.Size * r.scale
		face := r.face(f)
		width += face.Width(r.text)
		height = max(height, r.shift*f.Size+capHeight*size)
		depth = max(depth, -r.shift*f.Size+descent*size)
	}
	return width, height, depth
}

// Draw draws txt, turned by the style's rotation about pt.
func (h markup) Draw(c vg.Canvas, txt string, sty text.Style, pt vg.Point) {
	if txt == "" {
		return
	}
	c.Push()
	defer c.Pop()
	c.SetColor(sty.Color)
	if sty.Rotation != 0 { // canvases differ in what an unneeded transform costs
		c.Translate(pt)
		c.Rotate(sty.Rotation)
		pt = vg.Point{}
	}
	lines := h.Lines(txt)
	pitch := linePitch * sty.Font.Size
	block := capHeight*sty.Font.Size + pitch*vg.Length(len(lines)-1)
	y := pt.Y + vg.Length(sty.YAlign)*block + pitch*vg.Length(len(lines)-1)
	for _, line := range lines {
		w, _, _ := h.Box(line, sty.Font)
		x := pt.X + vg.Length(sty.XAlign)*w
		for _, r := range runs(line) {
			f := r.face(sty.Font)
			word := strings.TrimLeft(r.text, " ") // SVG drops leading spaces
			indent := f.Width(r.text[:len(r.text)-len(word)])
			c.FillString(f, vg.Point{X: x + indent, Y: y + r.shift*sty.Font.Size}, word)
			x += f.Width(r.text)
		}
		y -= pitch
	}
}

// run is a stretch of text at one height.
type run struct {
	text         string
	shift, scale vg.Length // in units of the type size
}

func (r run) face(f font.Font) font.Face { return sans().Lookup(f, f.Size*r.scale) }

// runs splits a line at its markup; an unclosed brace is ordinary text.
func runs(line string) []run {
	var out []run
	add := func(s string, shift, scale vg.Length) {
		s = strings.Map(func(r rune) rune {
			if unicode.Is(unicode.Cf, r) {
				return -1
			}
			return r
		}, s)
		if s != "" {
			out = append(out, run{s, shift, scale})
		}
	}
	for line != "" {
		at := markStart(line)
		if at < 0 {
			break
		}
		end := strings.IndexByte(line[at:], '}')
		if end < 0 {
			break
		}
		add(line[:at], 0, 1)
		inner := strings.ReplaceAll(line[at+2:at+end], "-", minus)
		if line[at] == '^' {
			add(inner, raise, smallScale)
		} else {
			add(inner, -lower, smallScale)
		}
		line = line[at+end+1:]
	}
	add(line, 0, 1)
	return out
}

// markStart returns where the next ^{ or _{ begins, or -1.
func markStart(s string) int {
	up, down := strings.Index(s, "^{"), strings.Index(s, "_{")
	if up < 0 || (down >= 0 && down < up) {
		return down
	}
	return up
}

// extent is the size of txt before rotation: its width, its height above the last
// baseline and its depth below it.
func extent(txt string, size vg.Length) (width, up, down vg.Length) {
	h := markup{}
	lines := h.Lines(txt)
	for i, line := range lines {
		w, asc, desc := h.Box(line, sansFont(size))
		width = max(width, w)
		up = max(up, asc+linePitch*size*vg.Length(len(lines)-1-i))
		if i == len(lines)-1 {
			down = desc
		}
	}
	return width, up, down
}

// width is the width of txt.
func width(txt string, size vg.Length) vg.Length {
	w, _, _ := extent(txt, size)
	return w
}

// rotatedBox is the bounding box of a box from lo to hi turned by angle about the
// origin and moved to pt.
func rotatedBox(lo, hi, pt vg.Point, angle float64) vg.Rectangle {
	sin, cos := math.Sincos(angle)
	inf := vg.Length(math.Inf(1))
	box := vg.Rectangle{Min: vg.Point{X: inf, Y: inf}, Max: vg.Point{X: -inf, Y: -inf}}
	for _, p := range []vg.Point{lo, hi, {X: lo.X, Y: hi.Y}, {X: hi.X, Y: lo.Y}} {
		x := pt.X + p.X*vg.Length(cos) - p.Y*vg.Length(sin)
		y := pt.Y + p.X*vg.Length(sin) + p.Y*vg.Length(cos)
		box.Min = vg.Point{X: min(box.Min.X, x), Y: min(box.Min.Y, y)}
		box.Max = vg.Point{X: max(box.Max.X, x), Y: max(box.Max.Y, y)}
	}
	return box
}
