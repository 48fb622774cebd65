package heat

import (
	"math"
)

// react lets two-state rock react through a step, before its new temperature is taken:
// X goes towards the cap with the mean of the rates at both ends.
func (ev *Evolution) react(h float64) {
	ev.reacted = 0
	for j := range ev.strata {
		s := &ev.strata[j]
		if s.react == nil || s.react.Kinetics == nil {
			continue
		}
		for i := s.lo; i < s.hi; i++ {
			c := &ev.cells[i]
			left := s.react.Cap - c.X
			if left <= 0 {
				continue
			}
			var k float64
			if s.react.Stable(c.T, c.P) {
				k = s.react.Rate(c.T, c.X)
			}
			if T, P := ev.two.T[i], ev.two.P[i]; s.react.Stable(T, P) {
				k += s.react.Rate(T, c.X)
			}
			d := -left * math.Expm1(-h*k/(2*left))
			c.X = min(c.X+d, s.react.Cap)
			ev.reacted = max(ev.reacted, d)
		}
	}
}
