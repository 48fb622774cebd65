package column

import (
	"errors"
	"fmt"
	"math"
)

// SeaWater is the density of the water that loads a column below sea level, kg/m³: common
// practice, no source.
const SeaWater = 1030.0

// Weight is a column as isostasy sees it: its thickness and two integrals of its in-situ
// density. The zero value is no column; Add puts pieces below one another.
type Weight struct {
	Thickness float64 // m
	Mass      float64 // ∫ρ dz, kg/m²
	Moment    float64 // of the mass above each depth, ∫m(z) dz, kg/m
}

// Add puts a piece below the others: its thickness in m, its mass in kg/m² and the density
// in kg/m³ at its top and at its bottom. Between them density is the parabola that has
// this mass: exact where it is constant, linear or quadratic in depth, and where the
// pressure is a cubic with those slopes.
func (w *Weight) Add(thickness, mass, top, bottom float64) {
	w.Moment += w.Mass*thickness + mass*thickness/2 + thickness*thickness*(top-bottom)/12
	w.Mass += mass
	w.Thickness += thickness
}

// AddUniform is Add of a piece of one density.
func (w *Weight) AddUniform(thickness, density float64) {
	w.Add(thickness, thickness*density, density, density)
}

func (w *Weight) check() error {
	if !(w.Thickness > 0 && w.Mass > 0 && w.Moment > 0) || !finite(w.Thickness, w.Mass, w.Moment) {
		return fmt.Errorf("isostasy: a column %g m thick with a mass of %g kg/m² and a moment of %g kg/m", w.Thickness, w.Mass, w.Moment)
	}
	return nil
}

// Reference is the column that elevation and potential energy are measured against.
type Reference struct {
	Elevation float64 // of its surface above sea level, m; water lies on it where negative
	Weight    Weight
}

// Asthenosphere is what columns float on, and what continues a column that ends above the
// level of compensation: one rock on the adiabat through a temperature and a pressure, so
// that its density depends on pressure alone. Where T or the heat capacity is 0 the rock
// keeps T.
type Asthenosphere struct {
	Rock  Rock
	Place float64 // relative depth in the rock's layer at which its density is taken
	T, P  float64 // K, Pa
}

// pressureStep is the longest step in Pa along the adiabat. The method is of fourth order:
// halving it changes depths by less than 1e-9 of the way (TestAsthenosphere).
const pressureStep = 25e6

// stretch is what lies between two pressures.
type stretch struct {
	T       float64 // K, at the second
	depth   float64 // m from the first to the second, negative upwards
	moment  float64 // ∫P dz over it, N/m
	density float64 // kg/m³, at the second
}

// between integrates dz = dP/(ρg) and ∫P dz from the pressure from, where the temperature
// is T, to the pressure to.
func (a *Asthenosphere) between(gravity, T, from, to float64) (stretch, error) {
	s := stretch{T: T}
	n := max(1, math.Ceil(math.Abs(to-from)/pressureStep))
	h := (to - from) / n
	var failed error
	slopes := func(T, P float64) [3]float64 {
		rho := a.Rock.Density.At(T, P, a.Place)
		err := errors.Join(Covered(a.Rock.Density, T, P), a.Rock.Melt.Covers(P))
		if err == nil && (!positive(rho) || !(T >= 0)) {
			err = fmt.Errorf("isostasy: asthenosphere of %g kg/m³ at T = %.4g K, P = %.4g Pa", rho, T, P)
		}
		if failed == nil {
			failed = err
		}
		s.density = rho
		var perPascal float64
		if a.T > 0 && a.Rock.HeatCapacity > 0 {
			perPascal = a.Rock.Adiabat(T, P, a.Place)
		}
		return [3]float64{perPascal, 1 / (rho * gravity), P / (rho * gravity)}
	}
	for i := range int(n) {
		P := from + h*float64(i)
		k1 := slopes(s.T, P)
		k2 := slopes(s.T+h/2*k1[0], P+h/2)
		k3 := slopes(s.T+h/2*k2[0], P+h/2)
		k4 := slopes(s.T+h*k3[0], P+h)
		if failed != nil {
			return stretch{}, failed
		}
		sum := func(j int) float64 { return h / 6 * (k1[j] + 2*(k2[j]+k3[j]) + k4[j]) }
		s.T, s.depth, s.moment = s.T+sum(0), s.depth+sum(1), s.moment+sum(2)
	}
	return s, nil
}

// from is between from the adiabat's own temperature at the pressure from.
func (a *Asthenosphere) from(gravity, from, to float64) (stretch, error) {
	if a.Rock.Density == nil || !(gravity > 0) || !finite(gravity, a.T, a.P, from, to) || !(from >= 0 && to >= 0) {
		return stretch{}, fmt.Errorf("isostasy: asthenosphere from %g to %g Pa through %g K at %g Pa under gravity %g m/s²", from, to, a.T, a.P, gravity)
	}
	T := a.T
	if a.P != from && a.T > 0 && a.Rock.HeatCapacity > 0 {
		s, err := a.between(gravity, T, a.P, from)
		if err != nil {
			return stretch{}, err
		}
		T = s.T
	}
	return a.between(gravity, T, from, to)
}

// Under puts a thickness in m of asthenosphere below a column, at the pressure there.
// Errors: a density that is not positive or that a table does not cover.
func (a *Asthenosphere) Under(gravity float64, w *Weight, thickness float64) error {
	top := gravity * w.Mass
	s, err := a.from(gravity, top, top)
	if err != nil {
		return err
	}
	bottom, last := top+s.density*gravity*thickness, s.density
	for range 50 {
		if s, err = a.from(gravity, top, bottom); err != nil {
			return err
		}
		off := s.density * gravity * (thickness - s.depth)
		bottom += off
		if math.Abs(off) <= 1e-14*bottom {
			break
		}
	}
	w.Add(thickness, (bottom-top)/gravity, last, s.density)
	return nil
}

// Isostasy is how high a column stands by local isostasy, and how hard it pushes on the
// reference column beside it.
type Isostasy struct {
	Elevation       float64 // of the surface above sea level, m; negative under water
	PotentialEnergy float64 // Γ = ∫P dz from the top of rock or water down to Level, N/m
	Force           float64 // ΔΓ = Γ − Γ of the reference, N/m; > 0 drives extension
	Level           float64 // of compensation: the deeper of the two columns' bases, m below sea level
	Density         float64 // of the asthenosphere there, kg/m³
}

// Balance floats a column beside a reference on one asthenosphere. Both weigh the same at
// the level of compensation, with sea water on a surface below sea level. Γ is taken from
// each column's own top down to that common level; the water belongs to it, for it pushes
// on the slope between the columns. With equal weights
//
//	ΔΓ = −g ∫ z Δρ dz
//
// whatever the level below both columns (Turcotte & Schubert, Geodynamics, from memory).
// Cutting out Δh of density ρ moves the surface by −Δh (1 − ρ/ρ_a).
//
// The column's own densities are taken as they are: the water does not squeeze its rock
// (20 m of elevation in 100 km of mantle under 2.5 km of water).
//
// Errors: columns without thickness or mass, an asthenosphere that is no denser than the
// water or has no density at a pressure met on the way. Gravity is in m/s².
func Balance(gravity float64, w Weight, r Reference, a Asthenosphere) (Isostasy, error) {
	if err := errors.Join(w.check(), r.Weight.check()); err != nil {
		return Isostasy{}, err
	}
	if !finite(r.Elevation) {
		return Isostasy{}, fmt.Errorf("isostasy: a reference at %g m", r.Elevation)
	}
	refDepth := r.Weight.Thickness - r.Elevation
	refFoot := gravity * (r.Weight.Mass + SeaWater*max(0, -r.Elevation))
	// down is the stretch from the reference's base to the column's, under so much water.
	down := func(water float64) (stretch, error) {
		return a.from(gravity, refFoot, gravity*(w.Mass+SeaWater*water))
	}
	s, err := down(0)
	if err != nil {
		return Isostasy{}, err
	}
	out := Isostasy{Elevation: w.Thickness - refDepth - s.depth}
	if out.Elevation < 0 {
		if out.Elevation, s, err = flooded(w.Thickness-refDepth, s, down); err != nil {
			return Isostasy{}, err
		}
	}
	foot := refFoot
	if s.depth > 0 { // the column is the deeper: the reference goes on
		foot = gravity * (w.Mass + SeaWater*max(0, -out.Elevation))
	}
	out.Level = refDepth + max(s.depth, 0)
	mine := energy(gravity, w, out.Elevation)
	ref := energy(gravity, r.Weight, r.Elevation)
	if s.depth > 0 {
		ref += s.moment
	} else {
		mine -= s.moment
	}
	end, err := a.from(gravity, foot, foot)
	if err != nil {
		return Isostasy{}, err
	}
	out.PotentialEnergy, out.Force, out.Density = mine, mine-ref, end.density
	if !finite(out.Elevation, out.PotentialEnergy, out.Force, out.Level) {
		return Isostasy{}, fmt.Errorf("isostasy: elevation %g m, potential energy %g N/m, force %g N/m", out.Elevation, out.PotentialEnergy, out.Force)
	}
	return out, nil
}

// flooded returns the elevation, below sea level, of a column that is so much thicker than
// the reference's base is deep, and the stretch between their bases: each metre of water
// sinks the column by ρ_w/ρ_a.
func flooded(thicker float64, s stretch, down func(water float64) (stretch, error)) (float64, stretch, error) {
	var water float64
	for range 50 {
		if !(s.density > SeaWater) {
			return 0, s, fmt.Errorf("isostasy: an asthenosphere of %g kg/m³ does not carry water of %g kg/m³", s.density, SeaWater)
		}
		step := (s.depth - thicker - water) / (1 - SeaWater/s.density)
		water += step
		var err error
		if s, err = down(max(water, 0)); err != nil {
			return 0, s, err
		}
		if math.Abs(step) <= 1e-13*(math.Abs(thicker)+math.Abs(s.depth)+water) {
			return -water, s, nil
		}
	}
	return 0, s, fmt.Errorf("isostasy: no depth of water found near %g m", water)
}

// energy is ∫P dz from the top of water or rock to a column's base, N/m.
func energy(gravity float64, w Weight, elevation float64) float64 {
	water := max(0, -elevation)
	return gravity * (SeaWater*water*water/2 + SeaWater*water*w.Thickness + w.Moment)
}
