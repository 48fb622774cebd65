package report

import (
	"fmt"
	"math"
	"slices"
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
	return s + from(t.Status)
}

// from is the status of a number in brackets, empty where nothing is said.
func from(status string) string {
	if status == "" {
		return ""
	}
	return " (" + numberStatus(status) + ")"
}

// errorWords writes the published errors as numbers, and where they come from.
func errorWords(l *rheology.Law) string {
	e, st := l.Errors, l.ErrorStatus()
	one := len(errorStatuses(l)) <= 1
	var parts []string
	status := ""
	for i, p := range []struct {
		of   string
		x    float64
		unit string
	}{{"ln A", e.LnA, ""}, {"n", e.N, ""}, {"r", e.R, ""}, {"E", e.E / 1e3, " kJ/mol"}, {"V", e.V * 1e6, " cm3/mol"}} {
		if p.x > 0 {
			s := fmt.Sprintf("%s ± %.3g%s", p.of, p.x, p.unit)
			if status = from(st[i]); !one {
				s += status
			}
			parts = append(parts, s)
		}
	}
	if one && len(parts) > 0 {
		return strings.Join(parts, ", ") + status
	}
	return strings.Join(parts, ", ")
}

// uncertainty is what the source says of errors, with where it comes from where that is
// the same for all of it.
func uncertainty(l *rheology.Law) string {
	if all := errorStatuses(l); l.Uncertainty != "" && len(all) == 1 {
		return l.Uncertainty + from(all[0])
	}
	return l.Uncertainty
}

// errorStatuses are the different statuses of a law's errors, that of none said too.
func errorStatuses(l *rheology.Law) []string {
	var all []string
	st := l.ErrorStatus()
	for i, x := range [5]float64{l.Errors.LnA, l.Errors.N, l.Errors.R, l.Errors.E, l.Errors.V} {
		if x > 0 && !slices.Contains(all, st[i]) {
			all = append(all, st[i])
		}
	}
	return all
}

// errorNames name the parameters in the order of rheology.Errors.
var errorNames = [...]string{"prefactor", "stress exponent", "water exponent", "activation energy", "activation volume"}

// errorNote says for a caption which errors of a law were taken, sizes, what each number
// turned about, and what is recalled.
func errorNote(l *rheology.Law, about *rheology.Pivot, sizes [5]float64) string {
	var parts, turned []string
	if sizes[0] > 0 {
		parts = append(parts, "prefactor")
	}
	if sizes[1] > 0 {
		parts = append(parts, "stress exponent "+exponentAbout(l, about))
	}
	if sizes[2] > 0 {
		unit := "1 MPa of fugacity"
		if l.Water == rheology.WaterContent {
			unit = "1 H/10^6 Si"
		}
		parts = append(parts, "water exponent about "+unit)
	}
	for i := 3; i < 5; i++ {
		if sizes[i] > 0 {
			turned = append(turned, errorNames[i])
		}
	}
	if len(turned) > 0 {
		at := "by itself (the temperatures of the experiments are not known)"
		if about != nil {
			at = fmt.Sprintf("about %.0f degC and %s GPa", about.T-zero, short(about.P/1e9))
		}
		parts = append(parts, strings.Join(turned, " and ")+" "+at)
	}
	s := fmt.Sprintf("Errors of %s: %s", l.Name, join(parts))
	if l.Errors.LnA > 0 && sizes[0] == 0 {
		s += "; that of the prefactor is part of these"
	}
	return s + "." + recalledErrors(l)
}

// exponentAbout says about which stress the stress exponent was moved, and why.
func exponentAbout(l *rheology.Law, about *rheology.Pivot) string {
	switch {
	case !l.Tested.Stress.Known():
		return "about 1 MPa (the stress of the experiments is not known)"
	case about == nil:
		return "about 1 MPa"
	}
	return "about " + short(about.Stress/1e6) + " MPa"
}

// recalledErrors is a sentence on the errors that are from memory, empty without any.
func recalledErrors(l *rheology.Law) string {
	if all := errorStatuses(l); len(all) == 1 && all[0] == "memory" {
		return " They are from memory."
	}
	var recalled []string
	for i, st := range l.ErrorStatus() {
		if st == "memory" {
			recalled = append(recalled, errorNames[i])
		}
	}
	if len(recalled) == 0 {
		return ""
	}
	return " From memory: that of the " + join(recalled) + "."
}

// plasticRows writes the numbers of low-temperature plasticity.
func plasticRows(row func(k, v string), l *rheology.Law) {
	if !l.Plastic() {
		return
	}
	b := l.Peierls
	s := fmt.Sprintf("%.4g GPa between invariants", b.Stress/1e9) + from(l.Status.Peierls)
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
