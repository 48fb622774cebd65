package excision

import "math"

// Balance returns, of every layer that zones cut, what they took and what is left against
// what there was, relative to that.
func Balance(ev *Evolution) map[string]float64 {
	out := map[string]float64{}
	for _, l := range ev.layers {
		now, _ := ev.heat.Layer(l.name)
		first := ev.first[l.name].Mass
		out[l.name] = (now.Mass*math.Exp(ev.Spread()) - ev.heat.Flown(l.name) - first) / first
	}
	return out
}

// SetStride makes the steps of a force balance shorter by a factor.
func SetStride(ev *Evolution, stride float64) { ev.stride = stride }

// Runaway returns when a zone ran away, s.
func Runaway(ev *Evolution, zone int) float64 { return ev.zones[zone].runaway }

// SlipOf returns a zone's slip so far, m, and its rate, m/s.
func SlipOf(ev *Evolution, zone int) (slip, rate float64) {
	return ev.zones[zone].slip, ev.zones[zone].rate
}

// StressOn returns the shear stress on a zone where it crosses the column, Pa.
func StressOn(ev *Evolution, zone int) float64 { return math.Exp(ev.zones[zone].shear.now) }
