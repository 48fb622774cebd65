package state

import (
	"fmt"
	"strings"

	"keelfall/column"
	"keelfall/rheology"
)

// warn lists what the state rests on: cautions of each law and density, once, with the
// rocks that use it, and the depths where a viscosity limit or friction decides.
func (s *State) warn() {
	c := s.Column
	var texts []string
	rocks := map[string][]string{}
	note := func(name string, laws *rheology.Creep, ps []Point) {
		laws.Melt = nil // s.melt says where there is too much
		for _, t := range laws.Cautions(used(ps)) {
			if rocks[t] == nil {
				texts = append(texts, t)
			}
			rocks[t] = append(rocks[t], name)
		}
	}
	caution := func(d column.Density, name string) {
		if k, ok := d.(interface{ Cautions() []string }); ok {
			for _, t := range k.Cautions() {
				if rocks[t] == nil {
					texts = append(texts, t)
				}
				rocks[t] = append(rocks[t], name)
			}
		}
	}
	for i := range c.Layers {
		if laws := c.Layers[i].CreepWith(c.Limits); laws != nil {
			note(c.Layers[i].Name, laws, s.Layers[i].Points)
		}
	}
	if c.Base.Boundary == column.HalfSpace && c.Base.Viscosity.Creep != nil {
		note("the half-space", c.Base.CreepWith(c.Limits), []Point{s.Base})
	}
	for i := range c.Layers {
		caution(c.Layers[i].Density, c.Layers[i].Name)
	}
	if b := c.Base.Boundary; b == column.HalfSpace || b == column.Inviscid {
		caution(c.Base.Density, "the base")
	}
	for _, t := range texts {
		s.Warnings = append(s.Warnings, fmt.Sprintf("%s (in %s)", t, strings.Join(rocks[t], ", ")))
	}
	for i := range c.Layers {
		s.limits(c.Layers[i].Name, s.Layers[i].Points)
		s.breaks(c.Layers[i].Name, &c.Layers[i].Rock, s.Layers[i].Points)
		s.melt(c.Layers[i].Name, &c.Layers[i].Rock, s.Layers[i].Points)
	}
	s.limits("the half-space", []Point{s.Base})
	if b := c.Base.Boundary; b == column.HalfSpace || b == column.Inviscid {
		s.melt("the base", &c.Base.Rock, []Point{s.Base})
	}
}

// used are the points where creep decides, not friction or a limit.
func used(ps []Point) []rheology.Use {
	var out []rheology.Use
	for _, p := range ps {
		if !p.Yielding && !p.Capped && !p.Floored {
			out = append(out, rheology.Use{T: p.T, P: p.P, Stress: p.Stress})
		}
	}
	return out
}

// limits warns of what decides in place of creep.
func (s *State) limits(name string, ps []Point) {
	l := s.Column.Limits
	s.limited(name, ps, "friction", func(p Point) bool { return p.Yielding && !p.Floored })
	s.limited(name, ps, fmt.Sprintf("the highest viscosity, %.3g Pa s,", l.Highest), func(p Point) bool { return p.Capped })
	s.limited(name, ps, fmt.Sprintf("the lowest viscosity, %.3g Pa s,", l.Lowest), func(p Point) bool { return p.Floored })
}

// limited warns of each range of depths in which a limit bites.
func (s *State) limited(name string, ps []Point, which string, bites func(Point) bool) {
	s.ranges(ps, bites, func(where string) string {
		return fmt.Sprintf("%s: %s decides %s, not the creep law", name, which, where)
	})
}
