package race

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"keelfall/column"
	"keelfall/solver/excision"
)

// Units of distance where |Δ ln p| has no meaning.
const (
	perDensity     = 100.0                   // kg/m³
	perTemperature = 100.0                   // K
	perSlip        = 1e-3 / (365.25 * 86400) // m/s, 1 mm/yr: from a zone that does not slip
	mostSlip       = 50.0                    // mm/yr
	mostFactor     = 1000.0
	rootViscosity  = "root viscosity"
)

// searches lists what is looked at.
func (r *Result) searches() []search {
	list := []search{r.viscositySearch(), r.undulationSearch(), r.densitySearch()}
	p := r.Problem
	if r.State.HasTemperature && len(p.Column.Geotherm) == 0 {
		if p.Column.Base.HasTemperature {
			list = append(list, temperatureSearch(p))
		}
		if p.Column.Base.HasHeatFlow && p.Column.Base.HeatFlow > 0 {
			list = append(list, scaled(p, "base.heat-flow", "basal heat flow", "W/m2", p.Column.Base.HeatFlow, 3, func(q *Problem, x float64) {
				q.Column.Base.HeatFlow *= math.Exp(x)
			}))
		}
	}
	if r.Rate.Used {
		list = append(list, scaled(p, "strain.reference-rate", "reference strain rate", "1/s", p.Strain.ReferenceRate, mostFactor, func(q *Problem, x float64) {
			q.Strain.ReferenceRate *= math.Exp(x)
		}))
	}
	if s := r.slipSearch(); len(s.keys(0)) > 0 {
		list = append(list, s)
	}
	return list
}

// scaled is a search over factors of one key, up to most either way.
func scaled(p *Problem, key, label, unit string, now, most float64, change func(*Problem, float64)) search {
	value := func(x float64) float64 { return now * math.Exp(x) }
	return search{
		flip: Flip{Key: key, Label: label, Unit: unit, From: now, Default: p.isDefault(key), Searched: fmt.Sprintf("× %.4g", most)},
		most: math.Log(most), value: value, change: change,
		keys: func(x float64) []Change { return []Change{{key, unit, now, value(x)}} },
	}
}

// viscositySearch multiplies the viscosity of all root layers by one factor.
func (r *Result) viscositySearch() search {
	p := r.Problem
	first, last, _ := p.Column.RootSpan()
	now := 1.0
	if first == last {
		now = p.Column.Layers[last].Viscosity.FactorOr1()
	}
	s := scaled(p, p.rootKey("viscosity-factor"), rootViscosity, "x", now, mostFactor, func(q *Problem, x float64) {
		for i := first; i <= last; i++ {
			q.Column.Layers[i].Viscosity.Factor = q.Column.Layers[i].Viscosity.FactorOr1() * math.Exp(x)
		}
	})
	s.flip.Default = false
	s.keys = func(x float64) []Change {
		var c []Change
		for i := first; i <= last; i++ {
			f := p.Column.Layers[i].Viscosity.FactorOr1()
			c = append(c, Change{p.layerKey(i, "viscosity-factor"), "x", f, f * math.Exp(x)})
		}
		if p.baseFollows() && (p.isDefault("base.viscosity") || p.isDefault("base.creep")) {
			f := p.Column.Base.Viscosity.FactorOr1()
			c = append(c, Change{"base.viscosity-factor", "x", f, f}) // or it would follow the root's
		}
		return c
	}
	return s
}

// undulationSearch scales the first amplitude, up to half the way to a drip.
func (r *Result) undulationSearch() search {
	p := r.Problem
	change := func(q *Problem, x float64) { q.Drip = q.Drip.Scaled(math.Exp(x)) }
	tip := p.Drip.Criterion * p.Column.RootThickness()
	if t := p.Drip.Rough.Amplitude; len(t) > 0 { // no key scales a table
		s := scaled(p, "drip.spectrum", "initial undulation", "x", 1, math.Max(1, tip/2/slices.Max(t)), change)
		s.keys = func(float64) []Change { return nil }
		return s
	}
	return scaled(p, "drip.amplitude", "initial undulation", "m", p.Drip.Amplitude, math.Max(1, tip/2/p.Drip.Amplitude), change)
}

// densitySearch adds to the density of all root layers.
func (r *Result) densitySearch() search {
	p := r.Problem
	first, last, _ := p.Column.RootSpan()
	contrast := -r.State.Jumps[last+1]
	const most = 500.0 // kg/m³
	s := search{
		flip: Flip{Key: p.rootKey("density"), Label: "root density", Unit: "kg/m3", Searched: fmt.Sprintf("± %.0f kg/m3", most),
			HasContrast: true, ContrastFrom: contrast, ContrastTo: contrast},
		most: most / perDensity,
		change: func(q *Problem, x float64) {
			for i := first; i <= last; i++ {
				q.Column.Layers[i].Density = heavier(q.Column.Layers[i].Density, perDensity*x)
			}
		},
	}
	plain := !p.baseFollows() || !p.isDefault("base.density")
	for i := first; i <= last; i++ {
		_, number := p.Column.Layers[i].Density.(column.Uniform)
		plain = plain && number
	}
	s.flip.From = contrast
	if plain && first == last {
		s.flip.From = float64(p.Column.Layers[last].Density.(column.Uniform))
	}
	from := s.flip.From
	s.value = func(x float64) float64 { return from + perDensity*x }
	s.keys = func(x float64) []Change {
		var c []Change
		for i := first; plain && i <= last; i++ {
			rho := float64(p.Column.Layers[i].Density.(column.Uniform))
			c = append(c, Change{p.layerKey(i, "density"), "kg/m3", rho, rho + perDensity*x})
		}
		return c
	}
	if !plain {
		s.flip.Key = "contrast of " + p.Column.Layers[last].Name
	}
	if !plain || first != last {
		s.flip.Label = "density contrast"
	}
	return s
}

func temperatureSearch(p *Problem) search {
	const most = 500.0 // K
	now := p.Column.Base.Temperature
	value := func(x float64) float64 { return now + perTemperature*x }
	return search{
		flip: Flip{Key: "base.temperature", Label: "basal temperature", Unit: "K", From: now, Searched: fmt.Sprintf("± %.0f K", most)},
		most: most / perTemperature, value: value,
		change: func(q *Problem, x float64) { q.Column.Base.Temperature = value(x) },
		keys:   func(x float64) []Change { return []Change{{"base.temperature", "K", now, value(x)}} },
	}
}

// slipSearch multiplies the given slip rate of every zone that cuts the root by one factor;
// where none of them slips, it adds to all of them.
func (r *Result) slipSearch() search {
	p := r.Problem
	var cutting []int
	var names []string
	still := true
	for i, z := range p.Zones {
		if z.Drive == excision.GivenRate && slices.ContainsFunc(p.Column.Layers, func(l column.Layer) bool { return l.Root && slices.Contains(z.Cuts, l.Name) }) {
			cutting, names = append(cutting, i), append(names, z.Name)
			still = still && z.SlipRate == 0
		}
	}
	key := func(name string) string { return "excision.zones." + name + ".slip-rate" }
	rate := func(now, x float64) float64 { return now * math.Exp(x) }
	f := Flip{Key: key(strings.Join(names, "+")), Label: "slip rate of the zones", Unit: "x", From: 1, Searched: fmt.Sprintf("× %.0f", mostFactor)}
	most := math.Log(mostFactor)
	if still {
		rate = func(_, x float64) float64 { return perSlip * math.Max(0, x) }
		f.Unit, f.From, f.Searched, most = "m/s", 0, fmt.Sprintf("%.0f mm/yr", mostSlip), mostSlip
	}
	if len(cutting) == 1 {
		f.Label, f.Unit, f.From = "slip rate", "m/s", p.Zones[cutting[0]].SlipRate
	}
	from := f.From
	return search{flip: f, most: most, zones: true,
		value: func(x float64) float64 { return rate(from, x) },
		change: func(q *Problem, x float64) {
			for _, i := range cutting {
				q.Zones[i].SlipRate = rate(q.Zones[i].SlipRate, x)
			}
		},
		keys: func(x float64) []Change {
			var c []Change
			for _, i := range cutting {
				z := &p.Zones[i]
				c = append(c, Change{key(z.Name), "m/s", z.SlipRate, rate(z.SlipRate, x)})
			}
			return c
		},
	}
}

// rootKey names a key of the root layers, all of them together.
func (p *Problem) rootKey(key string) string {
	first, last, _ := p.Column.RootSpan()
	var names []string
	for i := first; i <= last; i++ {
		names = append(names, p.Column.Layers[i].Name)
	}
	return "layers." + strings.Join(names, "+") + "." + key
}

func (p *Problem) layerKey(i int, key string) string {
	return "layers." + p.Column.Layers[i].Name + "." + key
}

// baseFollows says whether the half-space lies right below the root, so that what the
// experiment does not say of it is taken from the root.
func (p *Problem) baseFollows() bool {
	_, last, _ := p.Column.RootSpan()
	return last == len(p.Column.Layers)-1
}

func (p *Problem) isDefault(key string) bool {
	return slices.ContainsFunc(p.Defaults, func(d Default) bool { return d.Key == key })
}

// heavier returns a rock's density raised by more kg/m³.
func heavier(d column.Density, more float64) column.Density {
	if u, ok := d.(column.Uniform); ok {
		return u + column.Uniform(more)
	}
	return raised{d, more}
}

// raised is a density raised by a constant.
type raised struct {
	column.Density
	more float64 // kg/m³
}

// At returns the raised density.
func (r raised) At(T, P, x float64) float64 { return r.Density.At(T, P, x) + r.more }

// Covers is the range of the density that is raised.
func (r raised) Covers(T, P float64) error { return column.Covered(r.Density, T, P) }

// Kinks are those of the density that is raised.
func (r raised) Kinks() []column.Kink { return column.Kinks(r.Density) }
