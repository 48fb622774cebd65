package report

import (
	"math"
	"strconv"

	"keelfall/solver/race"
)

// DripTable is the drip time against wavelength.
func DripTable(r *race.Result) Table {
	t := Table{Name: "drip", Header: []string{"wavelength_km", "drip_time_Myr", "drip_time_amplitude_x3_Myr", "drip_time_amplitude_third_Myr", "beyond_the_arc"}}
	c := r.Drip.Curve
	limit, _ := r.Problem.Limit()
	for i := range c.Wavelength {
		low, high := math.NaN(), math.NaN() // a drip that softens itself is followed from one amplitude
		if i < len(c.Low) {
			low, high = c.Low[i], c.High[i]
		}
		beyond := limit > 0 && c.Wavelength[i] > limit*(1+1e-9)
		t.Rows = append(t.Rows, []string{cell(c.Wavelength[i] / km), cell(c.Time[i] / Myr), cell(low / Myr), cell(high / Myr), strconv.FormatBool(beyond)})
	}
	return t
}

// DripTables are the other tables of a drip.
func DripTables(r *race.Result) []Table {
	return []Table{dripsTable(r), AmplitudeTable(r), tracesTable(r), undulationsTable(r), exponentsTable(r)}
}

// dripsTable lists the drips, one a row.
func dripsTable(r *race.Result) Table {
	t := Table{Name: "drips", Header: []string{"time_Myr", "age_Ma", "initial_wavelength_km", "wavelength_km", "removed_thickness_km", "removed_share", "root_base_depth_km", "root_base_temperature_degC"}}
	if r.Drip.Outcome != "drips" {
		return t
	}
	for _, e := range dripEvents(r.Problem, r.State, r.Drip) {
		age := math.NaN()
		if r.Problem.HasTimeZero {
			age = (r.Problem.TimeZero - float64(e.Time)) / Myr
		}
		t.Rows = append(t.Rows, []string{cell(float64(e.Time) / Myr), cell(age), cell(float64(e.Initial) / km), cell(float64(e.Wavelength) / km),
			cell(float64(e.Thickness) / km), cell(float64(e.Share)), cell(float64(e.Depth) / km), cell(float64(e.Base) - zero)})
	}
	return t
}

// AmplitudeTable is the first drip against time: its amplitude and, where known, the
// second invariants of its strain rate and stress at the root's base, where they are
// largest along it, and of the background's strain rate.
func AmplitudeTable(r *race.Result) Table {
	t := Table{Name: "amplitude", Header: []string{"time_Myr", "root_base_amplitude_km", "wavelength_km", "strain_rate_1_s", "stress_MPa", "background_strain_rate_1_s"}}
	f := r.Drip.First
	if len(f.StrainRate) == len(f.Time) && len(f.Time) > 0 {
		for i := range f.Time {
			t.Rows = append(t.Rows, []string{cell(f.Time[i] / Myr), cell(f.Base[i] / km), cell(f.Wavelength[i] / km), cell(f.StrainRate[i]), cell(f.Stress[i] / 1e6), cell(f.Background[i])})
		}
		return t
	}
	for i := range r.Drip.History.Time {
		t.Rows = append(t.Rows, []string{cell(r.Drip.History.Time[i] / Myr), cell(r.Drip.History.Base[i] / km), "", "", "", ""})
	}
	return t
}

// tracesTable is the amplitude of every wavelength against time, up to its drip.
func tracesTable(r *race.Result) Table {
	t := Table{Name: "amplitudes", Header: []string{"initial_wavelength_km", "time_Myr", "wavelength_km", "root_base_amplitude_km"}}
	for _, tr := range r.Drip.Traces {
		for i := range tr.Time {
			t.Rows = append(t.Rows, []string{cell(tr.Wavelength[0] / km), cell(tr.Time[i] / Myr), cell(tr.Wavelength[i] / km), cell(tr.Base[i] / km)})
		}
	}
	return t
}

// undulationsTable is the drip time against the initial amplitude.
func undulationsTable(r *race.Result) Table {
	t := Table{Name: "undulations", Header: []string{"initial_amplitude_m", "drip_time_Myr"}}
	for _, u := range r.Study.Undulations {
		t.Rows = append(t.Rows, []string{cell(u.Amplitude), cell(u.Time / Myr)})
	}
	return t
}

// exponentsTable says which layer's viscosity sets the drip time.
func exponentsTable(r *race.Result) Table {
	t := Table{Name: "exponents", Header: []string{"layer", "dissipation_share", "dlnt_dlneta"}}
	for _, e := range exponents(r) {
		t.Rows = append(t.Rows, []string{e.layer, cell(e.share), cell(e.exponent)})
	}
	return t
}
