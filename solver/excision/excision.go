// Package excision computes how shear zones cut a root out of a column.
//
// A zone of dip θ slips at s; layering dips δ towards the zone's dip direction. The
// column it crosses loses s sin(θ − δ) of stratigraphic and s sin(θ − δ)/cos δ of
// vertical thickness per time, from the rock directly above the zone; negative is
// repetition. The zone lies below the layers it cuts, so the lowest of them goes
// first; a zone that has used its layers up stops cutting the column, but slips on
// until its interval ends. Heave is s cos θ, throw s sin θ.
//
// A zone moves rock aside, it does not destroy it. Averaged over an arc of original
// width B a root layer of thickness h loses what uniform stretching by the same
// extension would take, h × heave/(B + heave), by the heave of the zones that cut it.
// A zone's heave counts from when it has reached the root to the end of its interval,
// as it goes on clearing the arc after it has cut this column through; it counts as
// negative where the zone repeats rock, which thickens by h × |heave|/(B + |heave|).
// (Derived; structural geometry, common practice.)
//
// In this version slip rates are given, the column is otherwise frozen, and zones do
// not interact except by cutting the same layers.
package excision

import (
	"errors"
	"fmt"
	"math"
)

// Zone is one shear zone with a given slip rate.
type Zone struct {
	Name        string
	Dip         float64  // rad, 0 < dip <= π/2
	LayeringDip float64  // rad, towards the zone's dip direction
	Cuts        []string // names of the layers it cuts out, from above downwards; the last, lowest one is cut first
	From, To    float64  // s, active interval; To is +Inf for a zone without an end
	SlipRate    float64  // m/s, >= 0
	Width       float64  // m, normal to the zone; 0 where not given
}

// level is a sine or cosine below which an angle counts as zero: round-off of a dip
// of 90° or of layering parallel to the zone.
const level = 1e-12

// VerticalLoss is the vertical thickness lost per slip, sin(θ − δ)/cos δ.
func (z *Zone) VerticalLoss() float64 { return z.StratigraphicLoss() / math.Cos(z.LayeringDip) }

// StratigraphicLoss is the thickness lost per slip across the layering, sin(θ − δ);
// 0 where zone and layering are parallel.
func (z *Zone) StratigraphicLoss() float64 { return clean(math.Sin(z.Dip - z.LayeringDip)) }

// Heave is the horizontal extension per slip, cos θ; 0 for a vertical zone.
func (z *Zone) Heave() float64 { return clean(math.Cos(z.Dip)) }

// Throw is the vertical offset per slip, sin θ.
func (z *Zone) Throw() float64 { return math.Sin(z.Dip) }

func clean(x float64) float64 {
	if math.Abs(x) < level {
		return 0
	}
	return x
}

// StrainRate is the zone's second invariant s/(2b), 1/s; 0 where its width is unknown.
func (z *Zone) StrainRate() float64 {
	if z.Width == 0 {
		return 0
	}
	return z.SlipRate / (2 * z.Width)
}

// Layer is what excision needs of a layer.
type Layer struct {
	Name      string
	Thickness float64 // m
	Density   float64 // kg/m³, its mean
	Root      bool
}

// History is the sum of all zones against time.
type History struct {
	Time          []float64 // s
	RootThickness []float64 // m, in the column the zones cross
	ArcMean       []float64 // m, of the root, averaged over the arc's original width; nil without a width
	Slip, Heave   []float64 // m, summed over zones, until their intervals end
	Throw         []float64 // m
	RootMassShare []float64 // share of the root's initial mass that is gone; negative where repeated
	ArcMeanShare  []float64 // the same averaged over the arc; nil without a width
}

// Result is the answer to: when has excision taken the asked share of the root?
type Result struct {
	Outcome            string  // "excised", "window" or "no zones"
	Time               float64 // s; +Inf where it does not happen within the window
	Share              float64 // the share of the root's mass asked for
	Slip, Heave, Throw float64 // m, at Time, or at the window's end
	ExtensionDemanded  float64 // heave over the arc's width at that moment; 0 without a width
	CutThroughTime     float64 // s until the root is wholly gone at the zones' rates, beyond the window too; +Inf where never
	CutThroughSlip     float64 // m
	CutThroughHeave    float64 // m
	ArcMeanTime        float64 // s until the arc mean has lost the share, beyond the window too; +Inf where never or no width
	LocalBeyond        float64 // s until the column has lost the share, beyond the window too
	PressureGap        float64 // Pa missing across the zones at Time, or at the window's end; negative where repeated
	History            History
	Warnings           []string
}

// Setting is what Solve needs beside the zones.
type Setting struct {
	Layers   []Layer
	Gravity  float64 // m/s²
	ArcWidth float64 // m; 0 where not given
	Share    float64 // of the root's mass, in (0, 1]
	Window   float64 // s
}

// ErrNoRoot says that no layer is marked as root.
var ErrNoRoot = errors.New("excision: no layer is marked as root")

// samples is how many intervals of the window a history has.
const samples = 200

// Solve follows the zones until the window ends, and on until nothing more can
// happen: a zone whose interval ends with the window is taken to go on after it, one
// with another end stops there.
func Solve(zones []Zone, set Setting) (*Result, error) {
	if err := check(zones, set); err != nil {
		return nil, err
	}
	never := math.Inf(1)
	r := &Result{Outcome: "no zones", Time: never, Share: set.Share,
		CutThroughTime: never, ArcMeanTime: never, LocalBeyond: never}
	p := newProgress(zones, set)
	r.record(p)
	for next := 1; !math.IsInf(p.t, 1); {
		stop := never
		if next <= samples {
			stop = set.Window * float64(next) / samples
		}
		r.step(p, stop)
		if next <= samples && p.t >= stop {
			r.record(p)
			if next == samples && math.IsInf(r.LocalBeyond, 1) {
				r.at(p)
			}
			next++
		}
	}
	if len(zones) == 0 {
		return r, nil
	}
	r.Outcome = "window"
	if r.LocalBeyond <= set.Window {
		r.Outcome, r.Time = "excised", r.LocalBeyond
	}
	if set.ArcWidth > 0 {
		r.ExtensionDemanded = r.Heave / set.ArcWidth
		if r.ExtensionDemanded > 1 {
			r.Warnings = append(r.Warnings, fmt.Sprintf("the zones' heave of %.0f km is %.0f %% extension of an arc %.3g km wide", r.Heave/1e3, 100*r.ExtensionDemanded, set.ArcWidth/1e3))
		}
	}
	return r, nil
}

// step moves p to its next event, at most to stop, and notes what happens on the way.
func (r *Result) step(p *progress, stop float64) {
	v, end := p.rates(stop)
	if math.IsInf(r.ArcMeanTime, 1) && p.set.ArcWidth > 0 {
		r.ArcMeanTime = p.meanTime(v, end, r.Share)
	}
	if math.IsInf(end, 1) { // nothing is left to cut
		p.t = end
		return
	}
	before := p.clone()
	p.move(v, end)
	if math.IsInf(r.LocalBeyond, 1) && p.share() >= r.Share*(1-1e-12) {
		at := before.t + (end-before.t)*fraction(before.share(), p.share(), r.Share)
		r.LocalBeyond = at
		if at <= p.set.Window {
			before.move(v, at)
			r.at(before)
		}
	}
	if math.IsInf(r.CutThroughTime, 1) && p.root() <= 1e-9*p.initialRoot {
		r.CutThroughTime, r.CutThroughSlip, r.CutThroughHeave = p.t, p.slip, p.heave
	}
}

// at takes what the zones have done by now as the answer's.
func (r *Result) at(p *progress) {
	r.Slip, r.Heave, r.Throw, r.PressureGap = p.slip, p.heave, p.throw, p.gap
}

// record adds the present to the history.
func (r *Result) record(p *progress) {
	h := &r.History
	h.Time = append(h.Time, p.t)
	h.RootThickness = append(h.RootThickness, p.root())
	h.Slip, h.Heave = append(h.Slip, p.slip), append(h.Heave, p.heave)
	h.Throw = append(h.Throw, p.throw)
	h.RootMassShare = append(h.RootMassShare, p.share())
	if p.set.ArcWidth > 0 {
		thickness, share := p.mean(p.arc)
		h.ArcMean = append(h.ArcMean, thickness)
		h.ArcMeanShare = append(h.ArcMeanShare, share)
	}
}

// fraction returns where between a and b the value c lies, 0 to 1.
func fraction(a, b, c float64) float64 {
	if b == a {
		return 1
	}
	return math.Min(1, math.Max(0, (c-a)/(b-a)))
}
