package heat

import (
	"fmt"
	"math"

	"keelfall/column"
)

// Solve returns the column's temperature and pressure: its given geotherm where it
// has one, the steady geotherm where its base has a temperature or a heat flow, else
// the pressure alone.
func Solve(c *column.Column) (*Profile, error) {
	switch {
	case len(c.Geotherm) > 0:
		return Given(c)
	case c.Base.HasTemperature || c.Base.HasHeatFlow:
		return Steady(c)
	}
	return Pressure(c)
}

// Steady returns the steady conductive geotherm, with the pressure that agrees with
// it. The column is one that column.Validate accepts, with a basal temperature or a
// basal heat flow.
//
// A basal temperature is met to 1e-13 of its value. Residual is an independent check
// of the heat balance: κ_c dT/dz is taken from the stored curves in the middle of
// every step, where no equation was imposed, and its change from one middle to the
// next (to the surface and basal flow at the ends) is compared with the heat produced
// between, by a quadrature of H; the largest misfit is given relative to the largest
// heat flow or to κ_c T/depth, whichever is more.
//
// Errors: a DomainError where the temperature falls to 0 K or the conductivity is not
// positive, and one with the bracket where no heat flow meets the basal temperature.
func Steady(c *column.Column) (*Profile, error) {
	p := newProfile(c)
	var made float64
	for i := range c.Layers {
		made += c.Layers[i].HeatProduction.Integral(c.Layers[i].Thickness)
	}
	ms := make([]march, len(c.Layers))
	for i := range ms {
		ms[i] = march{layer: &c.Layers[i], g: c.Gravity, top: p.Layers[i].Top}
	}
	if c.Base.HasHeatFlow {
		p.SurfaceFlow = c.Base.HeatFlow + made
		p.Iterations = 1
		if _, err := p.shoot(c, ms, p.SurfaceFlow); err != nil {
			return nil, err
		}
	} else {
		q, err := p.basalTemperature(c, ms)
		if err != nil {
			return nil, err
		}
		p.SurfaceFlow = q
	}
	p.BaseFlow = p.SurfaceFlow - made
	for i := range ms {
		p.Layers[i].spans = ms[i].curves(make([]span, 0, len(p.Layers[i].Nodes)), p.Layers[i].Nodes)
	}
	p.Residual = p.residual(c)
	return p, nil
}

// newProfile lays out the grid.
func newProfile(c *column.Column) *Profile {
	p := &Profile{HasTemperature: c.HasTemperature(), Layers: make([]Layer, len(c.Layers))}
	var top float64
	for i := range c.Layers {
		l := &c.Layers[i]
		bottom := top + l.Thickness
		p.Layers[i] = Layer{Top: top, Bottom: bottom, Nodes: grid(top, bottom, steps(l.Thickness, l.HeatProduction.DecayLength))}
		top = bottom
	}
	return p
}

// shoot integrates down from the surface with the heat flow q there and returns the
// temperature at the base.
func (p *Profile) shoot(c *column.Column, ms []march, q float64) (float64, error) {
	T, P := c.Surface.Temperature, 0.0
	for i := range ms {
		nodes := p.Layers[i].Nodes
		nodes[0].T, nodes[0].P = T, P
		ms[i].flow = q
		if err := ms[i].run(nodes); err != nil {
			return 0, err
		}
		last := nodes[len(nodes)-1]
		T, P, q = last.T, last.P, last.Flow
	}
	return T, nil
}

const (
	basalTolerance = 1e-13 // of the basal temperature; round-off is near 1e-14
	looseTolerance = 1e-10 // where one unit in the last place of q changes T by more
	maxShots       = 100
)

// basalTemperature finds the surface heat flow at which the base has its temperature,
// by secant steps. They are kept inside the bracket, once there is one, and replaced by
// halving it where they gain little; without one, a step that gains little is doubled.
// Too cold or too hot for the physics counts as far below or above.
func (p *Profile) basalTemperature(c *column.Column, ms []march) (float64, error) {
	want := c.Base.Temperature
	q, resistance, err := p.guess(c)
	if err != nil {
		return 0, err
	}
	cold, hot := math.Inf(-1), math.Inf(1) // flows known to be too low and too high
	step, before := 0.0, math.Inf(1)       // the last step and the misfit before it
	var misfit float64
	var lastErr error
	for p.Iterations = 1; p.Iterations <= maxShots; p.Iterations++ {
		T, err := p.shoot(c, ms, q)
		misfit = T - want
		if err != nil {
			lastErr = err
			misfit = math.Inf(1)
			if d, ok := err.(*DomainError); ok && d.Flow < 0 {
				misfit = math.Inf(-1)
			}
		}
		if math.Abs(misfit) <= basalTolerance*want {
			return q, nil
		}
		if misfit < 0 {
			cold = max(cold, q)
		} else {
			hot = min(hot, q)
		}
		next := -misfit / resistance
		if secant := step * misfit / (before - misfit); secant*misfit < 0 && !math.IsInf(before, 0) {
			next = secant
		}
		slow := math.Abs(misfit) > math.Abs(before)/2 || math.IsInf(misfit, 0)
		bracket := !math.IsInf(cold, 0) && !math.IsInf(hot, 0)
		switch {
		case bracket && (slow || q+next <= cold || q+next >= hot):
			next = (cold+hot)/2 - q
		case !bracket && math.IsInf(misfit, 0):
			next = math.Copysign(max(2*math.Abs(step), want/resistance), -misfit)
		case !bracket && slow && step != 0:
			next *= 2
		}
		if q+next == q { // the last digit of q is worth more than the tolerance
			if math.Abs(misfit) <= looseTolerance*want {
				return q, nil
			}
			break
		}
		step, before = next, misfit
		q += next
	}
	if lastErr == nil {
		lastErr = fmt.Errorf("none failed")
	}
	return 0, fmt.Errorf("heat: basal temperature %g K not met: with %g W/m² at the surface the misfit is %g K; too cold at %g, too hot at %g W/m²; last failure: %w", want, q, misfit, cold, hot, lastErr)
}

// guess returns a surface heat flow and the column's thermal resistance in K/(W/m²)
// with each layer's conductivity taken at a straight geotherm's middle.
func (p *Profile) guess(c *column.Column) (q, resistance float64, err error) {
	var P, made, lost float64 // lost: by how much the heat made lowers T at the base
	rise, depth := c.Base.Temperature-c.Surface.Temperature, c.Depth()
	for i := range c.Layers {
		l := &c.Layers[i]
		mid := (p.Layers[i].Top + p.Layers[i].Bottom) / 2
		T := c.Surface.Temperature + rise*mid/depth
		half := c.Gravity * l.Density.At(T, P, 0.5) * l.Thickness / 2
		k := l.Conductivity.Value(T, P+half)
		if !(k > 0) {
			return 0, 0, &DomainError{l.Name, mid, T, k, 0}
		}
		P += 2 * half
		resistance += l.Thickness / k
		lost += (made + l.HeatProduction.Integral(l.Thickness/2)) * l.Thickness / k
		made += l.HeatProduction.Integral(l.Thickness)
	}
	return (rise + lost) / resistance, resistance, nil
}
