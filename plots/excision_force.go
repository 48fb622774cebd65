package plots

import (
	"math"

	"gonum.org/v1/plot/vg"

	"keelfall/solver/race"
)

// forceFigure is the strength of zones against the force that drives them, and the slip
// that follows.
type forceFigure struct {
	*zones
	age    float64 // of time zero, Ma; NaN where not given
	forced []int   // the zones whose forces are balanced
	slow   float64 // mm/yr, the slowest slip drawn
}

// slowest and fastest slip rates of the axis, mm/yr.
const (
	leastSlip = 1e-4
	mostSlip  = 1e3
)

// excisionForce draws the driving force and every zone's strength (a) and slip rate (b)
// against time; nil where no zone balances forces.
func excisionForce(res *race.Result, z *zones, width vg.Length) (*Figure, error) {
	width, err := pageWidth(width)
	if err != nil {
		return nil, err
	}
	f := &forceFigure{zones: z, age: math.NaN()}
	if res.Problem.HasTimeZero {
		f.age = res.Problem.TimeZero / myr
	}
	for i := range z.all {
		if _, _, ok := bounds(z.all[i].bear); ok {
			f.forced = append(f.forced, i)
		}
	}
	if len(f.forced) == 0 {
		return nil, nil
	}
	return &Figure{Name: "excision-force", Caption: f.caption(), Width: width, Height: 112 * vg.Millimeter, draw: f.draw}, nil
}

func (f *forceFigure) caption() string {
	s := "The force that drives a shear zone (black) and what it bears when it slips at 1 mm/yr (colour) (a); the slip rate at which both are equal (b), against time."
	for _, i := range f.forced {
		if _, hi, _ := bounds(f.all[i].rate); hi < leastSlip {
			s += " " + plain(f.all[i].name) + " is too strong to slip at 10^-4 mm/yr."
		}
	}
	return s + f.remark()
}

func (f *forceFigure) draw(s *sheet) {
	parts := []part{f.forces(), f.rates()}
	top := s.Max.Y - 4
	if !math.IsNaN(f.age) {
		top -= xAxisHeight(1)
		parts[0].top = func(p *panel) (string, []tick) { return "Age (Ma)", ageTicks(p, f.age) }
	}
	s.stack(parts, linear(0, f.end()), s.Min.Y+xAxisHeight(1)+2, top, "Time (Myr)", func(p *panel) []tick { return linearTicks(p.x, p.xFits) })
}

func (f *forceFigure) forces() part {
	drives, bears := make([][]vg.Point, len(f.all)), make([][]vg.Point, len(f.all))
	return part{left: "Force (10^{12} N/m)",
		scale: func(p *panel) (left, right []tick) {
			lo, hi := 0.0, 0.0
			for _, i := range f.forced {
				a, b, _ := bounds(f.all[i].drive, f.all[i].bear)
				lo, hi = math.Min(lo, a), math.Max(hi, b)
			}
			p.y = scale{lo: 1.05 * lo, hi: hi + 0.14*math.Max(hi-lo, 1e-3)}
			return linearTicks(p.y, p.yFits), nil
		},
		curves: func(p *panel) {
			for _, i := range f.forced {
				z := f.all[i]
				bears[i] = p.drawn("strength of "+z.name, f.time, z.bear, zoneLines[i].colour, thick, zoneLines[i].dashes)
				drives[i] = p.drawn("force on "+z.name, f.time, z.drive, black, medium, solid)
			}
		},
		labels: func(p *panel) {
			room := 0.5 * (p.box.Max.X - p.box.Min.X)
			for n, i := range f.forced {
				words := shorten(f.all[i].name, typeSize, room)
				p.name(zoneLines[i].colour, bears[i], true, words+" at 1 mm/yr", words+"\nat 1 mm/yr")
				if n == 0 {
					p.name(black, drives[i], true, "driving force", "driving\nforce")
				}
			}
		}}
}

func (f *forceFigure) rates() part {
	lines := make([][]vg.Point, len(f.all))
	return part{left: "Slip rate (mm/yr)",
		scale: func(p *panel) (left, right []tick) {
			lo, hi := math.Inf(1), 1.0
			for _, i := range f.forced {
				for _, r := range f.all[i].rate {
					if r >= leastSlip {
						lo, hi = math.Min(lo, r), math.Max(hi, r)
					}
				}
			}
			p.y = logarithmic(math.Max(math.Min(lo, 0.1), leastSlip)/1.5, math.Min(hi, mostSlip)*3)
			f.slow = p.y.lo
			return logTicks(p.y, false, p.yFits), nil
		},
		curves: func(p *panel) {
			p.hline(1, stroke(darkGrey, thin, dotted))
			for _, i := range f.forced {
				z := f.all[i]
				lines[i] = p.drawn("slip rate of "+z.name, f.time, z.rate, zoneLines[i].colour, thick, zoneLines[i].dashes)
			}
		},
		labels: func(p *panel) {
			room := 0.6 * (p.box.Max.X - p.box.Min.X)
			for _, i := range f.forced {
				words := shorten(f.all[i].name, typeSize, room)
				if len(lines[i]) > 0 {
					p.name(zoneLines[i].colour, lines[i], true, words)
					continue
				}
				p.place(zoneLines[i].colour, p.box, corner(p, true), words+" does not slip", words+"\ndoes not slip")
			}
		}}
}
