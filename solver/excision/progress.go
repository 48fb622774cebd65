package excision

import "math"

// progress is the column while zones cut it. Rates are constant between events (a
// zone starts or stops, a layer is used up), so steps are exact.
type progress struct {
	zones       []Zone
	set         Setting
	index       map[string]int
	t           float64   // s
	left        []float64 // thickness of each layer, m
	slip, heave float64   // m, summed over zones
	throw, gap  float64   // m, Pa
	mass, lost  float64   // of the root per area, kg/m²
	initialRoot float64   // m
}

func newProgress(zones []Zone, set Setting) *progress {
	p := &progress{zones: zones, set: set, index: map[string]int{}}
	for i, l := range set.Layers {
		p.index[l.Name] = i
		p.left = append(p.left, l.Thickness)
		if l.Root {
			p.mass += l.Thickness * l.Density
			p.initialRoot += l.Thickness
		}
	}
	return p
}

// root returns the root's thickness in the column the zones cross, m.
func (p *progress) root() float64 {
	var h float64
	for i, l := range p.set.Layers {
		if l.Root {
			h += p.left[i]
		}
	}
	return h
}

// share returns the part of the root's initial mass that is gone.
func (p *progress) share() float64 { return p.lost / p.mass }

// target returns the layer a zone is cutting at time t, or −1 where it has used its
// layers up or is not active: a zone without rock to cut stops.
func (p *progress) target(z *Zone) int {
	if p.t < z.From || p.t >= z.To {
		return -1
	}
	for _, n := range z.Cuts {
		if i := p.index[n]; p.left[i] > 1e-12*p.set.Layers[i].Thickness {
			return i
		}
	}
	return -1
}

// step advances to the next event, at most to stop.
func (p *progress) step(stop float64) {
	end := stop
	rate := make([]float64, len(p.left)) // of thickness loss, m/s
	for i := range p.zones {
		z := &p.zones[i]
		if z.From > p.t {
			end = math.Min(end, z.From)
		}
		if z.To > p.t {
			end = math.Min(end, z.To)
		}
		if l := p.target(z); l >= 0 {
			rate[l] += z.SlipRate * z.VerticalLoss()
		}
	}
	for i, r := range rate {
		if r > 0 {
			end = math.Min(end, p.t+p.left[i]/r)
		}
	}
	if math.IsInf(end, 1) {
		p.t = end
		return
	}
	dt := end - p.t
	for i := range p.zones {
		z := &p.zones[i]
		if p.target(z) >= 0 {
			p.slip += z.SlipRate * dt
			p.heave += z.SlipRate * dt * math.Cos(z.Dip)
			p.throw += z.SlipRate * dt * math.Sin(z.Dip)
		}
	}
	for i, r := range rate {
		cut := r * dt
		if end == p.t+p.left[i]/r { // exactly used up
			cut = p.left[i]
		}
		p.left[i] -= cut
		p.gap += cut * p.set.Layers[i].Density * p.set.Gravity
		if p.set.Layers[i].Root {
			p.lost += cut * p.set.Layers[i].Density
		}
	}
	p.t = end
}
