package drip

import (
	"context"
	"fmt"
	"math"

	"keelfall/solver/growth"
)

// answer fills all that is said of the first drip.
func (d *through) answer(ctx context.Context, r *Result) error {
	const fine = 1e-3 // of the wavelength; a time is good to about the square of that
	var best [3]Fastest
	var err error
	for j := range best {
		if best[j], err = d.best(ctx, j, d.limit(), fine); err != nil {
			return err
		}
	}
	r.TimeLow, r.Time, r.TimeHigh = best[0].Time, best[1].Time, best[2].Time
	r.Unrestricted = best[1]
	if d.o.Limit > 0 {
		if r.Unrestricted, err = d.best(ctx, 1, math.Inf(1), fine); err != nil {
			return err
		}
	}
	r.Unrestricted.Wavelength *= d.stretched(r.Unrestricted.Time)
	contrast := -d.course.first.s.Jumps[d.course.first.lay.rootBase]
	if math.IsInf(r.Time, 1) {
		r.Outcome, r.Reason = d.never(contrast, r.Unrestricted)
		return nil
	}
	r.Outcome, r.Reason = "drips", "the root is "+Weigh(contrast)
	if contrast <= 0 {
		r.Reason += " at the start, and becomes denser or is carried down by denser rock above"
	}
	if r.Time > d.set.Window {
		r.Outcome, r.Reason = "window", "it would drip, but only after the window has closed"
	}
	r.InitialWavelength, r.Wavelength = best[1].Wavelength, best[1].Wavelength*d.stretched(r.Time)
	if d.o.Limit > 0 && r.Unrestricted.Time < 0.99*r.Time {
		r.Excluded = fmt.Sprintf("wavelengths beyond %s, were computed and not used; the first of them to drip is %.4g km", d.o.LimitIs, r.Unrestricted.Wavelength/1e3)
	}
	r.SpacingFrom, r.SpacingTo = d.spacing(r.Time, r.InitialWavelength)
	f, err := d.one(ctx, r.InitialWavelength, 1, true)
	if err != nil {
		return err
	}
	if r.First, err = d.firstTrace(f); err != nil {
		return err
	}
	r.History.Time, r.History.Base = r.First.Time, r.First.Base
	return nil
}

// never says that nothing drips within the window, and why.
func (d *through) never(contrast float64, free Fastest) (outcome, reason string) {
	denser := contrast > 0
	for _, l := range d.course.legs {
		if b := l.end.lay.rootBase; b >= 0 {
			denser = denser || -l.end.s.Jumps[b] > 0
		}
	}
	switch {
	case d.course.last().lay.rootBase < 0:
		return "window", "the root was gone before it could drip"
	case !math.IsInf(free.Time, 1):
		return "window", fmt.Sprintf("no wavelength within %s, drips, though one of %.4g km would", d.o.LimitIs, free.Wavelength/1e3)
	case !denser:
		return "buoyant", "does not drip: the root is " + Weigh(contrast) + ", and never becomes denser"
	}
	return "window", "does not drip within twice the window, though the root is or becomes denser than what lies below it"
}

// at winds the course back to time t and returns the column there.
func (d *through) at(ctx context.Context, t float64) (*node, error) {
	mark := d.course.first.mark
	for _, l := range d.course.legs {
		for _, n := range []*node{l.from, l.mid, l.end} {
			if n != nil && n.t <= t && n.mark > mark {
				mark = n.mark
			}
		}
	}
	d.tape.back(mark)
	if t > d.tape.motion.Time() {
		if err := d.tape.advance(ctx, t); err != nil {
			return nil, err
		}
	}
	n, err := d.course.look()
	if err != nil {
		return nil, err
	}
	return n, d.course.refine(n, nil, true)
}

// mode adds the leading mode and the strain rates of the first drip, in the column then.
func (d *through) mode(n *node, r *Result) error {
	s, err := growth.NewSolver(n.model, courseTolerance)
	if err != nil {
		return err
	}
	if r.Mode, err = s.Mode(r.Wavelength); err != nil {
		return err
	}
	r.Rate = r.Mode.Growth
	root := n.s.Column.Layers
	if size := math.Abs(r.Mode.Displacement[n.lay.rootBase]); size > 0 {
		for i, l := range root {
			if l.Root {
				perMetre := r.Mode.StrainRate[i] / size
				r.StrainRate = math.Max(r.StrainRate, perMetre*d.set.AmplitudeAt(r.InitialWavelength))
				r.StrainRateEnd = math.Max(r.StrainRateEnd, perMetre*d.set.Criterion*n.root)
			}
		}
	}
	if w := rateCaution(n.s, r); w != "" && d.set.Softening != "self" {
		r.Warnings = append(r.Warnings, w)
	}
	return nil
}
