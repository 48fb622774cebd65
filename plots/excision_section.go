package plots

import (
	"fmt"
	"image/color"
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"

	"keelfall/solver/race"
)

// sectionFigure is a vertical section across the zones, before and after they slipped,
// as rigid blocks see it. x is 0 at the traverse and grows down the zones' dip; km.
type sectionFigure struct {
	*zones
	strata        *strata
	before, after blocks
	from, to      float64 // of x
	remarks       string
}

// excisionSection draws the section that the zones cut, at one scale in depth and along.
func excisionSection(res *race.Result, z *zones, width vg.Length) (*Figure, error) {
	width, err := pageWidth(width)
	if err != nil {
		return nil, err
	}
	f := &sectionFigure{zones: z}
	if f.strata, err = newStrata(&res.Problem.Column); err != nil {
		return nil, err
	}
	cuts, err := sectionCuts(res)
	if err != nil || len(cuts) == 0 {
		return nil, err
	}
	f.before = newBlocks(f.strata, cuts)
	f.after = f.before.clone()
	var heave, deepest float64
	for _, c := range cuts {
		heave += c.heave
		deepest = math.Max(deepest, c.depth)
		f.after.slip(c)
	}
	f.strata.bottom = math.Min(f.strata.bottom, math.Max(1.35*deepest, 20))
	f.extent(cuts, heave)
	for _, c := range cuts {
		if c.capped {
			f.remarks += " " + plain(c.name) + " is drawn as when its layers were used up in this column."
		}
	}
	if res.Problem.Moving() {
		f.remarks += " What else moves the column is left out."
	}
	return &Figure{Name: "excision-section", Caption: f.caption(cuts), Width: width, Height: f.height(width), draw: f.draw}, nil
}

// extent chooses how much of the section is shown: up to where the zones reach the
// surface, and as much again as the arc has been lengthened.
func (f *sectionFigure) extent(cuts []cut, heave float64) {
	deep := f.strata.bottom
	up := 0.6 * deep
	for _, c := range cuts {
		up = math.Max(up, 1.08*c.depth/math.Tan(c.dip))
	}
	f.from = -math.Min(up, 2.4*deep)
	f.to = math.Min(0.7*deep+heave, 1.6*deep)
}

// Room about the two sections, in points.
const (
	sectionHead  vg.Length = 13 // above each
	sectionRight vg.Length = 8
)

func (f *sectionFigure) left() vg.Length { return 30 }

// scale is points a km.
func (f *sectionFigure) scale(width vg.Length) vg.Length {
	return (width - f.left() - sectionRight) / vg.Length(f.to-f.from)
}

func (f *sectionFigure) height(width vg.Length) vg.Length {
	return 2*(sectionHead+f.scale(width)*vg.Length(f.strata.bottom)) + xAxisHeight(1) + 6
}

func (f *sectionFigure) caption(cuts []cut) string {
	s := "Section across the shear zones before (a) and after (b) they slipped, depth and distance at one scale, the root tinted. Zones are drawn to the base of the lowest layer they cut, dotted where they go on below it; the dashed vertical line is the traverse, the column of the other figures. Blocks are rigid, footwalls rise by what is left out of the traverse, and what would rise above the surface is not drawn. Slip in (b):"
	for i, c := range cuts {
		if i > 0 {
			s += ","
		}
		s += fmt.Sprintf(" %s %s km (dip %s°)", plain(c.name), plain(number(c.slip, 3)), plain(number(c.dip*180/math.Pi, 3)))
	}
	return s + "." + f.remarks + f.remark() + f.strata.remark()
}

func (f *sectionFigure) draw(s *sheet) {
	high := f.scale(s.Max.X-s.Min.X) * vg.Length(f.strata.bottom)
	top := s.Max.Y - sectionHead
	for i, b := range []blocks{f.before, f.after} {
		p := &panel{sheet: s, x: scale{lo: f.from, hi: f.to}, y: scale{lo: 0, hi: f.strata.bottom, down: true}, overhang: sectionRight - 1}
		p.box = vg.Rectangle{Min: vg.Point{X: s.Min.X + f.left(), Y: top - high}, Max: vg.Point{X: s.Max.X - sectionRight, Y: top}}
		f.blocks(p, b)
		p.frame()
		p.letter("(" + string(rune('a'+i)) + ") " + []string{"before", "after"}[i])
		p.vertical("Depth (km)", linearTicks(p.y, p.yFits), false)
		ticks := linearTicks(p.x, p.xFits)
		if i == 0 {
			p.horizontal("", unlabelled(ticks), false)
		} else {
			p.horizontal("Distance from the traverse (km)", ticks, false)
		}
		f.labels(p, b)
		top = p.box.Min.Y - 6 - sectionHead
	}
}

// blocks fills the layers, and draws contacts, zones and the traverse.
func (f *sectionFigure) blocks(p *panel, b blocks) {
	for _, q := range b.rock {
		x, y := q.columns()
		p.area(x, y, f.strata.all[q.index].fill(q.index))
	}
	for _, l := range b.contacts {
		p.clipped(l, lineGrey, hair, solid, true)
	}
	for _, l := range b.planes {
		dashes := solid
		if l.below {
			dashes = dotted
		}
		p.clipped(l, zoneLines[l.index].colour, thick, dashes, true)
	}
	p.vline(0, stroke(black, thin, dashed))
}

// clipped draws a segment cut at the frame; labels keep off it where kept.
func (p *panel) clipped(l segment, c color.Color, w vg.Length, dashes []vg.Length, kept bool) {
	for _, part := range p.clip().ClipLinesXY([]vg.Point{p.pt(l.a.x, l.a.z), p.pt(l.b.x, l.b.z)}) {
		p.StrokeLines(stroke(c, w, dashes), part)
		if kept {
			p.lines = append(p.lines, part)
		}
	}
}

// labels names layers, zones and the traverse where there is room.
func (f *sectionFigure) labels(p *panel, b blocks) {
	for _, l := range b.planes {
		if l.below {
			continue
		}
		for _, part := range p.clip().ClipLinesXY([]vg.Point{p.pt(l.a.x, l.a.z), p.pt(l.b.x, l.b.z)}) {
			words := shorten(f.all[l.index].name, typeSize, 0.4*(p.box.Max.X-p.box.Min.X))
			p.placeClear(zoneLines[l.index].colour, along(part, 4), words)
		}
	}
	p.placeClear(black, besideLine(p, 0, 3), "traverse")
	named := map[int]bool{}
	for _, q := range b.rock {
		l := f.strata.all[q.index]
		if named[q.index] || l.name == "" {
			continue
		}
		var spots []spot
		for _, u := range []float64{0.85, 0.15, 0.8, 0.75, 0.7, 0.2, 0.3, 0.4, 0.5, 0.9, 0.1} {
			x := f.from + u*(f.to-f.from)
			top, base, ok := q.span(x, f.strata.bottom)
			if ok && p.atY(top)-p.atY(base) >= typeSize {
				spots = append(spots, spot{vg.Point{X: p.atX(x), Y: (p.atY(top) + p.atY(base)) / 2}, text.XCenter, text.YCenter})
			}
		}
		wide := p.box.Max.X - p.box.Min.X
		named[q.index] = p.placeClear(black, spots, l.name, wrap(l.name, typeSize, 0.3*wide, 2), shorten(l.name, typeSize, 0.2*wide))
	}
}
