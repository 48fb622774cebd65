package report

import (
	"fmt"
	"math"
	"slices"

	"keelfall/column"
	"keelfall/solver/heat"
	"keelfall/solver/race"
)

// Past is a column's thermal history and what is read off it.
type Past struct {
	Problem  *race.Problem
	History  *heat.History
	Shown    []float64         // s: times of the geotherms that are printed and drawn, increasing
	Rows     []float64         // s: times of the table's rows, increasing
	Closures []heat.Closure    // one for each of the problem's clocks
	Isostasy []column.Isostasy // one for each of the history's times; nil where it is not known
	Unknown  string            // why it is not known
}

// ReadClocks reads every clock at its marker.
func (p *Past) ReadClocks() error {
	p.Closures = nil
	for _, c := range p.Problem.Clocks {
		i := slices.IndexFunc(p.History.Paths, func(q heat.Path) bool { return q.Name == c.Marker })
		if i < 0 || len(p.History.Paths[i].Time) < 2 {
			p.Closures = append(p.Closures, heat.Closure{Reason: "its marker has no path: it is gone at the start"})
			continue
		}
		closure, err := c.Close(p.History.Paths[i].Time, p.History.Paths[i].T)
		if err != nil {
			return err
		}
		p.Closures = append(p.Closures, closure)
	}
	return nil
}

// Warnings are the history's own, and the clocks'.
func (p *Past) Warnings() []string {
	w := slices.Clone(p.History.Warnings)
	if p.Unknown != "" {
		w = append(w, "the elevation is not known: "+p.Unknown)
	}
	for i, c := range p.Closures {
		if c.Caution != "" {
			w = append(w, p.Problem.Clocks[i].Name+": "+c.Caution)
		}
	}
	return w
}

// limits says what a thermal history leaves out.
func (p *Past) limits() []string {
	l := []string{"heat flows up and down only: a sheet is as wide as the column, and nothing is lost sideways"}
	melts, reacts := p.has()
	if melts {
		l = append(l, "melt stays in its rock: it takes up latent heat and gives it back, and none leaves")
	}
	if reacts {
		l = append(l, "reactions run one way and without heat of their own")
	}
	l = append(l, "radioactive heat moves with its rock and does not decline with time")
	if len(p.Problem.Zones) > 0 {
		l = append(l, "the shear zones of the experiment neither cut nor heat the column here, and the root does not drip")
	} else {
		l = append(l, "the root does not drip here, and nothing shears")
	}
	if len(p.Problem.Clocks) > 0 {
		l = append(l, "clocks are Dodson's closure, for a system that begins open and cools with 1/T linear in time")
	}
	return l
}

// has says whether any rock melts by a solidus, and whether any reacts.
func (p *Past) has() (melts, reacts bool) {
	c := &p.Problem.Column
	for i := range c.Layers {
		_, r := reaction(&c.Layers[i])
		melts, reacts = melts || c.Layers[i].Melt.NeedsTemperature(), reacts || r
	}
	for i := range p.Problem.Events {
		melts = melts || p.Problem.Events[i].Rock.Melt.NeedsTemperature()
	}
	return melts, reacts
}

// at returns the step of the history at the time t in s, or the last one before it.
func (p *Past) at(t float64) int {
	times := p.History.Time
	same := 1e-9 * times[len(times)-1] // times rounded differently are one
	i := 0
	for i+1 < len(times) && times[i+1] <= t+same {
		i++
	}
	return i
}

// snapshots are those of the times shown.
func (p *Past) snapshots() []heat.Snapshot {
	var out []heat.Snapshot
	for _, s := range p.History.Snapshots {
		if slices.Contains(p.Shown, s.Time) {
			out = append(out, s)
		}
	}
	return out
}

// age is the age in s of a time, without a value where there is no time zero.
func (p *Past) age(t float64) float64 {
	if !p.Problem.HasTimeZero {
		return math.NaN()
	}
	return p.Problem.TimeZero - t
}

// root is a value of the root at step i, without one where there is no root.
func (p *Past) root(values []float64, i int) float64 {
	if !(p.History.RootThickness[i] > 0) {
		return math.NaN()
	}
	return values[i]
}

// reacted is the reacted share at step i, without a value where nothing reacts.
func (p *Past) reacted(i int) float64 {
	if _, reacts := p.has(); !reacts {
		return math.NaN()
	}
	return p.History.Reacted[i]
}

// leastMass in kg/m2 is a third of a millimetre of rock: of less, the balance of mass would
// show but the round-off of all the rest.
const leastMass = 1.0

// closedMass is closed of the mass.
func closedMass(m *heat.Mass) (share float64, ok bool) {
	if m.Moved < leastMass {
		return 0, false
	}
	return closed(m.Missing, m.Moved)
}

// closed is what is missing of what moved, and whether anything did.
func closed(missing, moved float64) (share float64, ok bool) {
	if !(moved > 0) {
		return 0, false
	}
	return math.Abs(missing) / moved, true
}

// hottest is when a path is hottest, deepest when its pressure is highest, s.
func hottest(p *heat.Path) (hot, deep float64) {
	if len(p.Time) == 0 {
		return 0, 0
	}
	return p.Time[slices.Index(p.T, slices.Max(p.T))], p.Time[slices.Index(p.P, slices.Max(p.P))]
}

// eventWords says in a sentence's end what an event does.
func eventWords(e *heat.Event) string {
	rate := short(e.Rate*1e3*Year) + " mm/yr"
	inAll := short(e.Rate*(e.To-e.From)/km) + " km in all"
	temperature := func(there string) string {
		if e.Temperature == 0 {
			return there
		}
		return fmt.Sprintf("%.0f degC", e.Temperature-zero)
	}
	switch e.Verb {
	case "intrude":
		if e.Times > 1 {
			return fmt.Sprintf("%s, %d times, every %s: %s km at %s each, below %s", e.Name, e.Times, myr(e.Every), short(e.Thickness/km), temperature(""), e.Layer)
		}
		return fmt.Sprintf("%s comes in: %s km at %s, below %s", e.Name, short(e.Thickness/km), temperature(""), e.Layer)
	case "accumulate":
		return fmt.Sprintf("%s grows at its base by %s, %s, at %s", e.Layer, rate, inAll, temperature("the temperature there"))
	case "stretch":
		if e.Rate < 0 {
			return fmt.Sprintf("the column shortens at %.2g 1/s and thickens by a factor of %s", -e.Rate, short(math.Exp(-e.Rate*(e.To-e.From))))
		}
		return fmt.Sprintf("the column stretches at %.2g 1/s, by a factor of %s", e.Rate, short(math.Exp(e.Rate*(e.To-e.From))))
	case "erode":
		return fmt.Sprintf("the surface is eroded by %s, %s", rate, inAll)
	case "bury":
		return fmt.Sprintf("%s covers the surface by %s, %s, at %s", e.Name, rate, inAll, temperature("the surface's temperature"))
	case "change-base":
		if e.HasHeatFlow {
			return fmt.Sprintf("the heat flow at the base changes to %s mW/m2", short(e.HeatFlow*1e3))
		}
		return "the base changes to " + temperature("")
	case "remove":
		return fmt.Sprintf("%s %% of %s goes, from its base; rock of the base takes its place", short(100*e.Share), e.Layer)
	}
	return e.Verb
}
