package heat

import (
	"fmt"
)

// carried is a marker on its way: so much mass of its layer lies above it.
type carried struct {
	Path
	layer int
	above float64 // kg/m² of present area
}

// placeMarkers finds the markers in the column of the start.
func (ev *Evolution) placeMarkers(markers []Marker) error {
	seen := map[string]bool{}
	for i, m := range markers {
		if seen[m.Name] {
			return fmt.Errorf("heat: two markers are called %q", m.Name)
		}
		seen[m.Name] = true
		t := carried{Path: Path{Name: m.Name}}
		if m.BaseOf != "" {
			j, ok := ev.find(m.BaseOf)
			if !ok {
				return fmt.Errorf("heat: marker %d (%s): there is no layer %q", i+1, m.Name, m.BaseOf)
			}
			t.layer, t.above = j, ev.massOf(j)
			ev.tracks = append(ev.tracks, t)
			continue
		}
		if !(m.Depth >= 0 && m.Depth <= ev.depth0*(1+1e-9)) {
			return fmt.Errorf("heat: marker %d (%s): %g m is outside the column, 0 to %g m", i+1, m.Name, m.Depth, ev.depth0)
		}
		t.layer, t.above = ev.massTo(m.Depth)
		ev.tracks = append(ev.tracks, t)
	}
	return nil
}

func (ev *Evolution) massOf(layer int) float64 {
	var sum float64
	s := &ev.strata[layer]
	for i := s.lo; i < s.hi; i++ {
		sum += ev.cells[i].m
	}
	return sum
}

// massTo returns the layer at a depth and the mass of it above that depth.
func (ev *Evolution) massTo(z float64) (layer int, above float64) {
	var top float64
	for i := range ev.cells {
		c := &ev.cells[i]
		if c.layer != layer {
			layer, above = c.layer, 0
		}
		d := ev.thickness(c)
		if z <= top+d {
			return layer, above + c.m*(z-top)/d
		}
		top += d
		above += c.m
	}
	return layer, above
}

// begun writes the markers' first points.
func (ev *Evolution) begun() {
	for i := range ev.tracks {
		t := &ev.tracks[i]
		t.Layer = ev.strata[t.layer].name
		ev.write(t)
	}
}

// follow moves the markers through a step that is about to be taken.
func (ev *Evolution) follow(float64) {
	for k := range ev.tracks {
		t := &ev.tracks[k]
		if t.Ended {
			continue
		}
		for i := range ev.streams {
			f := &ev.streams[i]
			if f.top && f.cell == ev.strata[t.layer].lo {
				t.above += f.came
			}
		}
		t.above /= ev.two.area
	}
}

// chart ends the paths of markers that are outside their layers, and writes a point of
// all others.
func (ev *Evolution) chart() {
	for k := range ev.tracks {
		t := &ev.tracks[k]
		if t.Ended {
			continue
		}
		mass := ev.massOf(t.layer)
		switch {
		case t.above < -1e-9*mass && t.layer == 0 && ev.eroding > 0:
			ev.finish(t, "eroded")
		case t.above < -1e-9*mass || t.above > mass*(1+1e-9):
			ev.finish(t, "removed with its part of "+t.Layer)
		default:
			ev.write(t)
		}
	}
}

// end ends the paths in a layer.
func (ev *Evolution) end(layer int, reason string) {
	for k := range ev.tracks {
		if t := &ev.tracks[k]; !t.Ended && t.layer == layer {
			ev.finish(t, reason)
		}
	}
}

// cut ends the paths below so much mass of a layer.
func (ev *Evolution) cut(layer int, mass float64) {
	for k := range ev.tracks {
		if t := &ev.tracks[k]; !t.Ended && t.layer == layer && t.above > mass {
			ev.finish(t, "removed with its part of "+t.Layer)
		}
	}
}

func (ev *Evolution) finish(t *carried, reason string) {
	t.Ended, t.Reason, t.layer = true, reason, -1
}

// write appends where a marker is: the temperature is linear between the faces and
// middles of cells.
func (ev *Evolution) write(t *carried) {
	var z, P float64
	s := &ev.strata[t.layer]
	for i := range s.lo {
		c := &ev.cells[i]
		z += ev.thickness(c)
		P += ev.gravity * c.m
	}
	left := t.above
	for i := s.lo; i < s.hi; i++ {
		c := &ev.cells[i]
		if left > c.m && i+1 < s.hi {
			left -= c.m
			z += ev.thickness(c)
			P += ev.gravity * c.m
			continue
		}
		x := min(max(left/c.m, 0), 1)
		top, bottom := ev.facesOf(i)
		T := c.T + (2*x-1)*(bottom-c.T)
		if x < 0.5 {
			T = top + 2*x*(c.T-top)
		}
		t.put(ev.t, z+x*ev.thickness(c), T, P+ev.gravity*c.m*x)
		return
	}
}

// put appends a point, in place of the last where no time has passed.
func (t *carried) put(time, z, T, P float64) {
	if n := len(t.Time); n > 0 && t.Time[n-1] >= time {
		t.Time, t.Depth, t.T, t.P = t.Time[:n-1], t.Depth[:n-1], t.Path.T[:n-1], t.Path.P[:n-1]
	}
	t.Time = append(t.Time, time)
	t.Depth = append(t.Depth, z)
	t.Path.T = append(t.Path.T, T)
	t.Path.P = append(t.Path.P, P)
	t.Peak, t.Deepest = max(t.Peak, T), max(t.Deepest, P)
}

// facesOf are the temperatures at a cell's faces, from the column as it is.
func (ev *Evolution) facesOf(i int) (top, bottom float64) {
	c := &ev.cells[i]
	r := 1 / ev.conductance(c)
	top, bottom = ev.surfaceAt(ev.t), ev.base.Temperature
	if i > 0 {
		b := &ev.cells[i-1]
		q := 1 / ev.conductance(b)
		top = (c.T*q + b.T*r) / (q + r)
	}
	if i+1 < len(ev.cells) {
		b := &ev.cells[i+1]
		q := 1 / ev.conductance(b)
		bottom = (c.T*q + b.T*r) / (q + r)
	} else if ev.base.HasHeatFlow {
		bottom = c.T + ev.base.HeatFlow*r/2
	}
	return top, bottom
}

// Paths returns the markers' paths so far. They are copies.
func (ev *Evolution) Paths() []Path {
	out := make([]Path, len(ev.tracks))
	for i := range ev.tracks {
		p := ev.tracks[i].Path
		p.Time = append([]float64(nil), p.Time...)
		p.Depth = append([]float64(nil), p.Depth...)
		p.T = append([]float64(nil), p.T...)
		p.P = append([]float64(nil), p.P...)
		out[i] = p
	}
	return out
}
