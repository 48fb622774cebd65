package heat

import (
	"errors"
	"fmt"
	"math"

	"keelfall/column"
)

// Sample is a rock whose temperature and depth, or pressure, of equilibration were
// measured. An error is one standard deviation, 0 where it is not given; each sample
// has at least one of them.
type Sample struct {
	Name                    string
	Source                  string
	Temperature             float64 // K
	TemperatureError        float64 // K
	Depth, DepthError       float64 // m; used where HasPressure is false
	Pressure, PressureError float64 // Pa; used where HasPressure is true
	HasPressure             bool
}

// Fitting says what is fitted to samples: the basal temperature or, where the column's
// base has a heat flow, that; and, if asked, one factor on every layer's heat production.
type Fitting struct {
	Column         *column.Column // not modified; its base holds the value to start from, if it has one
	Samples        []Sample
	HeatProduction bool
}

// Fit is a steady geotherm fitted to samples. The fitted values stand in the order
// basal temperature or heat flow, factor on heat production.
type Fit struct {
	Fitted     []Fitted
	Covariance [][]float64    // of the fitted values, SI, from the samples' errors alone
	ChiSquare  float64        // Σ (residual / error)²
	Freedom    int            // samples − fitted values
	Residuals  []Residual     // in the order of the samples
	Condition  float64        // of the problem in the natural scales of what is fitted; large: hardly constrained
	Column     *column.Column // with the fitted values
	Profile    *Profile       // its steady geotherm
	Iterations int
	Notes      []string // what the points cannot constrain, or contradict, in words
}

// Fitted is one value that was fitted.
type Fitted struct {
	Key          string  // base.temperature, base.heat-flow or heat-production
	Name         string  // in words
	Start, Value float64 // K, W/m², or a factor
	Error        float64 // one standard deviation; 0 where Held
	Held         bool    // at 0, the end of its range: its error is not known
}

// Residual is what the fit leaves of one sample.
type Residual struct {
	Sample
	Depth       float64 // m, where the geotherm has the sample's pressure, or the sample's own
	Pressure    float64 // Pa, of the geotherm there, or the sample's own
	Model       float64 // K, of the geotherm there
	Residual    float64 // measured − model, K
	Uncertainty float64 // K: √(σ_T² + (dT/dz σ_z)²), or with dT/dP σ_P
}

// FitGeotherm fits the steady geotherm to the samples by least squares: it minimises
//
//	χ² = Σ (T − T(z))²/(σ_T² + (dT/dz)² σ_z²)
//
// with z the sample's depth or the depth of its pressure in the same geotherm, and
// dT/dP σ_P in place of dT/dz σ_z: the effective variance of Orear 1982 (Am. J. Phys.
// 50, 912), which for a straight line is errors-in-both regression. The slope in the
// variance is minimised with the rest. Steps are those of Levenberg and Marquardt with
// derivatives by central differences; covariances are those of the linearised problem.
//
// What the points do not constrain is said in Notes; where they leave nothing to
// choose from (fewer samples than fitted values, or all at one depth for two), it is an
// error. A factor on heat production that would be below 0 is held at 0, with a note.
//
// The fit assumes that all samples lay on one steady geotherm, at one time.
func FitGeotherm(f Fitting) (*Fit, error) {
	if err := f.check(); err != nil {
		return nil, fmt.Errorf("heat: geotherm: %w", err)
	}
	m := newFitter(f)
	s, err := m.minimise()
	if err == nil && f.HeatProduction && s.x[1] < 0 {
		best := s.x[1]
		m.held = true
		if s, err = m.minimise(); err == nil {
			m.notes = append(m.notes, fmt.Sprintf("the points ask for a heat production below 0 (× %.3g); it is held at 0, and its error is not known", best))
		}
	}
	if err != nil {
		return nil, fmt.Errorf("heat: geotherm: %w", err)
	}
	return m.result(s)
}

func (f *Fitting) check() error {
	n := 1
	if f.HeatProduction {
		n = 2
		made := 0.0
		for i := range f.Column.Layers {
			made += math.Abs(f.Column.Layers[i].HeatProduction.Integral(f.Column.Layers[i].Thickness))
		}
		if made == 0 {
			return errors.New("a factor on heat production is asked and no layer produces heat")
		}
	}
	if len(f.Samples) < n {
		return fmt.Errorf("%s for %s to fit; needs as many samples or more", counted(len(f.Samples), "sample"), counted(n, "value"))
	}
	depth := f.Column.Depth()
	for i := range f.Samples {
		s := &f.Samples[i]
		switch {
		case !(s.Temperature > 0) || math.IsInf(s.Temperature, 1):
			return fmt.Errorf("%s: temperature %g K", s.name(i), s.Temperature)
		case !s.HasPressure && !(s.Depth >= 0 && s.Depth <= depth):
			return fmt.Errorf("%s: depth %g m lies outside the column, 0 to %g m", s.name(i), s.Depth, depth)
		case s.HasPressure && (!(s.Pressure >= 0) || math.IsInf(s.Pressure, 1)):
			return fmt.Errorf("%s: pressure %g Pa", s.name(i), s.Pressure)
		}
		var error2 float64
		for _, e := range []float64{s.TemperatureError, s.DepthError, s.PressureError} {
			if !(e >= 0) || math.IsInf(e, 1) {
				return fmt.Errorf("%s: error %g; must be 0 or more", s.name(i), e)
			}
			error2 += e * e
		}
		if error2 == 0 {
			return fmt.Errorf("%s: has no error; needs one of temperature, depth or pressure", s.name(i))
		}
	}
	return nil
}

func (s *Sample) name(i int) string {
	if s.Name != "" {
		return "sample " + s.Name
	}
	return fmt.Sprintf("sample %d", i+1)
}

func counted(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}
