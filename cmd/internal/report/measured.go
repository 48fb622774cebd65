package report

import (
	"fmt"

	"keelfall/solver/race"
)

// measuredText says which densities are means of a measured section's rows, and how far
// the rows spread.
func measuredText(pb *race.Problem) []string {
	var out []string
	for _, m := range pb.Measured {
		if !m.HasDensity {
			continue
		}
		rows := "one row"
		if m.Rows > 1 {
			rows = fmt.Sprintf("the mean of %d rows", m.Rows)
		}
		s := fmt.Sprintf("Density of %s: %s of %s", m.Layer, rows, m.File)
		switch {
		case m.Rows > 1 && m.RowError > 0:
			s += fmt.Sprintf(", which scatter by %.0f kg/m3 (a row's own error is %.0f)", m.Scatter, m.RowError)
		case m.Rows > 1:
			s += fmt.Sprintf(", which scatter by %.0f kg/m3", m.Scatter)
		case m.RowError > 0:
			s += fmt.Sprintf(", good to %.0f kg/m3", m.RowError)
		}
		out = append(out, s+".")
	}
	return out
}

// measuredMethods adds to the methods how a measured section became layers.
func measuredMethods(w func(string, ...any), pb *race.Problem) {
	if len(pb.Measured) == 0 {
		return
	}
	w("Measured sections: rows of one name are one layer; its numbers are means of the rows weighted by thickness (harmonic for conductivity, geometric for viscosity and grain size), the scatter the standard deviation weighted alike. Where rows are given by pressures, ΔP = ρ g h with the row's own density.")
	for _, m := range pb.Measured {
		s := fmt.Sprintf("%s, from %d rows of %s", m.Layer, m.Rows, m.File)
		if m.HasDensity {
			s += fmt.Sprintf(": density %.4g kg/m³, scatter %.3g", m.Density, m.Scatter)
			if m.RowError > 0 {
				s += fmt.Sprintf(", a row's own error %.3g", m.RowError)
			}
		}
		w("* %s.", s)
	}
	w("")
}
