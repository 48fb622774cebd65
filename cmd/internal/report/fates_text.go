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

func excisionText(p *page, r *race.Result) {
	p.section("EXCISION")
	x, pb := r.Excision, r.Problem
	if x.Outcome == "no zones" {
		p.say("No shear zone cuts the root.")
		return
	}
	for _, z := range pb.Zones {
		active := short(z.From/Myr) + " to " + myr(z.To)
		if math.IsInf(z.To, 1) {
			active = "from " + short(z.From/Myr) + " Myr on"
		}
		s := fmt.Sprintf("%s, dip %.0f deg, slip %s mm/yr, %s", z.Name, z.Dip*180/math.Pi, short(z.SlipRate*1e3*Year), active)
		if e := z.StrainRate(); e > 0 {
			s += fmt.Sprintf(", strain rate %.0e 1/s", e)
		}
		p.say("%s.", s)
	}
	moment := "When the window ends"
	if x.Outcome == "excised" {
		moment = fmt.Sprintf("At %s, with %.0f %%%s of the root gone", when(pb, x.Time), 100*x.Share, star(pb, "drip.removes"))
	}
	gap := "missing"
	if x.PressureGap < 0 {
		gap = "repeated"
	}
	across := "the zones"
	if len(pb.Zones) == 1 {
		across = "the zone"
	}
	p.say("%s: slip %s km, heave %s km, throw %s km, %.2f GPa %s across %s.", moment, short(x.Slip/km), short(x.Heave/km), short(x.Throw/km), math.Abs(x.PressureGap)/1e9, gap, across)
	switch {
	case x.Outcome != "window":
	case math.IsInf(x.LocalBeyond, 1):
		p.say("At these rates %.0f %%%s of the root would never be gone.", 100*x.Share, star(pb, "drip.removes"))
	default:
		p.say("At these rates %.0f %%%s of the root would be gone at %s.", 100*x.Share, star(pb, "drip.removes"), when(pb, x.LocalBeyond))
	}
	if pb.ArcWidth > 0 {
		mean := "Averaged over the arc that share is never reached"
		if !math.IsInf(x.ArcMeanTime, 1) {
			mean = "Averaged over the arc that share is reached at " + when(pb, x.ArcMeanTime)
		}
		p.say("That is %.0f %% extension of the arc. %s.", 100*x.ExtensionDemanded, mean)
	} else {
		p.say("No arc width is given, so the mean over the arc cannot be said.")
	}
	if !math.IsInf(x.CutThroughTime, 1) {
		s := fmt.Sprintf("Cut through: slip %s km, heave %s km", short(x.CutThroughSlip/km), short(x.CutThroughHeave/km))
		if pb.ArcWidth > 0 {
			s += fmt.Sprintf(" = %.0f %% extension", 100*x.CutThroughHeave/pb.ArcWidth)
		}
		p.say("%s, at %s. The rock moves, none is lost.", s, when(pb, x.CutThroughTime))
	}
}

// later says a drip time that may lie beyond what was followed.
func later(p *race.Problem, t float64) string {
	if math.IsInf(t, 1) && p.Moving() {
		return "none as far as it was followed"
	}
	return myr(t)
}
