package state_test

import (
	"errors"
	"slices"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/state"
)

func curveTable(t testing.TB, rows ...column.CurvePoint) *column.Curve {
	t.Helper()
	tab, err := column.NewCurveTable("wet.csv", rows)
	if err != nil {
		t.Fatal(err)
	}
	return &column.Curve{Table: tab}
}

// TestTabulatedSolidus: a table of the line is the line, kinks included. With a corner the
// state has a kink at its pressure, and where the solidus then crosses the geotherm: rock
// of 3000 kg/m³, 300 K + 15 K/km (derived).
func TestTabulatedSolidus(t *testing.T) {
	line := meltingColumn(t, 30)
	table := meltingColumn(t, 30)
	var rows []column.CurvePoint
	for i := range 21 {
		P := 0.1e9 * float64(i)
		rows = append(rows, column.CurvePoint{P: P, T: line.Layers[0].Melt.Solidus.At(P)})
	}
	table.Layers[0].Melt.Solidus = curveTable(t, rows...)
	a, b := build(t, line, 1e-15), build(t, table, 1e-15)
	if k, want := b.Kinks(0), a.Kinks(0); len(k) != 1 || len(want) != 1 || !close(k[0], want[0], 1e-12) {
		t.Errorf("kinks %v, of the line %v", k, want)
	}
	for i, p := range a.Layers[0].Points {
		if q := b.Layers[0].Points[i]; !close(q.Viscosity, p.Viscosity, 1e-12*30) || q.T != p.T || q.P != p.P { // exp(30 φ)
			t.Fatalf("%+v, of the line %+v", q, p)
		}
	}
	// 900 K to 1 GPa, then 200 K/GPa: crossed at 40 km (1.1772 GPa) where it has 935.44 K, and
	// the geotherm 900 K: not yet. Both meet where 300 + 0.015 z = 900 + 2e-7 (ρ g z − 1e9).
	table.Layers[0].Melt.Solidus = curveTable(t, column.CurvePoint{P: 0, T: 900}, column.CurvePoint{P: 1e9, T: 900}, column.CurvePoint{P: 2e9, T: 1100})
	const corner = 1e9 / (3000 * 9.81)
	crossing := 400 / (0.015 - 2e-7*3000*9.81)
	if k := build(t, table, 1e-15).Kinks(0); len(k) != 2 || !close(k[0], corner, 1e-12) || !close(k[1], crossing, 1e-12) {
		t.Errorf("kinks %v, want %g and %g", k, corner, crossing)
	}
	if !slices.IsSorted([]float64{corner, crossing, 60e3}) {
		t.Fatal("the case is not what it says")
	}
}

// TestSolidusTooShort: a layer that leaves the table is an error with layer, depth,
// pressure and table; so is one whose top lies above it, however cold.
func TestSolidusTooShort(t *testing.T) {
	for want, rows := range map[string][]column.CurvePoint{
		"state: root at 51000 m: melt: the solidus at P = 1.50093 GPa lies outside the table wet.csv, which covers 0 to 1.5 GPa": {{P: 0, T: 900}, {P: 1.5e9, T: 1000}},
		"state: root at 0 m: melt: the solidus at P = 0 GPa lies outside the table wet.csv, which covers 0.5 to 2 GPa":           {{P: 0.5e9, T: 900}, {P: 2e9, T: 1000}},
	} {
		c := meltingColumn(t, 30)
		c.Layers[0].Melt.Solidus = curveTable(t, rows...)
		_, err := state.New(c, 1e-15)
		var outside *column.OutsideError
		if err == nil || !strings.HasPrefix(err.Error(), want) || !errors.As(err, &outside) {
			t.Errorf("%v, want %q", err, want)
		}
	}
}
