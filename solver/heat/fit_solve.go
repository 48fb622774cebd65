package heat

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"keelfall/column"
)

const (
	maxFitSteps  = 200
	fitStep      = 1e-4  // of a value's scale, for differences
	fitTolerance = 1e-10 // of a value's scale: the next step's size where the fit is done
	fitGain      = 1e-13 // of χ²: what the next step gains where the fit is done, a step of 3e-7 √χ² standard errors
	singular     = 1e7   // condition from which differences tell no more
	wide         = 0.5   // error over scale from which a value counts as not constrained
	tradeOff     = 0.95  // correlation from which two values are known only together
)

// fitter is the geotherm as a function of what is fitted.
type fitter struct {
	Fitting
	column column.Column // changed in place
	made   []float64     // heat production of the layers as given, W/m³
	scale  []float64     // natural sizes of what is fitted
	start  []float64
	held   bool // the factor on heat production is held at 0
	notes  []string
}

// fitState is the fit at one set of values.
type fitState struct {
	x          []float64
	profile    *Profile
	residuals  []Residual
	chi2       float64
	iterations int
}

func newFitter(f Fitting) *fitter {
	m := &fitter{Fitting: f, column: *f.Column}
	m.column.Layers = slices.Clone(f.Column.Layers)
	m.column.Geotherm = nil
	for i := range m.column.Layers {
		m.made = append(m.made, m.column.Layers[i].HeatProduction.Top)
	}
	depth, surface := m.column.Depth(), m.column.Surface.Temperature
	var slope, total float64 // the mean gradient the samples show
	for _, s := range f.Samples {
		z := s.Depth
		if s.HasPressure {
			z = s.Pressure / (m.column.Gravity * m.column.Layers[0].Density.At(surface, 0, 0))
		}
		if z > 0 {
			slope, total = slope+s.Temperature-surface, total+z
		}
	}
	rise := depth * slope / total
	if !(total > 0) || !(rise > 0) {
		rise = surface
	}
	b := &m.column.Base
	switch {
	case b.HasHeatFlow:
		m.start, m.scale = []float64{b.HeatFlow}, []float64{math.Max(math.Abs(b.HeatFlow), 0.01)}
	case b.HasTemperature:
		m.start, m.scale = []float64{b.Temperature}, []float64{math.Max(math.Abs(b.Temperature-surface), 100)}
	default:
		b.HasTemperature = true
		m.start, m.scale = []float64{surface + rise}, []float64{math.Max(rise, 100)}
	}
	if f.HeatProduction {
		m.start, m.scale = append(m.start, 1), append(m.scale, 1)
	}
	return m
}

// free is how many values are varied.
func (m *fitter) free() int {
	if m.held {
		return 1
	}
	return len(m.start)
}

// at solves the geotherm at x.
func (m *fitter) at(x []float64) (*fitState, error) {
	c := &m.column
	if c.Base.HasHeatFlow {
		c.Base.HeatFlow = x[0]
	} else if c.Base.Temperature = x[0]; !(x[0] > 0) {
		return nil, fmt.Errorf("basal temperature %g K", x[0])
	}
	if m.HeatProduction {
		for i := range c.Layers {
			c.Layers[i].HeatProduction.Top = x[1] * m.made[i]
		}
	}
	p, err := Solve(c)
	if err != nil {
		return nil, err
	}
	s := &fitState{x: slices.Clone(x), profile: p, residuals: make([]Residual, len(m.Samples))}
	for i := range m.Samples {
		if s.residuals[i], err = m.residual(p, i); err != nil {
			return nil, err
		}
		r := &s.residuals[i]
		s.chi2 += r.Residual * r.Residual / (r.Uncertainty * r.Uncertainty)
	}
	if math.IsNaN(s.chi2) || math.IsInf(s.chi2, 0) {
		return nil, fmt.Errorf("χ² is %g at %g", s.chi2, x)
	}
	return s, nil
}

func (m *fitter) residual(p *Profile, i int) (Residual, error) {
	s := m.Samples[i]
	r := Residual{Sample: s, Depth: s.Depth, Pressure: s.Pressure}
	j := 0
	if s.HasPressure {
		z, layer, ok := p.depthOf(s.Pressure)
		if !ok {
			last := p.Layers[len(p.Layers)-1].Nodes
			return r, fmt.Errorf("%s: pressure %.4g GPa is more than that at the column's base, %.4g GPa", s.name(i), s.Pressure/1e9, last[len(last)-1].P/1e9)
		}
		r.Depth, j = z, layer
	} else {
		for j+1 < len(p.Layers) && s.Depth > p.Layers[j].Bottom {
			j++
		}
	}
	T, P, slope := p.Layers[j].At(r.Depth)
	l := &m.column.Layers[j]
	spread := slope * s.DepthError
	if s.HasPressure {
		x := (r.Depth - p.Layers[j].Top) / l.Thickness
		spread = slope / (m.column.Gravity * l.Density.At(T, P, x)) * s.PressureError
	} else {
		r.Pressure = P
	}
	r.Model, r.Residual, r.Uncertainty = T, s.Temperature-T, math.Hypot(s.TemperatureError, spread)
	if !(r.Uncertainty > 0) {
		return r, fmt.Errorf("%s: the geotherm does not rise there and the sample has no error of temperature", s.name(i))
	}
	return r, nil
}

// depthOf finds where the pressure is P; ok is false below the base.
func (p *Profile) depthOf(P float64) (z float64, layer int, ok bool) {
	for i := range p.Layers {
		l := &p.Layers[i]
		if P > l.Nodes[len(l.Nodes)-1].P {
			continue
		}
		lo, hi := l.Top, l.Bottom
		for range 100 {
			mid := (lo + hi) / 2
			if mid <= lo || mid >= hi {
				break
			}
			if _, at, _ := l.At(mid); at < P {
				lo = mid
			} else {
				hi = mid
			}
		}
		return hi, i, true
	}
	return 0, 0, false
}

// jacobian is the derivative of the normalised residuals by the scaled values.
func (m *fitter) jacobian(s *fitState) (*mat.Dense, error) {
	J := mat.NewDense(len(m.Samples), m.free(), nil)
	for j := range m.free() {
		x := slices.Clone(s.x)
		x[j] = s.x[j] + fitStep*m.scale[j]
		above, err := m.at(x)
		if err != nil {
			return nil, err
		}
		x[j] = s.x[j] - fitStep*m.scale[j]
		below, err := m.at(x)
		if err != nil {
			return nil, err
		}
		for i := range m.Samples {
			J.Set(i, j, (above.normalised(i)-below.normalised(i))/(2*fitStep))
		}
	}
	return J, nil
}

func (s *fitState) normalised(i int) float64 {
	return s.residuals[i].Residual / s.residuals[i].Uncertainty
}

// minimise steps down from the start.
func (m *fitter) minimise() (*fitState, error) {
	x := slices.Clone(m.start)
	if m.held {
		x[1] = 0
	}
	s, err := m.at(x)
	if err != nil {
		return nil, fmt.Errorf("at the values the fit begins with: %w", err)
	}
	k := m.free()
	damping := 1e-3
	last := errors.New("none")
	for iteration := 1; iteration <= maxFitSteps; iteration++ {
		J, err := m.jacobian(s)
		if err != nil {
			return nil, err
		}
		r := mat.NewVecDense(len(m.Samples), nil)
		for i := range m.Samples {
			r.SetVec(i, s.normalised(i))
		}
		var normal mat.Dense
		var g mat.VecDense
		normal.Mul(J.T(), J)
		g.MulVec(J.T(), r)
		var whole mat.VecDense // the undamped step
		if err := whole.SolveVec(&normal, &g); err != nil {
			return nil, fmt.Errorf("the points do not depend on %s, or do not tell them apart", m.names())
		}
		s.iterations = iteration
		if gain := mat.Dot(&whole, &g); gain <= fitGain*s.chi2 || mat.Norm(&whole, math.Inf(1)) <= fitTolerance {
			next := slices.Clone(s.x)
			for j := range k {
				next[j] -= whole.AtVec(j) * m.scale[j]
			}
			t, err := m.at(next)
			if err != nil {
				return nil, err
			}
			t.iterations = iteration
			return t, nil
		}
		for {
			if damping > 1e10 {
				return nil, fmt.Errorf("does not converge: χ² stays at %g after %d steps; last failure: %w", s.chi2, iteration, last)
			}
			damped := mat.DenseCopyOf(&normal)
			for j := range k {
				damped.Set(j, j, normal.At(j, j)*(1+damping))
			}
			var d mat.VecDense
			if err := d.SolveVec(damped, &g); err != nil {
				return nil, err
			}
			next := slices.Clone(s.x)
			for j := range k {
				next[j] -= d.AtVec(j) * m.scale[j]
			}
			t, err := m.at(next)
			if err == nil && t.chi2 <= s.chi2 {
				s, damping = t, math.Max(damping/10, 1e-12)
				break
			}
			if err != nil {
				last = err
			}
			damping *= 10
		}
	}
	return nil, fmt.Errorf("does not converge in %d steps: χ² is %g at %g", maxFitSteps, s.chi2, s.x)
}
