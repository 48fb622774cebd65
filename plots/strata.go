package plots

import (
	"fmt"
	"image/color"
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"

	"keelfall/column"
)

// stratum is one rock of the column on the depth axis, in km.
type stratum struct {
	name        string // safe to draw; empty where nobody named it
	top, bottom float64
	root, below bool // below: the half-space
}

// strata are a column's rocks from the surface down, cut to the depth shown.
type strata struct {
	all    []stratum
	bottom float64 // depth shown, km
	cut    float64 // the column's own depth where it goes on below; else 0
}

// newStrata lays out a column. A column more than three times as deep as its root is
// cut below the root, for the root is what the figures are about; otherwise a little
// of the half-space is shown.
func newStrata(c *column.Column) (*strata, error) {
	if c == nil || len(c.Layers) == 0 {
		return nil, fmt.Errorf("plots: the column has no layers")
	}
	s := &strata{}
	var z, rootBase float64
	for i := range c.Layers {
		l := &c.Layers[i]
		if !(l.Thickness > 0) || math.IsInf(l.Thickness, 1) {
			return nil, fmt.Errorf("plots: layer %q is %g m thick", l.Name, l.Thickness)
		}
		next := z + l.Thickness/km
		s.all = append(s.all, stratum{name: literal(l.Name), top: z, bottom: next, root: l.Root})
		z = next
		if l.Root {
			rootBase = z
		}
	}
	s.bottom = z
	if step := niceStep(rootBase / 12); rootBase > 0 && z > 3*rootBase {
		s.bottom, s.cut = math.Ceil(1.6*rootBase/step)*step, z
		return s, nil
	}
	if c.Base.Boundary == column.HalfSpace || c.Base.Boundary == column.Inviscid {
		name := "half-space"
		if c.Base.Boundary == column.Inviscid {
			name = "inviscid"
		}
		s.bottom = 1.1 * z
		s.all = append(s.all, stratum{name: name, top: z, bottom: math.Inf(1), below: true})
	}
	return s, nil
}

// depth is the depth axis.
func (s *strata) depth() scale { return scale{lo: 0, hi: s.bottom, down: true} }

// remark says in a caption what the depth axis leaves out.
func (s *strata) remark() string {
	if s.cut == 0 {
		return ""
	}
	return fmt.Sprintf(" The column goes on to %s km below the depth shown.", plain(number(s.cut, 3)))
}

// shade fills a panel with the layers, the root tinted, and draws the contacts.
func (s *strata) shade(p *panel) {
	for i, l := range s.all {
		if l.top >= s.bottom {
			break
		}
		p.bandY(l.top, math.Min(l.bottom, s.bottom), l.fill(i))
	}
	for _, l := range s.all[1:] {
		if l.top < s.bottom {
			p.segment(p.pt(p.x.lo, l.top), p.pt(p.x.hi, l.top), stroke(lineGrey, hair, solid))
		}
	}
}

func (l stratum) fill(i int) color.Color {
	switch {
	case l.below:
		return baseGrey
	case l.root:
		return rootTint
	case i%2 == 1:
		return layerGrey
	}
	return white
}

// strip draws the layers' names in a column of the page whose right edge leads to the
// panels. Names that do not fit beside their layer are moved and tied to it by a
// line; where there is no room for all, thin layers other than the root go unnamed.
func (s *strata) strip(p *panel) {
	s.shade(p)
	const tie, inset = 7, 2.5
	width := p.box.Max.X - p.box.Min.X - inset - tie
	names := s.fitting(p, width)
	centres, heights := make([]vg.Length, len(names)), make([]vg.Length, len(names))
	for i, n := range names {
		// spread counts upward; the column runs downward.
		j := len(names) - 1 - i
		centres[j], heights[j] = s.middle(p, s.all[n.index]), n.height
	}
	at := spread(centres, heights, p.box.Min.Y+0.5, p.box.Max.Y-0.5)
	for i, n := range names {
		j := len(names) - 1 - i
		y, l := at[j], s.all[n.index]
		p.text(vg.Point{X: p.box.Min.X + inset, Y: y}, n.text, textStyle{x: text.XLeft, y: text.YCenter})
		top, bottom := p.atY(l.top), max(p.atY(l.bottom), p.box.Min.Y)
		if y+n.height/2 > top+1 || y-n.height/2 < bottom-1 {
			w, _, _ := extent(n.text, typeSize)
			from := vg.Point{X: p.box.Min.X + inset + min(w+1.5, width+1), Y: y}
			p.StrokeLines(stroke(darkGrey, hair, solid),
				[]vg.Point{from, {X: max(from.X, p.box.Max.X-tie), Y: y}, {X: p.box.Max.X, Y: centres[j]}})
		}
	}
}

// middle is the height on the page of the middle of what is shown of a layer.
func (s *strata) middle(p *panel, l stratum) vg.Length {
	return (p.atY(l.top) + p.atY(math.Min(l.bottom, s.bottom))) / 2
}

// name is a layer's name as it is written in the strip.
type name struct {
	index  int
	text   string
	height vg.Length
}

// fitting returns the names there is room for, from the surface down: all in up to
// three lines, else in fewer, else those of the root and of layers thick enough for one.
func (s *strata) fitting(p *panel, width vg.Length) []name {
	room := p.box.Max.Y - p.box.Min.Y - 1
	for _, most := range []int{3, 2, 1} {
		var out []name
		var sum vg.Length
		for i, l := range s.all {
			if l.top < s.bottom && l.name != "" {
				n := newName(i, l.name, width, most)
				out, sum = append(out, n), sum+n.height
			}
		}
		if sum <= room {
			return out
		}
	}
	var out []name
	one := newName(0, "x", width, 1).height
	for i, l := range s.all {
		if l.top >= s.bottom || l.name == "" || vg.Length(len(out)+1)*one > room {
			continue
		}
		if l.root || l.below || p.atY(l.top)-p.atY(math.Min(l.bottom, s.bottom)) >= one {
			out = append(out, newName(i, l.name, width, 1))
		}
	}
	return out
}

func newName(i int, txt string, width vg.Length, most int) name {
	txt = wrap(txt, typeSize, width, most)
	lines := len(markup{}.Lines(txt))
	return name{i, txt, typeSize * vg.Length(linePitch*float64(lines)+0.15)}
}

// longest is the width of the longest name in one line.
func (s *strata) longest() vg.Length {
	var w vg.Length
	for _, l := range s.all {
		w = max(w, width(l.name, typeSize))
	}
	return w
}

// stripWidth chooses the width of the names' strip for a figure of width.
func (s *strata) stripWidth(width vg.Length) vg.Length {
	return min(max(s.longest()+11, 40), 0.205*width)
}
