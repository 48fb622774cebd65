package race

import (
	"context"
	"fmt"
	"math"
	"slices"

	"keelfall/column"
	"keelfall/solver/excision"
)

// flips finds, for the numbers that matter most, the value nearest to the one in use
// at which the verdict changes, all else equal. Numbers of the drip change the drip
// time; slip rates change the excision.
func (r *Result) flips(ctx context.Context) error {
	p, v := r.Problem, &r.Verdict
	near := r.Drip.Wavelength
	if near == 0 {
		near = r.Spectrum.Fastest.Wavelength
	}
	// changed says whether the verdict differs after a change of the problem
	changed := func(change func(*Problem)) bool {
		q := *p
		q.Column.Layers = slices.Clone(p.Column.Layers)
		change(&q)
		t, err := dripTime(ctx, &q, near)
		if err != nil {
			return false // not a column that can be run: no flip there
		}
		return judge(t, r.Excision, v.Share, p.Drip.Window).outcome != v.Outcome
	}
	first, last, _ := p.Column.RootSpan()
	root := p.Column.Layers[last].Name
	scale := func(f *Flip, unit string, from, most float64, change func(*Problem, float64)) {
		f.Unit, f.From = unit, from
		if u, ok := nearest(func(x float64) bool {
			return changed(func(q *Problem) { change(q, math.Exp(x)) })
		}, most); ok {
			f.To, f.Found, f.Distance = from*math.Exp(u), true, math.Abs(u)
		}
		f.Default = p.isDefault(f.Key)
		v.Flips = append(v.Flips, *f)
	}
	scale(&Flip{Key: "layers." + root + ".viscosity-factor", Label: "root viscosity"}, "x", p.Column.Layers[last].Viscosity.FactorOr1(), math.Log(1000), func(q *Problem, x float64) {
		for i := first; i <= last; i++ {
			q.Column.Layers[i].Viscosity.Factor = q.Column.Layers[i].Viscosity.FactorOr1() * x
		}
	})
	if f := v.Flips[0]; f.Found {
		v.MarginLog10Viscosity = math.Log10(f.To / f.From)
	}
	tip := p.Drip.Criterion * p.rootThickness()
	scale(&Flip{Key: "drip.amplitude", Label: "initial undulation"}, "m", p.Drip.Amplitude, math.Log(0.99*tip/p.Drip.Amplitude), func(q *Problem, x float64) {
		q.Drip.Amplitude *= x
	})
	if contrast := -r.State.Jumps[last+1]; contrast > 0 {
		scale(&Flip{Key: "layers." + root + ".density", Label: "density contrast"}, "kg/m3", contrast, math.Log(10), func(q *Problem, x float64) {
			for i := first; i <= last; i++ {
				q.Column.Layers[i].Density = heavier{q.Column.Layers[i].Density, contrast * (x - 1)}
			}
		})
	}
	if p.Column.Base.HasTemperature && r.State.HasTemperature && len(p.Column.Geotherm) == 0 {
		const unit = 100.0 // K
		f := Flip{Key: "base.temperature", Label: "basal temperature", Unit: "K", From: p.Column.Base.Temperature}
		if u, ok := nearest(func(x float64) bool {
			return changed(func(q *Problem) { q.Column.Base.Temperature += unit * x })
		}, 5); ok {
			f.To, f.Found, f.Distance = f.From+unit*u, true, math.Abs(u)
		}
		v.Flips = append(v.Flips, f)
	}
	if r.Rate.Used {
		scale(&Flip{Key: "strain.reference-rate", Label: "reference strain rate"}, "1/s", p.Strain.ReferenceRate, math.Log(1000), func(q *Problem, x float64) {
			q.Strain.ReferenceRate *= x
		})
	}
	if len(p.Zones) > 0 {
		v.Flips = append(v.Flips, r.slipFlip())
	}
	slices.SortStableFunc(v.Flips, func(a, b Flip) int {
		switch {
		case a.Found && (!b.Found || a.Distance < b.Distance):
			return -1
		case b.Found && (!a.Found || b.Distance < a.Distance):
			return 1
		}
		return 0
	})
	return ctx.Err()
}

// slipFlip finds the factor on every zone's slip rate that changes the verdict.
func (r *Result) slipFlip() Flip {
	p, v := r.Problem, &r.Verdict
	f := Flip{Key: "excision.zones.slip-rate", Label: "slip rate of the zones", From: 1, Unit: "x"}
	if len(p.Zones) == 1 {
		f = Flip{Key: fmt.Sprintf("excision.zones.%s.slip-rate", p.Zones[0].Name), Label: "slip rate", From: p.Zones[0].SlipRate, Unit: "m/s"}
	}
	set := p.excisionSetting(r.State)
	u, ok := nearest(func(x float64) bool {
		zones := slices.Clone(p.Zones)
		for i := range zones {
			zones[i].SlipRate *= math.Exp(x)
		}
		res, err := excision.Solve(zones, set)
		return err == nil && judge(r.Drip.Time, res, v.Share, p.Drip.Window).outcome != v.Outcome
	}, math.Log(1000))
	if ok {
		f.To, f.Found, f.Distance = f.From*math.Exp(u), true, math.Abs(u)
	}
	return f
}

// nearest returns the x of smallest |x| up to most at which changed holds: growing
// steps outwards on both sides in turn, then bisection to 1e-4.
func nearest(changed func(float64) bool, most float64) (float64, bool) {
	if !(most > 0) {
		return 0, false
	}
	lo := 0.0
	for step := 0.1; lo < most; step *= 1.6 {
		hi := math.Min(lo+step, most)
		found, ok := 0.0, false
		for _, sign := range []float64{1, -1} {
			if !changed(sign * hi) {
				continue
			}
			a, b := lo, hi
			for b-a > 1e-4 {
				if mid := (a + b) / 2; changed(sign * mid) {
					b = mid
				} else {
					a = mid
				}
			}
			if !ok || b < math.Abs(found) {
				found, ok = sign*b, true
			}
		}
		if ok {
			return found, true
		}
		lo = hi
	}
	return 0, false
}

// rootThickness returns the sum of the root layers' thicknesses, m.
func (p *Problem) rootThickness() float64 {
	var h float64
	for i := range p.Column.Layers {
		if p.Column.Layers[i].Root {
			h += p.Column.Layers[i].Thickness
		}
	}
	return h
}

func (p *Problem) isDefault(key string) bool {
	return slices.ContainsFunc(p.Defaults, func(d Default) bool { return d.Key == key })
}

// heavier is a rock whose density is raised by a constant.
type heavier struct {
	column.Density
	more float64 // kg/m³
}

// At returns the raised density.
func (h heavier) At(T, P, x float64) float64 { return h.Density.At(T, P, x) + h.more }
