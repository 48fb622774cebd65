package report

import (
	"fmt"

	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// BranchJSON is one mode followed across wavelengths.
type BranchJSON struct {
	Label      []string `json:"label"`
	Wavelength []number `json:"wavelength_m"`
	Growth     []number `json:"growth_rate_per_s"`
	Imaginary  []number `json:"imaginary_per_s"`
}

// Branches returns every branch of a spectrum.
func Branches(s *state.State, all []growth.Branch) []BranchJSON {
	out := []BranchJSON{}
	depths := depthsOf(s)
	for _, b := range all {
		var j BranchJSON
		for _, m := range b.Modes {
			j.Label = append(j.Label, m.Label(RootBase(s), depths))
			j.Wavelength = append(j.Wavelength, number(m.Wavelength))
			j.Growth = append(j.Growth, number(m.Growth))
			j.Imaginary = append(j.Imaginary, number(m.Imaginary))
		}
		out = append(out, j)
	}
	return out
}

// BranchesTable is every branch as one table.
func BranchesTable(s *state.State, all []growth.Branch) Table {
	t := Table{Name: "branches", Header: []string{"branch", "label", "wavelength_km", "growth_rate_1_Myr", "imaginary_1_Myr"}}
	depths := depthsOf(s)
	for i, b := range all {
		for _, m := range b.Modes {
			t.Rows = append(t.Rows, []string{fmt.Sprint(i + 1), m.Label(RootBase(s), depths), cell(m.Wavelength / km), cell(m.Growth * Myr), cell(m.Imaginary * Myr)})
		}
	}
	return t
}

// fastestOf returns a branch's fastest mode.
func fastestOf(b growth.Branch) *growth.Mode {
	best := b.Modes[0]
	for _, m := range b.Modes {
		if m.Growth > best.Growth {
			best = m
		}
	}
	return best
}

// BranchLabels says of each branch what moves where it is fastest.
func BranchLabels(s *state.State, all []growth.Branch) []string {
	depths := depthsOf(s)
	labels := make([]string, len(all))
	for i, b := range all {
		labels[i] = fastestOf(b).Label(RootBase(s), depths)
	}
	return labels
}

// BranchesText lists the branches: each stretch of wavelengths over which the same
// thing moves, and where it is fastest.
func BranchesText(s *state.State, all []growth.Branch) string {
	pg := &page{}
	depths := depthsOf(s)
	pg.section("BRANCHES")
	pg.line("%-3s %-30s %16s  %14s  %14s", "", "what moves", "from-to km", "fastest km", "e-folding Myr")
	for i, b := range all {
		for from := 0; from < len(b.Modes); {
			label := b.Modes[from].Label(RootBase(s), depths)
			to, best := from, b.Modes[from]
			for to+1 < len(b.Modes) && b.Modes[to+1].Label(RootBase(s), depths) == label {
				to++
				if b.Modes[to].Growth > best.Growth {
					best = b.Modes[to]
				}
			}
			number := ""
			if from == 0 {
				number = fmt.Sprint(i + 1)
			}
			pg.line("%-3s %-30s %16s  %14s  %14s", number, label,
				stretch(b.Modes[from].Wavelength, b.Modes[to].Wavelength), sig(best.Wavelength/km, 3), sig(efold(best.Growth)/Myr, 3))
			from = to + 1
		}
	}
	return pg.b.String()
}

// stretch says a range of wavelengths in km.
func stretch(a, b float64) string {
	if a == b {
		return sig(a/km, 3)
	}
	return sig(a/km, 3) + "-" + sig(b/km, 3)
}
