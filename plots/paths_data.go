package plots

import (
	"math"
	"slices"

	"keelfall/column"
)

// measured is a sample in the axes' units; errors are one standard deviation.
type measured struct {
	name         string
	t, p, dt, dp float64
}

// solidus is a rock's solidus over the pressures its markers see.
type solidus struct {
	name string
	t, p []float64
}

// samples are the fit's, at the pressure of their depth where they have a depth.
func (t *Thermal) samples() []measured {
	if t.Fit == nil {
		return nil
	}
	var out []measured
	for _, r := range t.Fit.Residuals {
		m := measured{name: literal(r.Name), t: r.Temperature - zeroCelsius, p: r.Pressure / gpa, dt: r.TemperatureError, dp: r.PressureError / gpa}
		if !r.HasPressure && r.DepthError > 0 && t.Fit.Profile != nil {
			_, _, above := at(t.Fit.Profile, math.Max(0, r.Depth-r.DepthError))
			_, _, below := at(t.Fit.Profile, r.Depth+r.DepthError)
			m.dp = (below - above) / 2
		}
		out = append(out, m)
	}
	return out
}

func flatten(ms []measured) []float64 {
	var out []float64
	for _, m := range ms {
		out = append(out, m.t, m.p, m.dt, m.dp)
	}
	return out
}

// findSolidi finds the solidus of every marker's rock that melts by one, as far as it is
// known.
func (f *pathsFigure) findSolidi() {
	var seen []string
	for _, path := range f.paths {
		if slices.Contains(seen, path.Layer) {
			continue
		}
		seen = append(seen, path.Layer)
		if m := f.melting(path.Layer); m != nil {
			s := solidus{name: literal(path.Layer)}
			for _, P := range m.Solidus.Between(f.y.lo*gpa, f.y.hi*gpa, 41) {
				s.p, s.t = append(s.p, P/gpa), append(s.t, m.Solidus.At(P)-zeroCelsius)
			}
			if len(s.t) > 0 {
				f.solidi = append(f.solidi, s)
			}
		}
	}
}

// melting is the melt of a layer with a solidus, from any time it is there; nil without.
func (f *pathsFigure) melting(layer string) *column.Melt {
	for _, s := range f.History.Snapshots {
		for i := range s.Column.Layers {
			if l := &s.Column.Layers[i]; l.Name == layer && l.Melt.NeedsTemperature() {
				return l.Melt
			}
		}
	}
	return nil
}

// crosses reports whether a solidus runs through the figure.
func (f *pathsFigure) crosses(s solidus) bool {
	return slices.ContainsFunc(s.t, f.x.has)
}
