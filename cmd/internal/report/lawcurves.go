package report

import (
	"fmt"
	"math"
	"strings"

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

// words says the conditions for a caption: of grain size and water what the laws need.
func (c LawConditions) words(laws []rheology.Law) string {
	s := []string{fmt.Sprintf("a strain rate of %.3g 1/s", c.Rate), "a pressure of " + short(c.Pressure/1e9) + " GPa"}
	var grain, fugacity, content bool
	for i := range laws {
		grain = grain || laws[i].M != 0
		fugacity = fugacity || laws[i].Water == rheology.WaterFugacity
		content = content || laws[i].Water == rheology.WaterContent
	}
	if grain {
		s = append(s, "a grain size of "+short(c.GrainSize*1e3)+" mm")
	}
	if fugacity {
		s = append(s, "a water fugacity of "+short(c.Fugacity/1e6)+" MPa")
	}
	if content {
		s = append(s, "a water content of "+short(c.Content)+" H/10^6 Si")
	}
	return join(s)
}

// LawCurves returns the laws' viscosities against temperature, with the published errors
// where there are any, and the conditions in words.
func LawCurves(laws []rheology.Law, c LawConditions) ([]plots.LawCurve, string, error) {
	var curves []plots.LawCurve
	for i := range laws {
		l := &laws[i]
		curve := plots.LawCurve{Name: l.Name, OffPressure: l.Tested.P.Known() && !covers(l.Tested.P, c.Pressure)}
		varied := variants(l)
		for j := range curveSteps + 1 {
			T := c.From + (c.To-c.From)*float64(j)/curveSteps
			v, err := c.logViscosity(l, T)
			if err != nil {
				return nil, "", fmt.Errorf("%s at %.0f degC: %w", l.Name, T-zero, err)
			}
			curve.T, curve.Log = append(curve.T, T), append(curve.Log, v)
			curve.Cover = append(curve.Cover, cover(l, T))
			if varied == nil {
				continue
			}
			var square float64
			for _, pair := range varied {
				d, err := c.apart(pair, T)
				if err != nil {
					return nil, "", fmt.Errorf("%s with its published errors at %.0f degC: %w", l.Name, T-zero, err)
				}
				square += d * d
			}
			curve.Error = append(curve.Error, math.Sqrt(square))
		}
		curves = append(curves, curve)
	}
	return curves, c.words(laws), nil
}

// logViscosity is log₁₀ of a law's viscosity in Pa s.
func (c LawConditions) logViscosity(l *rheology.Law, T float64) (float64, error) {
	creep := rheology.Creep{Laws: []rheology.Law{*l}}
	r, err := creep.Respond(c.Rate, c.at(l, T))
	return math.Log10(r.Viscosity), err
}

// apart is how far log₁₀ of the viscosity moves with one standard deviation of one
// number: half the distance between the two sides.
func (c LawConditions) apart(pair [2]rheology.Law, T float64) (float64, error) {
	a, err := c.logViscosity(&pair[0], T)
	if err != nil {
		return 0, err
	}
	b, err := c.logViscosity(&pair[1], T)
	return (a - b) / 2, err
}

// variants returns the law with each number that has a published error moved by one
// standard deviation up and down: n, r, E and V about the middle of the experiments,
// where that is known and the error of A is that of the others; else A too, all about
// 1 MPa. nil where nothing is published or a number would leave its range.
func variants(l *rheology.Law) [][2]rheology.Law {
	e := l.Errors
	sizes := [5]float64{e.LnA, e.N, e.R, e.E, e.V}
	var about *rheology.Pivot
	if p, ok := l.Tested.Pivot(); ok {
		about = &p
		if e.N != 0 || e.E != 0 || e.V != 0 {
			sizes[0] = 0
		}
	}
	var out [][2]rheology.Law
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
				return nil
			}
			pair[side] = v
		}
		out = append(out, pair)
	}
	return out
}

// cover says whether the law's experiments reached the temperature.
func cover(l *rheology.Law, T float64) plots.Cover {
	switch {
	case !l.Tested.T.Known():
		return plots.CoverUnknown
	case covers(l.Tested.T, T):
		return plots.CoverInside
	}
	return plots.CoverOutside
}

// covers reports whether x lies in a range, round-off of its ends allowed.
func covers(r rheology.Interval, x float64) bool {
	return x >= r.Low*(1-1e-12) && x <= r.High*(1+1e-12)
}

// LawCurvesTable holds the curves, three columns a law: log₁₀ of the viscosity, its
// published error, and whether the experiments reached the temperature.
func LawCurvesTable(curves []plots.LawCurve) Table {
	t := Table{Name: "laws", Header: []string{"temperature_degC"}}
	for _, c := range curves {
		n := strings.ReplaceAll(c.Name, " ", "_")
		t.Header = append(t.Header, n+"_log10_viscosity_Pa_s", n+"_log10_error", n+"_calibrated")
	}
	if len(curves) == 0 {
		return t
	}
	words := map[plots.Cover]string{plots.CoverInside: "inside", plots.CoverOutside: "outside", plots.CoverUnknown: "unknown"}
	for j, T := range curves[0].T {
		row := []string{cell(T - zero)}
		for _, c := range curves {
			e := math.NaN()
			if c.Error != nil {
				e = c.Error[j]
			}
			row = append(row, cell(c.Log[j]), cell(e), words[c.Cover[j]])
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}
