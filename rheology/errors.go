package rheology

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// Errors are the published errors of a law, one standard deviation as published, in SI;
// 0 where the source gives none. LnA is that of ln A: ln 10 times an error of log10 A,
// or an error of A over A.
//
// Only numbers written as ± are here. A range (V 6-27 cm³/mol) has no one standard
// deviation and stands in Law.Uncertainty alone, as does an error of a Peierls stress.
type Errors struct{ LnA, N, R, E, V float64 }

var errorNames = [...]string{"ln prefactor", "stress exponent", "water exponent", "activation energy", "activation volume"}

// errorLetters name the parameters in the order of Errors.
var errorLetters = [...]string{"A", "n", "r", "E", "V"}

// ErrorStatus returns where the errors of ln A, n, r, E and V come from, "" where there is
// no error or nothing is said: Status.Errors or, without it, the parameter's own status.
func (l *Law) ErrorStatus() [5]string {
	st := [5]string{l.Status.A, l.Status.N, l.Status.R, l.Status.E, l.Status.V}
	given, err := errorStatus(l.Status.Errors)
	for i, e := range l.Errors.list() {
		switch {
		case e == 0:
			st[i] = ""
		case err == nil && given[i] != "":
			st[i] = given[i]
		}
	}
	return st
}

// errorStatus reads a status of errors: "memory", or "A memory, n seen" with the rest empty.
func errorStatus(s string) (out [5]string, err error) {
	known := []string{"seen", "memory", "choice", "given"}
	if slices.Contains(known, s) {
		for i := range out {
			out[i] = s
		}
		return out, nil
	}
	for _, part := range strings.FieldsFunc(s, func(r rune) bool { return r == ',' || r == ';' }) {
		letter, word, _ := strings.Cut(strings.TrimSpace(part), " ")
		i := slices.Index(errorLetters[:], letter)
		if i < 0 || !slices.Contains(known, word) {
			return out, fmt.Errorf("%q is no status of errors; needs seen, memory, choice or given, or a list like \"A memory, n seen\"", s)
		}
		out[i] = word
	}
	return out, nil
}

func (e *Errors) list() [5]float64 { return [5]float64{e.LnA, e.N, e.R, e.E, e.V} }

// Varied returns the law with ln A, n, r, E and V (in the order of Errors) moved by z
// standard deviations each; a parameter without a published error stays.
//
// The parameters of a fit are correlated, A and E above all: a higher E goes with a
// higher A, because it is the rate at the temperature of the experiments that was
// measured. Sources seldom give the correlation. With about nil the errors are taken as
// independent, n and r about 1 MPa, the unit of A; that overstates the spread, by
// exp(δE/RT) of rate, a factor of 20 for 30 kJ/mol at 1200 K. The common remedy
// (common practice, no source) is to move E, V and n about the middle of the experiments,
// where the rate is held: give about, such as Tested.Pivot, and z[0] = 0, since most of
// the error of A is that of E. What is left of z[0] then moves the rate itself. r is
// always moved about 1 MPa of fugacity or 1 H/10⁶ Si.
//
// Errors: a law that Validate refuses, as z moves a parameter beyond its range.
func (l *Law) Varied(z [5]float64, about *Pivot) (Law, error) {
	v := *l
	v.N += z[1] * l.Errors.N
	v.R += z[2] * l.Errors.R
	v.E += z[3] * l.Errors.E
	v.V += z[4] * l.Errors.V
	ln := z[0] * l.Errors.LnA
	if about != nil {
		ln += l.lnLaboratory(*about) - v.lnLaboratory(*about)
	}
	a := math.Exp(ln)
	v.LaboratoryA *= a
	// A is moved through its own unit, MPa, in which the exponents' pivot is 1.
	v.A *= a * InvariantPrefactor(1, &v) / InvariantPrefactor(1, l)
	if err := v.Validate(); err != nil {
		return Law{}, fmt.Errorf("%w, moved by %g standard deviations", err, z)
	}
	return v, nil
}

// lnLaboratory is the logarithm of the rate over A at the pivot, in MPa, at 1 of the unit
// of water and without the factor of Peierls.Least.
func (l *Law) lnLaboratory(at Pivot) float64 {
	h := (l.E + at.P*l.V) / (GasConstant * at.T)
	if b := l.Peierls; l.Plastic() {
		u := math.Pow(at.Stress/l.Test.Stress()/(b.Stress*(1+b.PerPa*at.P)), b.P)
		h *= math.Pow(max(1-u, 0), b.Q)
	}
	return l.N*math.Log(at.Stress/1e6) - h
}
