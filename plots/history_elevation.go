package plots

import (
	"math"

	"gonum.org/v1/plot/vg"
)

// stands says whether elevation and force are there to be drawn.
func (t *Thermal) stands() bool { return len(t.Elevation) > 0 }

// elevations sets the scales of the elevation and of the force and returns their ticks;
// finish draws them once the panel has its place.
func (f *historyFigure) elevations(p *panel) (left, right []tick, finish func()) {
	time, height, force := divided(f.History.Time, myr), divided(f.Elevation, km), divided(f.Force, 1e12)
	q := *p
	p.y, q.y = roomFor(height, 0.2), roomFor(force, 0.2)
	left, right = linearTicks(p.y, p.yFits), linearTicks(q.y, q.yFits)
	return left, right, func() {
		q.box, q.x = p.box, p.x
		if p.y.has(0) {
			p.segment(p.pt(p.x.lo, 0), p.pt(p.x.hi, 0), stroke(lineGrey, hair, solid))
		}
		first := len(p.lines)
		p.line("elevation", time, height, stroke(black, thick, solid))
		second := len(p.lines)
		q.line("force", time, force, stroke(blue, medium, dashed))
		p.vertical("Elevation (km)", left, false)
		q.vertical("Force (10¹² N/m)", right, true)
		if second > first {
			p.place(black, p.box, along(p.lines[first], 3), "elevation")
		}
		if len(p.lines) > second {
			p.place(blue, p.box, along(p.lines[second], 3), "extensional force", "force")
		}
	}
}

// roomFor is a scale with room around values, no narrower than least.
func roomFor(values []float64, least float64) scale {
	lo, hi, _ := bounds(values)
	if mid := (lo + hi) / 2; hi-lo < least {
		lo, hi = mid-math.Abs(least)/2, mid+math.Abs(least)/2
	}
	return padded(lo, hi, 0.12)
}

// elevationHeight is the room that the panel of elevation and force takes.
const elevationHeight = 30 * vg.Millimeter
