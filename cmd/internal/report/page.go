package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"keelfall/solver/growth"
	"keelfall/solver/race"
	"keelfall/solver/state"
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
	columnText(p, r.State)
	growthText(p, r.State, r.Spectrum)
	if r.Drip != nil {
		dripText(p, r)
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
		p.say("The number that decides it: %s%s. The verdict changes at %s instead of %s.", f.Label, given, value(f, f.To), value(f, f.From))
	} else {
		p.say("No single number within the bounds searched changes the verdict.")
	}
	if !math.IsInf(v.Margin, 0) {
		s := "Margin: " + myr(v.Margin)
		if !math.IsInf(v.MarginLog10Viscosity, 0) {
			s += fmt.Sprintf(", or %.2f log units of root viscosity", math.Abs(v.MarginLog10Viscosity))
		}
		p.say("%s.", s)
	} else if !math.IsInf(v.MarginLog10Viscosity, 0) {
		p.say("Margin: %.2f log units of root viscosity.", math.Abs(v.MarginLog10Viscosity))
	}
	p.say("Whether that is decided by your data cannot be said: the experiment gives no ranges.")
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
		return short(x) + " kg/m3"
	case "m/s":
		return short(x*1e3*Year) + " mm/yr"
	case "1/s":
		return fmt.Sprintf("%.2g 1/s", x)
	}
	return short(x) + " " + f.Unit
}

func columnText(p *page, s *state.State) {
	p.section("COLUMN")
	long := 5
	for i := range s.Column.Layers {
		n := len([]rune(s.Column.Layers[i].Name))
		if s.Column.Layers[i].Root {
			n += 6
		}
		long = max(long, min(n, 26))
	}
	p.line("%s  %9s  %10s  %11s  %9s  %10s  %s", pad("layer", long), "km", "degC", "GPa", "kg/m3", "log10 Pa s", "creep")
	for i, l := range s.Layers {
		a, b := l.Points[0], l.Points[len(l.Points)-1]
		c := &s.Column.Layers[i]
		name := c.Name
		switch {
		case c.Root && strings.EqualFold(name, "root"):
			name = "ROOT"
		case c.Root:
			name = cut(name, long-6) + ", ROOT"
		}
		t := "-"
		if s.HasTemperature {
			t = fmt.Sprintf("%.0f-%.0f", a.T-zero, b.T-zero)
		}
		p.line("%s  %9s  %10s  %11s  %9s  %10s  %s", pad(cut(name, long), long),
			fmt.Sprintf("%s-%s", short(a.Depth/km), short(b.Depth/km)), t,
			fmt.Sprintf("%.2f-%.2f", a.P/1e9, b.P/1e9), span("%.0f", a.Density, b.Density),
			span("%.1f", math.Log10(a.Viscosity), math.Log10(b.Viscosity)), flow(c.Viscosity.Creep == nil, creepNames(s, i)))
	}
	below(p, s, long)
	if s.HasTemperature {
		p.say("Heat flow %.1f mW/m2 at the surface, %.1f at the base of the column.", s.SurfaceFlow*1e3, s.BaseFlow*1e3)
	}
	if first, last, ok := s.Column.RootSpan(); ok {
		_ = first
		j := -s.Jumps[last+1]
		var h float64
		for i := range s.Column.Layers {
			if s.Column.Layers[i].Root {
				h += s.Column.Layers[i].Thickness
			}
		}
		if j > 0 {
			p.say("The root is %.0f kg/m3 denser than what lies below it: %.0f MPa over its %s km.", j, j*s.Column.Gravity*h/1e6, short(h/km))
		} else {
			p.say("The root is %.0f kg/m3 lighter than what lies below it: buoyant.", -j)
		}
	}
}

func creepNames(s *state.State, layer int) []string {
	var names []string
	if c := s.Column.Layers[layer].Viscosity.Creep; c != nil {
		for _, l := range c.Laws {
			names = append(names, brief(l.Name))
		}
	}
	return names
}

// brief is a law's name without its paper and the commonest mechanism, for a table;
// the methods give it whole.
func brief(name string) string {
	words := strings.Fields(name)
	for i, w := range words {
		if i > 1 && yearIn.MatchString(w) {
			words = words[:i-1]
			break
		}
	}
	if n := len(words); n > 1 && words[n-1] == "dislocation" {
		words = words[:n-1]
	}
	return strings.Join(words, " ")
}

func flow(given bool, names []string) string {
	if given {
		return "given"
	}
	return cut(strings.Join(names, " + "), 26)
}

// span writes a range, or one value where both ends print alike.
func span(format string, a, b float64) string {
	x, y := fmt.Sprintf(format, a), fmt.Sprintf(format, b)
	if x == y {
		return x
	}
	return x + "-" + y
}

// below describes what lies under the last layer.
func below(p *page, s *state.State, long int) {
	b := &s.Column.Base
	depth := short(s.Column.Depth() / km)
	switch b.Boundary.String() {
	case "half-space":
		t := "-"
		if s.HasTemperature {
			t = fmt.Sprintf("%.0f", s.Base.T-zero)
		}
		var names []string
		if b.Viscosity.Creep != nil {
			for _, l := range b.Viscosity.Creep.Laws {
				names = append(names, brief(l.Name))
			}
		}
		p.line("%s  %9s  %10s  %11s  %9.0f  %10.1f  %s", pad("half-space", long), depth+" down", t,
			fmt.Sprintf("%.2f", s.Base.P/1e9), s.Base.Density, math.Log10(s.Base.Viscosity), flow(b.Viscosity.Creep == nil, names))
	case "inviscid":
		p.line("%s  %9s  %10s  %11s  %9.0f  %10s", pad("fluid", long), depth+" down", "-", fmt.Sprintf("%.2f", s.Base.P/1e9), s.Base.Density, "inviscid")
	default:
		p.line("%s  %9s", pad(b.Boundary.String()+" base", long), depth)
	}
}

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

func growthText(p *page, s *state.State, sp *growth.Spectrum) {
	p.section("GROWTH")
	f := sp.Fastest
	if f.Growth <= 0 {
		p.say("Nothing grows: every undulation decays or stays; slowest decay %.3g 1/Myr, at %s km.", -f.Growth*Myr, short(f.Wavelength/km))
		return
	}
	p.say("Fastest wavelength %s km, e-folding time %s at first.", short(f.Wavelength/km), myr(1/f.Growth))
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
	worst := 0.0
	for _, x := range sp.Rates {
		worst = math.Max(worst, x.RelativeError)
	}
	p.say("Growth rates good to %.0e (estimated).", worst)
}

func dripText(p *page, r *race.Result) {
	p.section("DRIP")
	d, pb := r.Drip, r.Problem
	if math.IsInf(d.Time, 1) {
		p.say("%s.", strings.ToUpper(d.Reason[:1])+d.Reason[1:])
		return
	}
	limit := ""
	if d.Outcome == "window" {
		limit = fmt.Sprintf(", after the window of %s has closed", myr(pb.Drip.Window))
	}
	p.say("Drips at %s%s. Spacing %s km; any between %s and %s km would follow within 10 %% of that time.", when(pb, d.Time), limit,
		short(d.Wavelength/km), sig(d.SpacingFrom/km, 2), sig(d.SpacingTo/km, 2))
	if pb.ArcLength > 0 {
		p.say("%.0f drips of that spacing fit along the arc's %s km.", math.Max(1, math.Floor(pb.ArcLength/d.Wavelength)), short(pb.ArcLength/km))
	}
	if d.Excluded != "" {
		p.say("%s.", strings.ToUpper(d.Excluded[:1])+d.Excluded[1:])
	}
	p.say("From an undulation of %s m%s: three times that gives %s, a third %s.", short(pb.Drip.Amplitude), star(pb, "drip.amplitude"), myr(d.TimeLow), myr(d.TimeHigh))
	if r.Rate.Used {
		p.say("Viscosities at %.1e 1/s%s: at three times that %s, at a third %s.", pb.Strain.ReferenceRate, star(pb, "strain.reference-rate"), myr(r.Rate.AtThrice), myr(r.Rate.AtOneThird))
	}
	var h float64
	for _, l := range pb.Column.Layers {
		if l.Root {
			h += l.Thickness
		}
	}
	p.say("\"Dripped\" = tip %s km%s below the old base; the drip takes %.0f %%%s of the root's mass.", short(pb.Drip.Criterion*h/km), star(pb, "drip.criterion"), 100*pb.Drip.Removes, star(pb, "drip.removes"))
	p.say("Strain rate in the root %.1e 1/s at the start, %.1e at the drip.", d.StrainRate, d.StrainRateEnd)
	if w := shares(r.State, d.Mode); w != "" {
		p.say("Resistance at this wavelength: %s.", w)
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
		s := fmt.Sprintf("%s, dip %.0f deg, slip %s mm/yr, %s to %s", z.Name, z.Dip*180/math.Pi, short(z.SlipRate*1e3*Year), short(z.From/Myr), myr(z.To))
		if e := z.StrainRate(); e > 0 {
			s += fmt.Sprintf(", strain rate %.0e 1/s", e)
		}
		p.say("%s.", s)
	}
	moment := "When the window ends"
	if x.Outcome == "excised" {
		moment = fmt.Sprintf("At %s, with %.0f %%%s of the root gone", when(pb, x.Time), 100*x.Share, star(pb, "drip.removes"))
	}
	p.say("%s: slip %s km, heave %s km, throw %s km, %.2f GPa missing across the zones.", moment, short(x.Slip/km), short(x.Heave/km), short(x.Throw/km), x.PressureGap/1e9)
	if x.Outcome == "window" {
		p.say("%.0f %%%s of the root would be gone at %s at these rates.", 100*x.Share, star(pb, "drip.removes"), when(pb, x.LocalBeyond))
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

func flipsText(p *page, r *race.Result) {
	if len(r.Verdict.Flips) == 0 {
		return
	}
	p.section("REVERSAL")
	p.line("%s %14s %14s", pad("one at a time, nearest first", 30), "now", "flips at")
	for _, f := range r.Verdict.Flips {
		to := "no value does"
		if f.Found {
			to = value(f, f.To)
		}
		now := value(f, f.From)
		if f.Default {
			now += "*"
		}
		p.line("%s %14s %14s", pad(f.Label, 30), now, to)
	}
}

// left says what was left out and what to beware of.
func left(p *page, r *race.Result) {
	p.section("LIMITS")
	if v := r.Peeling; v.Viscosity > 0 {
		word := "stiffer than the"
		if v.Possible {
			word = "weaker than the"
		}
		p.say("Peeling from an edge (delamination) is not excluded: the weakest rock above the root is %s, 10^%.1f Pa s, %s 1e18 Pa s of Bird 1979.", v.Layer, math.Log10(v.Viscosity), word)
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
