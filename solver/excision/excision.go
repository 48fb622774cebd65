package excision

import (
	"errors"
	"fmt"
	"math"
)

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
	PlateFails         float64        // of Run: s when the force on the zones stretched the plate beside them away; +Inf
	Zones              []ZoneHistory  // of Run, one a zone
	Layers             []LayerHistory // of Run, the layers that zones cut, from above
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
		CutThroughTime: never, ArcMeanTime: never, LocalBeyond: never, PlateFails: never}
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
