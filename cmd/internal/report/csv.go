package report

import (
	"bytes"
	"encoding/csv"
	"math"
	"strconv"

	"keelfall/solver/growth"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

// Table is a CSV file: units stand in the column names.
type Table struct {
	Name   string // of the file, without .csv
	Header []string
	Rows   [][]string
}

// Encode returns the table as CSV.
func (t *Table) Encode() []byte {
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	w.Write(t.Header)
	w.WriteAll(t.Rows) // a bytes.Buffer does not fail
	return b.Bytes()
}

// cell formats a number for a spreadsheet, empty where there is no value.
func cell(x float64) string {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return ""
	}
	return strconv.FormatFloat(x, 'g', 10, 64)
}

// ColumnTable is the state against depth; stress is the second invariant τ_II, the
// differential stress 2 τ_II.
func ColumnTable(s *state.State) Table {
	t := Table{Name: "column", Header: []string{"depth_km", "layer", "temperature_degC", "pressure_GPa", "density_kg_m3",
		"log10_viscosity_Pa_s", "stress_exponent", "stress_MPa", "viscosity_limit", "differential_stress_MPa"}}
	for i, l := range s.Layers {
		for _, p := range l.Points {
			temp, limit := math.NaN(), ""
			if s.HasTemperature {
				temp = p.T - zero
			}
			switch {
			case p.Yielding && !p.Floored:
				limit = "friction"
			case p.Capped:
				limit = "highest"
			case p.Floored:
				limit = "lowest"
			}
			t.Rows = append(t.Rows, []string{cell(p.Depth / km), s.Column.Layers[i].Name, cell(temp), cell(p.P / 1e9), cell(p.Density),
				cell(math.Log10(p.Viscosity)), cell(p.Exponent), cell(p.Stress / 1e6), limit, cell(2 * p.Stress / 1e6)})
		}
	}
	return t
}

// SpectrumTable is growth against wavelength.
func SpectrumTable(rates []growth.Rate) Table {
	t := Table{Name: "spectrum", Header: []string{"wavelength_km", "growth_rate_1_Myr", "imaginary_1_Myr", "efold_time_Myr", "relative_error"}}
	for _, r := range rates {
		t.Rows = append(t.Rows, []string{cell(r.Wavelength / km), cell(r.Growth * Myr), cell(r.Imaginary * Myr), cell(efold(r.Growth) / Myr), cell(r.RelativeError)})
	}
	return t
}

// ControlsTable is who resists, and the exact derivatives of the fastest mode: those
// with respect to density and thickness hold at fixed viscosity, temperature,
// pressure and density jumps.
func ControlsTable(s *state.State, m *growth.Mode) Table {
	t := Table{Name: "controls", Header: []string{"layer", "dissipation_share", "dlnq_dlneta", "dq_drho_1_Myr_per_kg_m3", "dq_dthickness_1_Myr_per_km"}}
	if m == nil {
		return t
	}
	get := func(x []float64, i int) float64 {
		if i < len(x) {
			return x[i]
		}
		return math.NaN()
	}
	for i := 0; i <= len(s.Column.Layers); i++ {
		name := "base"
		if i < len(s.Column.Layers) {
			name = s.Column.Layers[i].Name
		}
		t.Rows = append(t.Rows, []string{name, cell(get(m.DissipationShare, i)), cell(get(m.DlnqDlnEta, i)),
			cell(get(m.DqDrho, i) * Myr), cell(get(m.DqDh, i) * Myr * km)})
	}
	return t
}

// ModeTable is the fastest mode's shape, scaled to 1 m of its largest displacement.
func ModeTable(s *state.State, m *growth.Mode) Table {
	t := Table{Name: "mode", Header: []string{"depth_km", "layer", "vertical_velocity_1_Myr", "horizontal_velocity_1_Myr", "shear_stress_Pa_per_m", "normal_stress_Pa_per_m"}}
	if m == nil {
		return t
	}
	for i := range m.Depth {
		t.Rows = append(t.Rows, []string{cell(m.Depth[i] / km), s.Column.Layers[m.Layer[i]].Name,
			cell(m.W[i] * Myr), cell(m.U[i] * Myr), cell(m.Shear[i]), cell(m.Normal[i])})
	}
	return t
}

// ExcisionTable is what the zones did against time.
func ExcisionTable(r *race.Result) Table {
	t := Table{Name: "excision", Header: []string{"time_Myr", "root_thickness_km", "arc_mean_root_thickness_km", "slip_km", "heave_km", "throw_km", "root_mass_share_removed"}}
	h := r.Excision.History
	for i := range h.Time {
		mean := math.NaN()
		if h.ArcMean != nil {
			mean = h.ArcMean[i]
		}
		t.Rows = append(t.Rows, []string{cell(h.Time[i] / Myr), cell(h.RootThickness[i] / km), cell(mean / km), cell(h.Slip[i] / km), cell(h.Heave[i] / km), cell(h.Throw[i] / km), cell(h.RootMassShare[i])})
	}
	return t
}

// ReversalTable is what would change the verdict, in units of a spreadsheet.
func ReversalTable(r *race.Result) Table {
	t := Table{Name: "reversal", Header: []string{"quantity", "key", "unit", "now", "flips_at", "verdict_becomes", "searched", "distance", "is_default",
		"contrast_now_kg_m3", "contrast_flips_at_kg_m3"}}
	for _, f := range r.Verdict.Flips {
		now, unit := trade(f.From, f.Unit)
		to, d, c0, c1 := math.NaN(), math.NaN(), math.NaN(), math.NaN()
		if f.HasContrast {
			c0 = f.ContrastFrom
		}
		if f.Found {
			to, _ = trade(f.To, f.Unit)
			d = f.Distance
			if f.HasContrast {
				c1 = f.ContrastTo
			}
		}
		t.Rows = append(t.Rows, []string{f.Label, f.Key, unit, cell(now), cell(to), f.Outcome, f.Searched, cell(d), strconv.FormatBool(f.Default), cell(c0), cell(c1)})
	}
	return t
}

// VerdictTable is the verdict, one quantity a row.
func VerdictTable(r *race.Result) Table {
	v := &r.Verdict
	t := Table{Name: "verdict", Header: []string{"quantity", "value", "unit"}}
	row := func(q, val, unit string) { t.Rows = append(t.Rows, []string{q, val, unit}) }
	row("verdict", v.Outcome, "")
	row("verdict time", cell(v.Time/Myr), "Myr")
	row("margin", cell(v.Margin/Myr), "Myr")
	row("margin to", v.MarginTo, "")
	row("margin to the window's end", cell(v.WindowMargin/Myr), "Myr")
	row("margin in log10 root viscosity", cell(v.MarginLog10Viscosity), "")
	row("fastest wavelength", cell(r.Spectrum.Fastest.Wavelength/km), "km")
	row("fastest growth rate", cell(r.Spectrum.Fastest.Growth*Myr), "1/Myr")
	if r.Drip != nil {
		row("drip time", cell(r.Drip.Time/Myr), "Myr")
		wavelength := r.Drip.Wavelength / km
		if math.IsInf(r.Drip.Time, 1) {
			wavelength = math.NaN()
		}
		row("drip wavelength", cell(wavelength), "km")
		row("excision time", cell(r.Excision.LocalBeyond/Myr), "Myr")
		row("share taken by the drip", cell(v.Shares.Drip), "")
		row("share taken by excision", cell(v.Shares.Excision), "")
	}
	return t
}

// Tables returns every table of a run.
func Tables(r *race.Result) []Table {
	t := []Table{ColumnTable(r.State), WeightTable(r.State), IsostasyTable(r.Problem, r.State), SpectrumTable(r.Spectrum.Rates), ControlsTable(r.State, r.Spectrum.Mode), ModeTable(r.State, r.Spectrum.Mode)}
	if r.Drip != nil {
		t = append(t, DripTable(r))
		t = append(t, DripTables(r)...)
		t = append(t, ExcisionTable(r))
		t = append(t, ExcisionTables(r)...)
		t = append(t, ReversalTable(r))
	}
	return append(t, VerdictTable(r))
}
