package configs

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"strings"

	"keelfall/solver/heat"
	"keelfall/solver/race"
)

// sampleColumns are the columns of a file of samples.
var sampleColumns = []csvColumn{
	{"temperature_error", "temperature-difference"},
	{"pressure_error", "pressure"},
	{"depth_error", "length"},
	{"temperature", "temperature"},
	{"pressure", "pressure"},
	{"depth", "length"},
	{"name", ""},
	{"source", ""},
	{"notes", ""},
}

const sampleNeeds = "a CSV file of samples with the columns temperature_degC, pressure_GPa or depth_km, and their errors (temperature_error_K, pressure_error_GPa, depth_error_km), and name, source, notes"

// sampleReader reads one file of samples.
type sampleReader struct {
	csvReader
	depth float64 // of the column, m
}

// samples reads the file that geotherm.fit names; nil where it has mistakes.
func (e *Experiment) samples(w *walker, f *fit, depth float64) (out []heat.Sample) {
	r := sampleReader{csvReader{w: w, file: e.beside(f.Fit.Value), needs: sampleNeeds, rows: "samples", known: sampleColumns}, depth}
	b, ok := r.open(e, f.Fit.Value, f.Fit.n, f.path+".fit")
	if !ok {
		return nil
	}
	before := len(w.mistakes)
	r.read(b, func(has func(string) bool) bool { return has("temperature") && (has("pressure") || has("depth")) },
		func(record []string, line int) bool { out = append(out, r.row(record, line)); return true })
	if len(w.mistakes) > before {
		return nil
	}
	return out
}

// row reads one sample. An empty cell is a value that is not given.
func (r *sampleReader) row(record []string, line int) (s heat.Sample) {
	given := map[string]bool{}
	before := len(r.w.mistakes)
	for i, text := range record {
		if text = strings.TrimSpace(text); text == "" {
			continue
		}
		word := r.words[i]
		dim := r.dimension(i)
		if dim == nil {
			if err := readable(text, map[bool]string{true: "name", false: "prose"}[word == "name"]); err != nil {
				r.add(line, word, "%s", err)
			}
			switch word {
			case "name":
				s.Name = text
			case "source":
				s.Source = text
			}
			continue
		}
		x, err := cell(text, r.units[i], dim)
		if err == nil && x < 0 {
			err = fmt.Errorf("%s is out of range; needs a value of at least 0 %s", shorten(text), dim.si)
		}
		if err != nil {
			r.add(line, r.heads[i], "%s", err)
			continue
		}
		given[word] = true
		*map[string]*float64{"temperature": &s.Temperature, "temperature_error": &s.TemperatureError, "pressure": &s.Pressure,
			"pressure_error": &s.PressureError, "depth": &s.Depth, "depth_error": &s.DepthError}[word] = x
	}
	s.HasPressure = given["pressure"]
	if len(r.w.mistakes) == before {
		r.whole(&s, given, line)
	}
	return s
}

// whole checks what the cells of one sample say together.
func (r *sampleReader) whole(s *heat.Sample, given map[string]bool, line int) {
	switch {
	case !given["temperature"]:
		r.add(line, "temperature", "is missing; a sample has one")
	case given["pressure"] && given["depth"]:
		r.add(line, "", "gives a pressure and a depth; needs one of them, the one that was measured")
	case !given["pressure"] && !given["depth"]:
		r.add(line, "", "gives neither a pressure nor a depth; needs one of them")
	case given["depth"] && s.Depth > r.depth:
		r.add(line, "depth", "%.6g km lies below the column, which is %.6g km deep", s.Depth/1e3, r.depth/1e3)
	case given["pressure_error"] && !given["pressure"]:
		r.add(line, "pressure_error", "has no meaning without a pressure")
	case given["depth_error"] && !given["depth"]:
		r.add(line, "depth_error", "has no meaning without a depth")
	case s.TemperatureError == 0 && s.PressureError == 0 && s.DepthError == 0:
		r.add(line, "", "gives no error; needs one standard deviation of the temperature, the pressure or the depth, for example in a column temperature_error_K")
	}
}

// fitGeotherm fits the geotherm to the samples, once, and gives p's column the values.
func (e *Experiment) fitGeotherm(w *walker, p *race.Problem) {
	g := e.data.Geotherm
	if g == nil || g.Fit == nil || len(w.mistakes) > 0 {
		return
	}
	if e.fit == nil {
		samples := e.samples(w, g.Fit, p.Column.Depth())
		if samples == nil {
			return
		}
		f, err := heat.FitGeotherm(heat.Fitting{Column: &p.Column, Samples: samples, HeatProduction: g.Fit.HeatProduction.On})
		if err != nil {
			w.addf(g.Fit.at, "geotherm", "cannot be fitted: %s", strings.TrimPrefix(strings.TrimPrefix(err.Error(), "heat: "), "geotherm: "))
			return
		}
		e.fit = f
	}
	p.GeothermFit = e.fit
	c := e.fit.Column
	p.Column.Base.Temperature, p.Column.Base.HasTemperature = c.Base.Temperature, c.Base.HasTemperature
	p.Column.Base.HeatFlow = c.Base.HeatFlow
	for i := range p.Column.Layers {
		p.Column.Layers[i].HeatProduction = c.Layers[i].HeatProduction
	}
}

// fitResult is the fit for a result's provenance; nil where nothing was fitted.
func (e *Experiment) fitResult() any {
	f := e.fit
	if f == nil {
		return nil
	}
	values, residuals, notes := []any{}, []any{}, []any{}
	for _, v := range f.Fitted {
		unit := map[string]string{"base.temperature": "K", "base.heat-flow": "W/m2"}[v.Key]
		values = append(values, map[string]any{"key": v.Key, "unit": unit, "start": v.Start, "value": v.Value, "error": v.Error, "held": v.Held})
	}
	for _, r := range f.Residuals {
		residuals = append(residuals, map[string]any{"name": r.Name, "source": r.Source, "depth_m": r.Depth, "pressure_Pa": r.Pressure,
			"temperature_K": r.Temperature, "geotherm_K": r.Model, "residual_K": r.Residual, "uncertainty_K": r.Uncertainty})
	}
	for _, n := range f.Notes {
		notes = append(notes, n)
	}
	covariance := []any{}
	for _, row := range f.Covariance {
		covariance = append(covariance, append([]float64(nil), row...))
	}
	name := e.data.Geotherm.Fit.Fit.Value
	sum := sha256.Sum256(e.files[name])
	return map[string]any{"file": name, "sha256": hex.EncodeToString(sum[:]), "fitted": values, "covariance": covariance,
		"chi_square": f.ChiSquare, "degrees_of_freedom": f.Freedom, "condition": f.Condition, "residuals": residuals, "notes": notes}
}
