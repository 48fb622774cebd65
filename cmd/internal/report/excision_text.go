package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"keelfall/solver/excision"
	"keelfall/solver/race"
)

// ExcisionPage is the text of `keelfall excise`: what the zones did to the root, then
// each zone and each layer against time.
func ExcisionPage(p *race.Problem, r *race.Result) string {
	pg := titled(p)
	if p.HasTimeZero {
		fmt.Fprintf(&pg.b, "Time zero %s Ma; Myr count from there. * = a default, chosen by nobody.\n", sig(p.TimeZero/Myr, 4))
	}
	excisionText(pg, r)
	for i := range r.Excision.Zones {
		zoneText(pg, r, i)
	}
	layersText(pg, r)
	return pg.b.String()
}

// excisionText is excision on a page: the zones in a sentence each, and what they did.
func excisionText(p *page, r *race.Result) {
	p.section("EXCISION")
	x, pb := r.Excision, r.Problem
	if x.Outcome == "no zones" {
		p.say("No shear zone cuts the root.")
		return
	}
	for i := range pb.Zones {
		p.say("%s.", zoneWords(&pb.Zones[i]))
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
	p.say("%s: slip %s km, heave %s km, throw %s km, %s GPa %s across %s.", moment, short(x.Slip/km), short(x.Heave/km), short(x.Throw/km), sig(math.Abs(x.PressureGap)/1e9, 2), gap, across)
	followed := pb.Moving() || slices.ContainsFunc(pb.Zones, func(z excision.Zone) bool { return z.Drive != excision.GivenRate })
	switch {
	case x.Outcome != "window":
	case followed && math.IsInf(x.LocalBeyond, 1):
		p.say("Up to twice the window %.0f %%%s of the root would not be gone.", 100*x.Share, star(pb, "drip.removes"))
	case math.IsInf(x.LocalBeyond, 1):
		p.say("At these rates %.0f %%%s of the root would never be gone.", 100*x.Share, star(pb, "drip.removes"))
	case followed:
		p.say("Going on like this, %.0f %%%s of the root would be gone at %s.", 100*x.Share, star(pb, "drip.removes"), when(pb, x.LocalBeyond))
	default:
		p.say("At these rates %.0f %%%s of the root would be gone at %s.", 100*x.Share, star(pb, "drip.removes"), when(pb, x.LocalBeyond))
	}
	if pb.ArcWidth > 0 {
		mean := "Averaged over the arc that share is never reached"
		if followed {
			mean = "Averaged over the arc that share is not reached up to twice the window"
		}
		if !math.IsInf(x.ArcMeanTime, 1) {
			mean = "Averaged over the arc that share is reached at " + when(pb, x.ArcMeanTime)
		}
		p.say("That is %.0f %% extension of the arc. %s.", 100*x.ExtensionDemanded, mean)
	} else {
		p.say("No arc width is given, so the mean over the arc cannot be said.")
	}
	if drives(pb, excision.ForceBalance) && !math.IsInf(x.PlateFails, 1) {
		p.say("The plate beside the zones gives way at %s: the force that drives them stretches it away.", when(pb, x.PlateFails))
	}
	if !math.IsInf(x.CutThroughTime, 1) {
		s := fmt.Sprintf("Cut through: slip %s km, heave %s km", short(x.CutThroughSlip/km), short(x.CutThroughHeave/km))
		if pb.ArcWidth > 0 {
			s += fmt.Sprintf(" = %.0f %% extension", 100*x.CutThroughHeave/pb.ArcWidth)
		}
		p.say("%s, at %s. The rock moves, none is lost.", s, when(pb, x.CutThroughTime))
	}
}

// zoneWords says what a zone is and what moves it.
func zoneWords(z *excision.Zone) string {
	active := short(z.From/Myr) + " to " + myr(z.To)
	if math.IsInf(z.To, 1) {
		active = "from " + short(z.From/Myr) + " Myr on"
	}
	moved := fmt.Sprintf("slip %s mm/yr", short(z.SlipRate*1e3*Year))
	switch z.Drive {
	case excision.ExtensionShare:
		moved = fmt.Sprintf("takes %s %% of the arc's extension", short(100*z.Share))
	case excision.PressureStep:
		moved = fmt.Sprintf("leaves a gap of %s GPa", short(z.PressureGap/1e9))
	case excision.ForceBalance:
		moved = fmt.Sprintf("driven by %s N/m from outside and by the column's own weight", bearing(z.FarField))
	}
	s := fmt.Sprintf("%s, dip %.0f deg, cuts %s, %s, %s", z.Name, z.Dip*180/math.Pi, join(z.Cuts), moved, active)
	if z.Width > 0 {
		s += fmt.Sprintf(", %s m wide", short(z.Width))
	}
	if e := z.StrainRate(); e > 0 {
		s += fmt.Sprintf(", strain rate %.0e 1/s", e)
	}
	return s
}

// bearing formats a force per length in the size that lithospheres bear.
func bearing(f float64) string { return short(f/1e12) + "e12" }

// moments are the times of the tables' columns: six through the window.
func moments(r *race.Result) []float64 {
	var out []float64
	for i := range 6 {
		out = append(out, r.Problem.Drip.Window*float64(i)/5)
	}
	return out
}

// tableHead writes the times above a table's columns, and their ages.
func tableHead(pg *page, r *race.Result, title string) {
	for _, unit := range []string{"Myr", "Ma"} {
		if unit == "Ma" && !r.Problem.HasTimeZero {
			continue
		}
		s := ""
		for _, t := range moments(r) {
			if unit == "Ma" {
				t = r.Problem.TimeZero - t
			}
			s += fmt.Sprintf("%9s", short(t/Myr))
		}
		pg.line("%s%5s%s", pad(cut(title, 31), 31), unit, s)
		title = ""
	}
}

// tableRow writes one quantity at the times of the head; nothing where it has no history.
func tableRow(pg *page, r *race.Result, name string, values []float64, unit float64) {
	if len(values) != len(r.Excision.History.Time) {
		return
	}
	s := ""
	for _, t := range moments(r) {
		s += fmt.Sprintf("%9s", short(lookUp(r.Excision.History.Time, values, t)/unit))
	}
	pg.line("%s%s", pad("  "+cut(name, 34), 36), s)
}

// zoneText is one zone against time, and what became of it.
func zoneText(pg *page, r *race.Result, i int) {
	z, h := &r.Problem.Zones[i], &r.Excision.Zones[i]
	pg.section("ZONE")
	tableHead(pg, r, z.Name)
	tableRow(pg, r, "slip rate, mm/yr", h.Rate, 1e-3/Year)
	tableRow(pg, r, "slip, km", h.Slip, km)
	tableRow(pg, r, "heave, km", h.Heave, km)
	tableRow(pg, r, "throw, km", h.Throw, km)
	tableRow(pg, r, "omission, stratigraphic, km", h.OmissionStratigraphic, km)
	tableRow(pg, r, "omission, vertical, km", h.OmissionVertical, km)
	tableRow(pg, r, "pressure gap, GPa", h.PressureGap, 1e9)
	if z.Drive == excision.ForceBalance {
		tableRow(pg, r, "driving force, 1e12 N/m", whileBearing(h, h.Force), 1e12)
		tableRow(pg, r, "strength at 1 mm/yr, 1e12 N/m", whileBearing(h, h.Strength), 1e12)
		tableRow(pg, r, "where it crosses the column: degC", celsius(whileBearing(h, h.T)), 1)
		tableRow(pg, r, "  shear stress, MPa", whileBearing(h, h.Stress), 1e6)
		tableRow(pg, r, "  shear heat, mW/m2", whileBearing(h, h.Heating), 1e-3)
	}
	for _, s := range h.Strips {
		if _, most := extremes(s.Width); most > 0 {
			tableRow(pg, r, "strip without "+s.Layer+", km", s.Width, km)
		}
	}
	for _, s := range zoneFate(r, i) {
		pg.say("%s.", upper(s))
	}
}

// whileBearing are values of a zone in a balance of forces, NaN while it bears none.
func whileBearing(h *excision.ZoneHistory, values []float64) []float64 {
	out := slices.Clone(values)
	for i := range out {
		if i < len(h.Strength) && h.Strength[i] == 0 {
			out[i] = math.NaN()
		}
	}
	return out
}

// hardly is the part of the layers a zone cuts below which its slip counts as none.
const hardly = 0.01

// zoneFate says what became of a zone.
func zoneFate(r *race.Result, i int) []string {
	p, z, h := r.Problem, &r.Problem.Zones[i], &r.Excision.Zones[i]
	last := len(h.Slip) - 1
	var out []string
	if !math.IsInf(h.UsedUp, 1) && h.UsedUp <= p.Drip.Window {
		s := fmt.Sprintf("its layers are used up in this column at %s", when(p, h.UsedUp))
		if h.UsedUp < math.Min(z.To, p.Drip.Window) {
			s += "; from then on it slips without cutting the column, and clears the arc"
		}
		out = append(out, s)
	}
	if z.Drive != excision.ForceBalance {
		return out
	}
	if !math.IsInf(h.Runaway, 1) {
		out = append(out, fmt.Sprintf("it runs away at %s: what drives it is more than it bears at any slower rate, and it is held at %s m/yr", when(p, h.Runaway), short(excision.FastestSlip*Year)))
	}
	first := slices.IndexFunc(h.Strength, func(s float64) bool { return s > 0 })
	switch {
	case first >= 0 && h.Slip[last] < hardly*(h.Remaining[0]):
		s := "does not slip"
		if h.Slip[last] > 0 {
			s = fmt.Sprintf("hardly slips, %s m in all", short(h.Slip[last]))
		}
		out = append(out, fmt.Sprintf("it %s: it would bear %s N/m at 1 mm/yr, and %s N/m drive it", s, bearing(h.Strength[first]), bearing(h.Force[first])))
	case !math.IsInf(h.Holds, 1):
		out = append(out, "it stops slipping at "+when(p, h.Holds))
	case p.ArcWidth > 0 && h.Heave[last] > p.ArcWidth*(1-1e-6):
		out = append(out, "it has cleared the arc, and stops")
	}
	return out
}

// layersText is what is left of the layers that zones cut.
func layersText(pg *page, r *race.Result) {
	x := r.Excision
	if len(x.Layers) == 0 {
		return
	}
	pg.section("LAYERS")
	tableHead(pg, r, "thickness left, km")
	for i := range x.Layers {
		l := &x.Layers[i]
		name := l.Name
		if l.Root && !strings.Contains(strings.ToLower(name), "root") {
			name += ", ROOT"
		}
		tableRow(pg, r, name, l.Thickness, km)
		if l.ArcMean != nil {
			tableRow(pg, r, "  mean over the arc", l.ArcMean, km)
		}
	}
	notes := []string{"the first row of a layer is the column that the zones cross"}
	if r.Problem.Moving() {
		notes = append(notes, "events and the arc's own stretching thin layers too")
	} else if drives(r.Problem, excision.ForceBalance) {
		notes = append(notes, "the plate's own stretching under the same force thins layers too")
	}
	pg.say("%s.", upper(strings.Join(notes, "; ")))
}

// extremes are the least and the largest of values; 0 without one.
func extremes(values []float64) (lo, hi float64) {
	for i, v := range values {
		if i == 0 || v < lo {
			lo = v
		}
		if i == 0 || v > hi {
			hi = v
		}
	}
	return lo, hi
}

// celsius converts temperatures; 0 K, where there is none, becomes NaN.
func celsius(T []float64) []float64 {
	out := make([]float64, len(T))
	for i, v := range T {
		out[i] = v - zero
		if v <= 0 {
			out[i] = math.NaN()
		}
	}
	return out
}
