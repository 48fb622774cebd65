package heat

import "keelfall/column"

// varying is the density of a stratum as that of a layer now: its own where the rock is
// one composition, a column.Varying where the place in the layer or the reacted share
// matters and is not what it was.
func (ev *Evolution) varying(j int, thickness float64) column.Density {
	s := &ev.strata[j]
	graded := s.graded()
	if s.react == nil && !graded {
		return s.rock.Density
	}
	n := s.hi - s.lo
	v := column.Varying{Of: s.solid, Depth: make([]float64, n), Place: make([]float64, n)}
	if s.react != nil {
		v.Extent = make([]float64, n)
	}
	var z float64
	for i := s.lo; i < s.hi; i++ {
		c, k := &ev.cells[i], i-s.lo
		d := ev.thickness(c)
		v.Depth[k] = (z + d/2) / thickness
		z += d
		v.Place[k] = c.x
		if s.react != nil {
			v.Extent[k] = c.X
		}
	}
	edges(&v)
	var d column.Density = v
	if r := s.react; r != nil && !graded && flat(v.Extent) {
		d = r.WithExtent(v.Extent[0])
	}
	if m, ok := s.rock.Density.(column.Molten); ok {
		return column.Molten{Solid: d, Melt: m.Melt}
	}
	return d
}

// graded says whether the density depends on the place in the layer.
func (s *stratum) graded() bool {
	const T, P = 1000, 1e9
	parts := []column.Density{s.solid}
	if s.react != nil {
		parts = []column.Density{s.react.Protolith, s.react.Product}
	}
	for _, d := range parts {
		if d.Gradient(T, P, 0.5) != 0 {
			return true
		}
	}
	return false
}

func flat(x []float64) bool {
	for _, v := range x {
		if v != x[0] {
			return false
		}
	}
	return true
}

// edges prolongs the places to the layer's top and base.
func edges(v *column.Varying) {
	n := len(v.Depth)
	if n < 2 {
		return
	}
	at := func(x []float64, i, j int, d float64) float64 {
		return x[i] + (d-v.Depth[i])*(x[j]-x[i])/(v.Depth[j]-v.Depth[i])
	}
	a, b := at(v.Place, 0, 1, 0), at(v.Place, n-2, n-1, 1)
	v.Place = append(append([]float64{min(max(a, 0), 1)}, v.Place...), min(max(b, 0), 1))
	if v.Extent != nil {
		v.Extent = append(append([]float64{v.Extent[0]}, v.Extent...), v.Extent[n-1])
	}
	v.Depth = append(append([]float64{0}, v.Depth...), 1)
}
