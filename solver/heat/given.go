package heat

import (
	"math"

	"keelfall/column"
)

// Pressure returns the profile of a column without temperature: pressure alone, from
// densities that do not depend on temperature.
func Pressure(c *column.Column) (*Profile, error) {
	p := newProfile(c)
	p.HasTemperature = false
	var P float64
	for i := range c.Layers {
		l := &p.Layers[i]
		m := march{layer: &c.Layers[i], g: c.Gravity, top: l.Top, mode: absent}
		l.Nodes[0].P = P
		if err := m.run(l.Nodes); err != nil {
			return nil, err
		}
		l.spans = m.curves(nil, l.Nodes)
		P = l.Nodes[len(l.Nodes)-1].P
	}
	return p, nil
}

// nearKink is the relative difference of slopes, and of depths to the column's,
// below which a geotherm's points are taken as collinear or as lying on an interface:
// round-off of typed decimals.
const nearKink = 1e-9

// Given returns the profile of a column with a given geotherm: T linear between the
// points, the pressure integrated with it, heat flows κ_c dT/dz of the segments at
// either end. The nodes include the points inside each layer. The first or last
// segment is prolonged by round-off where the points stop that much short.
func Given(c *column.Column) (*Profile, error) {
	p := newProfile(c)
	g, depth := c.Geotherm, c.Depth()
	var P float64
	seg := 0
	for i := range c.Layers {
		l := &p.Layers[i]
		cuts := []float64{l.Top}
		for _, pt := range g {
			if pt.Depth > l.Top+nearKink*depth && pt.Depth < l.Bottom-nearKink*depth {
				cuts = append(cuts, pt.Depth)
			}
		}
		cuts = append(cuts, l.Bottom)
		full := len(l.Nodes) - 1
		l.Nodes = l.Nodes[:0:0]
		var before float64
		for j := 0; j+1 < len(cuts); j++ {
			from, to := cuts[j], cuts[j+1]
			mid := (from + to) / 2
			for seg+2 < len(g) && g[seg+1].Depth < mid {
				seg++
			}
			slope := (g[seg+1].Temperature - g[seg].Temperature) / (g[seg+1].Depth - g[seg].Depth)
			m := march{layer: &c.Layers[i], g: c.Gravity, top: l.Top, mode: given,
				line: line{g[seg].Depth - l.Top, g[seg].Temperature, slope}}
			n := math.Ceil(float64(full) * (to - from) / (l.Bottom - l.Top))
			nodes := grid(from, to, int(max(n, 1)))
			nodes[0].T = g[seg].Temperature + slope*(from-g[seg].Depth)
			nodes[0].P = P
			if err := m.run(nodes); err != nil {
				return nil, err
			}
			l.spans = m.curves(l.spans, nodes)
			P = nodes[len(nodes)-1].P
			if j > 0 {
				if math.Abs(slope-before) > nearKink*max(math.Abs(slope), math.Abs(before)) {
					l.Kinks = append(l.Kinks, from)
				}
				nodes = nodes[1:]
			}
			l.Nodes = append(l.Nodes, nodes...)
			before = slope
		}
	}
	p.SurfaceFlow = p.Layers[0].Nodes[0].Flow
	last := p.Layers[len(p.Layers)-1].Nodes
	p.BaseFlow = last[len(last)-1].Flow
	return p, nil
}
