package report

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"keelfall/column"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

// isostaticOnly is what every elevation is.
const isostaticOnly = "Isostatic only: a root that hangs is held in part by viscous stress, which neither number knows"

// heightWords says an elevation in km with its sign, marked where it rests on a default.
func heightWords(e float64, mark string) string {
	s := fmt.Sprintf("%+.2f km", e/km+0) + mark
	if e < 0 {
		s += ", under water"
	}
	return s
}

// forceWords says what a difference of potential energy drives.
func forceWords(f float64) string {
	kind := "extensional"
	if f < 0 {
		kind = "compressional"
	}
	return fmt.Sprintf("%s force %s N/m", kind, newtons(f))
}

// newtons writes the size of a force in N/m.
func newtons(f float64) string {
	return strings.Replace(fmt.Sprintf("%.2g", math.Abs(f)), "e+", "e", 1)
}

// unknown says why there is no elevation, and what may help.
func unknown(err error) string {
	s := err.Error()
	if outside := (*column.OutsideError)(nil); errors.As(err, &outside) {
		s = "the asthenosphere that the columns float on is " + outside.Error() + "; reference.asthenosphere gives it one density"
	}
	return s
}

// isostasyText is the page's line on elevation and force, with what it rests on.
func isostasyText(p *page, pb *race.Problem, s *state.State, whole bool) {
	f, err := race.Isostasy(pb, s)
	if err != nil {
		p.say("Elevation is not known: %s.", unknown(err))
		return
	}
	mark := star(pb, "reference")
	line := fmt.Sprintf("Elevation %s, %s", heightWords(f.Elevation, mark), forceWords(f.Force))
	switch {
	case f.HasRoot && (f.Force < 0) == (f.WithoutRoot.Force < 0):
		line += fmt.Sprintf("; %s and %s N/m without the root", heightWords(f.WithoutRoot.Elevation, mark), newtons(f.WithoutRoot.Force))
	case f.HasRoot:
		line += fmt.Sprintf("; %s and an %s without the root", heightWords(f.WithoutRoot.Elevation, mark), forceWords(f.WithoutRoot.Force))
	}
	p.say("%s. %s.", line, isostaticOnly)
	if !whole {
		return
	}
	p.say("Against %s.", referenceWords(pb))
	p.say("Both columns weigh the same %s km below sea level and float on asthenosphere, %.0f kg/m3 there: %s. Without the root the asthenosphere stands in its place. The force is the difference of potential energy per length of strike: an extensional one stretches the column, a compressional one shortens it.",
		short(f.Level/km), f.Density, asthenosphereWords(pb))
}

// referenceWords describes the reference column.
func referenceWords(pb *race.Problem) string {
	r := pb.Reference
	words := "a column"
	if star(pb, "reference") != "" {
		words = "a mid-ocean ridge*"
	}
	if r.Elevation == 0 {
		words += " at sea level"
	} else {
		words += fmt.Sprintf(" at %+.2f km", r.Elevation/km)
	}
	var layers []string
	for _, l := range r.Layers {
		layers = append(layers, fmt.Sprintf("%s km of %.0f kg/m3", short(l.Thickness/km), l.Density))
	}
	return words + ": " + join(layers) + ", then asthenosphere"
}

// asthenosphereWords says where the density of the asthenosphere is from.
func asthenosphereWords(pb *race.Problem) string {
	switch {
	case pb.Reference.Asthenosphere > 0:
		return "as the experiment gives it"
	case pb.Column.HasTemperature():
		return "rock of the base, on the adiabat through its temperature"
	}
	return "rock of the base"
}

// isostasyMethods says what elevation and force are.
func isostasyMethods(w func(string, ...any), pb *race.Problem) {
	if pb.Reference == nil {
		return
	}
	w("Elevation is that of local isostasy against %s: both columns weigh the same at the deeper of their bases and float on asthenosphere (%s), with sea water of %.0f kg/m3 (common practice) on a surface below sea level. The extensional force per length of strike is ΔΓ = Γ − Γ_ref, Γ = ∫P dz from the top of rock or water to that one level, water included. %s.\n",
		referenceWords(pb), asthenosphereWords(pb), column.SeaWater, isostaticOnly)
}

// standingJSON is a column in isostatic balance.
type standingJSON struct {
	Elevation number `json:"elevation_m"`
	Energy    number `json:"potential_energy_N_m"`
	Force     number `json:"extensional_force_N_m"` // potential energy less that of the reference; negative drives shortening
}

type referenceJSON struct {
	Elevation     number               `json:"elevation_m"`
	Layers        []referenceLayerJSON `json:"layers"`
	Asthenosphere number               `json:"asthenosphere_kg_m3"` // null: that of the rock of the base
}

type referenceLayerJSON struct {
	Thickness number `json:"thickness_m"`
	Density   number `json:"density_kg_m3"`
}

func standing(b column.Isostasy) standingJSON {
	return standingJSON{number(b.Elevation), number(b.PotentialEnergy), number(b.Force)}
}

// reference returns the reference column for JSON; nil where there is none.
func reference(pb *race.Problem) *referenceJSON {
	r := pb.Reference
	if r == nil {
		return nil
	}
	j := &referenceJSON{Elevation: number(r.Elevation), Layers: []referenceLayerJSON{}, Asthenosphere: none}
	if r.Asthenosphere > 0 {
		j.Asthenosphere = number(r.Asthenosphere)
	}
	for _, l := range r.Layers {
		j.Layers = append(j.Layers, referenceLayerJSON{number(l.Thickness), number(l.Density)})
	}
	return j
}

// isostasy fills the column's JSON.
func (c *ColumnJSON) isostasy(pb *race.Problem, s *state.State) {
	c.standingJSON, c.Level, c.Asthenosphere, c.Reference = standingJSON{none, none, none}, none, none, reference(pb)
	f, err := race.Isostasy(pb, s)
	if err != nil {
		c.Warnings = append(c.Warnings, "the elevation is not known: "+unknown(err))
		return
	}
	c.standingJSON, c.Level, c.Asthenosphere = standing(f.Isostasy), number(f.Level), number(f.Density)
	if f.HasRoot {
		w := standing(f.WithoutRoot)
		c.WithoutRoot = &w
	}
}

// IsostasyTable is elevation, potential energy and force with the root and without.
func IsostasyTable(pb *race.Problem, s *state.State) Table {
	t := Table{Name: "isostasy", Header: []string{"column", "elevation_km", "potential_energy_N_m", "extensional_force_N_m", "compensation_depth_km", "asthenosphere_kg_m3"}}
	f, err := race.Isostasy(pb, s)
	if err != nil {
		return t
	}
	row := func(name string, b column.Isostasy) {
		t.Rows = append(t.Rows, []string{name, cell(b.Elevation / km), cell(b.PotentialEnergy), cell(b.Force), cell(b.Level / km), cell(b.Density)})
	}
	row("as it is", f.Isostasy)
	if f.HasRoot {
		row("without the root", f.WithoutRoot)
	}
	return t
}

// Stand floats the column at every time, beside the reference and on the asthenosphere of
// its start, s.
func (p *Past) Stand(s *state.State) {
	var err error
	if p.Isostasy, err = race.IsostasyThrough(p.Problem, s, p.History.Weight); err != nil {
		p.Unknown = unknown(err)
	}
}

// standing is a quantity of the isostatic balance at step i, without a value where it is
// not known.
func (p *Past) standing(i int, of func(column.Isostasy) float64) float64 {
	if i >= len(p.Isostasy) {
		return math.NaN()
	}
	return of(p.Isostasy[i])
}

func elevation(b column.Isostasy) float64 { return b.Elevation }
func driving(b column.Isostasy) float64   { return b.Force }
func potential(b column.Isostasy) float64 { return b.PotentialEnergy }

// Elevations are the elevation in m and the force in N/m at the history's times.
func (p *Past) Elevations() (heights, forces []float64) {
	for _, b := range p.Isostasy {
		heights, forces = append(heights, b.Elevation), append(forces, b.Force)
	}
	return heights, forces
}

// heights writes elevation and force at the times of the rows.
func (p *Past) heights(pg *page) {
	if p.Isostasy == nil && p.Unknown == "" {
		return
	}
	pg.section("ELEVATION")
	if p.Unknown != "" {
		pg.say("Not known: %s.", p.Unknown)
		return
	}
	mark := star(p.Problem, "reference")
	pg.line("%s  %9s  %12s", p.stampHeader(), "elevation", "force")
	pg.line("%s  %9s  %12s", pad("", len(p.stampHeader())), "km"+mark, "1e12 N/m"+mark)
	for _, t := range p.Rows {
		i := p.at(t)
		pg.line("%s  %+9.2f  %+12.2f", p.stamp(t), p.standing(i, elevation)/km+0, p.standing(i, driving)/1e12+0)
	}
	pg.say("Against %s. A force above 0 drives extension; below sea level water lies on the column. %s.", referenceWords(p.Problem), isostaticOnly)
}
