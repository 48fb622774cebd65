package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"keelfall/column"
	"keelfall/solver/state"
)

// DepthOf is a pressure that was asked for and the depth at which the column has it.
type DepthOf struct {
	Pressure, Depth float64 // Pa, m
	Found           bool    // false: the column does not reach it
}

// weightText writes what each rock weighs against the rock below it, and what it would
// take to turn that round.
func weightText(p *page, s *state.State) {
	p.section("WEIGHT")
	all, err := s.Sinking()
	if err != nil {
		p.say("What the rocks weigh against one another is not known: %v.", err)
		return
	}
	p.say("Each rock against the rock below it, both at the temperature and pressure of its own middle:")
	long := 5
	for _, k := range all {
		long = max(long, min(len([]rune(s.Column.Layers[k.Layer].Name)), 26))
	}
	p.line("%s  %6s  %5s  %5s  %10s  %15s  %11s", pad("layer", long), "at km", "kg/m3", "below", "difference", "expansivity 1/K", "modulus GPa")
	for _, k := range all {
		below, by := "-", "-"
		if k.HasBelow {
			below, by = fmt.Sprintf("%.0f", k.Below), signed(k.Contrast)
		}
		grows := "0"
		if k.Expansivity != 0 {
			grows = fmt.Sprintf("%.2e", k.Expansivity)
		}
		modulus := "-" // the density does not depend on pressure
		if !math.IsInf(k.BulkModulus, 0) {
			modulus = sig(k.BulkModulus/1e9, 3)
		}
		p.line("%s  %6s  %5.0f  %5s  %10s  %15s  %11s", pad(cut(s.Column.Layers[k.Layer].Name, long), long), short(k.Depth/km), k.Density, below, by, grows, modulus)
	}
	if slices.ContainsFunc(all, func(k state.Sinking) bool { return math.IsInf(k.BulkModulus, 0) }) {
		p.say("A dash for the bulk modulus: that density does not depend on pressure.")
	}
	if names := melting(s, all); len(names) > 0 {
		p.say("Expansivity and bulk modulus of %s count the melt that forms as it is heated or let off pressure.", join(names))
	}
	for _, k := range all {
		if math.Abs(k.Contrast) < 1e-9*k.Density { // one rock above and below
			continue
		}
		for _, n := range k.Needs {
			p.say("%s", need(upper(called(&s.Column.Layers[k.Layer])), k, n)+beyond(s, k.Layer, n))
		}
	}
}

// melting names the layers whose density counts melt that forms at their middle.
func melting(s *state.State, all []state.Sinking) []string {
	var out []string
	for _, k := range all {
		l := &s.Column.Layers[k.Layer]
		if m := l.Melt; m.NeedsTemperature() && m.Density > 0 {
			if _, perKelvin := m.At(k.T, k.P); perKelvin > 0 {
				out = append(out, called(l))
			}
		}
	}
	return out
}

// rootNeed says in one sentence what it takes for the root's lowest layer to sink; empty
// where the rock has no handle.
func rootNeed(s *state.State) string {
	_, last, ok := s.Column.RootSpan()
	if !ok {
		return ""
	}
	all, err := s.Sinking()
	if err != nil {
		return fmt.Sprintf("What it takes for the root to sink is not known: %v.", err)
	}
	k := all[last]
	if len(k.Needs) == 0 {
		return ""
	}
	n := k.Needs[0]
	if i := slices.IndexFunc(k.Needs, func(n state.Need) bool { return n.Found }); i >= 0 {
		n = k.Needs[i]
	}
	return need("The root", k, n) + beyond(s, k.Layer, n)
}

// need words one handle of a rock.
func need(who string, k state.Sinking, n state.Need) string {
	switch {
	case n.Found && n.Rises:
		return fmt.Sprintf("%s sinks with a %s above %s; it has %s.", who, n.What, share(n.At), share(n.Now))
	case n.Found:
		return fmt.Sprintf("%s sinks with a %s below %s; it has %s.", who, n.What, share(n.At), share(n.Now))
	case k.Contrast > 0:
		return fmt.Sprintf("%s sinks at every %s from %s to %s; it has %s: floating is never in range.", who, n.What, share(n.From), share(n.To), share(n.Now))
	}
	return fmt.Sprintf("%s floats at every %s from %s to %s; it has %s: sinking is never in range.", who, n.What, share(n.From), share(n.To), share(n.Now))
}

// beyond says where the value that changes the sign is more than the rock can have.
func beyond(s *state.State, layer int, n state.Need) string {
	if !n.Found {
		return ""
	}
	if n.What == "melt fraction" && n.At > column.MeltLimit {
		return fmt.Sprintf(" That is more melt than a rock keeps (about %s).", share(column.MeltLimit))
	}
	if r, ok := reaction(&s.Column.Layers[layer]); ok && n.What == "reaction extent" && n.At > r.Cap {
		return fmt.Sprintf(" That is beyond its cap, %s.", share(r.Cap))
	}
	return ""
}

// signed writes a whole number with its sign, 0 without one.
func signed(x float64) string {
	if math.Abs(x) < 0.5 {
		return "0"
	}
	return fmt.Sprintf("%+.0f", x)
}

// share writes a share with two decimals, or as many as a small one needs.
func share(x float64) string {
	if x != 0 && math.Abs(x) < 0.095 {
		return sig(x, 2)
	}
	return strings.TrimSuffix(fmt.Sprintf("%.2f", x), ".00")
}

// depthsText writes the depths of the pressures asked for.
func depthsText(p *page, s *state.State, depths []DepthOf) {
	if len(depths) == 0 {
		return
	}
	p.section("DEPTH OF")
	for _, d := range depths {
		if !d.Found {
			p.say("%s GPa: not in this column, which ends at %s GPa.", short(d.Pressure/1e9), short(s.Base.P/1e9))
			continue
		}
		p.say("%s GPa: %s km, in %s.", short(d.Pressure/1e9), sig(d.Depth/km, 4), layerAt(s, d.Depth))
	}
}

// layerAt names the layer at a depth.
func layerAt(s *state.State, depth float64) string {
	i := slices.IndexFunc(s.Layers, func(l state.Profile) bool { return depth <= l.Points[len(l.Points)-1].Depth })
	if i < 0 {
		i = len(s.Layers) - 1
	}
	return s.Column.Layers[i].Name
}

type sinkingJSON struct {
	Layer       string     `json:"layer"`
	Depth       number     `json:"depth_m"`
	T           number     `json:"temperature_K"`
	P           number     `json:"pressure_Pa"`
	Density     number     `json:"density_kg_m3"`
	Below       number     `json:"density_below_kg_m3"`
	Contrast    number     `json:"contrast_kg_m3"`
	Expansivity number     `json:"expansivity_per_K"`
	BulkModulus number     `json:"bulk_modulus_Pa"`
	Needs       []needJSON `json:"needs"`
}

type needJSON struct {
	What  string `json:"what"`
	Now   number `json:"now"`
	From  number `json:"from"`
	To    number `json:"to"`
	At    number `json:"at"`    // null where the sign never changes in the range
	Rises bool   `json:"rises"` // more of it makes the rock denser against what lies below
}

type depthJSON struct {
	Pressure number `json:"pressure_Pa"`
	Depth    number `json:"depth_m"`
}

// sinking returns the layers' weights for JSON.
func sinking(s *state.State) ([]sinkingJSON, error) {
	out := []sinkingJSON{}
	all, err := s.Sinking()
	for _, k := range all {
		j := sinkingJSON{s.Column.Layers[k.Layer].Name, number(k.Depth), none, number(k.P), number(k.Density), none, none, number(k.Expansivity + 0), number(k.BulkModulus), []needJSON{}}
		if s.HasTemperature {
			j.T = number(k.T)
		}
		if k.HasBelow {
			j.Below, j.Contrast = number(k.Below), number(k.Contrast)
		}
		for _, n := range k.Needs {
			at := none
			if n.Found {
				at = number(n.At)
			}
			j.Needs = append(j.Needs, needJSON{n.What, number(n.Now), number(n.From), number(n.To), at, n.Rises})
		}
		out = append(out, j)
	}
	return out, err
}

// DepthsJSON returns the depths of pressures for JSON.
func DepthsJSON(depths []DepthOf) []depthJSON {
	out := []depthJSON{}
	for _, d := range depths {
		j := depthJSON{number(d.Pressure), none}
		if d.Found {
			j.Depth = number(d.Depth)
		}
		out = append(out, j)
	}
	return out
}

// WeightTable is what each rock weighs against the rock below it, one row a handle.
func WeightTable(s *state.State) Table {
	t := Table{Name: "weight", Header: []string{"layer", "depth_km", "temperature_degC", "pressure_GPa", "density_kg_m3", "density_below_kg_m3", "contrast_kg_m3",
		"expansivity_1_K", "bulk_modulus_GPa", "handle", "handle_now", "handle_from", "handle_to", "changes_sign_at", "sinks"}}
	all, err := s.Sinking()
	if err != nil {
		return t
	}
	for _, k := range all {
		T, below, by := math.NaN(), math.NaN(), math.NaN()
		if s.HasTemperature {
			T = k.T - zero
		}
		if k.HasBelow {
			below, by = k.Below, k.Contrast
		}
		row := []string{s.Column.Layers[k.Layer].Name, cell(k.Depth / km), cell(T), cell(k.P / 1e9), cell(k.Density), cell(below), cell(by), cell(k.Expansivity + 0), cell(k.BulkModulus / 1e9)}
		if len(k.Needs) == 0 {
			t.Rows = append(t.Rows, append(row, "", "", "", "", "", ""))
		}
		for _, n := range k.Needs {
			at, sinks := math.NaN(), "never"
			switch {
			case n.Found && n.Rises:
				at, sinks = n.At, "above"
			case n.Found:
				at, sinks = n.At, "below"
			case k.Contrast > 0:
				sinks = "always"
			}
			t.Rows = append(t.Rows, append(slices.Clone(row), n.What, cell(n.Now), cell(n.From), cell(n.To), cell(at), sinks))
		}
	}
	return t
}
