package report

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"keelfall/rheology"
	"keelfall/solver/checks"
	"keelfall/solver/growth"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

func titled(p *race.Problem) *page {
	pg := &page{}
	if p.Title != "" {
		for _, l := range wrap(p.Title, pageWidth) {
			pg.b.WriteString(l + "\n")
		}
	}
	return pg
}

// ColumnPage is the text of `keelfall column`.
func ColumnPage(p *race.Problem, s *state.State) string {
	pg := titled(p)
	columnText(pg, s)
	if race.RateDependent(s) {
		pg.say("Viscosity at %.1e 1/s%s.", p.Strain.ReferenceRate, star(p, "strain.reference-rate"))
	}
	if s.HasTemperature && len(p.Column.Geotherm) == 0 {
		pg.say("Largest relative residual of the heat balance %.0e.", s.HeatResidual)
	}
	return pg.b.String()
}

// SpectrumPage is the text of `keelfall spectrum`; exact, where not nil, are the
// wavelengths asked for.
func SpectrumPage(p *race.Problem, s *state.State, sp *growth.Spectrum, exact []growth.Rate) string {
	pg := titled(p)
	growthText(pg, s, sp)
	rates := exact
	if rates == nil { // a readable choice: every tenth and the peaks
		for i, r := range sp.Rates {
			if i%8 == 0 || r.Wavelength == sp.Fastest.Wavelength || i == len(sp.Rates)-1 {
				rates = append(rates, r)
			}
		}
	}
	pg.section("RATES")
	pg.line("%14s  %18s  %16s  %14s", "wavelength km", "growth rate 1/Myr", "e-folding Myr", "relative error")
	for _, r := range rates {
		pg.line("%14s  %18s  %16s  %14.0e", sig(r.Wavelength/km, 5), sig(r.Growth*Myr, 6), sig(efold(r.Growth)/Myr, 4), r.RelativeError)
	}
	return pg.b.String()
}

// DripPage is the text of `keelfall drip`.
func DripPage(p *race.Problem, r *race.Result) string {
	pg := titled(p)
	dripText(pg, r)
	return pg.b.String()
}

// ExcisionPage is the text of `keelfall excise`.
func ExcisionPage(p *race.Problem, r *race.Result) string {
	pg := titled(p)
	excisionText(pg, r)
	return pg.b.String()
}

// CheckPage is the text of `keelfall check`.
func CheckPage(name string, p *race.Problem) string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s: in order. %d layers, %s km deep, %d shear zones.\n", name, len(p.Column.Layers), sig(p.Column.Depth()/km, 4), len(p.Zones))
	if len(p.Defaults) > 0 {
		b.WriteString("Defaults taken (* bears on the verdict, and nobody has measured it):\n")
		for _, d := range p.Defaults {
			s := " "
			if d.Starred {
				s = "*"
			}
			fmt.Fprintf(&b, "  %s %s: %s\n", s, d.Key, d.Value)
		}
	}
	return b.String()
}

// CheckJSON is what `keelfall check --format json` prints.
type CheckJSON struct {
	File     string        `json:"file"`
	Input    string        `json:"input_sha256"`
	Layers   int           `json:"layers"`
	Depth    number        `json:"depth_m"`
	Zones    int           `json:"zones"`
	Defaults []defaultJSON `json:"defaults"`
	Warnings []string      `json:"warnings"`
}

type defaultJSON struct {
	Key     string `json:"key"`
	Value   string `json:"value"`
	Starred bool   `json:"starred"`
}

// Check returns what was read.
func Check(name, sha string, p *race.Problem) CheckJSON {
	j := CheckJSON{name, sha, len(p.Column.Layers), number(p.Column.Depth()), len(p.Zones), []defaultJSON{}, list(nil)}
	for _, d := range p.Defaults {
		j.Defaults = append(j.Defaults, defaultJSON{d.Key, d.Value, d.Starred})
	}
	return j
}

// DefaultsTable lists the defaults taken.
func DefaultsTable(p *race.Problem) Table {
	t := Table{Name: "defaults", Header: []string{"key", "value", "bears_on_verdict"}}
	for _, d := range p.Defaults {
		t.Rows = append(t.Rows, []string{d.Key, d.Value, strconv.FormatBool(d.Starred)})
	}
	return t
}

// VerifyPage is the text of `keelfall verify`.
func VerifyPage(all []checks.Outcome) string {
	var b strings.Builder
	passed := 0
	for _, o := range all {
		word := "FAILS"
		if o.Pass {
			word = "ok"
			passed++
		}
		fmt.Fprintf(&b, "%-6s %s\n", word, o.Name)
		if o.Err != nil {
			fmt.Fprintf(&b, "       could not be computed: %v\n", o.Err)
			continue
		}
		fmt.Fprintf(&b, "       %.10g %s; known %.10g; apart by %.1e of %.0e allowed. %s (%s)\n", o.Value, o.Unit, o.Want, o.Difference, o.Tolerance, o.Source, o.Status)
	}
	fmt.Fprintf(&b, "%d of %d checks pass.\n", passed, len(all))
	return b.String()
}

// VerifyJSON is one check of `keelfall verify --format json`.
type VerifyJSON struct {
	Name       string `json:"name"`
	Value      number `json:"value"`
	Published  number `json:"published"`
	Difference number `json:"relative_difference"`
	Tolerance  number `json:"tolerance"`
	Unit       string `json:"unit"`
	Source     string `json:"source"`
	Status     string `json:"status"`
	Pass       bool   `json:"pass"`
}

// Verify returns the outcomes of the checks.
func Verify(all []checks.Outcome) []VerifyJSON {
	out := []VerifyJSON{}
	for _, o := range all {
		v, d := number(o.Value), number(o.Difference)
		if o.Err != nil {
			v, d = none, none
		}
		out = append(out, VerifyJSON{o.Name, v, number(o.Want), d, number(o.Tolerance), o.Unit, o.Source, string(o.Status), o.Pass})
	}
	return out
}

// VerifyTable is the same as a table.
func VerifyTable(all []checks.Outcome) Table {
	t := Table{Name: "verify", Header: []string{"name", "value", "published", "unit", "relative_difference", "tolerance", "source", "status", "pass"}}
	for _, o := range all {
		v, d := o.Value, o.Difference
		if o.Err != nil {
			v, d = math.NaN(), math.NaN()
		}
		t.Rows = append(t.Rows, []string{o.Name, cell(v), cell(o.Want), o.Unit, cell(d), cell(o.Tolerance), o.Source, string(o.Status), strconv.FormatBool(o.Pass)})
	}
	return t
}

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
	row("A as published", fmt.Sprintf("%.4g MPa^-n s^-1 um^m (%s)", l.LaboratoryA, l.Status.A))
	row("A, invariant SI", fmt.Sprintf("%.5g", l.A))
	row("n", fmt.Sprintf("%g (%s)", l.N, l.Status.N))
	row("grain exponent m", fmt.Sprintf("%g (%s)", l.M, l.Status.M))
	row("water exponent r", fmt.Sprintf("%g (%s), water as %s", l.R, l.Status.R, l.Water))
	row("E", fmt.Sprintf("%g kJ/mol (%s)", l.E/1e3, l.Status.E))
	row("V", fmt.Sprintf("%g cm3/mol (%s)", l.V*1e6, l.Status.V))
	row("published errors", l.Uncertainty)
	row("confidence", l.Confidence)
	row("source", l.Source)
	row("page", l.URL)
	row("notes", l.Notes)
	return b.String()
}

// LawJSON is one creep law.
type LawJSON struct {
	Name       string          `json:"name"`
	Material   string          `json:"material"`
	Mechanism  string          `json:"mechanism"`
	A          number          `json:"prefactor_invariant_SI"`
	N          number          `json:"stress_exponent"`
	M          number          `json:"grain_exponent"`
	R          number          `json:"water_exponent"`
	Water      string          `json:"water"`
	E          number          `json:"activation_energy_J_mol"`
	V          number          `json:"activation_volume_m3_mol"`
	Source     string          `json:"source"`
	Status     rheology.Status `json:"status"`
	Confidence string          `json:"confidence"`
	Warnings   []string        `json:"warnings"`
}

// Laws returns creep laws for JSON.
func Laws(laws []rheology.Law) []LawJSON {
	out := []LawJSON{}
	for _, l := range laws {
		out = append(out, LawJSON{l.Name, l.Material, l.Mechanism, number(l.A), number(l.N), number(l.M), number(l.R), l.Water.String(),
			number(l.E), number(l.V), l.Source, l.Status, l.Confidence, list(nil)})
	}
	return out
}

// LawsTable returns creep laws as a table.
func LawsTable(laws []rheology.Law) Table {
	t := Table{Name: "laws", Header: []string{"name", "material", "mechanism", "prefactor_invariant_SI", "stress_exponent", "grain_exponent", "water_exponent", "water", "activation_energy_kJ_mol", "activation_volume_cm3_mol", "source", "numbers"}}
	for _, l := range laws {
		t.Rows = append(t.Rows, []string{l.Name, l.Material, l.Mechanism, cell(l.A), cell(l.N), cell(l.M), cell(l.R), l.Water.String(), cell(l.E / 1e3), cell(l.V * 1e6), l.Source, lawStatus(&l)})
	}
	return t
}
