package column

import (
	"bytes"
	_ "embed" // minerals.csv
	"encoding/csv"
	"fmt"
	"io"
	"slices"
	"strconv"
	"strings"
	"sync"
)

//go:embed minerals.csv
var mineralsCSV []byte

var catalogue = sync.OnceValue(func() []Mineral {
	list, err := readMinerals(bytes.NewReader(mineralsCSV))
	if err != nil {
		panic("the embedded minerals: " + err.Error()) // a test reads them
	}
	return list
})

// Mineral is an end-member with what its equation of state needs, in SI. See Volume
// for the equations.
//
// The numbers are those of Holland & Powell 1998 (J. metamorphic Geol. 16, 309), as
// recalled: MineralStatus says so number by number. Quartz is the exception; its Notes
// say why. SeenVolume and SeenBulkModulus are measured values that were read on a page;
// nothing is computed from them, they stand there for comparison.
type Mineral struct {
	Name    string // full name
	Symbol  string // approved symbol (Warr 2021, Mineral. Mag. 85, 291; from memory)
	Formula string

	MolarMass             float64 // kg/mol
	V0                    float64 // m³/mol at 298 K and 1 bar
	A0                    float64 // 1/K; not the expansivity at 298 K, which is 0.42 A0
	K0                    float64 // isothermal bulk modulus at 298 K, Pa
	BulkModulusDerivative float64 // ∂K/∂P
	BulkModulusSlope      float64 // (1/K0) ∂K/∂T, 1/K
	BirchMurnaghan        bool    // third-order Birch–Murnaghan in P in place of Murnaghan

	Status MineralStatus

	SeenVolume       float64 // m³/mol; 0 where none was found
	SeenVolumeSource string
	SeenBulkModulus  string // in GPa, as written, conflicting ones beside each other
	Source, Notes    string
}

// MineralStatus says how each number of a mineral is known: "seen" on a page,
// "memory" with how sure the recollection is, "derived", or a "choice" of ours.
type MineralStatus struct {
	MolarMass, V0, A0, K0, BulkModulusDerivative, BulkModulusSlope string
}

// FromMemory says whether any number is recalled and not confirmed.
func (s MineralStatus) FromMemory() bool {
	for _, w := range []string{s.MolarMass, s.V0, s.A0, s.K0, s.BulkModulusDerivative, s.BulkModulusSlope} {
		if strings.HasPrefix(w, "memory") {
			return true
		}
	}
	return false
}

// Minerals returns the minerals known here, sorted by name; the slice is the caller's.
func Minerals() []Mineral { return slices.Clone(catalogue()) }

// FindMineral returns the mineral of a full name or approved symbol, without regard to
// case. The error for an unknown one offers the nearest names, or all.
func FindMineral(name string) (Mineral, error) {
	want := strings.TrimSpace(name)
	var names, near []string
	for _, m := range catalogue() {
		if strings.EqualFold(want, m.Name) || strings.EqualFold(want, m.Symbol) {
			return m, nil
		}
		names = append(names, m.Name)
		if len(want) < 64 && likeness(strings.ToLower(want), m.Name) >= 0.6 {
			near = append(near, m.Name)
		}
	}
	slices.SortStableFunc(near, func(a, b string) int {
		la, lb := likeness(strings.ToLower(want), a), likeness(strings.ToLower(want), b)
		switch {
		case la > lb:
			return -1
		case la < lb:
			return 1
		}
		return 0
	})
	if len(near) > 0 {
		return Mineral{}, fmt.Errorf("no mineral is called %q; did you mean %s?", name, strings.Join(near[:min(len(near), 3)], " or "))
	}
	return Mineral{}, fmt.Errorf("no mineral is called %q; known are %s", name, strings.Join(names, ", "))
}

// likeness is the share of pairs of neighbouring letters that two words have in
// common (Dice 1945, Ecology 26, 297): 1 for the same word, 0 for nothing in common.
func likeness(a, b string) float64 {
	if len(a) < 2 || len(b) < 2 {
		return 0
	}
	pairs := map[string]int{}
	for i := range len(a) - 1 {
		pairs[a[i:i+2]]++
	}
	common := 0
	for i := range len(b) - 1 {
		if pairs[b[i:i+2]] > 0 {
			pairs[b[i:i+2]]--
			common++
		}
	}
	return 2 * float64(common) / float64(len(a)+len(b)-2)
}

// mineralFields read minerals.csv, whose header names them in this order.
var mineralFields = []struct {
	name string
	set  func(m *Mineral, s string) error
}{
	{"name", word(func(m *Mineral) *string { return &m.Name })},
	{"symbol", word(func(m *Mineral) *string { return &m.Symbol })},
	{"formula", word(func(m *Mineral) *string { return &m.Formula })},
	{"molar_mass_g_mol", number(func(m *Mineral) *float64 { return &m.MolarMass }, 1, 1e3)},
	{"volume_cm3_mol", number(func(m *Mineral) *float64 { return &m.V0 }, 1, 1e6)},
	{"a0_per_K", number(func(m *Mineral) *float64 { return &m.A0 }, 1, 1)},
	{"bulk_modulus_GPa", number(func(m *Mineral) *float64 { return &m.K0 }, 1e9, 1)},
	{"bulk_modulus_derivative", number(func(m *Mineral) *float64 { return &m.BulkModulusDerivative }, 1, 1)},
	{"bulk_modulus_slope_per_K", number(func(m *Mineral) *float64 { return &m.BulkModulusSlope }, 1, 1)},
	{"compression", func(m *Mineral, s string) error {
		m.BirchMurnaghan = s == "birch-murnaghan"
		if !m.BirchMurnaghan && s != "murnaghan" {
			return fmt.Errorf("%q; known are murnaghan, birch-murnaghan", s)
		}
		return nil
	}},
	{"status_molar_mass", word(func(m *Mineral) *string { return &m.Status.MolarMass })},
	{"status_volume", word(func(m *Mineral) *string { return &m.Status.V0 })},
	{"status_a0", word(func(m *Mineral) *string { return &m.Status.A0 })},
	{"status_bulk_modulus", word(func(m *Mineral) *string { return &m.Status.K0 })},
	{"status_bulk_modulus_derivative", word(func(m *Mineral) *string { return &m.Status.BulkModulusDerivative })},
	{"status_bulk_modulus_slope", word(func(m *Mineral) *string { return &m.Status.BulkModulusSlope })},
	{"seen_volume_cm3_mol", func(m *Mineral, s string) error {
		if s == "" {
			return nil
		}
		return number(func(m *Mineral) *float64 { return &m.SeenVolume }, 1, 1e6)(m, s)
	}},
	{"seen_volume_source", word(func(m *Mineral) *string { return &m.SeenVolumeSource })},
	{"seen_bulk_modulus_GPa", word(func(m *Mineral) *string { return &m.SeenBulkModulus })},
	{"source", word(func(m *Mineral) *string { return &m.Source })},
	{"notes", word(func(m *Mineral) *string { return &m.Notes })},
}

func word(at func(*Mineral) *string) func(*Mineral, string) error {
	return func(m *Mineral, s string) error { *at(m) = s; return nil }
}

func number(at func(*Mineral) *float64, times, over float64) func(*Mineral, string) error {
	return func(m *Mineral, s string) error {
		x, err := strconv.ParseFloat(s, 64)
		if err != nil || x-x != 0 {
			return fmt.Errorf("%q is not a number", s)
		}
		*at(m) = x * times / over
		return nil
	}
}

func readMinerals(r io.Reader) ([]Mineral, error) {
	rows, err := csv.NewReader(r).ReadAll()
	if err != nil {
		return nil, fmt.Errorf("minerals: %w", err)
	}
	var list []Mineral
	for i, row := range rows {
		var m Mineral
		for j, f := range mineralFields {
			switch {
			case j >= len(row) || i == 0 && row[j] != f.name:
				return nil, fmt.Errorf("minerals, row %d: no column %s", i+1, f.name)
			case i == 0:
			default:
				if err := f.set(&m, row[j]); err != nil {
					return nil, fmt.Errorf("minerals, row %d: %s: %w", i+1, f.name, err)
				}
			}
		}
		if i == 0 {
			continue
		}
		if err := m.Validate(); err != nil {
			return nil, fmt.Errorf("minerals, row %d: %w", i+1, err)
		}
		list = append(list, m)
	}
	slices.SortFunc(list, func(a, b Mineral) int { return strings.Compare(a.Name, b.Name) })
	return list, nil
}
