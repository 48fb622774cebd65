package report

import (
	"fmt"
	"math"
	"strings"

	"keelfall/solver/heat"
)

// HistoryPage is the text of `keelfall history`.
func HistoryPage(p *Past) string {
	pg := titled(p.Problem)
	if p.Problem.HasTimeZero {
		fmt.Fprintf(&pg.b, "Time zero %s Ma; Myr count from there.\n", sig(p.Problem.TimeZero/Myr, 4))
	} else {
		pg.b.WriteString("Times in Myr from the start.\n")
	}
	p.events(pg)
	p.rows(pg)
	p.heights(pg)
	for i := range p.History.Paths {
		p.path(pg, &p.History.Paths[i], i == 0)
	}
	p.clocks(pg)
	if p.Problem.GeothermFit != nil {
		fitText(pg, p.Problem.GeothermFit)
	}
	p.balance(pg)
	pg.section("LIMITS")
	for _, l := range p.limits() {
		pg.item(l)
	}
	if w := p.History.Warnings; len(w) > 0 { // the clocks' stand with them
		pg.section("WARNINGS")
		for _, l := range w {
			pg.item(l)
		}
	}
	return pg.b.String()
}

// period says when an event happens, with ages where there is a time zero.
func (p *Past) period(e *heat.Event) string {
	from, to := e.From, e.To
	if e.Verb == "intrude" && e.Times > 1 {
		to = from + float64(e.Times-1)*e.Every
	}
	s := short(from / Myr)
	if to > from {
		s += "-" + short(to/Myr)
	}
	s += " Myr"
	if !p.Problem.HasTimeZero {
		return s
	}
	s += fmt.Sprintf(" (%.1f", p.age(from)/Myr)
	if to > from {
		s += fmt.Sprintf("-%.1f", p.age(to)/Myr)
	}
	return s + " Ma)"
}

func (p *Past) events(pg *page) {
	pg.section("EVENTS")
	events := heat.InOrder(p.Problem.Events)
	if e := p.Problem.Strain.ExtensionRate; e != 0 {
		word := "stretches"
		if e < 0 {
			word = "shortens"
		}
		rest := ""
		for i := range events {
			if events[i].Verb == "stretch" {
				rest = ", except where an event says otherwise"
			}
		}
		pg.say("The column %s at %.2g 1/s%s.", word, math.Abs(e), rest)
	}
	if len(events) == 0 {
		pg.say("Nothing happens to the column from outside.")
		return
	}
	wide := 0
	for i := range events {
		wide = max(wide, len(p.period(&events[i])))
	}
	for i := range events {
		for j, l := range wrap(eventWords(&events[i]), pageWidth-margin-wide-2) {
			lead := ""
			if j == 0 {
				lead = p.period(&events[i])
			}
			pg.line("%s  %s", pad(lead, wide), l)
		}
	}
}

// stamp is a time, and its age, as the first cells of a row.
func (p *Past) stamp(t float64) string {
	s := fmt.Sprintf("%7s", short(t/Myr))
	if p.Problem.HasTimeZero {
		s += fmt.Sprintf("  %6.1f", p.age(t)/Myr)
	}
	return s
}

func (p *Past) stampHeader() string {
	if p.Problem.HasTimeZero {
		return "    Myr      Ma"
	}
	return "    Myr"
}

// orDash formats a number, a dash where there is none.
func orDash(format string, x float64) string {
	if math.IsNaN(x) {
		return "-"
	}
	return fmt.Sprintf(format, x)
}

func (p *Past) rows(pg *page) {
	h := p.History
	melts, reacts := p.has()
	pg.section("HISTORY")
	head := fmt.Sprintf("%s  %9s  %9s  %8s  %9s", p.stampHeader(), "heat flow", "root base", "root", "own rock")
	unit := fmt.Sprintf("%s  %9s  %9s  %8s  %9s", pad("", len(p.stampHeader())), "mW/m2", "degC", "km", "to km")
	if melts {
		head, unit = head+fmt.Sprintf("  %9s", "most melt"), unit+fmt.Sprintf("  %9s", "%")
	}
	if reacts {
		head, unit = head+fmt.Sprintf("  %8s", "reacted"), unit+fmt.Sprintf("  %8s", "%")
	}
	pg.line("%s", head)
	pg.line("%s", unit)
	for _, t := range p.Rows {
		i := p.at(t)
		s := fmt.Sprintf("%s  %9.2f  %9s  %8s  %9.2f", p.stamp(t), h.SurfaceFlow[i]*1e3, orDash("%.1f", p.root(h.RootBase, i)-zero),
			orDash("%.2f", p.root(h.RootThickness, i)/km), h.Depth[i]/km)
		if melts {
			s += fmt.Sprintf("  %9.1f", 100*h.MeltFraction[i])
		}
		if reacts {
			s += "  " + fmt.Sprintf("%8s", orDash("%.1f", 100*p.reacted(i)))
		}
		pg.line("%s", s)
	}
	notes := []string{"own rock: the column without what came in below it"}
	if melts {
		notes = append(notes, "most melt: the largest share of the volume anywhere")
	}
	if reacts {
		what := "the root's rock that can react"
		if p.Problem.Column.RootThickness() == 0 {
			what = "the rock that can react"
		}
		notes = append(notes, "reacted: share of the mass of "+what)
	}
	pg.say("%s.", upper(strings.Join(notes, "; ")))
}

// path writes a marker's way at the times of the geotherms, and its extremes.
func (p *Past) path(pg *page, m *heat.Path, first bool) {
	if first {
		pg.section("MARKERS")
	} else {
		pg.b.WriteByte('\n')
	}
	pg.line("%s", m.Name+", in "+m.Layer)
	if len(m.Time) == 0 {
		pg.say("No path: %s.", m.Reason)
		return
	}
	pg.line("%s  %8s  %8s  %8s", p.stampHeader(), "km", "GPa", "degC")
	last := m.Time[len(m.Time)-1]
	write := func(t float64) {
		pg.line("%s  %8.2f  %8.3f  %8.1f", p.stamp(t), lookUp(m.Time, m.Depth, t)/km, lookUp(m.Time, m.P, t)/1e9, lookUp(m.Time, m.T, t)-zero)
	}
	for _, t := range p.Shown {
		if t >= m.Time[0] && t <= last {
			write(t)
		}
	}
	if m.Ended && last < p.Shown[len(p.Shown)-1] {
		write(last)
	}
	hot, deep := hottest(m)
	pg.say("Hottest: %.1f degC at %s. Highest pressure: %.3f GPa at %s.", lookUp(m.Time, m.T, hot)-zero, when(p.Problem, hot), lookUp(m.Time, m.P, deep)/1e9, when(p.Problem, deep))
	if m.Ended {
		pg.say("Its path ends at %s: %s.", when(p.Problem, last), m.Reason)
	}
}

// lookUp returns y at x, linear between the points.
func lookUp(xs, ys []float64, x float64) float64 {
	for i := range xs {
		switch {
		case xs[i] == x || i == 0 && x < xs[i]:
			return ys[i]
		case xs[i] > x:
			return ys[i-1] + (ys[i]-ys[i-1])*(x-xs[i-1])/(xs[i]-xs[i-1])
		}
	}
	return ys[len(ys)-1]
}

func (p *Past) clocks(pg *page) {
	if len(p.Closures) == 0 {
		return
	}
	pg.section("CLOCKS")
	for i, c := range p.Closures {
		k := &p.Problem.Clocks[i]
		if !c.Found {
			pg.say("%s at %s tells no age: %s.", k.Name, k.Marker, degrees(c.Reason))
			continue
		}
		pg.say("%s at %s closes at %.0f degC, cooling by %s K/Myr there: %s.", k.Name, k.Marker, c.Temperature-zero, short(c.CoolingRate*Myr), p.ageWords(c.Time))
		if c.Caution != "" {
			pg.say("Caution: %s.", degrees(strings.TrimSuffix(c.Caution, ".")))
		}
	}
}

// degrees writes a solver's sentence as the page writes temperatures.
func degrees(s string) string { return strings.ReplaceAll(s, "°C", "degC") }

// ageWords says the age that a clock shows.
func (p *Past) ageWords(t float64) string {
	if p.Problem.HasTimeZero {
		return fmt.Sprintf("it shows %.1f Ma (%s)", p.age(t)/Myr, myr(t))
	}
	return myr(t) + " after the start"
}

func (p *Past) balance(pg *page) {
	e, m := &p.History.Energy, &p.History.Mass
	pg.section("BALANCE")
	share, ok := closed(e.Missing, e.Moved)
	if !ok {
		pg.say("No heat moved.")
	} else {
		pg.say("The energy balance is closed to %.0e of the heat that moved%s, in %s.", share, massWords(closedMass(m)), Count(p.History.Steps, "step"))
	}
	var words []string
	for _, t := range energyTerms(e) {
		if math.Abs(t.value) > 5e-4*e.Moved {
			words = append(words, fmt.Sprintf("%s %s%s", t.words, plus(t.value), short(math.Abs(t.value)/1e12)))
		}
	}
	if len(words) > 0 {
		pg.say("In TJ per m2: %s.", strings.Join(words, ", "))
	}
}

func massWords(share float64, ok bool) string {
	if !ok {
		return ""
	}
	return fmt.Sprintf(", the mass balance to %.0e of the mass", share)
}

func plus(x float64) string {
	if x < 0 {
		return "-"
	}
	return "+"
}

type term struct {
	words string
	value float64
}

// energyTerms are the terms of the balance with the sign they have for the column.
func energyTerms(e *heat.Energy) []term {
	return []term{{"stored", e.Stored}, {"through the surface", -e.Surface}, {"through the base", e.Conducted}, {"radioactive", e.Produced},
		{"given", e.Given}, {"by compression", e.Compression}, {"with rock from below", e.FromBelow}, {"with rock added", e.Added},
		{"with rock taken", -e.Taken}, {"sideways", -e.Sideways}}
}
