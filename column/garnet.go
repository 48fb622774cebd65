package column

import "slices"

// garnets are the end-members of the garnet group, by name.
var garnets = map[string]bool{"pyrope": true, "almandine": true, "grossular": true, "spessartine": true, "andradite": true, "uvarovite": true}

// Garnet returns the share of garnet in the rock's volume at 298 K and P = 0, where
// modes are counted. ok is false where there is no garnet, or nothing else.
func (m *Modes) Garnet() (share float64, ok bool) {
	var all, garnet float64
	for i := range m.parts {
		v := m.parts[i].Mass / m.parts[i].Mineral.Density(ReferenceKelvin, 0)
		all += v
		if garnets[m.parts[i].Mineral.Name] {
			garnet += v
		}
	}
	return garnet / all, garnet > 0 && garnet < all
}

// WithGarnet returns the rock with another share of garnet, 0 to 1, counted as Garnet
// counts it. Garnets keep their proportions to one another, the other minerals theirs.
// It panics where Garnet has none to change.
func (m *Modes) WithGarnet(share float64) *Modes {
	now, ok := m.Garnet()
	if !ok {
		panic("column: no garnet beside other minerals")
	}
	out := Modes{slices.Clone(m.parts)}
	var mass float64
	for i := range out.parts {
		p := &out.parts[i]
		if garnets[p.Mineral.Name] {
			p.Mass *= share / now
		} else {
			p.Mass *= (1 - share) / (1 - now)
		}
		mass += p.Mass
	}
	for i := range out.parts {
		out.parts[i].Mass /= mass
	}
	return &out
}
