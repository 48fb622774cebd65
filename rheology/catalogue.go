package rheology

import (
	"bytes"
	_ "embed" // laws.csv
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"sync"
)

//go:embed laws.csv
var lawsCSV []byte

var catalogue = sync.OnceValue(func() []Law {
	laws, err := ReadLaws(bytes.NewReader(lawsCSV))
	if err != nil {
		panic("the embedded catalogue: " + err.Error()) // a test reads it
	}
	return laws
})

// Laws returns the catalogue's laws, sorted by name; the slice is the caller's.
//
// It holds every complete law of our collection but one: single crystals of
// orthopyroxene in shear are not for bulk rock. The two laws of Lusk 2021 were fitted
// to several geometries and to natural rocks; they are taken as axial compression,
// which Cautions repeats.
func Laws() []Law { return slices.Clone(catalogue()) }

// field reads one column of the catalogue into a law. The order is that of laws.csv.
type field struct {
	name     string
	required bool
	set      func(l *Law, s string) error
}

var fields = []field{
	{"name", true, text(func(l *Law) *string { return &l.Name })},
	{"material", false, text(func(l *Law) *string { return &l.Material })},
	{"water_state", false, text(func(l *Law) *string { return &l.WaterState })},
	{"mechanism", false, text(func(l *Law) *string { return &l.Mechanism })},
	{"test", true, func(l *Law, s string) (err error) { l.Test, err = ParseTest(s); return }},
	{"prefactor_MPa_um", true, number(func(l *Law) *float64 { return &l.LaboratoryA }, 1, 1)},
	{"stress_exponent", true, number(func(l *Law) *float64 { return &l.N }, 1, 1)},
	{"grain_exponent", false, number(func(l *Law) *float64 { return &l.M }, 1, 1)},
	{"water_exponent", false, number(func(l *Law) *float64 { return &l.R }, 1, 1)},
	{"water_measure", false, func(l *Law, s string) (err error) { l.Water, err = parseMeasure(s); return }},
	{"activation_energy_kJ_mol", true, number(func(l *Law) *float64 { return &l.E }, 1e3, 1)},
	{"activation_volume_cm3_mol", false, number(func(l *Law) *float64 { return &l.V }, 1, 1e6)},
	{"peierls_stress_MPa", false, number(func(l *Law) *float64 { return &l.Peierls.Stress }, 1e6, 1)},
	{"peierls_p", false, number(func(l *Law) *float64 { return &l.Peierls.P }, 1, 1)},
	{"peierls_q", false, number(func(l *Law) *float64 { return &l.Peierls.Q }, 1, 1)},
	{"peierls_pressure_factor_per_GPa", false, number(func(l *Law) *float64 { return &l.Peierls.PerPa }, 1, 1e9)},
	{"least_stress_MPa", false, number(func(l *Law) *float64 { return &l.Peierls.Least }, 1e6, 1)},
	{"melt_exponent", false, text(func(l *Law) *string { return &l.Melt })},
	{"uncertainty", false, text(func(l *Law) *string { return &l.Uncertainty })},
	{"error_log10_prefactor", false, number(func(l *Law) *float64 { return &l.Errors.LnA }, math.Ln10, 1)},
	{"error_prefactor_MPa_um", false, nil}, // readLaw
	{"error_stress_exponent", false, number(func(l *Law) *float64 { return &l.Errors.N }, 1, 1)},
	{"error_water_exponent", false, number(func(l *Law) *float64 { return &l.Errors.R }, 1, 1)},
	{"error_activation_energy_kJ_mol", false, number(func(l *Law) *float64 { return &l.Errors.E }, 1e3, 1)},
	{"error_activation_volume_cm3_mol", false, number(func(l *Law) *float64 { return &l.Errors.V }, 1, 1e6)},
	{"tested_temperature_degC", false, interval(func(l *Law) *Interval { return &l.Tested.T }, 1, 273.15, false)},
	{"tested_pressure_MPa", false, interval(func(l *Law) *Interval { return &l.Tested.P }, 1e6, 0, true)},
	{"tested_stress_MPa", false, interval(func(l *Law) *Interval { return &l.Tested.Stress }, 1e6, 0, false)},
	{"status_tested", false, text(func(l *Law) *string { return &l.Tested.Status })},
	{"status_test", false, text(func(l *Law) *string { return &l.Status.Test })},
	{"status_prefactor", false, text(func(l *Law) *string { return &l.Status.A })},
	{"status_stress_exponent", false, text(func(l *Law) *string { return &l.Status.N })},
	{"status_grain_exponent", false, text(func(l *Law) *string { return &l.Status.M })},
	{"status_water_exponent", false, text(func(l *Law) *string { return &l.Status.R })},
	{"status_activation_energy", false, text(func(l *Law) *string { return &l.Status.E })},
	{"status_activation_volume", false, text(func(l *Law) *string { return &l.Status.V })},
	{"status_peierls", false, text(func(l *Law) *string { return &l.Status.Peierls })},
	{"status_errors", false, func(l *Law, s string) error { l.Status.Errors = s; _, err := errorStatus(s); return err }},
	{"confidence", false, text(func(l *Law) *string { return &l.Confidence })},
	{"source", false, text(func(l *Law) *string { return &l.Source })},
	{"url", false, text(func(l *Law) *string { return &l.URL })},
	{"notes", false, text(func(l *Law) *string { return &l.Notes })},
}

func text(at func(*Law) *string) func(*Law, string) error {
	return func(l *Law, s string) error { *at(l) = s; return nil }
}

// number reads a number in a unit of so many to one of SI: a division by a power of
// ten is exact to the last digit, a product with 1e-6 is not.
func number(at func(*Law) *float64, times, over float64) func(*Law, string) error {
	return func(l *Law, s string) error {
		if s == "" {
			return nil
		}
		// A paper that gives log10 A is quoted as such: 10^12.7.
		s, isPower := strings.CutPrefix(s, "10^")
		x, err := strconv.ParseFloat(s, 64)
		if err != nil || math.IsNaN(x) || math.IsInf(x, 0) {
			return fmt.Errorf("%q is not a number", s)
		}
		if isPower {
			x = math.Pow(10, x)
		}
		*at(l) = x * times / over
		return nil
	}
}

func parseMeasure(s string) (WaterMeasure, error) {
	for _, w := range []WaterMeasure{NoWater, WaterFugacity, WaterContent} {
		if s == w.String() {
			return w, nil
		}
	}
	if s == "" {
		return NoWater, nil
	}
	return 0, fmt.Errorf("water measure %q; known are none, fugacity, content", s)
}

// ReadLaws reads a catalogue: CSV with a header of the column names of laws.csv, in
// any order; name, test, prefactor_MPa_um, stress_exponent and
// activation_energy_kJ_mol are required. Units are the laboratory's: stress and
// fugacity in MPa, grain size in µm, a content in H/10⁶ Si, kJ/mol, cm³/mol. A
// prefactor may be written 10^12.7. The laws come back in invariant SI form, sorted
// by name without regard to case; names must be unique in that sense.
//
// A law of low-temperature plasticity has peierls_stress_MPa, peierls_p and peierls_q
// (Peierls), its stresses as the test measures them. An error of the prefactor is given
// in its own unit or of its log10, not both. A tested_… range is "1027 to 1427", "300",
// ">120" or "<560"; a pressure of 0 is that of the room. status_errors is a word for all
// errors or a list, "A memory, n seen"; without it an error has its parameter's status.
// Columns that are not there are empty.
//
// An error carries the line: "laws, line 7: stress_exponent: …". An activation volume
// left empty or marked "not determined" is 0 with VolumeDetermined false.
func ReadLaws(r io.Reader) ([]Law, error) {
	in := csv.NewReader(r)
	in.TrimLeadingSpace = true
	in.Comment = '#'
	header, err := in.Read()
	if err != nil {
		return nil, fmt.Errorf("laws: no header line: %w", err)
	}
	cols, err := readHeader(header)
	if err != nil {
		return nil, err
	}
	var laws []Law
	lines := map[string]int{}
	for {
		rec, err := in.Read()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			return nil, fmt.Errorf("laws: %w", err) // names the line itself
		}
		line, _ := in.FieldPos(0)
		l, err := readLaw(cols, rec)
		if err != nil {
			return nil, fmt.Errorf("laws, line %d: %w", line, err)
		}
		key := fold(l.Name)
		if other, ok := lines[key]; ok {
			return nil, fmt.Errorf("laws, line %d: %q stands in line %d already", line, l.Name, other)
		}
		lines[key] = line
		laws = append(laws, l)
	}
	if len(laws) == 0 {
		return nil, fmt.Errorf("laws: no law below the header")
	}
	slices.SortFunc(laws, func(a, b Law) int { return strings.Compare(fold(a.Name), fold(b.Name)) })
	return laws, nil
}

func readHeader(header []string) ([]field, error) {
	cols := make([]field, len(header))
	seen := map[string]bool{}
	for i, h := range header {
		h = strings.TrimPrefix(strings.TrimSpace(h), "\ufeff") // some spreadsheets write a mark
		j := slices.IndexFunc(fields, func(f field) bool { return f.name == h })
		if j < 0 {
			return nil, fmt.Errorf("laws, line 1: unknown column %q", h)
		}
		if seen[h] {
			return nil, fmt.Errorf("laws, line 1: column %q stands twice", h)
		}
		seen[h] = true
		cols[i] = fields[j]
	}
	for _, f := range fields {
		if f.required && !seen[f.name] {
			return nil, fmt.Errorf("laws, line 1: no column %q", f.name)
		}
	}
	return cols, nil
}

func readLaw(cols []field, rec []string) (Law, error) {
	var l, absolute Law
	for i, s := range rec {
		s = strings.TrimSpace(s)
		if s == "" && cols[i].required {
			return l, fmt.Errorf("%s is empty", cols[i].name)
		}
		set, to := cols[i].set, &l
		if set == nil { // an error of A itself, whatever the order of the columns
			set, to = number(func(l *Law) *float64 { return &l.Errors.LnA }, 1, 1), &absolute
		}
		if err := set(to, s); err != nil {
			return l, fmt.Errorf("%s: %w", cols[i].name, err)
		}
		if cols[i].name == "activation_volume_cm3_mol" {
			l.VolumeDetermined = s != ""
		}
	}
	if strings.HasPrefix(l.Status.V, "not determined") {
		l.VolumeDetermined = false
	}
	if e := absolute.Errors.LnA; e != 0 {
		if l.Errors.LnA != 0 {
			return l, fmt.Errorf("rheology: %s: an error of the prefactor and one of its logarithm; give one", l.Name)
		}
		l.Errors.LnA = e / l.LaboratoryA
	}
	l.Peierls.Stress /= l.Test.Stress()
	l.Peierls.Least /= l.Test.Stress()
	l.A = InvariantPrefactor(l.LaboratoryA, &l)
	return l, l.Validate()
}

// InvariantPrefactor returns A between second invariants in SI from a laboratory's
// prefactor in MPa^-n s⁻¹ µm^m, with MPa^-r for a fugacity, and the exponents, water
// measure and test geometry of l:
//
//	A = F(n) a 10^(-6 (n + m + r)), r only for a fugacity
//
// It is 0 where the number underflows, which Validate refuses.
func InvariantPrefactor(a float64, l *Law) float64 {
	e := l.N + l.M
	if l.Water == WaterFugacity {
		e += l.R
	}
	return l.Test.Factor(l.N) * a * math.Pow(10, -6*e)
}
