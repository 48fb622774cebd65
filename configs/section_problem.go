package configs

import "keelfall/solver/race"

// measured lists the layers that measured sections made, as race takes them: a density
// that was edited is no longer the section's.
func (e *Experiment) measured() []race.Measured {
	density := map[string]Scatter{}
	for _, s := range e.Scatter() {
		density[s.Key] = s
	}
	var out []race.Measured
	for i, l := range rocks(e.tree) {
		if l.rows == nil {
			continue
		}
		m := race.Measured{File: l.rows.file, Rows: len(l.rows.lines)}
		if n := l.get("name"); n != nil {
			m.Layer = n.text
		}
		if s, ok := density[entryKey(i, l)+".density"]; ok {
			m.HasDensity, m.Density, m.Scatter, m.RowError = true, s.Mean, s.SD, s.RowError
		}
		m.Temperature, m.HasTemperature = l.rows.warmth.(float64)
		m.Pressure, m.HasPressure = l.rows.pressure.(float64)
		out = append(out, m)
	}
	return out
}
