package heat

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"
)

// result reads errors, condition and what is not constrained off the minimum.
func (m *fitter) result(s *fitState) (*Fit, error) {
	J, err := m.jacobian(s)
	if err != nil {
		return nil, err
	}
	k := m.free()
	out := &Fit{ChiSquare: s.chi2, Freedom: len(m.Samples) - k, Residuals: s.residuals, Iterations: s.iterations, Notes: m.notes, Profile: s.profile}
	var svd mat.SVD
	if !svd.Factorize(J, mat.SVDThin) {
		return nil, fmt.Errorf("heat: geotherm: the fit's derivatives cannot be decomposed: %v", mat.Formatted(J))
	}
	values := svd.Values(nil)
	out.Condition = values[0] / values[k-1]
	if !(out.Condition < singular) {
		return nil, fmt.Errorf("heat: geotherm: the points cannot constrain %s (condition %.2g): what they tell of one is told of the other", m.names(), out.Condition)
	}
	var V mat.Dense
	svd.VTo(&V)
	all := len(m.start)
	out.Covariance = make([][]float64, all)
	for i := range all {
		out.Covariance[i] = make([]float64, all)
		for j := range all {
			for n := 0; n < k && i < k && j < k; n++ {
				out.Covariance[i][j] += V.At(i, n) * V.At(j, n) / (values[n] * values[n]) * m.scale[i] * m.scale[j]
			}
		}
		out.Fitted = append(out.Fitted, Fitted{Key: m.key(i), Name: m.name(i), Start: m.start[i], Value: s.x[i], Error: math.Sqrt(out.Covariance[i][i]), Held: i >= k})
	}
	if _, err := m.at(s.x); err != nil { // the column at the values that were found
		return nil, err
	}
	c := m.column
	out.Column = &c
	out.Notes = append(out.Notes, m.say(out)...)
	return out, nil
}

func (m *fitter) key(i int) string {
	switch {
	case i == 1:
		return "heat-production"
	case m.column.Base.HasHeatFlow:
		return "base.heat-flow"
	}
	return "base.temperature"
}

func (m *fitter) name(i int) string {
	return map[string]string{"heat-production": "factor on heat production", "base.heat-flow": "basal heat flow", "base.temperature": "basal temperature"}[m.key(i)]
}

func (m *fitter) names() string {
	if m.free() == 1 {
		return "the " + m.name(0)
	}
	return "the " + m.name(0) + " and the " + m.name(1)
}

// unlikelyChi is the chance below which scatter is more than the errors allow, or less.
const unlikelyChi = 0.01

// say puts into words what the points do not constrain, and how they scatter.
func (m *fitter) say(f *Fit) []string {
	var notes []string
	for i := range m.free() {
		v := &f.Fitted[i]
		switch {
		case v.Key == "base.temperature":
			if v.Error > wide*math.Abs(v.Value-m.column.Surface.Temperature) {
				notes = append(notes, fmt.Sprintf("the points do not constrain the basal temperature: %.0f ± %.0f °C", v.Value-zeroCelsius, v.Error))
			}
		case v.Error <= wide*math.Abs(v.Value):
		case v.Key == "base.heat-flow":
			notes = append(notes, fmt.Sprintf("the points do not constrain the basal heat flow: %.3g ± %.2g mW/m²", v.Value*1e3, v.Error*1e3))
		default:
			notes = append(notes, fmt.Sprintf("the points do not constrain the heat production: %.3g ± %.2g times what is given", v.Value, v.Error))
		}
	}
	if m.free() == 2 {
		if r := f.Covariance[0][1] / (f.Fitted[0].Error * f.Fitted[1].Error); math.Abs(r) > tradeOff {
			notes = append(notes, fmt.Sprintf("the points tell %s only together (correlation %.3f): a change of one makes up for a change of the other", m.names(), r))
		}
	}
	if f.Freedom > 0 {
		chi := distuv.ChiSquared{K: float64(f.Freedom)}
		switch p := chi.Survival(f.ChiSquare); {
		case p < unlikelyChi:
			notes = append(notes, fmt.Sprintf("the points scatter more than their errors allow (χ² %.3g for %d degrees of freedom): they lay on no one steady geotherm of this column, or their errors are larger", f.ChiSquare, f.Freedom))
		case p > 1-unlikelyChi:
			notes = append(notes, fmt.Sprintf("the points scatter less than their errors (χ² %.3g for %d degrees of freedom): the errors are larger than need be, or are shared by all", f.ChiSquare, f.Freedom))
		}
	} else {
		notes = append(notes, "as many values are fitted as there are samples: the fit passes through them and cannot be tested")
	}
	if d := m.deepest(f); d < 0.5*m.column.Depth() {
		notes = append(notes, fmt.Sprintf("the deepest point lies at %.3g km of %.3g km: below it the geotherm is the column's conductivities, not the points'", d/1e3, m.column.Depth()/1e3))
	}
	return notes
}

func (m *fitter) deepest(f *Fit) float64 {
	var d float64
	for i := range f.Residuals {
		d = math.Max(d, f.Residuals[i].Depth)
	}
	return d
}
