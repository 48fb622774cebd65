package column

import (
	"fmt"
	"math"

	"keelfall/rheology"
)

// Validate returns the first thing that makes the column unusable, with its numbers:
// no layer, a thickness or viscosity that is not positive, root layers that are not
// adjacent, creep or thermal expansion without a temperature, a law without the grain
// size or water it needs, a geotherm that does not cover the column.
func (c *Column) Validate() error {
	switch {
	case !positive(c.Gravity):
		return fmt.Errorf("column: gravity %g m/s², must be > 0", c.Gravity)
	case len(c.Layers) == 0:
		return fmt.Errorf("column: no layers")
	case c.Surface.Boundary != Free && c.Surface.Boundary != FreeSlip && c.Surface.Boundary != Rigid:
		return fmt.Errorf("column: surface boundary %v; known are free, free-slip, rigid", c.Surface.Boundary)
	case c.Base.Boundary < FreeSlip || c.Base.Boundary > Inviscid:
		return fmt.Errorf("column: base boundary %v; known are half-space, inviscid, free-slip, rigid", c.Base.Boundary)
	case c.Sense != 0 && c.Sense != 1 && c.Sense != -1:
		return fmt.Errorf("column: sense of strain %g, must be 1, 0 or -1", c.Sense)
	case c.Limits.Lowest < 0 || c.Limits.Highest < 0 || math.IsNaN(c.Limits.Lowest+c.Limits.Highest):
		return fmt.Errorf("column: viscosity limits %g and %g Pa s, must be >= 0", c.Limits.Lowest, c.Limits.Highest)
	case c.Limits.Highest > 0 && c.Limits.Lowest > c.Limits.Highest:
		return fmt.Errorf("column: lowest viscosity %g Pa s is above the highest, %g", c.Limits.Lowest, c.Limits.Highest)
	}
	names := map[string]bool{}
	for i := range c.Layers {
		l := &c.Layers[i]
		if l.Name == "" {
			return fmt.Errorf("column: layer %d has no name", i+1)
		}
		if names[l.Name] {
			return fmt.Errorf("column: two layers are called %q", l.Name)
		}
		names[l.Name] = true
		if !positive(l.Thickness) {
			return fmt.Errorf("column: %s: thickness %g m, must be > 0", l.Name, l.Thickness)
		}
		if err := c.rock(&l.Rock, true); err != nil {
			return fmt.Errorf("column: %s: %w", l.Name, err)
		}
	}
	if first, last, ok := c.RootSpan(); ok {
		for i := first; i <= last; i++ {
			if !c.Layers[i].Root {
				return fmt.Errorf("column: %s lies between root layers but is not one", c.Layers[i].Name)
			}
		}
	}
	if b := c.Base.Boundary; b == HalfSpace || b == Inviscid {
		if err := c.rock(&c.Base.Rock, b == HalfSpace); err != nil {
			return fmt.Errorf("column: base: %w", err)
		}
	}
	return c.thermal()
}

// rock checks one rock; viscous says whether its viscosity is used.
func (c *Column) rock(r *Rock, viscous bool) error {
	if err := validDensity(r.Density); err != nil {
		return err
	}
	if r.Density.NeedsTemperature() && !c.HasTemperature() {
		return fmt.Errorf("its density depends on temperature and the column has none")
	}
	if m := r.Melt; m != nil {
		if err := m.Validate(); err != nil {
			return err
		}
		if m.NeedsTemperature() && !c.HasTemperature() {
			return fmt.Errorf("its solidus needs a temperature and the column has none")
		}
	}
	if !viscous {
		return nil
	}
	return c.viscosity(r)
}

func (c *Column) viscosity(r *Rock) error {
	v := &r.Viscosity
	if !positive(v.FactorOr1()) {
		return fmt.Errorf("viscosity factor %g, must be > 0", v.Factor)
	}
	if v.Creep == nil {
		if r.Friction != nil {
			return fmt.Errorf("friction belongs to creep laws; a viscosity given as a number is used as it is")
		}
		if !positive(v.Top) || !positive(v.Bottom) {
			return fmt.Errorf("viscosity %g to %g Pa s, must be > 0", v.Top, v.Bottom)
		}
		if !(v.Exponent >= 1) || math.IsInf(v.Exponent, 1) {
			return fmt.Errorf("stress exponent %g, must be >= 1", v.Exponent)
		}
		return nil
	}
	if !c.HasTemperature() {
		return fmt.Errorf("creep laws need a temperature and the column has none: give a basal temperature, a basal heat flow or a geotherm")
	}
	for _, l := range v.Creep.AllLaws() {
		if err := l.Validate(); err != nil {
			return err
		}
	}
	creep := r.CreepWith(rheology.Limits{})
	if f := creep.Friction; f != nil {
		if err := f.Validate(); err != nil {
			return err
		}
		creep.Friction = nil // of cohesion 0 has no strength at P = 0
	}
	// Any temperature and strain rate show whether grain size and water are there.
	_, err := creep.Respond(1e-15, r.Conditions(1000, 0))
	return err
}

func (c *Column) thermal() error {
	if !c.HasTemperature() {
		return nil
	}
	if !positive(c.Surface.Temperature) {
		return fmt.Errorf("column: surface temperature %g K, must be > 0", c.Surface.Temperature)
	}
	for i := range c.Layers {
		l := &c.Layers[i]
		if !positive(l.Conductivity.Reference) || math.IsNaN(l.Conductivity.PerKelvin+l.Conductivity.PerPascal+l.Conductivity.At) {
			return fmt.Errorf("column: %s: conductivity %g W/m/K, must be > 0", l.Name, l.Conductivity.Reference)
		}
		h := l.HeatProduction
		if math.IsNaN(h.Top) || math.IsInf(h.Top, 0) || !(h.DecayLength >= 0) {
			return fmt.Errorf("column: %s: heat production %g W/m³ with decay length %g m", l.Name, h.Top, h.DecayLength)
		}
	}
	if len(c.Geotherm) > 0 {
		return c.geotherm()
	}
	b := c.Base
	switch {
	case b.HasTemperature && b.HasHeatFlow:
		return fmt.Errorf("column: base has a temperature (%g K) and a heat flow (%g W/m²); one of them", b.Temperature, b.HeatFlow)
	case b.HasTemperature && !positive(b.Temperature):
		return fmt.Errorf("column: basal temperature %g K, must be > 0", b.Temperature)
	case b.HasHeatFlow && (math.IsNaN(b.HeatFlow) || math.IsInf(b.HeatFlow, 0)):
		return fmt.Errorf("column: basal heat flow %g W/m²", b.HeatFlow)
	}
	return nil
}

// coverTolerance is how far, relative to the column, a given geotherm may stop short
// of the surface or the base: round-off of sums of thicknesses.
const coverTolerance = 1e-9

func (c *Column) geotherm() error {
	g := c.Geotherm
	for i, p := range g {
		if !positive(p.Temperature) || math.IsNaN(p.Depth) || math.IsInf(p.Depth, 0) {
			return fmt.Errorf("column: geotherm point %d: %g K at %g m", i+1, p.Temperature, p.Depth)
		}
		if i > 0 && !(p.Depth > g[i-1].Depth) {
			return fmt.Errorf("column: geotherm point %d at %g m is not below point %d at %g m", i+1, p.Depth, i, g[i-1].Depth)
		}
	}
	depth := c.Depth()
	if len(g) < 2 || g[0].Depth > coverTolerance*depth || g[len(g)-1].Depth < depth*(1-coverTolerance) {
		return fmt.Errorf("column: the geotherm's %d points from %g to %g m do not cover the column, 0 to %g m", len(g), g[0].Depth, g[len(g)-1].Depth, depth)
	}
	return nil
}

func positive(x float64) bool { return x > 0 && !math.IsInf(x, 1) }

// String returns the boundary's name as it is written in an experiment.
func (b Boundary) String() string {
	switch b {
	case Free:
		return "free"
	case FreeSlip:
		return "free-slip"
	case Rigid:
		return "rigid"
	case HalfSpace:
		return "half-space"
	case Inviscid:
		return "inviscid"
	}
	return fmt.Sprintf("boundary %d", int(b))
}
