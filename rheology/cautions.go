package rheology

import (
	"fmt"
	"slices"
)

// volumeMatters is the pressure in Pa above which an activation volume that was not
// determined is worth a word: 1 GPa times 10 cm³/mol is 10 kJ/mol.
const volumeMatters = 1e9

// Cautions returns what should be said when the law is used at the conditions, each
// beginning with its name: parameters recalled with less than high confidence, an
// activation volume that was chosen or not determined, used above 1 GPa, a test
// geometry that was assumed. Nothing to say is nil.
func (l *Law) Cautions(at Conditions) []string {
	var out []string
	switch l.Confidence {
	case "low":
		out = append(out, fmt.Sprintf("%s: numbers recalled from memory with low confidence; read %s before use", l.Name, l.Source))
	case "medium":
		out = append(out, fmt.Sprintf("%s: numbers recalled from memory, to be checked against %s", l.Name, l.Source))
	}
	if at.P > volumeMatters {
		switch {
		case !l.VolumeDetermined:
			out = append(out, fmt.Sprintf("%s: used above 1 GPa, where its activation volume (not determined, %g cm³/mol assumed) counts", l.Name, l.V*1e6))
		case l.Status.V == "choice":
			out = append(out, fmt.Sprintf("%s: used above 1 GPa with an activation volume that is a choice, %g cm³/mol (%s)", l.Name, l.V*1e6, l.Uncertainty))
		}
	}
	if l.Status.Test == "assumed" {
		out = append(out, fmt.Sprintf("%s: its test geometry is assumed to be %s", l.Name, l.Test))
	}
	return out
}

// Cautions returns those of every law, and names two laws of one list that describe
// the same mechanism of the same rock, whose rates should not be added, and a
// piezometer that was recalled.
func (c *Creep) Cautions(at Conditions) []string {
	out := cautions(nil, c.Laws, c.Mixtures, at)
	for _, l := range c.AllLaws() {
		if l.M != 0 && c.Piezometer != nil {
			if s := c.Piezometer.caution(); s != "" {
				return append(out, s)
			}
		}
	}
	return out
}

func cautions(out []string, laws []Law, mixtures []Mixture, at Conditions) []string {
	for i := range laws {
		for _, s := range laws[i].Cautions(at) {
			if !slices.Contains(out, s) { // a law may stand in several phases
				out = append(out, s)
			}
		}
		for j := range i {
			a, b := &laws[j], &laws[i]
			if a.Material != "" && a.Material == b.Material && a.Mechanism == b.Mechanism {
				out = append(out, fmt.Sprintf("%s and %s act in parallel but are the same mechanism of the same rock: counted twice", a.Name, b.Name))
			}
		}
	}
	for i := range mixtures {
		for j := range mixtures[i].Phases {
			p := &mixtures[i].Phases[j]
			out = cautions(out, p.Laws, p.Mixtures, at)
		}
	}
	return out
}
