package race

import (
	"fmt"
	"math"
	"strings"

	"keelfall/solver/drip"
	"keelfall/solver/excision"
)

// ruling is what the contract's clock says of one drip time and one excision.
type ruling struct {
	outcome string
	time    float64 // s, when the clock stops
	margin  float64 // s to the other fate
	next    string  // which that is: "drip" or "excision"
	shares  Shares
}

// judge applies the contract's clock: it stops when the share of the root's initial
// mass is gone. The mechanism with the larger part is named; both, where the smaller
// part is at least half the larger; preserved, where the window ends first.
func judge(drip float64, x *excision.Result, share, window float64) ruling {
	switch {
	case x.Time <= window && x.Time <= drip:
		return ruling{"excised", x.Time, drip - x.Time, "drip", Shares{0, share}}
	case drip <= window:
		gone := math.Max(0, at(x.History.Time, x.History.RootMassShare, drip))
		v := ruling{"dripped", drip, x.LocalBeyond - drip, "excision", Shares{share * (1 - gone), gone}} // of the mass left at that moment
		if math.Min(v.shares.Drip, gone) >= math.Max(v.shares.Drip, gone)/2 {
			v.outcome = "both"
		}
		return v
	}
	next := "drip"
	if x.LocalBeyond < drip {
		next = "excision"
	}
	return ruling{"preserved", window, math.Min(drip, x.LocalBeyond) - window, next,
		Shares{0, math.Max(0, at(x.History.Time, x.History.RootMassShare, window))}}
}

// judge fills the verdict.
func (r *Result) judge() {
	v, x := &r.Verdict, r.Excision
	v.Share = r.Problem.Share()
	v.MarginLog10Viscosity = math.Inf(1)
	j := judge(r.Drip.Time, x, v.Share, r.Problem.Drip.Window)
	v.Outcome, v.Time, v.Margin, v.MarginTo, v.Shares = j.outcome, j.time, j.margin, j.next, j.shares
	v.WindowMargin = r.Problem.Drip.Window - v.Time
	if len(x.History.ArcMeanShare) > 0 {
		v.ArcMean.Excision = at(x.History.Time, x.History.ArcMeanShare, v.Time)
	}
	if v.Shares.Drip > 0 { // a drip takes its share of what is there
		v.ArcMean.Drip = v.Share * (1 - math.Max(0, v.ArcMean.Excision))
	}
	v.Sentence = r.sentence()
	r.reasons()
}

// at interpolates y(x) linearly; it holds the last value beyond the end.
func at(x, y []float64, v float64) float64 {
	for i := 1; i < len(x); i++ {
		if v <= x[i] {
			if x[i] == x[i-1] {
				return y[i]
			}
			return y[i-1] + (y[i]-y[i-1])*(v-x[i-1])/(x[i]-x[i-1])
		}
	}
	if len(y) == 0 {
		return 0
	}
	return y[len(y)-1]
}

// reasons says why, in the order that matters.
func (r *Result) reasons() {
	v, d, x := &r.Verdict, r.Drip, r.Excision
	add := func(format string, a ...any) { v.Reasons = append(v.Reasons, fmt.Sprintf(format, a...)) }
	_, last, _ := r.Problem.Column.RootSpan()
	contrast := -r.State.Jumps[last+1]
	switch {
	case d.Outcome == "buoyant":
		add("too buoyant: the root is %s", drip.Weigh(contrast))
	case math.IsInf(d.Time, 1):
		add("%s", d.Reason)
	case d.Outcome == "drips" && contrast > 0:
		add("dense enough: the root is %s", drip.Weigh(contrast))
	case d.Outcome == "drips":
		add("%s", d.Reason)
	default:
		add("not enough time: the root would drip, but only after the window has closed")
	}
	if d.Mode != nil && d.Mode.DissipationShare != nil {
		best := 0
		for i, s := range d.Mode.DissipationShare {
			if s > d.Mode.DissipationShare[best] {
				best = i
			}
		}
		name := "the half-space below"
		if best < len(r.Problem.Column.Layers) {
			name = r.Problem.Column.Layers[best].Name
		}
		add("%.0f %% of the resistance to the drip is in %s", 100*d.Mode.DissipationShare[best], name)
	}
	switch x.Outcome {
	case "no zones":
		add("no shear zone cuts the root")
	case "window":
		zones, plural := r.Problem.zoneWords()
		do := "does"
		if plural {
			do = "do"
		}
		add("%s %s not take %.0f %% of the root within the window", zones, do, 100*v.Share)
	}
}

// sentence says the verdict in words, in Myr from the start.
func (r *Result) sentence() string {
	const myr = 1e6 * 365.25 * 86400 // s
	v, d, x := &r.Verdict, r.Drip, r.Excision
	when := func(t float64) string {
		switch t /= myr; {
		case t >= 1000:
			return "more than 1000 Myr"
		case t >= 100:
			return fmt.Sprintf("%.0f Myr", t)
		}
		return fmt.Sprintf("%.3g Myr", t)
	}
	share := fmt.Sprintf("%.0f %% of it", 100*v.Share)
	name, plural := r.Problem.zoneWords()
	zones := "no shear zone cuts it"
	if x.Outcome != "no zones" {
		zones = name + " would never take " + share
		if !math.IsInf(x.LocalBeyond, 1) {
			zones = name + " would need " + when(x.LocalBeyond) + " for " + share
		}
	}
	drips := "it would never drip"
	switch {
	case math.IsInf(d.Time, 1) && r.Problem.Moving(): // not followed beyond the window
		drips = "it does not drip before then"
	case d.Time >= 1000*myr && d.Outcome != "buoyant":
		drips = "it would take more than 1000 Myr to drip"
	case !math.IsInf(d.Time, 1):
		drips = "it would drip at " + when(d.Time)
	}
	switch v.Outcome {
	case "dripped":
		return "The root drips first, at " + when(v.Time) + "; " + zones + "."
	case "both":
		has := "has"
		if plural {
			has = "have"
		}
		return "The root drips at " + when(v.Time) + fmt.Sprintf(", when %s %s already taken %.0f %% of it: both remove it.", name, has, 100*v.Shares.Excision)
	case "excised":
		cuts := " cuts"
		if plural {
			cuts = " cut"
		}
		if math.IsInf(d.Time, 1) && r.Problem.Moving() {
			drips = fmt.Sprintf("it does not drip within the window of %s", when(r.Problem.Drip.Window))
		}
		return strings.ToUpper(name[:1]) + name[1:] + cuts + " the root out first, " + share + " by " + when(v.Time) + "; " + drips + "."
	}
	return "The root is still there when the window ends at " + when(r.Problem.Drip.Window) + ": " + drips + ", and " + zones + "."
}

// zoneWords names the shear zones in a sentence: one by its name.
func (p *Problem) zoneWords() (name string, plural bool) {
	if len(p.Zones) != 1 {
		return "the shear zones", true
	}
	name = p.Zones[0].Name
	if strings.Contains(strings.ToLower(name), "zone") && !strings.EqualFold(name, "zone") {
		return "the " + name, false
	}
	return "the shear zone " + name, false
}
