package heat

import (
	"fmt"
	"math"
	"slices"

	"keelfall/column"
)

// stratum is a layer of the moving column: cells lo to hi−1.
type stratum struct {
	name   string
	rock   column.Rock
	root   bool
	below  bool // rock of the base that came in
	c      float64
	k      column.Conductivity
	solid  column.Density   // without melt
	react  *column.Reaction // solid, where it is two-state rock
	melt   *column.Melt     // where its fraction follows T and P
	latent float64          // J/kg; 0 without melt
	lo, hi int
	worn   float64 // mass that has gone from its top, less what came there, kg per m² of the present area
	born   float64 // thickness in m of its relative depths, to which its heat production belongs
}

func newStratum(name string, rock column.Rock, root bool, thickness float64) stratum {
	s := stratum{name: name, rock: rock, root: root, c: rock.HeatCapacity, k: rock.Conductivity, solid: rock.Density, born: thickness}
	if m, ok := s.solid.(column.Molten); ok {
		s.solid = m.Solid
	}
	if r, ok := s.solid.(column.Reaction); ok {
		s.react = &r
	}
	if rock.Melt.NeedsTemperature() {
		s.melt, s.latent = rock.Melt, rock.Melt.LatentHeat
	}
	return s
}

// density of the rock without melt, kg/m³, at the relative depth x and reacted share X.
func (s *stratum) density(T, P, x, X float64) float64 {
	if s.react != nil {
		return s.react.AtExtent(T, P, x, X)
	}
	return s.solid.At(T, P, x)
}

// touch makes the tangent of density.
func (s *stratum) touch(T, P, x, X float64) tangent {
	t := tangent{T: T, P: P, X: X}
	if s.react == nil {
		t.rho, t.perKelvin, t.perPascal = s.solid.At(T, P, x), s.solid.PerKelvin(T, P, x), s.solid.PerPascal(T, P, x)
	} else {
		a, b := s.react.Protolith, s.react.Product
		va, vb := 1/a.At(T, P, x), 1/b.At(T, P, x)
		t.rho = 1 / ((1-X)*va + X*vb)
		pa, pb := t.rho*va, t.rho*vb
		pa, pb = (1-X)*pa*pa, X*pb*pb
		t.perKelvin = pa*a.PerKelvin(T, P, x) + pb*b.PerKelvin(T, P, x)
		t.perPascal = pa*a.PerPascal(T, P, x) + pb*b.PerPascal(T, P, x)
		t.perX = -t.rho * t.rho * (vb - va)
	}
	t.touched = t.rho
	return t
}

// bulk is the density with melt in it, of a solid of density rho.
func (s *stratum) bulk(rho, T, P float64) float64 {
	if s.melt == nil || s.melt.Density == 0 {
		return rho
	}
	phi, _ := s.melt.At(T, P)
	return rho + phi*(s.melt.Density-rho)
}

// enthalpy returns e = c_p T + L φ(T, P) in J/kg and (∂e/∂T)_P.
func (s *stratum) enthalpy(T, P float64) (e, perKelvin float64) {
	if s.latent == 0 {
		return s.c * T, s.c
	}
	phi, d := s.melt.At(T, P)
	return s.c*T + s.latent*phi, s.c + s.latent*d
}

// temperature is the T in K at which the enthalpy is e.
func (s *stratum) temperature(e, P float64) float64 {
	if s.latent == 0 {
		return e / s.c
	}
	solidus, liquidus := s.melt.Solidus.At(P), s.melt.Liquidus.At(P)
	switch {
	case e <= s.c*solidus:
		return e / s.c
	case e >= s.c*liquidus+s.latent:
		return (e - s.latent) / s.c
	}
	return solidus + (e-s.c*solidus)/(s.c+s.latent/(liquidus-solidus))
}

// cell is one parcel of rock.
type cell struct {
	m     float64 // mass, kg per m² of the present area
	T, P  float64 // K; Pa, at its middle
	e     float64 // enthalpy c_p T + L φ, J/kg
	H     float64 // heat production, W/kg
	X     float64 // reacted share of the mass
	x     float64 // relative depth in its layer when the layer was new
	layer int
	solid tangent
}

// tangent is a density as a linear function near T, P and X; rho follows X.
type tangent struct {
	T, P, X                   float64
	touched, perX             float64
	rho, perKelvin, perPascal float64
}

func (t *tangent) at(T, P float64) float64 {
	return t.rho + t.perKelvin*(T-t.T) + t.perPascal*(P-t.P)
}

// How far T, P and X may go from where a tangent touches: the curvature of thermal
// expansion, some 1e-8/K², then costs 1e-8 of the density.
const (
	tangentT = 2.0  // K
	tangentP = 2e7  // Pa
	tangentX = 3e-3 // costs 1e-7 of the density, where the parts' differ by a seventh
)

// settle makes T and the density agree with the cell's enthalpy and pressure, at which its
// melt has to have a solidus and a liquidus.
func (ev *Evolution) settle(c *cell) {
	s := &ev.strata[c.layer]
	if s.latent != 0 {
		c.T = s.temperature(c.e, c.P)
	}
	if s.melt != nil && ev.err == nil {
		if err := s.melt.Covers(c.P); err != nil {
			ev.err = fmt.Errorf("heat: %s at %s: %w", s.name, inMyr(ev.t), err)
		}
	}
	t := &c.solid
	if math.Abs(c.X-t.X) <= tangentX && math.Abs(c.T-t.T) <= tangentT && math.Abs(c.P-t.P) <= tangentP {
		t.rho = t.touched + t.perX*(c.X-t.X)
		return
	}
	ev.touch(c)
}

// touch renews the tangent.
func (ev *Evolution) touch(c *cell) {
	s := &ev.strata[c.layer]
	c.solid = s.touch(c.T, c.P, c.x, c.X)
	t := &c.solid
	if ev.err != nil {
		return
	}
	if !(t.rho > 0) || math.IsInf(t.rho, 1) || math.IsNaN(t.perKelvin+t.perPascal) {
		ev.err = fmt.Errorf("heat: %s: density %g kg/m³ at T = %.4g K, P = %.4g Pa", s.name, t.rho, c.T, c.P)
	} else if err := column.Covered(s.rock.Density, c.T, c.P); err != nil {
		ev.err = fmt.Errorf("heat: %s: %w", s.name, err)
	}
}

// rho is the density of the cell now, kg/m³.
func (ev *Evolution) rho(c *cell) float64 {
	return ev.strata[c.layer].bulk(c.solid.at(c.T, c.P), c.T, c.P)
}

// thickness of the cell now, m.
func (ev *Evolution) thickness(c *cell) float64 { return c.m / ev.rho(c) }

// press computes the pressures from the masses. With work, what a sudden change of
// pressure does to the rock is added to its enthalpy: α T ΔP/ρ.
func (ev *Evolution) press(work bool) {
	var above float64
	for i := range ev.cells {
		c := &ev.cells[i]
		P := ev.gravity * (above + c.m/2)
		above += c.m
		if work && P != c.P {
			d := ev.expansion(c) * c.T * (P - c.P)
			c.e += d
			ev.energy.Compression += c.m * d
			ev.energy.Moved += math.Abs(c.m * d)
			if s := &ev.strata[c.layer]; s.latent == 0 {
				c.T = c.e / s.c
			}
		}
		c.P = P
		ev.settle(c)
	}
}

// expansion is α/ρ of the rock without melt, m³/kg/K.
func (ev *Evolution) expansion(c *cell) float64 {
	rho := c.solid.at(c.T, c.P)
	return -c.solid.perKelvin / (rho * rho)
}

// insert puts cells of a new stratum in front of stratum at.
func (ev *Evolution) insert(at int, s stratum, cells []cell) {
	lo := len(ev.cells)
	if at < len(ev.strata) {
		lo = ev.strata[at].lo
	}
	s.lo = lo
	ev.strata = slices.Insert(ev.strata, at, s)
	ev.cells = slices.Insert(ev.cells, lo, cells...)
	for i := range ev.tracks {
		if ev.tracks[i].layer >= at {
			ev.tracks[i].layer++
		}
	}
	for i := range ev.cells[lo : lo+len(cells)] {
		ev.cells[lo+i].layer = at
	}
	for i := lo + len(cells); i < len(ev.cells); i++ {
		ev.cells[i].layer++
	}
	ev.index()
}

// drop takes out an empty stratum.
func (ev *Evolution) drop(at int) {
	ev.end(at, "removed with "+ev.strata[at].name)
	ev.strata = slices.Delete(ev.strata, at, at+1)
	for i := range ev.tracks {
		if t := &ev.tracks[i]; t.layer > at {
			t.layer--
		}
	}
	for i := range ev.cells {
		if ev.cells[i].layer > at {
			ev.cells[i].layer--
		}
	}
	ev.index()
}

// index renews the strata's ranges of cells.
func (ev *Evolution) index() {
	i := 0
	for j := range ev.strata {
		s := &ev.strata[j]
		s.lo = i
		for i < len(ev.cells) && ev.cells[i].layer == j {
			i++
		}
		s.hi = i
	}
	ev.fresh = false
}

// find returns the stratum of that name.
func (ev *Evolution) find(name string) (int, bool) {
	for i := range ev.strata {
		if ev.strata[i].name == name {
			return i, true
		}
	}
	return 0, false
}

// depth is the column's thickness and own that without rock of the base at its foot, m.
func (ev *Evolution) depths() (all, own float64) {
	for i := range ev.cells {
		c := &ev.cells[i]
		all += ev.thickness(c)
		if !ev.strata[c.layer].below {
			own = all
		}
	}
	return all, own
}
