package excision

import (
	"fmt"
	"math"
)

// check returns the first thing that makes zones or setting unusable.
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
	for _, z := range zones {
		if !(z.Dip > 0 && z.Dip <= math.Pi/2) {
			return fmt.Errorf("excision: zone %q dips %g°; must be above 0 and at most 90", z.Name, z.Dip*180/math.Pi)
		}
		if !(math.Abs(z.LayeringDip) < math.Pi/2) {
			return fmt.Errorf("excision: zone %q: layering dips %g°; must be within 90", z.Name, z.LayeringDip*180/math.Pi)
		}
		if !(z.SlipRate >= 0) || math.IsInf(z.SlipRate, 0) {
			return fmt.Errorf("excision: zone %q slips at %g m/s; must be zero or more", z.Name, z.SlipRate)
		}
		if !(z.From >= 0 && z.To > z.From) {
			return fmt.Errorf("excision: zone %q is active from %g to %g s", z.Name, z.From, z.To)
		}
		if len(z.Cuts) == 0 {
			return fmt.Errorf("excision: zone %q cuts no layer", z.Name)
		}
		for _, n := range z.Cuts {
			if _, ok := index[n]; !ok {
				return fmt.Errorf("excision: zone %q cuts %q, which is not a layer", z.Name, n)
			}
		}
	}
	return nil
}
