package report

import (
	"fmt"
	"strings"

	"keelfall/rheology"
)

// LawsPage lists the creep laws.
func LawsPage(laws []rheology.Law) string {
	var b strings.Builder
	long := 0
	for _, l := range laws {
		long = max(long, len([]rune(l.Name)))
	}
	fmt.Fprintf(&b, "%s  %5s %4s %4s %7s %8s  %-9s %s\n", pad("law", long), "n", "m", "r", "kJ/mol", "cm3/mol", "water", "numbers")
	for _, l := range laws {
		fmt.Fprintf(&b, "%s  %5.2f %4.2g %4.2g %7.0f %8.3g  %-9s %s\n", pad(l.Name, long), l.N, l.M, l.R, l.E/1e3, l.V*1e6, l.Water, lawStatus(&l))
	}
	fmt.Fprintf(&b, "%d laws. keelfall laws \"NAME\" shows one with its sources.\n", len(laws))
	return b.String()
}

// LawPage shows one law.
func LawPage(l *rheology.Law) string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s\n\n", l.Name)
	row := func(k, v string) {
		if v != "" {
			for i, line := range wrap(v, pageWidth-22) {
				if i > 0 {
					k = ""
				}
				fmt.Fprintf(&b, "%s%s\n", pad(k, 22), line)
			}
		}
	}
	row("material", l.Material)
	row("water", l.WaterState)
	row("mechanism", l.Mechanism)
	row("test", l.Test.String())
	row("A as published", fmt.Sprintf("%.4g %s (%s)", l.LaboratoryA, laboratoryUnit(l), l.Status.A))
	row("A, invariant SI", fmt.Sprintf("%.5g %s", l.A, prefactorUnit(l)))
	row("n", fmt.Sprintf("%g (%s)", l.N, l.Status.N))
	row("grain exponent m", fmt.Sprintf("%g (%s)", l.M, l.Status.M))
	row("water exponent r", fmt.Sprintf("%g (%s), water as %s", l.R, l.Status.R, l.Water))
	row("E", fmt.Sprintf("%.6g kJ/mol (%s)", l.E/1e3, l.Status.E))
	row("V", fmt.Sprintf("%.6g cm3/mol (%s)", l.V*1e6, l.Status.V))
	row("published errors", l.Uncertainty)
	row("confidence", l.Confidence)
	row("source", l.Source)
	row("page", l.URL)
	row("notes", l.Notes)
	return b.String()
}

// LawJSON is one creep law, in SI between the second invariants of strain rate and
// stress; its statuses say where each number comes from.
type LawJSON struct {
	Name       string     `json:"name"`
	Material   string     `json:"material"`
	Mechanism  string     `json:"mechanism"`
	A          number     `json:"prefactor"`
	AUnit      string     `json:"prefactor_unit"`
	N          number     `json:"stress_exponent"`
	M          number     `json:"grain_exponent"`
	R          number     `json:"water_exponent"`
	Water      string     `json:"water"`
	E          number     `json:"activation_energy_J_mol"`
	V          number     `json:"activation_volume_m3_mol"`
	Source     string     `json:"source"`
	Status     statusJSON `json:"status"`
	Confidence string     `json:"confidence"`
	Warnings   []string   `json:"warnings"`
}

type statusJSON struct {
	A    string `json:"prefactor"`
	N    string `json:"stress_exponent"`
	M    string `json:"grain_exponent"`
	R    string `json:"water_exponent"`
	E    string `json:"activation_energy"`
	V    string `json:"activation_volume"`
	Test string `json:"test"`
}

// Laws returns creep laws for JSON.
func Laws(laws []rheology.Law) []LawJSON {
	out := []LawJSON{}
	for i := range laws {
		l := &laws[i]
		st := l.Status
		out = append(out, LawJSON{l.Name, l.Material, l.Mechanism, number(l.A), prefactorUnit(l), number(l.N), number(l.M), number(l.R), l.Water.String(),
			number(l.E), number(l.V), l.Source, statusJSON{st.A, st.N, st.M, st.R, st.E, st.V, st.Test}, l.Confidence, list(nil)})
	}
	return out
}

// prefactorUnit is the unit of a law's prefactor in SI.
func prefactorUnit(l *rheology.Law) string {
	u := fmt.Sprintf("Pa^-%.4g s^-1", l.N)
	switch {
	case l.R == 0:
	case l.Water == rheology.WaterFugacity:
		u = fmt.Sprintf("Pa^-%.4g s^-1", l.N+l.R)
	default:
		u += fmt.Sprintf(" (H/1e6 Si)^-%.4g", l.R)
	}
	if l.M != 0 {
		u += fmt.Sprintf(" m^%.4g", l.M)
	}
	return u
}

// laboratoryUnit is the unit of a law's prefactor as published.
func laboratoryUnit(l *rheology.Law) string {
	u := strings.ReplaceAll(prefactorUnit(l), "Pa^", "MPa^")
	return strings.ReplaceAll(u, " m^", " um^")
}

// LawsTable returns creep laws as a table.
func LawsTable(laws []rheology.Law) Table {
	t := Table{Name: "laws", Header: []string{"name", "material", "mechanism", "prefactor", "prefactor_unit", "stress_exponent", "grain_exponent", "water_exponent", "water", "activation_energy_kJ_mol", "activation_volume_cm3_mol", "source", "numbers"}}
	for i := range laws {
		l := &laws[i]
		t.Rows = append(t.Rows, []string{l.Name, l.Material, l.Mechanism, cell(l.A), prefactorUnit(l), cell(l.N), cell(l.M), cell(l.R), l.Water.String(), cell(l.E / 1e3), cell(l.V * 1e6), l.Source, lawStatus(l)})
	}
	return t
}
