package report

import (
	"fmt"
	"math"
	"strings"

	"keelfall/solver/race"
)

// Page returns the one page that a run prints.
func Page(r *race.Result) string {
	p := &page{}
	pb := r.Problem
	title := pb.Title
	if title == "" {
		title = "Untitled experiment"
	}
	for _, l := range wrap(title, pageWidth) {
		p.b.WriteString(l + "\n")
	}
	if pb.HasTimeZero {
		fmt.Fprintf(&p.b, "Time zero %s Ma. * = a default, chosen by nobody.\n", sig(pb.TimeZero/Myr, 4))
	} else {
		p.b.WriteString("Times in Myr from the start. * = a default, chosen by nobody.\n")
	}
	answer(p, r)
	columnText(p, r.Problem, r.State)
	isostasyText(p, r.Problem, r.State, false)
	if n := rootNeed(r.State); n != "" {
		p.say("%s", n)
	}
	growthText(p, r.State, r.Spectrum, r.Spectrum.Rates)
	if r.Drip != nil {
		dripText(p, r, true)
		excisionText(p, r)
		flipsText(p, r)
	}
	left(p, r)
	return p.b.String()
}

// star marks a default.
func star(p *race.Problem, key string) string {
	for _, d := range p.Defaults {
		if d.Key == key {
			return "*"
		}
	}
	return ""
}

// when says a time as Myr and, where there is a time zero, as an age.
func when(p *race.Problem, t float64) string {
	if math.IsInf(t, 1) {
		return "never"
	}
	if t > 1000*Myr {
		return myr(t)
	}
	if p.HasTimeZero && p.TimeZero >= t {
		return fmt.Sprintf("%.1f Ma (%s)", (p.TimeZero-t)/Myr, myr(t))
	}
	return myr(t)
}

func answer(p *page, r *race.Result) {
	p.section("ANSWER")
	v := &r.Verdict
	if r.Drip == nil {
		p.say("No layer is marked root: true, so no fate is judged; growth is below.")
		return
	}
	p.say("%s", v.Sentence)
	if pb := r.Problem; pb.HasTimeZero && v.Outcome != "preserved" && pb.TimeZero >= v.Time {
		p.say("That is at %.1f Ma.", (pb.TimeZero-v.Time)/Myr)
	}
	if f, ok := v.Decider(); ok {
		given := ""
		if f.Default {
			given = ", a default that nobody has measured"
		}
		to, from := values(f)
		p.say("The number that decides it: %s%s. At %s instead of %s the root %s.", f.Label, given, to, from, becomes(f.Outcome))
	} else if len(v.Flips) > 0 {
		p.say("No single number within the bounds searched changes the verdict.")
	}
	margins(p, r)
	if sp := r.Spectrum; sp.Mode != nil && r.Problem.ThermalBuoyancy != "none" && sp.Fastest.Growth > 3/r.Problem.Drip.Window &&
		sp.Mode.Label(RootBase(r.State), depthsOf(r.State)) == "thermal" {
		p.say("But heat alone overturns this column: an e-folding time of %s, which the drip leaves out.", myr(1/sp.Fastest.Growth))
	}
	p.say("Whether that is decided by your data cannot be said: the experiment gives no ranges.")
}

// becomes says an outcome as what the root does.
func becomes(outcome string) string {
	switch outcome {
	case "dripped":
		return "drips first"
	case "excised":
		return "is cut out first"
	case "both":
		return "goes both ways"
	}
	return "is still there when the window ends"
}

// margins says how far away the other outcomes are, each with what it is.
func margins(p *page, r *race.Result) {
	v := &r.Verdict
	var words []string
	if v.Outcome != "preserved" && v.WindowMargin > 0 {
		words = append(words, "the window ends "+myr(v.WindowMargin)+" later")
	}
	if !math.IsInf(v.Margin, 0) {
		what := "the drip"
		if v.MarginTo == "excision" {
			what = "excision"
		}
		after := " later"
		if v.Outcome == "preserved" {
			after = " after the window"
		}
		words = append(words, what+" would come "+myr(v.Margin)+after)
	}
	if !math.IsInf(v.MarginLog10Viscosity, 0) {
		way := "stiffer"
		if v.MarginLog10Viscosity < 0 {
			way = "weaker"
		}
		size := fmt.Sprintf("%.2f log units", math.Abs(v.MarginLog10Viscosity))
		if math.Abs(v.MarginLog10Viscosity) < 0.005 {
			size = "less than 0.01 log units"
		}
		words = append(words, fmt.Sprintf("a root %s %s %s", size, way, becomes(v.MarginViscosityOutcome)))
	}
	if len(words) > 0 {
		p.say("Margins: %s.", strings.Join(words, "; "))
	}
}

// value says a flip's value in the trade's units.
func value(f race.Flip, x float64) string {
	switch f.Unit {
	case "x":
		return "× " + short(x)
	case "m":
		return short(x) + " m"
	case "K":
		return fmt.Sprintf("%.0f degC", x-zero)
	case "kg/m3":
		return fmt.Sprintf("%.4g kg/m3", x+0) // no minus zero
	case "1/s":
		return fmt.Sprintf("%.2g 1/s", x)
	}
	y, unit := trade(x, f.Unit)
	return short(y) + " " + unit
}

// values says a flip's two values, with as many digits as tell them apart.
func values(f race.Flip) (to, from string) {
	to, from = value(f, f.To), value(f, f.From)
	for n := 4; to == from && n < 10; n++ {
		y, unit := trade(f.To, f.Unit)
		x, _ := trade(f.From, f.Unit)
		if f.Unit == "x" {
			unit = "×"
		}
		to, from = sig(y, n)+" "+unit, sig(x, n)+" "+unit
	}
	return to, from
}

func flipsText(p *page, r *race.Result) {
	if len(r.Verdict.Flips) == 0 {
		return
	}
	p.section("REVERSAL")
	p.line("%s %14s %24s   %s", pad("one at a time, nearest first", 30), "now", "changes at", "verdict then")
	for _, f := range r.Verdict.Flips {
		to, then := "none within "+f.Searched, ""
		if f.Found {
			to, then = value(f, f.To), f.Outcome
		}
		now := value(f, f.From)
		if f.Found {
			to, now = values(f)
		}
		if f.Default {
			now += "*"
		}
		p.line("%s %14s %24s   %s", pad(cut(f.Label, 30), 30), now, to, then)
	}
	for _, f := range r.Verdict.Flips {
		if f.HasContrast && f.Found && f.From != f.ContrastFrom {
			p.say("At that root density the contrast with what lies below is %.0f kg/m3 instead of %.0f.", f.ContrastTo, f.ContrastFrom)
		}
	}
	if first, last, _ := r.Problem.Column.RootSpan(); first != last {
		p.say("Viscosity and density are those of all root layers together.")
	}
}

// left says what was left out and what to beware of.
func left(p *page, r *race.Result) {
	p.section("LIMITS")
	if names := fromMemory(r.Problem); len(names) > 0 {
		p.item("creep laws whose numbers are from memory, to be checked: " + join(names))
	}
	for _, l := range r.Limits {
		p.item(l)
	}
	if len(r.Warnings) > 0 {
		p.section("WARNINGS")
		for _, w := range r.Warnings {
			p.item(w)
		}
	}
}
