package excision

import (
	"fmt"
	"math"

	"keelfall/column"
	"keelfall/solver/heat"
)

// balanced is ln x at which F(x) is the force, between lo and hi; beyond is −1 where F is
// larger already at lo, 1 where it is smaller still at hi. F rises with x. Newton's method on
// ln F against ln x, kept inside the bracket and replaced by halving it where it leaves;
// ln x is good to 1e-10.
func balanced(F func(x float64) (F, slope float64, err error), force, lo, hi, guess float64) (lnX float64, beyond int, err error) {
	target := math.Log(force)
	x := min(max(guess, lo), hi)
	low, high := false, false // the bracket's ends are known to be below and above
	for range 200 {
		f, slope, err := F(math.Exp(x))
		if err != nil {
			return 0, 0, err
		}
		if !(f > 0) || math.IsInf(f, 1) {
			return 0, 0, fmt.Errorf("excision: a strength of %g N/m at exp(%g)", f, x)
		}
		miss := math.Log(f) - target
		switch {
		case miss > 0 && x == lo:
			return lo, -1, nil
		case miss < 0 && x == hi:
			return hi, 1, nil
		case miss == 0:
			return x, 0, nil
		case miss > 0:
			hi, high = x, true
		default:
			lo, low = x, true
		}
		step := -miss * f / slope
		next := x + step
		switch {
		case math.Abs(step) < 1e-5 && next > lo && next < hi: // what is left is its square
			return next, 0, nil
		case !(next > lo && next < hi) || math.IsNaN(next):
			if next = (lo + hi) / 2; miss > 0 && !low {
				next = lo // is there an x at all?
			} else if miss < 0 && !high {
				next = hi
			}
		}
		if hi-lo < 1e-10 && low && high {
			return (lo + hi) / 2, 0, nil
		}
		x = next
	}
	return 0, 0, fmt.Errorf("excision: no rate found for %g N/m between exp(%g) and exp(%g)", force, lo, hi)
}

// Bounds of what a plate may stretch at, 1/s.
const (
	slowestPlate = 1e-30
	fastestPlate = 1e-13 // half as thick in 0.2 Myr
)

// givesWay ends the zones that a force drives where the plate beside them is too weak to
// bear it: from there on the plate necks, and no force is carried.
func (ev *Evolution) givesWay(force float64) {
	ev.broken = ev.Time()
	for i := range ev.zones {
		if z := &ev.zones[i]; z.Drive == ForceBalance && ev.acts(z) {
			z.ended, z.slipping.now = true, math.Inf(-1)
		}
	}
	ev.warnings = append(ev.warnings, fmt.Sprintf("the plate beside the zones gives way at %.4g Myr: a force of %.4g N/m would stretch it faster than %g 1/s; from there on no zone is driven by a force", ev.Time()/myr, force, fastestPlate))
}

// balance finds the slip rate of every zone that a force drives, and the rate at which the
// plate beside them stretches: all bear the same force, one after the other.
func (ev *Evolution) balance() error {
	if ev.solved {
		return nil
	}
	c, p, s, err := ev.section()
	if err != nil {
		return err
	}
	var weight float64
	if ev.plan.Weight != nil {
		if weight, err = ev.plan.Weight(c, p); err != nil {
			return err
		}
		if math.IsNaN(weight) || math.IsInf(weight, 0) {
			return fmt.Errorf("excision: a force of %g N/m from the column's weight at %.4g Myr", weight, ev.Time()/myr)
		}
	}
	ev.plate.now = math.Inf(-1)
	for i := range ev.zones {
		z := &ev.zones[i]
		if z.Drive != ForceBalance || !ev.acts(z) {
			continue
		}
		z.force = z.FarField + weight
		if err := ev.slip(z, s, c); err != nil {
			return err
		}
		if z.force > 0 && math.IsInf(ev.plate.now, -1) {
			if err := ev.stretch(s, z.force); err != nil {
				return err
			}
		}
	}
	ev.solved = true
	return nil
}

// seen is the column as it was cut into panels last.
type seen struct {
	column  *column.Column
	profile *heat.Profile
	section *section
}

// section is the column now, cut into panels.
func (ev *Evolution) section() (*column.Column, *heat.Profile, *section, error) {
	if ev.seen == nil {
		c, p, err := ev.heat.Snapshot()
		if err != nil {
			return nil, nil, nil, err
		}
		s, err := newSection(c, p, ev.rockOf)
		if err != nil {
			return nil, nil, nil, err
		}
		ev.seen = &seen{c, p, s}
	}
	return ev.seen.column, ev.seen.profile, ev.seen.section, nil
}

// rockOf is a layer's rock made ready, from the store.
func (ev *Evolution) rockOf(l *column.Layer) (*rock, error) {
	if r := ev.rocks[l.Name]; r != nil {
		return r, nil
	}
	r, err := newRock(&l.Rock, ev.start.Limits, ev.plan.Reference)
	if err == nil {
		ev.rocks[l.Name] = r
	}
	return r, err
}

// rocksOf are what a zone creeps as in the layers down to its root.
func (ev *Evolution) rocksOf(z *acting, c *column.Column) ([]*rock, error) {
	root := ev.crosses(&z.Zone)
	var out []*rock
	for i := 0; i < len(c.Layers) && root != ""; i++ {
		l := &c.Layers[i]
		r := ev.rocks[l.Name]
		if z.Creep != nil {
			if r = z.rocks[l.Name]; r == nil {
				var err error
				if r, err = z.ownRock(&l.Rock, ev.start.Limits); err != nil {
					return nil, fmt.Errorf("excision: zone %s in %s: %w", z.Name, l.Name, err)
				}
				z.rocks[l.Name] = r
			}
		}
		out = append(out, r)
		if l.Name == root {
			break
		}
	}
	return out, nil
}

// slip finds a zone's slip rate and the shear stress on it.
func (ev *Evolution) slip(z *acting, s *section, c *column.Column) error {
	rocks, err := ev.rocksOf(z, c)
	if err != nil {
		return err
	}
	var tau float64
	F := func(x float64) (f, slope float64, err error) {
		f, slope, tau, err = z.bears(s, rocks, ev.width, x)
		return f, slope, err
	}
	lnS, beyond := math.Inf(-1), -1
	if z.force > 0 {
		guess := z.slipping.expected
		if math.IsInf(guess, -1) || guess == 0 {
			guess = math.Log(StandardSlip)
		}
		if lnS, beyond, err = balanced(F, z.force, math.Log(SlowestSlip), math.Log(FastestSlip), guess); err != nil {
			return err
		}
	}
	switch beyond {
	case -1: // it holds
		lnS = math.Inf(-1)
		if math.IsInf(z.holding, 1) {
			z.holding, z.held = ev.Time(), z.force
			if z.least, _, _, err = z.bears(s, rocks, ev.width, SlowestSlip); err != nil {
				return err
			}
		}
	case 1:
		z.runaway = min(z.runaway, ev.Time())
	}
	z.slipping.now = lnS
	if tau == 0 && z.force > 0 {
		return fmt.Errorf("excision: zone %s: no shear stress where it crosses the column", z.Name)
	}
	z.shear.now = math.Log(tau)
	return nil
}

// stretch finds the stretching of the plate beside the zones.
func (ev *Evolution) stretch(s *section, force float64) error {
	F := func(x float64) (float64, float64, error) { return s.flows(0, x) }
	guess := ev.plate.expected
	if guess == 0 || math.IsInf(guess, -1) {
		guess = math.Log(1e-16)
	}
	lnE, beyond, err := balanced(F, force, math.Log(slowestPlate), math.Log(fastestPlate), guess)
	switch {
	case err != nil:
		return err
	case beyond > 0:
		ev.givesWay(force)
		return nil
	case beyond < 0:
		lnE = math.Inf(-1)
	}
	ev.plate.now = lnE
	return nil
}

// StrengthOf returns what a zone would bear per length of strike slipping at s in m/s in the
// column now, in N/m.
//
// Errors: a zone that no force drives, a rate that is not positive, those of rheology.
func (ev *Evolution) StrengthOf(zone string, s float64) (float64, error) {
	for i := range ev.zones {
		z := &ev.zones[i]
		if z.Name != zone || z.Drive != ForceBalance {
			continue
		}
		if !(s > 0) || math.IsInf(s, 1) {
			return 0, fmt.Errorf("excision: zone %s slipping at %g m/s", zone, s)
		}
		c, _, sec, err := ev.section()
		if err != nil {
			return 0, err
		}
		rocks, err := ev.rocksOf(z, c)
		if err != nil {
			return 0, err
		}
		F, _, _, err := z.bears(sec, rocks, ev.width, s)
		return F, err
	}
	return 0, fmt.Errorf("excision: no zone %s that a force drives", zone)
}
