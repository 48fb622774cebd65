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
	fmt.Fprintf(&b, "%s  %5s %4s %4s %7s %8s  %-9s %-12s %s\n", pad("law", long), "n", "m", "r", "kJ/mol", "cm3/mol", "water", "tested degC", "numbers")
	for _, l := range laws {
		fmt.Fprintf(&b, "%s  %5.2f %4.2g %4.2g %7.0f %8.3g  %-9s %-12s %s\n", pad(l.Name, long), l.N, l.M, l.R, l.E/1e3, l.V*1e6, l.Water, tested(l.Tested.T, 1, zero, ""), lawStatus(&l))
	}
	fmt.Fprintf(&b, "%s. keelfall laws \"NAME\" shows one with its sources.\n", Count(len(laws), "law"))
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
	row("A as published", fmt.Sprintf("%.4g %s%s", l.LaboratoryA, laboratoryUnit(l), from(l.Status.A)))
	row("A, invariant SI", fmt.Sprintf("%.5g %s", l.A, prefactorUnit(l)))
	row("n", fmt.Sprintf("%g%s", l.N, from(l.Status.N)))
	row("grain exponent m", fmt.Sprintf("%g%s", l.M, from(l.Status.M)))
	row("water exponent r", fmt.Sprintf("%g%s, water as %s", l.R, from(l.Status.R), l.Water))
	row("E", fmt.Sprintf("%.6g kJ/mol%s", l.E/1e3, from(l.Status.E)))
	row("V", fmt.Sprintf("%.6g cm3/mol%s", l.V*1e6, from(l.Status.V)))
	plasticRows(row, l)
	row("experiments", testedWords(&l.Tested))
	row("published errors", uncertainty(l))
	row("as numbers", errorWords(l))
	row("confidence", l.Confidence)
	row("source", l.Source)
	row("page", l.URL)
	row("notes", l.Notes)
	return b.String()
}

// LawJSON is one creep law, in SI between the second invariants of strain rate and
// stress; its statuses say where each number comes from.
type LawJSON struct {
	Name       string        `json:"name"`
	Material   string        `json:"material"`
	Mechanism  string        `json:"mechanism"`
	A          number        `json:"prefactor"`
	AUnit      string        `json:"prefactor_unit"`
	N          number        `json:"stress_exponent"`
	M          number        `json:"grain_exponent"`
	R          number        `json:"water_exponent"`
	Water      string        `json:"water"`
	E          number        `json:"activation_energy_J_mol"`
	V          number        `json:"activation_volume_m3_mol"`
	Source     string        `json:"source"`
	Status     statusJSON    `json:"status"`
	Confidence string        `json:"confidence"`
	WaterState string        `json:"water_state"`
	Test       string        `json:"test"`
	Peierls    *peierlsJSON  `json:"low_temperature_plasticity"` // null for other mechanisms
	Tested     testedJSON    `json:"experiments"`
	Errors     lawErrorsJSON `json:"published_errors"`
	URL        string        `json:"url"`
	Notes      string        `json:"notes"`
	Warnings   []string      `json:"warnings"`
}

// peierlsJSON are the numbers of low-temperature plasticity, stresses invariant.
type peierlsJSON struct {
	Stress number `json:"peierls_stress_Pa"`
	PerPa  number `json:"peierls_stress_rise_per_Pa"`
	P      number `json:"p"`
	Q      number `json:"q"`
	Least  number `json:"least_stress_Pa"`
}

// testedJSON is where the experiments were: two ends, null where not known or open.
type testedJSON struct {
	T      [2]number `json:"temperature_K"`
	P      [2]number `json:"pressure_Pa"`
	Stress [2]number `json:"stress_Pa"` // as the test measures it
	Status string    `json:"status"`
}

// lawErrorsJSON are published standard errors, null where there is none.
type lawErrorsJSON struct {
	LnA number `json:"ln_prefactor"`
	N   number `json:"stress_exponent"`
	R   number `json:"water_exponent"`
	E   number `json:"activation_energy_J_mol"`
	V   number `json:"activation_volume_m3_mol"`

	Status errorStatusJSON `json:"status"` // of each, empty where there is none
}

type errorStatusJSON struct {
	LnA string `json:"ln_prefactor"`
	N   string `json:"stress_exponent"`
	R   string `json:"water_exponent"`
	E   string `json:"activation_energy"`
	V   string `json:"activation_volume"`
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
		st, e, es := l.Status, l.Errors, l.ErrorStatus()
		j := LawJSON{Name: l.Name, Material: l.Material, Mechanism: l.Mechanism, A: number(l.A), AUnit: prefactorUnit(l),
			N: number(l.N), M: number(l.M), R: number(l.R), Water: l.Water.String(), E: number(l.E), V: number(l.V), Source: l.Source,
			Status: statusJSON{st.A, st.N, st.M, st.R, st.E, st.V, st.Test}, Confidence: l.Confidence, WaterState: l.WaterState, Test: l.Test.String(),
			Tested: testedJSON{ends(l.Tested.T), ends(l.Tested.P), ends(l.Tested.Stress), l.Tested.Status},
			Errors: lawErrorsJSON{positive(e.LnA), positive(e.N), positive(e.R), positive(e.E), positive(e.V), errorStatusJSON{es[0], es[1], es[2], es[3], es[4]}},
			URL:    l.URL, Notes: l.Notes, Warnings: list(nil)}
		if b := l.Peierls; l.Plastic() {
			j.Peierls = &peierlsJSON{number(b.Stress), number(b.PerPa), number(b.P), number(b.Q), number(b.Least)}
		}
		out = append(out, j)
	}
	return out
}

// positive is a number that has no value where it is 0.
func positive(x float64) number {
	if x > 0 {
		return number(x)
	}
	return none
}

// ends are a range's ends, without a value where they are not known or open.
func ends(i rheology.Interval) [2]number { return [2]number{positive(i.Low), positive(i.High)} }

// prefactorUnit is the unit of a law's prefactor in SI.
func prefactorUnit(l *rheology.Law) string {
	n := l.N
	if l.Water == rheology.WaterFugacity {
		n += l.R
	}
	u := "s^-1"
	if n != 0 {
		u = fmt.Sprintf("Pa^-%.4g s^-1", n)
	}
	if l.Water == rheology.WaterContent {
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
	t := Table{Name: "laws", Header: []string{"name", "material", "mechanism", "prefactor", "prefactor_unit", "stress_exponent", "grain_exponent", "water_exponent", "water", "activation_energy_kJ_mol", "activation_volume_cm3_mol", "source", "numbers",
		"tested_temperature_degC", "tested_pressure_MPa", "tested_stress_MPa", "error_ln_prefactor", "error_stress_exponent", "error_water_exponent",
		"error_activation_energy_kJ_mol", "error_activation_volume_cm3_mol", "peierls_stress_MPa", "errors"}}
	for i := range laws {
		l := &laws[i]
		t.Rows = append(t.Rows, []string{l.Name, l.Material, l.Mechanism, cell(l.A), prefactorUnit(l), cell(l.N), cell(l.M), cell(l.R), l.Water.String(), cell(l.E / 1e3), cell(l.V * 1e6), l.Source, lawStatus(l),
			tested(l.Tested.T, 1, zero, ""), tested(l.Tested.P, 1e6, 0, ""), tested(l.Tested.Stress, 1e6, 0, ""), given(l.Errors.LnA), given(l.Errors.N), given(l.Errors.R),
			given(l.Errors.E / 1e3), given(l.Errors.V * 1e6), given(l.Peierls.Stress / 1e6), errorWords(l)})
	}
	return t
}
