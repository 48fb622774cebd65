package excision

import (
	"fmt"
	"math"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/heat"
)

// rock is how one rock bears a strain rate: creep laws made ready, or a number.
type rock struct {
	flow      *rheology.Flow
	viscosity column.Viscosity
	reference float64 // 1/s, at which the number holds
}

// stress returns τ_II in Pa at the strain rate e in 1/s, and d ln τ/d ln ε = 1/n.
func (r *rock) stress(e, T, P, x float64) (tau, perRate float64, err error) {
	if r.flow != nil {
		a, err := r.flow.Respond(e, T, P)
		return a.Stress, 1 / a.Exponent, err
	}
	eta, n := r.viscosity.At(x)
	if n != 1 {
		if !(r.reference > 0) {
			return 0, 0, fmt.Errorf("a viscosity given with a stress exponent of %g needs the strain rate it holds at", n)
		}
		eta *= math.Pow(e/r.reference, 1/n-1)
	}
	return 2 * eta * e, 1 / n, nil
}

// newRock makes a layer's rock ready, without its friction.
func newRock(r *column.Rock, limits rheology.Limits, reference float64) (*rock, error) {
	c := r.CreepWith(limits)
	if c == nil {
		return &rock{viscosity: r.Viscosity, reference: reference}, nil
	}
	c.Friction = nil
	f, err := c.For(r.Conditions(0, 0))
	return &rock{flow: f}, err
}

// ownRock is the zone's own creep in a layer, with the layer's grain size and water where
// the zone has none.
func (z *Zone) ownRock(r *column.Rock, limits rheology.Limits) (*rock, error) {
	c := *z.Creep
	c.Limits, c.Friction = limits, nil
	at := r.Conditions(0, 0)
	if z.GrainSize > 0 {
		at.GrainSize = z.GrainSize
	}
	if z.WaterMeasure != rheology.NoWater {
		at.Water, at.WaterMeasure = z.Water, z.WaterMeasure
	}
	f, err := c.For(at)
	return &rock{flow: f}, err
}

// panel is a part of a layer. T, P and the logarithms of stresses are parabolas through
// its top, middle and bottom.
type panel struct {
	half    float64 // of its height, m
	T, P, x [3]float64
}

// span is one layer of a section.
type span struct {
	name     string
	rock     *rock
	friction *rheology.Friction // the layer's own
	panels   []panel
	bottom   float64 // m
}

// thick is the height of a panel, m: a creep law's ln τ is then good to some 1e-5.
const thick = 2500.0

// section is the column as a balance of forces sees it.
type section struct{ spans []span }

// newSection cuts a column into panels.
func newSection(c *column.Column, p *heat.Profile, rocks func(*column.Layer) (*rock, error)) (*section, error) {
	s := &section{spans: make([]span, len(c.Layers))}
	for i := range c.Layers {
		l, h := &c.Layers[i], &p.Layers[i]
		r, err := rocks(l)
		if err != nil {
			return nil, fmt.Errorf("excision: %s: %w", l.Name, err)
		}
		n := int(math.Ceil((h.Bottom - h.Top) / thick))
		sp := span{name: l.Name, rock: r, friction: l.Friction, bottom: h.Bottom, panels: make([]panel, n)}
		for k := range sp.panels {
			q := &sp.panels[k]
			q.half = (h.Bottom - h.Top) / float64(2*n)
			for j := range 3 {
				q.x[j] = float64(2*k+j) / float64(2*n)
				if j == 0 && k > 0 {
					q.T[0], q.P[0] = sp.panels[k-1].T[2], sp.panels[k-1].P[2]
					continue
				}
				q.T[j], q.P[j], _ = h.At(h.Top + q.x[j]*(h.Bottom-h.Top))
			}
		}
		s.spans[i] = sp
	}
	return s, nil
}

// parabola through values at −1, 0 and 1.
type parabola struct{ a, b, c float64 }

func through(v [3]float64) parabola {
	return parabola{v[1], (v[2] - v[0]) / 2, (v[0]+v[2])/2 - v[1]}
}

func (p *parabola) at(t float64) float64 { return p.a + t*(p.b+t*p.c) }

// creeping fills the parabolas of ln τ and 1/n at the strain rate e over a panel; before is
// the panel above in the layer, whose lowest values are this one's first.
func (q *panel) creeping(r *rock, e float64, before *[2]float64, first bool) (lnTau, perRate parabola, err error) {
	var l, n [3]float64
	for j := range 3 {
		if j == 0 && !first {
			l[0], n[0] = before[0], before[1]
			continue
		}
		tau, m, err := r.stress(e, q.T[j], q.P[j], q.x[j])
		if err != nil {
			return lnTau, perRate, err
		}
		l[j], n[j] = math.Log(tau), m
	}
	*before = [2]float64{l[2], n[2]}
	return through(l), through(n), nil
}

// flows returns ∫min(2τ_II, 2τ_y) dz in N/m of the rocks from one layer on, stretched at
// the rate e in 1/s, and its derivative to ln e; τ_y is their own yield in extension.
func (s *section) flows(from int, e float64) (F, slope float64, err error) {
	for i := from; i < len(s.spans); i++ {
		sp := &s.spans[i]
		a, b := math.Inf(1), 0.0
		if f := sp.friction; f != nil {
			a = 2 * f.Yield(0, 1)
			b = 2*f.Yield(1e9, 1)/1e9 - a/1e9
		}
		dF, dS, _, err := sp.bears(sp.rock, e, 2, a, b)
		if err != nil {
			return 0, 0, fmt.Errorf("excision: %s: %w", sp.name, err)
		}
		F, slope = F+dF, slope+dS
	}
	return F, slope, nil
}

// bears integrates over a layer, of rock r strained at e in 1/s, the smaller of the
// differential stresses k τ_II of creep and a + b P of friction; last is that at its base.
func (sp *span) bears(r *rock, e, k, a, b float64) (F, slope, last float64, err error) {
	var before [2]float64
	for j := range sp.panels {
		q := &sp.panels[j]
		l, n, err := q.creeping(r, e, &before, j == 0)
		if err != nil {
			return 0, 0, 0, err
		}
		w := weaker{l: l, n: n, k: k, yields: !math.IsInf(a, 1)}
		if w.yields {
			w.friction = through([3]float64{a + b*q.P[0], a + b*q.P[1], a + b*q.P[2]})
		}
		dF, dS := w.integral()
		F += dF * q.half
		slope += dS * q.half
		last = w.at(1)
	}
	return F, slope, last, nil
}

// sliding is the differential stress that friction on a plane bears, as a + b P: extension
// unloads the plane, whose normal stress is P − Δσ sin²θ.
func sliding(f *rheology.Friction, dip, factor float64) (a, b float64) {
	if f == nil {
		return math.Inf(1), 0
	}
	mu := math.Tan(f.Angle)
	sin, cos := math.Sincos(dip)
	d := sin * (cos + mu*sin) / factor
	return f.Cohesion / d, mu * (1 - f.PoreFluid) / d
}

// bears returns what a zone bears per length of strike when it slips at s in m/s, in N/m,
// and its derivative to ln s:
//
//	F = ∫ min(2τ_creep/sin 2θ, Δσ_friction) dz + ∫_{below} 2τ_II(e_b) dz,  e_b = s cos θ/B
//
// the first over the layers down to its root, the second over those below. At its root
// stress is the shear stress on it, Pa.
func (z *Zone) bears(s *section, rocks []*rock, width, slip float64) (F, slope, stress float64, err error) {
	factor := z.factor()
	k := 2 * factor / math.Sin(2*z.Dip)
	e := slip / (2 * z.Width)
	for i, r := range rocks {
		sp := &s.spans[i]
		f := z.Friction
		if f == nil {
			f = sp.friction
		}
		a, b := sliding(f, z.Dip, factor)
		dF, dS, last, err := sp.bears(r, e, k, a, b)
		if err != nil {
			return 0, 0, 0, fmt.Errorf("excision: zone %s in %s: %w", z.Name, sp.name, err)
		}
		F, slope = F+dF, slope+dS
		stress = last * math.Sin(2*z.Dip) / 2
	}
	below, rate, err := s.flows(len(rocks), slip*z.Heave()/width)
	return F + below, slope + rate, stress, err
}

func (z *Zone) factor() float64 {
	if z.StrengthFactor == 0 {
		return 1
	}
	return z.StrengthFactor
}
