package report

import (
	"fmt"
	"math"

	"keelfall/solver/drip"
	"keelfall/solver/race"
)

// undulation says what the first drip grew from.
func undulation(p *race.Problem, d *drip.Result) string {
	set := &p.Drip
	at := short(set.AmplitudeAt(d.InitialWavelength)) + " m"
	switch {
	case len(set.Rough.Wavelength) > 0:
		return fmt.Sprintf("an undulation of %s at that wavelength, as the table %s says", at, set.Spectrum)
	case !set.White():
		return fmt.Sprintf("an undulation of %s at that wavelength (a red spectrum: %s m%s at %s km%s, growing with wavelength to the power %s%s)", at,
			short(set.Amplitude), star(p, "drip.amplitude"), short(set.Rough.At/km), star(p, "drip.spectrum.at"), short(set.Rough.Exponent), star(p, "drip.spectrum.red"))
	}
	return fmt.Sprintf("an undulation of %s m%s", short(set.Amplitude), star(p, "drip.amplitude"))
}

// room says how many drips find room along the arc.
func room(p *page, r *race.Result) {
	d, pb := r.Drip, r.Problem
	n, ok := r.DripsAlongStrike(d.Wavelength)
	if !ok {
		return
	}
	length := short(pb.ArcLength / km)
	if n == 0 {
		p.say("Not one drip of that spacing finds room along the arc's %s km.", length)
		return
	}
	across := pb.Strain.Wavevector != race.AlongStrike
	fit := Count(n, "drip")
	if !across {
		fit += " of it"
	}
	fit += map[bool]string{true: " fits", false: " fit"}[n == 1] + " along the arc's " + length + " km"
	most, _ := r.DripsAlongStrike(d.SpacingFrom)
	if least, _ := r.DripsAlongStrike(d.SpacingTo); most > least {
		fit += fmt.Sprintf(", and %d to %d at the ends of that range", least, most)
	}
	if across {
		p.say("If that spacing holds along strike, %s.", fit)
		return
	}
	p.say("%s.", fit)
}

// criticalWords says how thick the root can grow before it drips; "" where that was not
// looked for.
func criticalWords(r *race.Result) string {
	c, pb := r.Study.Critical, r.Problem
	if c == nil {
		return ""
	}
	searched := fmt.Sprintf("%s to %s km", short(c.From/km), short(c.To/km))
	window := myr(pb.Drip.Window)
	switch {
	case c.Always:
		return fmt.Sprintf("it drips within %s at any thickness searched (%s)", window, searched)
	case math.IsNaN(c.Thickness):
		return fmt.Sprintf("it does not drip within %s at any thickness searched (%s)", window, searched)
	}
	at := ""
	if pb.Moving() {
		at = " at the start"
	}
	s := fmt.Sprintf("a root of %s km%s (× %s) would drip just as the window of %s ends; a thinner one is still there then", short(c.Thickness/km), at, sig(c.Factor, 3), window)
	switch {
	case !math.IsNaN(c.Reached):
		s += fmt.Sprintf("; growing at %s mm/yr from its %s km, it gets there in %s", short(c.Rate*1e3*Year), short(pb.Column.RootThickness()/km), myr(c.Reached))
		if c.Until < c.Reached {
			s += ", but it grows only until " + when(pb, c.Until)
		}
	case c.Rate > 0:
		s += "; it is thicker than that already"
	}
	return s
}

// exponent is what one layer does to the drip time.
type exponent struct {
	layer           string
	share, exponent float64 // NaN where not known
}

// exponents lists layers from the surface down, the half-space last.
func exponents(r *race.Result) []exponent {
	var shares []float64
	if r.Drip.Mode != nil {
		shares = r.Drip.Mode.DissipationShare
	}
	if r.Study.Exponents == nil && shares == nil {
		return nil
	}
	var out []exponent
	for i := 0; i <= len(r.Problem.Column.Layers); i++ {
		name := "base"
		if i < len(r.Problem.Column.Layers) {
			name = r.Problem.Column.Layers[i].Name
		}
		out = append(out, exponent{name, float64(valueAt(shares, i)), float64(valueAt(r.Study.Exponents, i))})
	}
	return out
}

// dripsText lists the drips one a line.
func dripsText(p *page, r *race.Result) {
	d, pb := r.Drip, r.Problem
	if d.Outcome != "drips" {
		return
	}
	p.section("DRIPS")
	age := ""
	if pb.HasTimeZero {
		age = fmt.Sprintf("%8s", "Ma")
	}
	p.line("%3s %8s%s  %22s  %13s  %21s", "", "Myr", age, "wavelength km", "root lost km", "root base before")
	p.line("%3s %8s%s  %22s  %13s  %21s", "", "", pad("", len(age)), "at start      at drip", "", "km        degC")
	dash := func(n number, of float64, digits int) string {
		if math.IsNaN(float64(n)) {
			return "-"
		}
		return sig((float64(n))/of, digits)
	}
	for i, e := range dripEvents(pb, r.State, d) {
		at := ""
		if pb.HasTimeZero {
			at = fmt.Sprintf("%8.1f", (pb.TimeZero-float64(e.Time))/Myr)
		}
		p.line("%3d %8s%s  %8s     %8s   %13s  %8s     %8s", i+1, dash(e.Time, Myr, 3), at, dash(e.Initial, km, 3), dash(e.Wavelength, km, 3), dash(e.Thickness, km, 3), dash(e.Depth, km, 3), dash(e.Base-zero, 1, 4))
	}
}

// firstText follows the first drip.
func firstText(p *page, r *race.Result) {
	f := r.Drip.First
	n := len(f.StrainRate)
	if n < 2 {
		return
	}
	p.section("FIRST")
	p.line("%10s %14s %16s %14s %14s", "Myr", "amplitude km", "strain rate 1/s", "background 1/s", "stress MPa")
	end := f.Time[n-1]
	for _, x := range []float64{0, 0.25, 0.5, 0.75, 1} {
		i := 0
		for i < n-1 && f.Time[i] < x*end*(1-1e-9) {
			i++
		}
		back := "-"
		if f.Background[i] > 0 {
			back = fmt.Sprintf("%.1e", f.Background[i])
		}
		p.line("%10s %14s %16.1e %14s %14s", sig(f.Time[i]/Myr, 3), sig(f.Base[i]/km, 3), f.StrainRate[i], back, sig(f.Stress[i]/1e6, 2))
	}
	p.say("Strain rate and stress are the drip's own, second invariants (half the differential stress), at the root's base and there where they are largest along it.")
}

// exponentsText says which layer's viscosity sets the time.
func exponentsText(p *page, r *race.Result) {
	list := exponents(r)
	if list == nil {
		return
	}
	p.section("CONTROLS")
	p.line("%s %12s %12s", pad("which layer's viscosity sets the time", 40), "resistance", "d ln t")
	largest := exponent{exponent: math.Inf(-1)}
	var sum float64
	for _, e := range list {
		share, exp := "-", "-"
		if !math.IsNaN(e.share) {
			share = fmt.Sprintf("%.0f %%", 100*e.share)
		}
		if !math.IsNaN(e.exponent) {
			exp = fmt.Sprintf("%.3f", e.exponent+0)
			sum += e.exponent
			if e.exponent > largest.exponent {
				largest = e
			}
		}
		p.line("%s %12s %12s", pad(cut(e.layer, 40), 40), share, exp)
	}
	if r.Study.Exponents == nil {
		return
	}
	p.line("%s %12s %12.3f", pad("sum", 40), "", sum)
	if r.Problem.Moving() {
		p.say("They add up to 1 in Newtonian rock that stands still; here the column changes on its way, and they need not.")
	}
	p.say("d ln t is the drip time's exponent ∂ln t/∂ln η, with η the viscosity of that layer alone: with that of %s 10 %% higher, the root drips %.1f %% later. Resistance is the share of the dissipation at the drip's wavelength: it says who resists the growth, not who sets the time, where rock softens.",
		largest.layer, 100*(math.Pow(1.1, largest.exponent)-1))
}

// undulationsText says what other undulations would do.
func undulationsText(p *page, r *race.Result) {
	list := r.Study.Undulations
	if len(list) == 0 {
		return
	}
	p.section("START")
	p.line("%14s %14s", "undulation m", "drips at Myr")
	step := max(1, (len(list)-1)/6)
	for i := 0; i < len(list); i += step {
		t := "later"
		switch {
		case list[i].Time > 1000*Myr && !math.IsInf(list[i].Time, 1):
			t = "more than 1000"
		case !math.IsInf(list[i].Time, 1):
			t = sig(list[i].Time/Myr, 3)
		}
		p.line("%14s %14s", sig(list[i].Amplitude, 3), t)
	}
}
