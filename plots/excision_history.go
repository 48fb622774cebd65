package plots

import (
	"fmt"
	"image/color"
	"math"

	"gonum.org/v1/plot/vg"

	"keelfall/solver/race"
)

// excisionFigure is the root's thickness, and every zone's slip and heave, against time.
type excisionFigure struct {
	*zones
	age         float64 // of time zero, Ma; NaN where not given
	column, arc []float64
	share       float64 // whose removal is marked; 0 where it is not reached
	when        float64 // Myr
}

// excisionHistory draws the root's thickness in the column and over the arc (a) and the
// zones' slip and heave (b) against time.
func excisionHistory(res *race.Result, z *zones, width vg.Length) (*Figure, error) {
	width, err := pageWidth(width)
	if err != nil {
		return nil, err
	}
	x := res.Excision
	f := &excisionFigure{zones: z, age: math.NaN(), column: divided(x.History.RootThickness, km), arc: divided(x.History.ArcMean, km)}
	if res.Problem.HasTimeZero {
		f.age = res.Problem.TimeZero / myr
	}
	if err := sameLength("root thickness and time", len(f.column), len(z.time)); err != nil {
		return nil, err
	}
	if len(f.arc) == 0 {
		f.arc = nil
	} else if err := sameLength("arc mean and time", len(f.arc), len(z.time)); err != nil {
		return nil, err
	}
	if err := finite("root thickness", append(append([]float64{}, f.column...), f.arc...)...); err != nil {
		return nil, err
	}
	if x.Outcome == "excised" && !math.IsInf(x.Time, 1) {
		f.share, f.when = x.Share, x.Time/myr
	}
	return &Figure{Name: "excision", Caption: f.caption(), Width: width, Height: 112 * vg.Millimeter, draw: f.draw}, nil
}

func (f *excisionFigure) caption() string {
	s := "The root's thickness in the column that the shear zones cross (solid)"
	if f.arc != nil {
		s += " and averaged over the arc (dashed)"
	}
	s += " (a); each zone's slip (thick) and heave (thin) (b), against time."
	if f.share > 0 {
		s += fmt.Sprintf(" The dot marks %s %% of the root's mass cut out.", plain(number(100*f.share, 3)))
	}
	return s + f.remark()
}

func (f *excisionFigure) draw(s *sheet) {
	parts := []part{f.thickness(), f.offsets()}
	top := s.Max.Y - 4
	if !math.IsNaN(f.age) {
		top -= xAxisHeight(1)
		parts[0].top = func(p *panel) (string, []tick) { return "Age (Ma)", ageTicks(p, f.age) }
	}
	s.stack(parts, linear(0, f.end()), s.Min.Y+xAxisHeight(1)+2, top, "Time (Myr)", func(p *panel) []tick { return linearTicks(p.x, p.xFits) })
}

func (f *excisionFigure) thickness() part {
	var column, arc []vg.Point
	return part{left: "Root thickness (km)",
		scale: func(p *panel) (left, right []tick) {
			_, hi, _ := bounds(f.column, f.arc)
			p.y = scale{lo: 0, hi: 1.14 * math.Max(hi, 1e-3)}
			return linearTicks(p.y, p.yFits), nil
		},
		curves: func(p *panel) {
			if f.arc != nil {
				arc = p.drawn("root thickness, arc mean", f.time, f.arc, blue, medium, dashed)
			}
			column = p.drawn("root thickness, column", f.time, f.column, black, thick, solid)
		},
		labels: func(p *panel) {
			if f.share > 0 && p.x.has(f.when) {
				at := p.pt(f.when, interpolate(f.time, f.column, f.when))
				p.dot(at, 2, vermillion)
				words := number(100*f.share, 2) + " % cut out"
				p.place(black, p.box, around(at, 5), words+" at "+number(f.when, 3)+" Myr", words+"\nat "+number(f.when, 3)+" Myr")
			}
			p.name(blue, arc, true, "arc mean")
			p.name(black, column, false, "column crossed by the zones", "column crossed\nby the zones", "column")
		}}
}

// drawn draws a curve and returns the longest part of it that lies on the page.
func (p *panel) drawn(name string, x, y []float64, c color.Color, w vg.Length, dashes []vg.Length) []vg.Point {
	before := len(p.lines)
	p.line(name, x, y, stroke(c, w, dashes))
	longest := []vg.Point{}
	for _, l := range p.lines[before:] {
		if len(l) > len(longest) {
			longest = l
		}
	}
	return longest
}

// name writes one of the wordings above or below a line, if there is one.
func (p *panel) name(c color.Color, line []vg.Point, above bool, wordings ...string) {
	if len(line) > 0 {
		p.place(c, p.box, beside(line, above), wordings...)
	}
}

func (f *excisionFigure) offsets() part {
	slips, heaves := make([][]vg.Point, len(f.all)), make([][]vg.Point, len(f.all))
	return part{left: "Slip and heave (km)",
		scale: func(p *panel) (left, right []tick) {
			hi := 1e-3
			for _, z := range f.all {
				_, top, _ := bounds(z.slip, z.heave)
				hi = math.Max(hi, top)
			}
			p.y = scale{lo: 0, hi: 1.12 * hi}
			return linearTicks(p.y, p.yFits), nil
		},
		curves: func(p *panel) {
			for i, z := range f.all {
				l := zoneLines[i]
				heaves[i] = p.drawn("heave of "+z.name, f.time, z.heave, l.colour, medium, l.dashes)
				slips[i] = p.drawn("slip of "+z.name, f.time, z.slip, l.colour, thick, l.dashes)
			}
		},
		labels: func(p *panel) {
			room := 0.55 * (p.box.Max.X - p.box.Min.X)
			for i, z := range f.all {
				words := shorten(z.name, typeSize, room)
				p.name(zoneLines[i].colour, slips[i], true, words+", slip", words+",\nslip")
				p.name(zoneLines[i].colour, heaves[i], false, "heave")
			}
		}}
}
