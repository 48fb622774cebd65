package report

import (
	"math"

	"keelfall/solver/heat"
)

// HistoryTable is the column against time.
func HistoryTable(p *Past) Table {
	h := p.History
	t := Table{Name: "history", Header: []string{"time_Myr", "age_Ma", "surface_heat_flow_mW_m2", "root_base_temperature_degC", "root_thickness_km", "own_rock_depth_km", "melt_fraction_max", "reacted_share",
		"elevation_km", "extensional_force_N_m"}}
	for i, at := range h.Time {
		t.Rows = append(t.Rows, []string{cell(at / Myr), cell(p.age(at) / Myr), cell(h.SurfaceFlow[i] * 1e3), cell(p.root(h.RootBase, i) - zero),
			cell(h.RootThickness[i] / km), cell(h.Depth[i] / km), cell(h.MeltFraction[i]), cell(p.reacted(i)),
			cell(p.standing(i, elevation) / km), cell(p.standing(i, driving))})
	}
	return t
}

// HistoryTables are those beside it: markers' paths, geotherms, layers, and clocks and
// samples where there are any.
func HistoryTables(p *Past) []Table {
	h := p.History
	paths := Table{Name: "paths", Header: []string{"marker", "layer", "time_Myr", "age_Ma", "depth_km", "pressure_GPa", "temperature_degC"}}
	for i := range h.Paths {
		m := &h.Paths[i]
		for k, at := range m.Time {
			paths.Rows = append(paths.Rows, []string{m.Name, m.Layer, cell(at / Myr), cell(p.age(at) / Myr), cell(m.Depth[k] / km), cell(m.P[k] / 1e9), cell(m.T[k] - zero)})
		}
	}
	temperatures := Table{Name: "temperatures", Header: []string{"time_Myr", "age_Ma", "layer", "depth_km", "pressure_GPa", "temperature_degC"}}
	for _, s := range p.snapshots() {
		for i := range s.Profile.Layers {
			for _, n := range s.Profile.Layers[i].Nodes {
				temperatures.Rows = append(temperatures.Rows, []string{cell(s.Time / Myr), cell(p.age(s.Time) / Myr), s.Column.Layers[i].Name, cell(n.Depth / km), cell(n.P / 1e9), cell(n.T - zero)})
			}
		}
	}
	layers := Table{Name: "layers", Header: []string{"time_Myr", "age_Ma", "layer", "top_km", "base_km"}}
	for _, s := range h.Snapshots {
		z := 0.0
		for i := range s.Column.Layers {
			l := &s.Column.Layers[i]
			layers.Rows = append(layers.Rows, []string{cell(s.Time / Myr), cell(p.age(s.Time) / Myr), l.Name, cell(z / km), cell((z + l.Thickness) / km)})
			z += l.Thickness
		}
	}
	out := []Table{temperatures, layers}
	if len(h.Paths) > 0 {
		out = append(out, paths)
	}
	if len(p.Closures) > 0 {
		out = append(out, clocksTable(p))
	}
	if f := p.Problem.GeothermFit; f != nil {
		out = append(out, SamplesTable(f))
	}
	return out
}

func clocksTable(p *Past) Table {
	t := Table{Name: "clocks", Header: []string{"clock", "marker", "closure_time_Myr", "age_Ma", "closure_temperature_degC", "cooling_rate_K_Myr", "diffused_after", "reason", "caution"}}
	for i := range p.Closures {
		k, c := &p.Problem.Clocks[i], p.Closures[i]
		age := p.age(c.Time)
		if !c.Found {
			c.Time, c.Temperature, c.CoolingRate, c.Diffused, age = math.NaN(), math.NaN(), math.NaN(), math.NaN(), math.NaN()
		}
		t.Rows = append(t.Rows, []string{k.Name, k.Marker, cell(c.Time / Myr), cell(age / Myr), cell(c.Temperature - zero), cell(c.CoolingRate * Myr), cell(c.Diffused), c.Reason, c.Caution})
	}
	return t
}

// SamplesTable is what a fit of the geotherm leaves of each sample.
func SamplesTable(f *heat.Fit) Table {
	t := Table{Name: "samples", Header: []string{"sample", "depth_km", "pressure_GPa", "depth_error_km", "pressure_error_GPa", "temperature_degC", "temperature_error_K", "geotherm_degC", "residual_K", "residual_error_K"}}
	for i := range f.Residuals {
		r := &f.Residuals[i]
		dz, dp := r.DepthError, math.NaN()
		if r.HasPressure {
			dz, dp = math.NaN(), r.PressureError
		}
		t.Rows = append(t.Rows, []string{sampleName(f, i), cell(r.Depth / km), cell(r.Pressure / 1e9), cell(dz / km), cell(dp / 1e9), cell(r.Temperature - zero),
			cell(r.TemperatureError), cell(r.Model - zero), cell(r.Residual), cell(r.Uncertainty)})
	}
	return t
}
