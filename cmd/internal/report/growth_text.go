package report

import (
	"fmt"
	"math"
	"slices"

	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// shares says who resists, largest first, at least 3 %.
func shares(s *state.State, m *growth.Mode) string {
	if m == nil || m.DissipationShare == nil {
		return ""
	}
	type part struct {
		name  string
		share float64
	}
	var parts []part
	for i, d := range m.DissipationShare {
		name := "the half-space below"
		if i < len(s.Column.Layers) {
			name = s.Column.Layers[i].Name
		}
		parts = append(parts, part{name, d})
	}
	slices.SortStableFunc(parts, func(a, b part) int {
		switch {
		case a.share > b.share:
			return -1
		case a.share < b.share:
			return 1
		}
		return 0
	})
	var words []string
	for _, q := range parts {
		if q.share >= 0.03 {
			words = append(words, fmt.Sprintf("%.0f %% %s", 100*q.share, q.name))
		}
	}
	return join(words)
}

// growthText describes a spectrum; shown are the rates that a page gives beside it.
func growthText(p *page, s *state.State, sp *growth.Spectrum, shown []growth.Rate) {
	p.section("GROWTH")
	f := sp.Fastest
	if f.Growth <= 0 {
		p.say("Nothing grows: every undulation decays or stays; slowest decay %.3g 1/Myr, at %s km.", -f.Growth*Myr, short(f.Wavelength/km))
		return
	}
	what := ""
	if m := sp.Mode; m != nil {
		what = fmt.Sprintf("; what moves: %s", m.Label(RootBase(s), depthsOf(s)))
		if m.Imaginary != 0 {
			what += fmt.Sprintf(", oscillating with a period of %s", myr(2*math.Pi/m.Imaginary))
		}
	}
	p.say("Fastest wavelength %s km, e-folding time %s at first%s.", short(f.Wavelength/km), myr(1/f.Growth), what)
	if f.AtRangeEdge {
		p.say("That is an end of the range of wavelengths: no maximum was bracketed.")
	}
	for _, q := range sp.Peaks {
		if q.Wavelength != f.Wavelength && q.Growth > 0 {
			p.say("Another maximum at %s km, e-folding time %s.", short(q.Wavelength/km), myr(1/q.Growth))
		}
	}
	if w := shares(s, sp.Mode); w != "" {
		p.say("Resistance: %s.", w)
	}
	if m := sp.Mode; m != nil {
		var heat float64
		for _, v := range m.ThermalWork {
			heat += v
		}
		if math.Abs(heat) > 0.005 {
			p.say("Of the work, %.0f %% is done by the heat that the undulation carries.", 100*heat)
		}
	}
	worst, own := 0.0, math.NaN()
	for _, x := range shown {
		worst = math.Max(worst, x.RelativeError)
		if x.Wavelength == f.Wavelength {
			own = x.RelativeError
		}
	}
	if math.IsNaN(own) { // other wavelengths were asked for
		p.say("Growth rates below good to %.0e (estimated).", worst)
		return
	}
	p.say("That rate is good to %.0e, the worst of the range to %.0e (estimated).", own, worst)
}
