// Package state makes a column at one time consistent: temperature, pressure,
// density and viscosity agree with one another.
//
// Temperature and pressure come together from package heat (conductivity depends on
// both, pressure on the density, density on both). Density and viscosity then follow
// point by point: a creep law at its own T, P, grain size and water, at one strain
// rate for the whole column; a viscosity given as a number is used as it is.
//
// The density jump that drives an interface is taken at one pressure and temperature,
// those of the interface, on either side; the gradient inside a layer that counts for
// buoyancy is the compositional one alone. A column may have no temperature at all:
// then T is 0 everywhere, HasTemperature false, and nothing in it depends on T.
//
// What a result rests on is said in Warnings: laws recalled from memory or used
// beyond what their source covers, and viscosity limits that carry more than half.
package state

import (
	"fmt"
	"math"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/heat"
)

// Point is the state of one rock at one depth.
type Point struct {
	Depth, T, P     float64 // m, K, Pa
	Density         float64 // kg/m³
	Viscosity       float64 // secant, Pa s
	Exponent        float64 // tangent stress exponent
	Stress          float64 // τ_II at the strain rate, Pa
	Capped, Floored bool    // a viscosity limit carries more than half
	Yielding        bool    // friction decides, not creep
}

// State is a consistent column. T is NaN-free: HasTemperature is false and T zero
// where the column has no temperature.
type State struct {
	Column         *column.Column
	StrainRate     float64 // at which creep viscosities were evaluated, 1/s
	HasTemperature bool
	Layers         []Profile // one a layer, from the surface down
	Base           Point     // the half-space's rock just below the last layer
	Jumps          []float64 // [ρ] below minus above, kg/m³: surface, contacts, base
	SurfaceFlow    float64   // heat flow at the surface, W/m²
	BaseFlow       float64   // heat flow at the base, W/m²
	HeatResidual   float64   // largest relative residual of the steady heat equation
	Iterations     int
	Warnings       []string

	heat  *heat.Profile
	kinks [][]float64      // of a layer, increasing
	flows []*rheology.Flow // a layer's laws with its factor, limits, grain size, water; nil for numbers; the half-space last
}

// Profile is one layer's state on its own grid, top to bottom, ends included.
type Profile struct{ Points []Point }

// New returns the state of the column c at the strain rate in 1/s, a second
// invariant. c is checked with Validate, kept and not modified; do not change it
// while the state is in use. Creep laws need a strain rate > 0; without any, 0 is
// allowed and stresses are then 0.
//
// Jumps has len(c.Layers)+1 values: the surface against air of density 0, each
// contact, and the base rock against the last layer. The last is 0 over a rigid or
// free-slip base, which cannot move. Base is the half-space's rock, its temperature
// the column's at the base; below an inviscid base it has a density and no
// viscosity; otherwise it holds T and P only.
//
// Errors: those of Validate and package heat, and the layer and depth where a creep
// law or a density has no value.
func New(c *column.Column, strainRate float64) (*State, error) { return From(c, nil, strainRate) }

// From is New with the temperatures and pressures of a profile of this very column, as
// heat.Evolution.Snapshot returns them; nil: those of heat.Solve.
func From(c *column.Column, hp *heat.Profile, strainRate float64) (*State, error) {
	if err := c.Validate(); err != nil {
		return nil, fmt.Errorf("state: %w", err)
	}
	if !(strainRate >= 0) || math.IsInf(strainRate, 1) {
		return nil, fmt.Errorf("state: strain rate %g 1/s, must be >= 0", strainRate)
	}
	if hp == nil {
		var err error
		if hp, err = heat.Solve(c); err != nil {
			return nil, fmt.Errorf("state: %w", err)
		}
	}
	if len(hp.Layers) != len(c.Layers) {
		return nil, fmt.Errorf("state: a profile of %d layers for a column of %d", len(hp.Layers), len(c.Layers))
	}
	var err error
	s := &State{
		Column: c, StrainRate: strainRate, HasTemperature: hp.HasTemperature,
		SurfaceFlow: hp.SurfaceFlow, BaseFlow: hp.BaseFlow,
		HeatResidual: hp.Residual, Iterations: hp.Iterations,
		Layers: make([]Profile, len(c.Layers)), heat: hp, flows: make([]*rheology.Flow, len(c.Layers)+1),
	}
	for i := range c.Layers {
		l, nodes := &c.Layers[i], hp.Layers[i].Nodes
		if s.flows[i], err = flow(&l.Rock, c); err != nil {
			return nil, fmt.Errorf("state: %s: %w", l.Name, err)
		}
		ps := make([]Point, len(nodes))
		for j, n := range nodes {
			x := (n.Depth - hp.Layers[i].Top) / l.Thickness
			if ps[j], err = s.point(&l.Rock, s.flows[i], x, n.Depth, n.T, n.P); err != nil {
				return nil, fmt.Errorf("state: %s at %.0f m: %w", l.Name, n.Depth, err)
			}
		}
		s.Layers[i].Points = ps
	}
	if err := s.base(); err != nil {
		return nil, err
	}
	if err := s.jumps(); err != nil {
		return nil, err
	}
	s.kinks = make([][]float64, len(c.Layers))
	for i := range c.Layers {
		s.kinks[i] = s.yieldKinks(i, kinks(&hp.Layers[i], &c.Layers[i].Rock))
	}
	s.warn()
	return s, nil
}

// flow returns the rock's creep ready for its grain size, its water and the sense in
// which the column is strained; nil for a number.
func flow(r *column.Rock, c *column.Column) (*rheology.Flow, error) {
	creep := r.CreepWith(c.Limits)
	if creep == nil {
		return nil, nil
	}
	at := r.Conditions(0, 0)
	at.Sense = c.Sense
	return creep.For(at)
}

// point evaluates one rock.
func (s *State) point(r *column.Rock, f *rheology.Flow, x, z, T, P float64) (Point, error) {
	p := Point{Depth: z, T: T, P: P, Density: r.Density.At(T, P, x)}
	if !(p.Density > 0) || math.IsInf(p.Density, 1) {
		return p, fmt.Errorf("density %g kg/m³ at T = %.4g K, P = %.4g Pa", p.Density, T, P)
	}
	if err := column.Covered(r.Density, T, P); err != nil {
		return p, err
	}
	if err := r.Melt.Covers(P); err != nil {
		return p, err
	}
	if f == nil {
		p.Viscosity, p.Exponent = r.Viscosity.At(x)
		p.Stress = 2 * p.Viscosity * s.StrainRate
		return p, nil
	}
	a, err := f.Respond(s.StrainRate, T, P)
	p.Viscosity, p.Exponent, p.Stress, p.Capped, p.Floored, p.Yielding = a.Viscosity, a.Exponent, a.Stress, a.Capped, a.Floored, a.Yielding
	return p, err
}

// base fills the point below the last layer.
func (s *State) base() error {
	c := s.Column
	last := s.Layers[len(s.Layers)-1].Points
	b := last[len(last)-1]
	s.Base = Point{Depth: b.Depth, T: b.T, P: b.P}
	var err error
	switch c.Base.Boundary {
	case column.HalfSpace:
		n := len(c.Layers)
		if s.flows[n], err = flow(&c.Base.Rock, c); err == nil {
			s.Base, err = s.point(&c.Base.Rock, s.flows[n], 0, b.Depth, b.T, b.P)
		}
	case column.Inviscid:
		s.Base.Density = c.Base.Density.At(b.T, b.P, 0)
		err = column.Covered(c.Base.Density, b.T, b.P)
	}
	if err != nil {
		return fmt.Errorf("state: base at %.0f m: %w", b.Depth, err)
	}
	return nil
}

// jumps fills [ρ]_i = ρ_below(P_i, T_i) − ρ_above(P_i, T_i).
func (s *State) jumps() error {
	n := len(s.Layers)
	s.Jumps = make([]float64, n+1)
	s.Jumps[0] = s.Layers[0].Points[0].Density
	for i := 0; i < n; i++ {
		ps := s.Layers[i].Points
		above := ps[len(ps)-1].Density
		switch {
		case i+1 < n:
			s.Jumps[i+1] = s.Layers[i+1].Points[0].Density - above
		case s.Base.Density > 0:
			s.Jumps[n] = s.Base.Density - above
		}
		if math.IsNaN(s.Jumps[i+1]) {
			return fmt.Errorf("state: density jump %g kg/m³ below %s", s.Jumps[i+1], s.Column.Layers[i].Name)
		}
	}
	return nil
}
