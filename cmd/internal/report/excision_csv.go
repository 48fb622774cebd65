package report

import (
	"math"

	"keelfall/solver/race"
)

// ExcisionTables are every zone, every layer that zones cut, and the strips that layers
// are wholly gone from, against time.
func ExcisionTables(r *race.Result) []Table {
	x, p := r.Excision, r.Problem
	if len(x.Zones) == 0 {
		return nil
	}
	age := func(t float64) float64 {
		if !p.HasTimeZero {
			return math.NaN()
		}
		return p.TimeZero - t
	}
	at := func(v []float64, k int, unit float64) string { // empty where it has no history
		if k >= len(v) {
			return ""
		}
		return cell(v[k] / unit)
	}
	zones := Table{Name: "excision-zones", Header: []string{"zone", "time_Myr", "age_Ma", "slip_rate_mm_yr", "slip_km", "heave_km", "throw_km", "stratigraphic_omission_km",
		"vertical_omission_km", "pressure_gap_GPa", "remaining_km", "driving_force_1e12_N_m", "strength_at_1_mm_yr_1e12_N_m", "shear_stress_MPa", "shear_heat_mW_m2", "temperature_degC"}}
	strips := Table{Name: "excision-strips", Header: []string{"zone", "layer", "time_Myr", "age_Ma", "strip_without_layer_km"}}
	for i := range x.Zones {
		h := &x.Zones[i]
		T := celsius(h.T)
		for k, t := range x.History.Time {
			zones.Rows = append(zones.Rows, []string{h.Name, cell(t / Myr), cell(age(t) / Myr), at(h.Rate, k, 1e-3/Year), at(h.Slip, k, km), at(h.Heave, k, km), at(h.Throw, k, km),
				at(h.OmissionStratigraphic, k, km), at(h.OmissionVertical, k, km), at(h.PressureGap, k, 1e9), at(h.Remaining, k, km),
				at(h.Force, k, 1e12), at(h.Strength, k, 1e12), at(h.Stress, k, 1e6), at(h.Heating, k, 1e-3), at(T, k, 1)})
		}
		for _, s := range h.Strips {
			for k, t := range x.History.Time {
				strips.Rows = append(strips.Rows, []string{h.Name, s.Layer, cell(t / Myr), cell(age(t) / Myr), at(s.Width, k, km)})
			}
		}
	}
	layers := Table{Name: "excision-layers", Header: []string{"layer", "root", "time_Myr", "age_Ma", "thickness_km", "arc_mean_thickness_km"}}
	for i := range x.Layers {
		l := &x.Layers[i]
		root := ""
		if l.Root {
			root = "true"
		}
		for k, t := range x.History.Time {
			layers.Rows = append(layers.Rows, []string{l.Name, root, cell(t / Myr), cell(age(t) / Myr), at(l.Thickness, k, km), at(l.ArcMean, k, km)})
		}
	}
	return []Table{zones, layers, strips}
}
