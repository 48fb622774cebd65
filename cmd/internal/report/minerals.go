package report

import (
	"fmt"
	"slices"
	"strings"

	"keelfall/column"
)

// roomKelvin is 25 degC, at which a mineral's density is listed.
const roomKelvin = zero + 25

// mineralStatus says what kinds of number a mineral has; its molar mass is derived.
func mineralStatus(m *column.Mineral) string {
	st := m.Status
	all := []string{st.V0, st.A0, st.K0, st.BulkModulusDerivative, st.BulkModulusSlope}
	var out []string
	for _, k := range []struct{ status, words string }{{"memory", "from memory"}, {"seen", "published"}, {"choice", "choice"}} {
		if slices.ContainsFunc(all, func(s string) bool { return strings.HasPrefix(s, k.status) }) {
			out = append(out, k.words)
		}
	}
	return strings.Join(out, ", ")
}

// numberStatus words the status of one number for people.
func numberStatus(s string) string {
	switch {
	case s == "memory":
		return "from memory"
	case strings.HasPrefix(s, "memory"):
		return "from memory, " + strings.Trim(strings.TrimPrefix(s, "memory"), ", ") + " confidence"
	case s == "choice":
		return "a choice of ours"
	case s == "seen":
		return "published"
	case s == "absent in law (0)":
		return "not in this law"
	case s == "not determined (0 assumed)":
		return "not determined, 0 assumed"
	case s == "given":
		return "typed by the user"
	}
	return s
}

// MineralsPage lists the end-members.
func MineralsPage(list []column.Mineral) string {
	var b strings.Builder
	name, formula := 7, 7
	for i := range list {
		name, formula = max(name, len([]rune(list[i].Name))), max(formula, len([]rune(list[i].Formula)))
	}
	fmt.Fprintf(&b, "%s  %-6s  %s  %11s  %9s  %5s  %s\n", pad("mineral", name), "symbol", pad("formula", formula), "kg/m3 25 degC", "a0 1e-5/K", "K GPa", "numbers")
	for i := range list {
		m := &list[i]
		fmt.Fprintf(&b, "%s  %-6s  %s  %13.0f  %9.2f  %5.1f  %s\n", pad(m.Name, name), m.Symbol, pad(m.Formula, formula), m.Density(roomKelvin, 0), m.A0*1e5, m.K0/1e9, mineralStatus(m))
	}
	fmt.Fprintf(&b, "%s. a0 is the constant of the volume's formula; the expansivity at 25 degC is 0.42 a0.\nkeelfall minerals NAME --at \"800 degC,1.5 GPa\" shows one with its sources.\n", Count(len(list), "end-member"))
	return b.String()
}

// MineralPage shows one end-member, and what it weighs at T in K and P in Pa.
func MineralPage(m *column.Mineral, T, P float64) string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s (%s), %s\n\n", m.Name, m.Symbol, m.Formula)
	row := func(k, v string) {
		if v == "" {
			return
		}
		for i, line := range wrap(v, pageWidth-28) {
			if i > 0 {
				k = ""
			}
			fmt.Fprintf(&b, "%s%s\n", pad(k, 28), line)
		}
	}
	st := m.Status
	row("molar mass", fmt.Sprintf("%.6g g/mol (%s)", m.MolarMass*1e3, numberStatus(st.MolarMass)))
	row("volume, 25 degC", fmt.Sprintf("%.6g cm3/mol (%s)", m.V0*1e6, numberStatus(st.V0)))
	row("a0", fmt.Sprintf("%.4g 1/K (%s)", m.A0, numberStatus(st.A0)))
	row("bulk modulus K", fmt.Sprintf("%.5g GPa (%s)", m.K0/1e9, numberStatus(st.K0)))
	row("dK/dP", fmt.Sprintf("%g (%s)", m.BulkModulusDerivative, numberStatus(st.BulkModulusDerivative)))
	row("(1/K) dK/dT", fmt.Sprintf("%g 1/K (%s)", m.BulkModulusSlope, numberStatus(st.BulkModulusSlope)))
	row("compression", compression(m))
	b.WriteByte('\n')
	row("at", fmt.Sprintf("%.4g degC, %.4g GPa", T-zero, P/1e9))
	row("density", fmt.Sprintf("%.1f kg/m3", m.Density(T, P)))
	row("expansivity", fmt.Sprintf("%.3g 1/K", m.Expansivity(T, P)))
	row("bulk modulus", fmt.Sprintf("%.4g GPa", m.BulkModulus(T, P)/1e9))
	row("density at 25 degC, 0 GPa", fmt.Sprintf("%.1f kg/m3", m.Density(roomKelvin, 0)))
	b.WriteByte('\n')
	if m.SeenVolume > 0 {
		row("for comparison, read", fmt.Sprintf("volume %.5g cm3/mol (%+.2f %% against the one above): %s", m.SeenVolume*1e6, 100*(m.SeenVolume/m.V0-1), m.SeenVolumeSource))
	}
	if m.SeenBulkModulus != "" {
		row("for comparison, read", "bulk modulus "+m.SeenBulkModulus+" GPa")
	}
	row("source", m.Source)
	row("notes", m.Notes)
	return b.String()
}

// compression names the law by which a mineral's volume falls with pressure.
func compression(m *column.Mineral) string {
	if m.BirchMurnaghan {
		return "Birch-Murnaghan, third order"
	}
	return "Murnaghan 1944"
}

// MineralJSON is one end-member in SI, and its state at the temperature and pressure
// asked for.
type MineralJSON struct {
	Name        string            `json:"name"`
	Symbol      string            `json:"symbol"`
	Formula     string            `json:"formula"`
	MolarMass   number            `json:"molar_mass_kg_mol"`
	V0          number            `json:"volume_m3_mol"`
	A0          number            `json:"a0_per_K"`
	K0          number            `json:"bulk_modulus_Pa"`
	DKDP        number            `json:"bulk_modulus_derivative"`
	Slope       number            `json:"bulk_modulus_slope_per_K"`
	T           number            `json:"temperature_K"`
	P           number            `json:"pressure_Pa"`
	Density     number            `json:"density_kg_m3"`
	Expansivity number            `json:"expansivity_per_K"`
	Modulus     number            `json:"bulk_modulus_at_Pa"`
	Status      mineralStatusJSON `json:"status"`
	Compression string            `json:"compression"`
	Seen        mineralSeenJSON   `json:"seen_for_comparison"` // nothing is computed from them
	Source      string            `json:"source"`
	Notes       string            `json:"notes"`
	Warnings    []string          `json:"warnings"`
}

// mineralSeenJSON are measured values that were read on a page: null or empty where none.
type mineralSeenJSON struct {
	Volume number `json:"volume_m3_mol"`
	Source string `json:"volume_source"`
	K      string `json:"bulk_modulus_GPa"` // as written, conflicting ones beside each other
}

type mineralStatusJSON struct {
	MolarMass string `json:"molar_mass"`
	V0        string `json:"volume"`
	A0        string `json:"a0"`
	K0        string `json:"bulk_modulus"`
	DKDP      string `json:"bulk_modulus_derivative"`
	Slope     string `json:"bulk_modulus_slope"`
}

// Minerals returns end-members for JSON, at T in K and P in Pa.
func Minerals(list []column.Mineral, T, P float64) []MineralJSON {
	out := []MineralJSON{}
	for i := range list {
		m := &list[i]
		st := m.Status
		out = append(out, MineralJSON{m.Name, m.Symbol, m.Formula, number(m.MolarMass), number(m.V0), number(m.A0), number(m.K0), number(m.BulkModulusDerivative), number(m.BulkModulusSlope),
			number(T), number(P), number(m.Density(T, P)), number(m.Expansivity(T, P)), number(m.BulkModulus(T, P)),
			mineralStatusJSON{st.MolarMass, st.V0, st.A0, st.K0, st.BulkModulusDerivative, st.BulkModulusSlope},
			compression(m), mineralSeenJSON{positive(m.SeenVolume), m.SeenVolumeSource, m.SeenBulkModulus}, m.Source, m.Notes, []string{}})
	}
	return out
}

// MineralsTable lists end-members at T in K and P in Pa.
func MineralsTable(list []column.Mineral, T, P float64) Table {
	t := Table{Name: "minerals", Header: []string{"name", "symbol", "formula", "molar_mass_g_mol", "volume_cm3_mol", "a0_1_K", "bulk_modulus_GPa", "density_25degC_kg_m3",
		"temperature_degC", "pressure_GPa", "density_kg_m3", "expansivity_1_K", "bulk_modulus_at_GPa", "numbers", "source"}}
	for i := range list {
		m := &list[i]
		t.Rows = append(t.Rows, []string{m.Name, m.Symbol, m.Formula, cell(m.MolarMass * 1e3), cell(m.V0 * 1e6), cell(m.A0), cell(m.K0 / 1e9), cell(m.Density(roomKelvin, 0)),
			cell(T - zero), cell(P / 1e9), cell(m.Density(T, P)), cell(m.Expansivity(T, P)), cell(m.BulkModulus(T, P) / 1e9), mineralStatus(m), m.Source})
	}
	return t
}
