// Package excision computes how shear zones cut a root out of a column.
//
// A zone of dip θ slips at s; layering dips δ towards the zone's dip direction. The
// column it crosses loses s sin(θ − δ) of stratigraphic and s sin(θ − δ)/cos δ of
// vertical thickness per time, from the rock directly above the zone; negative is
// repetition. Heave is s cos θ, throw s sin θ. Averaged over an arc of original width
// B the loss is that of uniform stretching by the same extension,
// h × heave/(B + heave): a zone moves rock aside, it does not destroy it (derived;
// structural geometry, common practice).
//
// In this version slip rates are given, the column is otherwise frozen, and zones do
// not interact except by cutting the same layers.
package excision

import (
	"errors"
	"fmt"
	"math"
	"sort"
)

// Zone is one shear zone with a given slip rate.
type Zone struct {
	Name        string
	Dip         float64  // rad, 0 < dip <= π/2
	LayeringDip float64  // rad, towards the zone's dip direction
	Cuts        []string // names of the layers it cuts out, in order
	From, To    float64  // s, active interval
	SlipRate    float64  // m/s, >= 0
	Width       float64  // m, normal to the zone; 0 where not given
}

// VerticalLoss is the vertical thickness lost per slip, sin(θ − δ)/cos δ.
func (z *Zone) VerticalLoss() float64 { return math.Sin(z.Dip-z.LayeringDip) / math.Cos(z.LayeringDip) }

// StratigraphicLoss is the thickness lost per slip across the layering, sin(θ − δ).
func (z *Zone) StratigraphicLoss() float64 { return math.Sin(z.Dip - z.LayeringDip) }

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
	ArcMean       []float64 // m, averaged over the arc's original width; nil without a width
	Slip, Heave   []float64 // m, summed over zones
	Throw         []float64 // m
	RootMassShare []float64 // share of the root's initial mass that is gone; negative where repeated
	ArcMeanShare  []float64 // the same averaged over the arc; nil without a width
}

// Result is the answer to: when has excision taken the asked share of the root?
type Result struct {
	Outcome            string  // "excised", "window" or "no zones"
	Time               float64 // s; +Inf where it does not happen
	Share              float64 // the share of the root's mass asked for
	Slip, Heave, Throw float64 // m, at Time, or at the window's end
	ExtensionDemanded  float64 // heave over the arc's width at that moment; 0 without a width
	CutThroughTime     float64 // s until the root is wholly gone at the zones' rates, beyond the window too; +Inf where never
	CutThroughSlip     float64 // m
	CutThroughHeave    float64 // m
	ArcMeanTime        float64 // s until the arc mean has lost the share, beyond the window too; +Inf where never or no width
	LocalBeyond        float64 // s until the column has lost the share, beyond the window too
	PressureGap        float64 // Pa missing across the zones at Time, or at the window's end
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

// Solve follows the zones until the window ends.
func Solve(zones []Zone, set Setting) (*Result, error) {
	if err := check(zones, set); err != nil {
		return nil, err
	}
	r := &Result{Outcome: "no zones", Time: math.Inf(1), Share: set.Share,
		CutThroughTime: math.Inf(1), ArcMeanTime: math.Inf(1), LocalBeyond: math.Inf(1)}
	p := newProgress(zones, set)
	const samples = 200
	next := 0
	record := func() {
		h := &r.History
		h.Time = append(h.Time, p.t)
		h.RootThickness = append(h.RootThickness, p.root())
		h.Slip, h.Heave = append(h.Slip, p.slip), append(h.Heave, p.heave)
		h.Throw = append(h.Throw, p.throw)
		h.RootMassShare = append(h.RootMassShare, p.share())
		if set.ArcWidth > 0 {
			s := p.heave / (set.ArcWidth + p.heave)
			h.ArcMeanShare = append(h.ArcMeanShare, s)
			h.ArcMean = append(h.ArcMean, p.initialRoot*(1-s))
		}
	}
	record()
	for p.t < set.Window {
		next++
		stop := math.Min(set.Window, set.Window*float64(next)/samples)
		for p.t < stop {
			before := *p
			before.left = append([]float64(nil), p.left...)
			p.step(stop)
			if math.IsInf(r.Time, 1) && p.share() >= set.Share*(1-1e-12) {
				r.Time = before.t + (p.t-before.t)*fraction(before.share(), p.share(), set.Share)
				f := 1.0
				if p.t > before.t {
					f = (r.Time - before.t) / (p.t - before.t)
				}
				r.Slip = before.slip + f*(p.slip-before.slip)
				r.Heave = before.heave + f*(p.heave-before.heave)
				r.Throw = before.throw + f*(p.throw-before.throw)
				r.PressureGap = before.gap + f*(p.gap-before.gap)
			}
		}
		record()
	}
	if len(zones) == 0 {
		return r, nil
	}
	r.Outcome = "excised"
	if math.IsInf(r.Time, 1) {
		r.Outcome = "window"
		r.Slip, r.Heave, r.Throw, r.PressureGap = p.slip, p.heave, p.throw, p.gap
	}
	if set.ArcWidth > 0 {
		r.ExtensionDemanded = r.Heave / set.ArcWidth
		if r.ExtensionDemanded > 1 {
			r.Warnings = append(r.Warnings, fmt.Sprintf("the zones' heave of %.0f km is %.0f %% extension of an arc %.0f km wide", r.Heave/1e3, 100*r.ExtensionDemanded, set.ArcWidth/1e3))
		}
	}
	beyond(r, zones, set)
	return r, nil
}

// beyond follows the zones past the window, as if they went on at their own
// intervals, to say when the root would be cut through and the arc mean thinned.
func beyond(r *Result, zones []Zone, set Setting) {
	free := make([]Zone, len(zones))
	for i, z := range zones {
		free[i] = z
		if z.To >= set.Window {
			free[i].To = math.Inf(1)
		}
	}
	p := newProgress(free, set)
	for i := 0; i < 10*(len(zones)+1)*(len(set.Layers)+2); i++ {
		before := *p
		p.step(math.Inf(1))
		if math.IsInf(p.t, 1) {
			break
		}
		if math.IsInf(r.LocalBeyond, 1) && p.share() >= set.Share*(1-1e-12) {
			r.LocalBeyond = before.t + (p.t-before.t)*fraction(before.lost/before.mass, p.share(), set.Share)
		}
		if p.root() <= 1e-9*p.initialRoot {
			r.CutThroughTime, r.CutThroughSlip, r.CutThroughHeave = p.t, p.slip, p.heave
			break
		}
	}
	if set.ArcWidth > 0 && set.Share < 1 {
		want := set.ArcWidth * set.Share / (1 - set.Share) // heave/(B + heave) = share
		r.ArcMeanTime = heaveTime(free, want)
	}
}

// heaveTime returns when the summed heave of the zones reaches want, as if rock to
// cut never ran out; +Inf where never.
func heaveTime(zones []Zone, want float64) float64 {
	var at []float64
	for _, z := range zones {
		at = append(at, z.From, z.To)
	}
	sort.Float64s(at)
	var t, heave float64
	for _, end := range at {
		var rate float64
		for _, z := range zones {
			if z.From <= t && t < z.To {
				rate += z.SlipRate * math.Cos(z.Dip)
			}
		}
		if rate > 0 && heave+rate*(end-t) >= want {
			return t + (want-heave)/rate
		}
		if math.IsInf(end, 1) {
			break
		}
		heave += rate * (end - t)
		t = end
	}
	return math.Inf(1)
}

// fraction returns where between a and b the value c lies, 0 to 1.
func fraction(a, b, c float64) float64 {
	if b == a {
		return 1
	}
	return math.Min(1, math.Max(0, (c-a)/(b-a)))
}

func check(zones []Zone, set Setting) error {
	root := false
	index := map[string]int{}
	for i, l := range set.Layers {
		root = root || l.Root
		index[l.Name] = i
		if !(l.Thickness > 0) || !(l.Density > 0) {
			return fmt.Errorf("excision: layer %q: thickness %g m, density %g kg/m³; must be positive", l.Name, l.Thickness, l.Density)
		}
	}
	switch {
	case !root:
		return ErrNoRoot
	case !(set.Share > 0 && set.Share <= 1):
		return fmt.Errorf("excision: share %g; must be above 0 and at most 1", set.Share)
	case !(set.Window > 0) || math.IsInf(set.Window, 0):
		return fmt.Errorf("excision: window %g s; must be positive", set.Window)
	}
	for _, z := range zones {
		if !(z.Dip > 0 && z.Dip <= math.Pi/2) {
			return fmt.Errorf("excision: zone %q dips %g°; must be above 0 and at most 90", z.Name, z.Dip*180/math.Pi)
		}
		if !(math.Abs(z.LayeringDip) < math.Pi/2) {
			return fmt.Errorf("excision: zone %q: layering dips %g°; must be within 90", z.Name, z.LayeringDip*180/math.Pi)
		}
		if !(z.SlipRate >= 0) || math.IsInf(z.SlipRate, 0) {
			return fmt.Errorf("excision: zone %q slips at %g m/s; must be zero or more", z.Name, z.SlipRate)
		}
		if !(z.From >= 0 && z.To > z.From) {
			return fmt.Errorf("excision: zone %q is active from %g to %g s", z.Name, z.From, z.To)
		}
		if len(z.Cuts) == 0 {
			return fmt.Errorf("excision: zone %q cuts no layer", z.Name)
		}
		for _, n := range z.Cuts {
			if _, ok := index[n]; !ok {
				return fmt.Errorf("excision: zone %q cuts %q, which is not a layer", z.Name, n)
			}
		}
	}
	return nil
}
