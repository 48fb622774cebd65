package race

import (
	"context"
	"math"
	"slices"

	"keelfall/column"
	"keelfall/solver/excision"
)

// flips finds, for the numbers that matter most, the value at which the verdict
// changes: those of the drip are moved until the drip time meets the time that it has
// (the excision time, or the window's end); slip rates until the excision time does.
func (r *Result) flips(ctx context.Context) error {
	p, d, x, v := r.Problem, r.Drip, r.Excision, &r.Verdict
	target := math.Min(x.Time, p.Drip.Window) // the drip is first where it is below this
	near := d.Wavelength
	if near == 0 {
		near = r.Spectrum.Fastest.Wavelength
	}
	dripAt := func(change func(*Problem)) float64 {
		q := *p
		q.Column.Layers = slices.Clone(p.Column.Layers)
		change(&q)
		t, err := dripTime(ctx, &q, near)
		if err != nil {
			if ctx.Err() != nil {
				return math.NaN()
			}
			return math.Inf(1) // not a column that could be run: not a flip either
		}
		return t
	}
	first, last, _ := p.Column.RootSpan()
	scaleRoot := func(x float64) float64 {
		return dripAt(func(q *Problem) {
			for i := first; i <= last; i++ {
				q.Column.Layers[i].Viscosity.Factor *= math.Exp(x)
			}
		})
	}
	viscosity := Flip{Key: "viscosity-factor", Label: "root viscosity", From: 1, Unit: "x"}
	if u, ok := crossing(scaleRoot, target, math.Log(1000)); ok {
		viscosity.To, viscosity.Found, viscosity.Distance = math.Exp(u), true, math.Abs(u)
		v.MarginLog10Viscosity = u / math.Ln10
	}
	add := func(f Flip) { v.Flips = append(v.Flips, f) }
	add(viscosity)

	amplitude := Flip{Key: "drip.amplitude", Label: "initial undulation", From: p.Drip.Amplitude, Unit: "m", Default: p.isDefault("drip.amplitude")}
	var thickness float64
	for i := first; i <= last; i++ {
		thickness += p.Column.Layers[i].Thickness
	}
	most := math.Log(p.Drip.Criterion * thickness / p.Drip.Amplitude * 0.999)
	if u, ok := crossing(func(x float64) float64 {
		return dripAt(func(q *Problem) { q.Drip.Amplitude *= math.Exp(math.Min(x, most)) })
	}, target, math.Log(1000)); ok && u < most {
		amplitude.To, amplitude.Found, amplitude.Distance = p.Drip.Amplitude*math.Exp(u), true, math.Abs(u)
	}
	add(amplitude)

	if contrast := -r.State.Jumps[last+1]; contrast > 0 {
		density := Flip{Key: "density", Label: "density contrast", From: contrast, Unit: "kg/m3"}
		if u, ok := crossing(func(x float64) float64 {
			more := contrast * (math.Exp(x) - 1)
			return dripAt(func(q *Problem) {
				for i := first; i <= last; i++ {
					q.Column.Layers[i].Density = heavier{q.Column.Layers[i].Density, more}
				}
			})
		}, target, math.Log(10)); ok {
			density.To, density.Found, density.Distance = contrast*math.Exp(u), true, math.Abs(u)
		}
		add(density)
	}
	if p.Column.Base.HasTemperature && r.State.HasTemperature && len(p.Column.Geotherm) == 0 {
		const unit = 100.0 // K
		temperature := Flip{Key: "base.temperature", Label: "basal temperature", From: p.Column.Base.Temperature, Unit: "K"}
		if u, ok := crossing(func(x float64) float64 {
			return dripAt(func(q *Problem) { q.Column.Base.Temperature += unit * x })
		}, target, 5); ok {
			temperature.To, temperature.Found, temperature.Distance = p.Column.Base.Temperature+unit*u, true, math.Abs(u)
		}
		add(temperature)
	}
	if r.Rate.Used {
		rate := Flip{Key: "strain.reference-rate", Label: "reference strain rate", From: p.Strain.ReferenceRate, Unit: "1/s", Default: p.isDefault("strain.reference-rate")}
		if u, ok := crossing(func(x float64) float64 {
			return dripAt(func(q *Problem) { q.Strain.ReferenceRate *= math.Exp(x) })
		}, target, math.Log(1000)); ok {
			rate.To, rate.Found, rate.Distance = p.Strain.ReferenceRate*math.Exp(u), true, math.Abs(u)
		}
		add(rate)
	}
	if len(p.Zones) > 0 {
		add(r.slipFlip())
	}
	slices.SortStableFunc(v.Flips, func(a, b Flip) int {
		switch {
		case a.Found != b.Found && a.Found, a.Found && b.Found && a.Distance < b.Distance:
			return -1
		case a.Found != b.Found, a.Found && b.Found && a.Distance > b.Distance:
			return 1
		}
		return 0
	})
	return ctx.Err()
}

// slipFlip finds the factor on every zone's slip rate that changes which is first.
func (r *Result) slipFlip() Flip {
	p, d := r.Problem, r.Drip
	f := Flip{Key: "excision.slip-rate", Label: "slip rate of the zones", From: 1, Unit: "x"}
	set := p.excisionSetting(r.State)
	target := math.Min(d.Time, p.Drip.Window)
	u, ok := crossing(func(x float64) float64 {
		zones := slices.Clone(p.Zones)
		for i := range zones {
			zones[i].SlipRate *= math.Exp(x)
		}
		res, err := excision.Solve(zones, set)
		if err != nil {
			return math.Inf(1)
		}
		return res.Time
	}, target, math.Log(1000))
	if ok {
		f.To, f.Found, f.Distance = math.Exp(u), true, math.Abs(u)
	}
	return f
}

// crossing returns the smallest |x|, up to most, at which the time t(x) passes target:
// steps outwards that double, then bisection to 1e-4. A time is +Inf where never.
func crossing(t func(float64) float64, target, most float64) (float64, bool) {
	if math.IsInf(target, 1) {
		return 0, false
	}
	start := t(0) < target
	found := math.Inf(1)
	for _, sign := range []float64{1, -1} {
		lo := 0.0
		for step := 0.1; lo < most && lo < math.Abs(found); step *= 1.6 {
			hi := math.Min(lo+step, most)
			th := t(sign * hi)
			if math.IsNaN(th) {
				return 0, false
			}
			if (th < target) != start {
				for hi-lo > 1e-4 {
					mid := (lo + hi) / 2
					if (t(sign*mid) < target) != start {
						hi = mid
					} else {
						lo = mid
					}
				}
				if hi < math.Abs(found) {
					found = sign * hi
				}
				break
			}
			lo = hi
		}
	}
	return found, !math.IsInf(found, 1)
}

func (p *Problem) isDefault(key string) bool {
	for _, d := range p.Defaults {
		if d.Key == key {
			return true
		}
	}
	return false
}

// heavier is a rock whose density is raised by a constant.
type heavier struct {
	column.Density
	more float64 // kg/m³
}

func (h heavier) At(T, P, x float64) float64 { return h.Density.At(T, P, x) + h.more }
