package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"keelfall/rheology"
	"keelfall/solver/drip"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

func columnText(p *page, pb *race.Problem, s *state.State) {
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
			span("%.1f", math.Log10(a.Viscosity), math.Log10(b.Viscosity)), creepCell(creepOf(s, i)))
	}
	below(p, s, long)
	if s.HasTemperature {
		p.say("Heat flow %.1f mW/m2 at the surface, %.1f at the base of the column.", s.SurfaceFlow*1e3, s.BaseFlow*1e3)
	}
	for _, w := range slices.Concat(measuredText(pb), together(s), frictionText(s), reacted(s)) {
		p.say("%s", w)
	}
	contrast, stress, ok := race.Buoyancy(s)
	if !ok {
		return
	}
	root := "The root"
	if first, last, _ := s.Column.RootSpan(); first != last {
		root = "At its base the root"
	}
	word := "pulls down"
	if stress < 0 {
		word = "pushes up"
	}
	weigh := strings.ReplaceAll(drip.Weigh(contrast), "³", "3")
	whole := fmt.Sprintf("over its %s km", short(s.Column.RootThickness()/km))
	if s.HasTemperature { // colder than its base higher up, and so denser
		whole = fmt.Sprintf("taken over its whole %s km, colder rock higher up included,", short(s.Column.RootThickness()/km))
	}
	p.say("%s is %s; %s it %s with %.2g MPa.", root, weigh, whole, word, math.Abs(stress)/1e6)
}

// creepOf returns the creep of a layer, or of the half-space below the last.
func creepOf(s *state.State, layer int) *rheology.Creep {
	if layer < len(s.Column.Layers) {
		return s.Column.Layers[layer].Viscosity.Creep
	}
	return s.Column.Base.Viscosity.Creep
}

// creepCell names a rock's creep in the table: its materials, each once.
func creepCell(c *rheology.Creep) string {
	if c == nil {
		return "given"
	}
	var names []string
	for _, l := range c.AllLaws() {
		if n := brief(&l); !slices.Contains(names, n) {
			names = append(names, n)
		}
	}
	return cut(strings.Join(names, " + "), 26)
}

// brief is a law's name without its paper and its mechanism; the methods give it whole.
func brief(l *rheology.Law) string {
	words := strings.Fields(l.Name)
	for i, w := range words {
		if i > 1 && yearIn.MatchString(w) {
			words = words[:i-1]
			break
		}
	}
	if short, ok := strings.CutSuffix(strings.Join(words, " "), " "+l.Mechanism); ok && l.Mechanism != "" {
		return short
	}
	if n := len(words); n > 1 && (words[n-1] == "dislocation" || words[n-1] == "diffusion") {
		words = words[:n-1]
	}
	return strings.Join(words, " ")
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
		p.line("%s  %9s  %10s  %11s  %9.0f  %10.1f  %s", pad("half-space", long), depth+" down", t,
			fmt.Sprintf("%.2f", s.Base.P/1e9), s.Base.Density, math.Log10(s.Base.Viscosity), creepCell(b.Viscosity.Creep))
	case "inviscid":
		p.line("%s  %9s  %10s  %11s  %9.0f  %10s", pad("fluid", long), depth+" down", "-", fmt.Sprintf("%.2f", s.Base.P/1e9), s.Base.Density, "inviscid")
	default:
		p.line("%s  %9s", pad(b.Boundary.String()+" base", long), depth)
	}
}
