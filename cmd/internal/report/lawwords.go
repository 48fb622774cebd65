package report

import (
	"fmt"
	"math"
	"strings"

	"keelfall/rheology"
)

// tested words a range of experiments in a unit of so many SI units, from a zero of the
// scale at the offset; empty where none is known.
func tested(i rheology.Interval, unit, offset float64, name string) string {
	if !i.Known() {
		return ""
	}
	value := func(x float64) string {
		if offset != 0 { // a temperature, converted: whole degrees
			return fmt.Sprintf("%.0f", (x-offset)/unit)
		}
		return fmt.Sprintf("%.4g", x/unit)
	}
	var s string
	switch {
	case math.IsInf(i.High, 1):
		s = "above " + value(i.Low)
	case i.Low == 0:
		s = "below " + value(i.High)
	case i.Low == i.High:
		s = value(i.Low)
	default:
		s = value(i.Low) + " to " + value(i.High)
	}
	if name != "" {
		s += " " + name
	}
	return s
}

// testedWords says where a law's experiments were.
func testedWords(t *rheology.Tested) string {
	var parts []string
	for _, s := range []string{tested(t.T, 1, zero, "degC"), tested(t.P, 1e6, 0, "MPa"), tested(t.Stress, 1e6, 0, "MPa of stress")} {
		if s != "" {
			parts = append(parts, s)
		}
	}
	if len(parts) == 0 {
		return "conditions not in the catalogue"
	}
	s := strings.Join(parts, "; ")
	if t.Status != "" {
		s += " (" + numberStatus(t.Status) + ")"
	}
	return s
}

// errorWords writes the published errors as numbers.
func errorWords(e *rheology.Errors) string {
	var parts []string
	for _, p := range []struct {
		of   string
		x    float64
		unit string
	}{{"ln A", e.LnA, ""}, {"n", e.N, ""}, {"r", e.R, ""}, {"E", e.E / 1e3, " kJ/mol"}, {"V", e.V * 1e6, " cm3/mol"}} {
		if p.x > 0 {
			parts = append(parts, fmt.Sprintf("%s ± %.3g%s", p.of, p.x, p.unit))
		}
	}
	return strings.Join(parts, ", ")
}

// plasticRows writes the numbers of low-temperature plasticity.
func plasticRows(row func(k, v string), l *rheology.Law) {
	if !l.Plastic() {
		return
	}
	b := l.Peierls
	s := fmt.Sprintf("%.4g GPa between invariants", b.Stress/1e9)
	if l.Status.Peierls != "" {
		s += " (" + numberStatus(l.Status.Peierls) + ")"
	}
	if b.PerPa > 0 {
		s += fmt.Sprintf(", rising by %.3g %% per GPa", b.PerPa*1e11)
	}
	row("Peierls stress", s)
	row("exponents p, q", fmt.Sprintf("%g, %g", b.P, b.Q))
	if b.Least > 0 {
		row("not below", fmt.Sprintf("about %.3g MPa between invariants: it is cut off there, our own choice", b.Least/1e6))
	}
}

// given is a cell that is empty where the number is 0.
func given(x float64) string {
	if x == 0 {
		return ""
	}
	return cell(x)
}
