package report

import (
	"fmt"
	"math"

	"keelfall/plots"
	"keelfall/rheology"
)

// LawConditions are what creep laws are compared at.
type LawConditions struct {
	Rate      float64 // second invariant of the strain rate, 1/s
	Pressure  float64 // Pa
	GrainSize float64 // m, for laws that depend on it
	Fugacity  float64 // of water, Pa, for laws that count it so
	Content   float64 // of water, H/10⁶ Si, for laws that count it so
	From, To  float64 // temperatures, K
}

// curveSteps is how many steps of temperature a curve takes.
const curveSteps = 140

// at returns what a law is evaluated at.
func (c LawConditions) at(l *rheology.Law, T float64) rheology.Conditions {
	at := rheology.Conditions{T: T, P: c.Pressure, GrainSize: c.GrainSize, WaterMeasure: l.Water}
	switch l.Water {
	case rheology.WaterFugacity:
		at.Water = c.Fugacity
	case rheology.WaterContent:
		at.Water = c.Content
	}
	return at
}

// LawCurves returns the laws' viscosities against temperature, with the published errors
// where there are any, and the conditions in words.
func LawCurves(laws []rheology.Law, c LawConditions) ([]plots.LawCurve, string, error) {
	var curves []plots.LawCurve
	for i := range laws {
		curve, err := c.curve(&laws[i])
		if err != nil {
			return nil, "", err
		}
		curves = append(curves, curve)
	}
	return curves, c.words(laws), nil
}

// curve is one law's.
func (c LawConditions) curve(l *rheology.Law) (plots.LawCurve, error) {
	curve := plots.LawCurve{Name: l.Name, OffPressure: !l.Tested.Pressures(c.Pressure)}
	varied, note := variants(l)
	curve.ErrorNote = note
	for j := range curveSteps + 1 {
		T := c.From + (c.To-c.From)*float64(j)/curveSteps
		beyond := func(what string) error { // all else was checked: the stress is no number any more
			return fmt.Errorf("%s%s has no viscosity within the range of numbers at %.0f degC and %s GPa; needs a higher temperature or a lower pressure", l.Name, what, T-zero, short(c.Pressure/1e9))
		}
		r, err := c.respond(l, T)
		if err != nil {
			return curve, beyond("")
		}
		curve.T, curve.Log = append(curve.T, T), append(curve.Log, math.Log10(r.Viscosity))
		curve.Cover = append(curve.Cover, cover(l, T, c.Pressure, r.Stress*l.Test.Stress()))
		if varied == nil {
			continue
		}
		var square float64
		for _, pair := range varied {
			d, err := c.apart(pair, T)
			if err != nil {
				return curve, beyond(" with its published errors")
			}
			square += d * d
		}
		curve.Error = append(curve.Error, math.Sqrt(square))
	}
	return curve, nil
}

// respond is what a law does at the conditions.
func (c LawConditions) respond(l *rheology.Law, T float64) (rheology.Response, error) {
	creep := rheology.Creep{Laws: []rheology.Law{*l}}
	return creep.Respond(c.Rate, c.at(l, T))
}

// apart is how far log₁₀ of the viscosity moves with one standard deviation of one
// number: half the distance between the two sides.
func (c LawConditions) apart(pair [2]rheology.Law, T float64) (float64, error) {
	a, err := c.respond(&pair[0], T)
	if err != nil {
		return 0, err
	}
	b, err := c.respond(&pair[1], T)
	return math.Log10(a.Viscosity/b.Viscosity) / 2, err
}

// variants returns the law with each number that has a published error moved by one
// standard deviation up and down: n, E and V about the middle of the experiments, as far
// as that is known, n else about 1 MPa. The error of A is left out where it is that of the
// others: where they turn about a known temperature and, if n has an error, about a known
// stress. Else A is moved too, which is the rate at 1 MPa. note says so for a caption. nil
// where nothing is published or a number would leave its range, with a note of that.
func variants(l *rheology.Law) (out [][2]rheology.Law, note string) {
	e := l.Errors
	sizes := [5]float64{e.LnA, e.N, e.R, e.E, e.V}
	var about *rheology.Pivot
	if p, ok := l.Tested.Pivot(); ok {
		about = &p
		if (e.N != 0 || e.E != 0 || e.V != 0) && (e.N == 0 || l.Tested.Stress.Known()) {
			sizes[0] = 0
		}
	}
	for i, size := range sizes {
		if size == 0 {
			continue
		}
		var pair [2]rheology.Law
		for side := range pair {
			var z [5]float64
			z[i] = 1 - 2*float64(side)
			v, err := l.Varied(z, about)
			if err != nil {
				return nil, fmt.Sprintf("The errors of %s are not drawn: moved by one of them, its %s leaves its range.", l.Name, errorNames[i])
			}
			pair[side] = v
		}
		out = append(out, pair)
	}
	if out == nil {
		return nil, ""
	}
	return out, errorNote(l, about, sizes)
}

// cover says whether the law's experiments reached the temperature, the pressure and the
// stress as its test measures it.
func cover(l *rheology.Law, T, P, stress float64) plots.Cover {
	switch inside, known := l.Tested.Covers(T, P, stress); {
	case !inside:
		return plots.CoverOutside
	case !known:
		return plots.CoverUnknown
	}
	return plots.CoverInside
}
