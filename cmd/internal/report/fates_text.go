package report

import (
	"fmt"
	"math"

	"keelfall/solver/drip"
	"keelfall/solver/race"
)

// dripText is the drip on a page; with events each drip has its sentence.
func dripText(p *page, r *race.Result, events bool) {
	p.section("DRIP")
	d, pb := r.Drip, r.Problem
	if math.IsInf(d.Time, 1) {
		p.say("%s.", upper(d.Reason))
		if w := criticalWords(r); w != "" {
			p.say("Thickness: %s.", w)
		}
		return
	}
	limit := ""
	if d.Outcome == "window" {
		limit = fmt.Sprintf(", when the window of %s has closed", myr(pb.Drip.Window))
	}
	at := "at " + when(pb, d.Time)
	if d.Time > 1000*Myr {
		at = "after " + myr(d.Time)
	}
	p.say("Drips %s%s. Spacing %s km; any between %s and %s km would follow within 10 %% of that time.", at, limit,
		short(d.Wavelength/km), sig(d.SpacingFrom/km, 2), sig(d.SpacingTo/km, 2))
	room(p, r)
	if d.Excluded != "" {
		p.say("%s.", upper(d.Excluded))
	}
	p.say("From %s: three times that gives %s, a third %s.", undulation(pb, d), myr(d.TimeLow), later(pb, d.TimeHigh))
	if r.Rate.Used {
		p.say("Viscosities at %.1e 1/s%s: at three times that %s, at a third %s.", pb.Strain.ReferenceRate, star(pb, "strain.reference-rate"), myr(r.Rate.AtThrice), myr(r.Rate.AtOneThird))
	}
	tip := fmt.Sprintf("%s km%s below the old base", short(pb.Drip.Criterion*pb.Column.RootThickness()/km), star(pb, "drip.criterion"))
	if pb.Moving() {
		tip = fmt.Sprintf("down by %s%s times the root's thickness at that time", short(pb.Drip.Criterion), star(pb, "drip.criterion"))
	}
	p.say("\"Dripped\" = tip %s; the drip takes %.0f %%%s of the root's mass.", tip, 100*pb.Drip.Removes, star(pb, "drip.removes"))
	if d.Thermal != nil {
		p.say("%s.", upper(d.Thermal.Words()))
	}
	if w := criticalWords(r); w != "" {
		p.say("Thickness: %s.", w)
	}
	for i, e := range d.Drips {
		if !events {
			break
		}
		of := ""
		if i > 0 {
			of = " after the undulation began anew"
		}
		base := ""
		if e.BaseTemperature > 0 {
			base = fmt.Sprintf(" at %.0f degC", e.BaseTemperature-zero)
		}
		p.say("Drip %d at %s%s: %s km of wavelength (%s km when it began), %s km of the root goes, whose base was at %s km%s.", i+1, when(pb, e.Time), of,
			short(e.Wavelength/km), short(e.Initial/km), short(e.Lost/km), short(e.Depth/km), base)
	}
	if d.Soft != nil {
		softText(p, d.Soft)
		return
	}
	if d.StrainRateEnd == 0 { // of a column that moves they are not known
		return
	}
	p.say("Strain rate in the root %.1e 1/s at the start, %.1e at the drip.", d.StrainRate, d.StrainRateEnd)
	if w := shares(r.State, d.Mode); w != "" {
		p.say("Resistance at this wavelength: %s.", w)
	}
}

// softText says how a time was found where the drip softens its own rock.
func softText(p *page, s *drip.SelfSoftened) {
	how := "nothing else strains it: growth is faster than exponential"
	if s.Strained {
		how = "so does what strains the column; how far the closure falls short of both together is interpolated between what is known of each"
	}
	p.say("The drip softens its own rock, and %s. The closure gives %s, a slow bound; the best estimate, for a mean stress exponent of %.2g, is %s to %s.",
		how, myr(s.Slow), s.Exponent, myr(s.BestLow), myr(s.BestHigh))
	if !s.Correction.Inside {
		p.say("The stress exponent or the wavelength lies beyond the solutions that the estimate rests on (n of 1 to 5, k times the root's thickness 1 to 3); their edge is used.")
	}
	if s.Failed > 0 {
		p.say("%s left out: their viscosities did not settle.", Count(s.Failed, "wavelength"))
	}
}

// later says a drip time that may lie beyond what was followed.
func later(p *race.Problem, t float64) string {
	if math.IsInf(t, 1) && p.Moving() {
		return "none as far as it was followed"
	}
	return myr(t)
}
