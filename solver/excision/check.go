package excision

import (
	"errors"
	"fmt"
	"math"
)

// check returns the first thing that makes zones or setting of Solve unusable.
func check(zones []Zone, set Setting) error {
	root := false
	index := map[string]int{}
	for i, l := range set.Layers {
		root = root || l.Root
		index[l.Name] = i
		if !(l.Thickness > 0) || !(l.Density > 0) {
			return fmt.Errorf("excision: layer %q: thickness %g m, density %g kg/m³; must be positive", l.Name, l.Thickness, l.Density)
		}
	}
	switch {
	case !root:
		return ErrNoRoot
	case !(set.Share > 0 && set.Share <= 1):
		return fmt.Errorf("excision: share %g; must be above 0 and at most 1", set.Share)
	case !(set.Window > 0) || math.IsInf(set.Window, 0):
		return fmt.Errorf("excision: window %g s; must be positive", set.Window)
	}
	for i := range zones {
		z := &zones[i]
		if z.Drive != GivenRate {
			return fmt.Errorf("excision: zone %q: its rate is not given, so that it has to be followed through time", z.Name)
		}
		if err := z.check(index); err != nil {
			return fmt.Errorf("excision: zone %q %w", z.Name, err)
		}
	}
	return nil
}

// check looks at one zone alone; index are the layers' places from above.
func (z *Zone) check(index map[string]int) error {
	if !(z.Dip > 0 && z.Dip <= math.Pi/2) {
		return fmt.Errorf("dips %g°; must be above 0 and at most 90", z.Dip*180/math.Pi)
	}
	if !(math.Abs(z.LayeringDip) < math.Pi/2) {
		return fmt.Errorf("lies in layering that dips %g°; must be within 90", z.LayeringDip*180/math.Pi)
	}
	if !(z.SlipRate >= 0) || math.IsInf(z.SlipRate, 0) {
		return fmt.Errorf("slips at %g m/s; must be zero or more", z.SlipRate)
	}
	if !(z.From >= 0 && z.To > z.From) {
		return fmt.Errorf("is active from %g to %g s", z.From, z.To)
	}
	if !(z.Width >= 0) || math.IsInf(z.Width, 1) {
		return fmt.Errorf("is %g m wide; must be zero or more", z.Width)
	}
	if len(z.Cuts) == 0 {
		return errors.New("cuts no layer")
	}
	for _, n := range z.Cuts {
		if _, ok := index[n]; !ok {
			return fmt.Errorf("cuts %q, which is not a layer", n)
		}
	}
	return nil
}

// check returns the first thing that makes a plan's zones unusable.
func (ev *Evolution) check() error {
	p := &ev.plan
	if ev.start == nil {
		return errors.New("excision: no column")
	}
	if !(p.ArcWidth >= 0) || math.IsInf(p.ArcWidth, 1) {
		return fmt.Errorf("excision: an arc %g m wide; must be zero, for not given, or more", p.ArcWidth)
	}
	index := map[string]int{}
	for i := range ev.start.Layers {
		index[ev.start.Layers[i].Name] = i
	}
	names := map[string]bool{}
	for i := range p.Zones {
		z := &p.Zones[i]
		err := z.check(index)
		for k := 1; k < len(z.Cuts) && err == nil; k++ {
			if index[z.Cuts[k]] != index[z.Cuts[k-1]]+1 {
				err = fmt.Errorf("cuts %q and %q, which does not lie directly below", z.Cuts[k-1], z.Cuts[k])
			}
		}
		if err == nil && names[z.Name] {
			err = errors.New("has the name of another zone")
		}
		names[z.Name] = true
		if err == nil {
			err = ev.driven(z)
		}
		for k := 0; k < i && err == nil; k++ {
			err = z.together(&p.Zones[k])
		}
		if err != nil {
			return fmt.Errorf("excision: zone %q %w", z.Name, err)
		}
	}
	return ev.shares()
}

// driven checks what sets a zone's slip rate.
func (ev *Evolution) driven(z *Zone) error {
	upright := z.Heave() == 0
	switch z.Drive {
	case GivenRate:
	case ExtensionShare:
		switch {
		case !(z.Share >= 0 && z.Share <= 1):
			return fmt.Errorf("takes a share of %g of the arc's extension; must be 0 to 1", z.Share)
		case upright:
			return errors.New("is vertical and cannot take a share of the arc's extension")
		case ev.plan.ArcWidth == 0:
			return errors.New("takes a share of the extension of an arc whose width is not given")
		case !ev.extends(z):
			return errors.New("takes a share of the arc's extension, which is none while the zone is active")
		}
	case PressureStep:
		switch {
		case !(z.PressureGap >= 0) || math.IsInf(z.PressureGap, 1):
			return fmt.Errorf("leaves a pressure gap of %g Pa; must be zero or more", z.PressureGap)
		case math.IsInf(z.To, 1):
			return errors.New("is to leave its pressure gap by an end that is not given")
		case !(z.VerticalLoss() > 0):
			return fmt.Errorf("dips %.4g° in layering of %.4g° and leaves nothing out, no pressure gap either", z.Dip*180/math.Pi, z.LayeringDip*180/math.Pi)
		}
	case ForceBalance:
		return ev.forced(z)
	default:
		return fmt.Errorf("has a drive %d that does not exist", z.Drive)
	}
	return nil
}

func (ev *Evolution) forced(z *Zone) error {
	switch {
	case math.IsNaN(z.FarField) || math.IsInf(z.FarField, 0):
		return fmt.Errorf("is driven by %g N/m", z.FarField)
	case !(z.Width > 0):
		return errors.New("is in a balance of forces and has no width")
	case z.Heave() == 0:
		return errors.New("is vertical: no horizontal force makes it slip")
	case ev.plan.ArcWidth == 0:
		return errors.New("is in a balance of forces, and the arc's width is not given")
	case !ev.start.HasTemperature():
		return errors.New("is in a balance of forces, and the column has no temperature")
	case !(z.StrengthFactor >= 0) || math.IsInf(z.StrengthFactor, 1):
		return fmt.Errorf("has a strength factor of %g", z.StrengthFactor)
	}
	if z.Friction != nil {
		return z.Friction.Validate()
	}
	return nil
}

// extends says whether the arc extends at some time while a zone is active.
func (ev *Evolution) extends(z *Zone) bool {
	if ev.plan.Heat.ExtensionRate > 0 {
		return true
	}
	for i := range ev.plan.Heat.Events {
		if e := &ev.plan.Heat.Events[i]; e.Verb == "stretch" && e.Rate > 0 && e.From < z.To && z.From < e.To {
			return true
		}
	}
	return false
}

// together refuses two zones that are driven by two forces at one time.
func (z *Zone) together(o *Zone) error {
	if z.From >= o.To || o.From >= z.To {
		return nil
	}
	if z.Drive == ForceBalance && o.Drive == ForceBalance && z.FarField != o.FarField {
		return fmt.Errorf("is driven by %.4g N/m from outside while zone %q is by %.4g; both lie in one plate and bear one force", z.FarField, o.Name, o.FarField)
	}
	return nil
}

// shares refuses zones that together take more than the arc's extension.
func (ev *Evolution) shares() error {
	for i := range ev.plan.Zones {
		at := ev.plan.Zones[i].From
		var sum float64
		for k := range ev.plan.Zones {
			if z := &ev.plan.Zones[k]; z.Drive == ExtensionShare && z.From <= at && at < z.To {
				sum += z.Share
			}
		}
		if sum > 1+1e-12 {
			return fmt.Errorf("excision: at %.4g Myr the zones' shares of the arc's extension are %.6g together; at most 1", at/myr, sum)
		}
	}
	return nil
}
