package drip

import (
	"context"
	"fmt"
	"math"

	"keelfall/column"
	"keelfall/solver/heat"
)

// Motion is a column that changes with time.
type Motion interface {
	Time() float64                                    // s
	Advance(ctx context.Context, to float64) error    // s; what happens at that time has happened
	Next() float64                                    // s, of the next event; +Inf without
	ExtensionRate() float64                           // now, 1/s
	Remove(layer string, share float64) error         // of its mass, from its base; base rock takes its place
	Snapshot() (*column.Column, *heat.Profile, error) // now; a nil profile: that of heat.Solve
	Copy() Motion                                     // as it is now, to go its own way
}

// Heated is a heat.Evolution as a Motion.
type Heated struct{ *heat.Evolution }

// Copy returns a copy of the evolution.
func (h Heated) Copy() Motion { return Heated{h.Evolution.Copy()} }

// Cold is the motion of a column without temperature that stretches at a constant rate e
// in 1/s: every layer's thickness goes as exp(−et), and a half-space or inviscid base
// follows. The share that Remove takes is one of thickness.
type Cold struct {
	column column.Column // at time 0, or at the last removal
	e, t   float64
	since  float64 // time of column
}

// NewCold returns a copy of c in motion.
func NewCold(c *column.Column, e float64) *Cold {
	return &Cold{column: *c, e: e}
}

// Copy returns the column as it is now.
func (m *Cold) Copy() Motion {
	c := *m
	return &c
}

// Time returns the model time, s.
func (m *Cold) Time() float64 { return m.t }

// Next returns +Inf: nothing happens but stretching.
func (m *Cold) Next() float64 { return math.Inf(1) }

// ExtensionRate returns the constant rate, 1/s.
func (m *Cold) ExtensionRate() float64 { return m.e }

// Advance moves the column on to a time in s.
func (m *Cold) Advance(ctx context.Context, to float64) error {
	if !(to >= m.t) || math.IsInf(to, 1) {
		return fmt.Errorf("drip: a column at %g s cannot advance to %g s", m.t, to)
	}
	m.t = to
	return ctx.Err()
}

// Snapshot returns the column now.
func (m *Cold) Snapshot() (*column.Column, *heat.Profile, error) {
	c := m.column
	c.Layers = append([]column.Layer(nil), c.Layers...)
	thin := math.Exp(-m.e * (m.t - m.since))
	for i := range c.Layers {
		c.Layers[i].Thickness *= thin
	}
	return &c, nil, nil
}

// Remove takes a share of a layer away. Rock of a half-space takes its place below the
// root where other layers lie there; an inviscid base has none to give.
func (m *Cold) Remove(layer string, share float64) error {
	if !(share > 0 && share <= 1) {
		return fmt.Errorf("drip: remove from %s: share %g, must be above 0 and at most 1", layer, share)
	}
	c, _, _ := m.Snapshot()
	for i := range c.Layers {
		if c.Layers[i].Name != layer {
			continue
		}
		gone := share * c.Layers[i].Thickness
		at := i + 1
		for c.Layers[i].Root && at < len(c.Layers) && c.Layers[at].Root {
			at++
		}
		var out []column.Layer
		for j, l := range c.Layers {
			if j == at && c.Base.Boundary == column.HalfSpace {
				out = fill(out, c, gone)
			}
			if j != i {
				out = append(out, l)
			} else if share < 1 {
				l.Thickness -= gone
				out = append(out, l)
			}
		}
		if len(out) == 0 {
			return fmt.Errorf("drip: nothing would be left of the column without %s", layer)
		}
		c.Layers = out
		m.column, m.since = *c, m.t
		return nil
	}
	return fmt.Errorf("drip: remove from %s: the layer is not there", layer)
}

// fill adds rock of the base, thickness thick, to what already lies there.
func fill(above []column.Layer, c *column.Column, thickness float64) []column.Layer {
	n := len(above)
	if n > 0 && footRock(above[n-1].Name) {
		above[n-1].Thickness += thickness
		return above
	}
	return append(above, column.Layer{Name: "asthenosphere", Thickness: thickness, Rock: c.Base.Rock})
}
