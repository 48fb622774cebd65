package report

import (
	"strings"

	"keelfall/column"
	"keelfall/solver/race"
)

// mineralsOf returns the end-members whose modes make the column's densities, each once,
// from the surface down.
func mineralsOf(p *race.Problem) []column.Mineral {
	var out []column.Mineral
	seen := map[string]bool{}
	note := func(d column.Density) {
		for _, d := range column.Parts(d) {
			m, ok := d.(*column.Modes)
			if !ok {
				continue
			}
			for _, part := range m.Parts() {
				if n := part.Mineral.Name; !seen[n] {
					seen[n] = true
					out = append(out, part.Mineral)
				}
			}
		}
	}
	for i := range p.Column.Layers {
		note(p.Column.Layers[i].Density)
	}
	note(p.Column.Base.Density)
	return out
}

// mineralIDs names the sources of a mineral's numbers, as mineralSources has them.
func mineralIDs(m *column.Mineral) []string {
	ids := []string{"holland1998"}
	if m.Status.K0 == "seen" {
		ids = append(ids, "angel1997")
	}
	if m.Status.A0 == "choice" {
		ids = append(ids, "mineral-choice")
	}
	return ids
}

// mineralSources lists the end-members whose modes make a density, in one entry a
// source. Those whose compression was measured, and whose other numbers are of several
// origins, are told apart number by number.
func mineralSources(p *race.Problem) []SourceJSON {
	var recalled, measured, volumes, chosen []string
	for _, m := range mineralsOf(p) {
		if m.Status.K0 == "seen" {
			measured, volumes = append(measured, m.Name), append(volumes, m.Name)
		} else {
			recalled = append(recalled, m.Name)
		}
		if m.Status.A0 == "choice" {
			chosen = append(chosen, m.Name)
		}
	}
	var out []SourceJSON
	var of []string
	if len(recalled) > 0 {
		of = append(of, "volumes, expansion and bulk moduli of "+join(recalled))
	}
	if len(volumes) > 0 {
		of = append(of, "the volume alone of "+join(volumes))
	}
	if len(of) > 0 {
		out = append(out, SourceJSON{"holland1998", "from memory",
			"Holland & Powell 1998, J. metamorphic Geol. 16, 309: " + strings.Join(of, "; ") + "; as recalled, number by number in the mineral table"})
	}
	if len(measured) > 0 {
		out = append(out, SourceJSON{"angel1997", "published", "Angel et al. 1997, J. Appl. Cryst. 30, 461: bulk modulus and its derivative of " + join(measured)})
	}
	if len(chosen) > 0 {
		out = append(out, SourceJSON{"mineral-choice", "choice", "expansion and softening with temperature of " + join(chosen) + ": effective numbers, our own choice"})
	}
	return out
}
