package excision

import (
	"math"
	"slices"
)

// progress is the column while zones cut it. Rates are constant between events (a
// zone starts or stops, a layer is used up), so steps are exact.
type progress struct {
	zones       []Zone
	set         Setting
	index       map[string]int
	t           float64   // s
	left        []float64 // thickness of each layer, m
	arc         []float64 // heave that thins each root layer's arc mean, m; negative where it thickens
	slip, heave float64   // m, summed over zones
	throw, gap  float64   // m, Pa
	mass, lost  float64   // of the root per area, kg/m²
	initialRoot float64   // m
}

// rates are what all zones do per second until the next event.
type rates struct {
	cut, arc           []float64 // a layer's thickness loss and signed heave, m/s
	slip, heave, throw float64   // m/s
}

func newProgress(zones []Zone, set Setting) *progress {
	p := &progress{zones: zones, set: set, index: map[string]int{}, arc: make([]float64, len(set.Layers))}
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

func (p *progress) clone() *progress {
	q := *p
	q.left, q.arc = slices.Clone(p.left), slices.Clone(p.arc)
	return &q
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

// mean returns the root's thickness in m and the share of its mass that is gone,
// averaged over the arc, where zones that cut a layer have heaved by arc.
func (p *progress) mean(arc []float64) (thickness, share float64) {
	for i, l := range p.set.Layers {
		if !l.Root {
			continue
		}
		gone := arc[i] / (p.set.ArcWidth + math.Abs(arc[i]))
		if math.IsInf(arc[i], 0) {
			gone = math.Copysign(1, arc[i])
		}
		thickness += l.Thickness * (1 - gone)
		share += l.Thickness * l.Density * gone / p.mass
	}
	return thickness, share
}

// there says whether a layer has rock left to cut.
func (p *progress) there(layer int) bool {
	return p.left[layer] > 1e-12*p.set.Layers[layer].Thickness
}

// target returns the layer an active zone is cutting: the lowest of its layers that
// is there; −1 where it has used them up.
func (p *progress) target(z *Zone) int {
	for _, n := range slices.Backward(z.Cuts) {
		if i := p.index[n]; p.there(i) {
			return i
		}
	}
	return -1
}

// atRoot says whether an active zone has reached the root: from below it meets a root
// layer before other rock that is still there.
func (p *progress) atRoot(z *Zone) bool {
	for _, n := range slices.Backward(z.Cuts) {
		switch i := p.index[n]; {
		case p.set.Layers[i].Root:
			return true
		case p.there(i):
			return false
		}
	}
	return false
}

// rates returns what happens until the next event, which comes at end, at most stop.
func (p *progress) rates(stop float64) (v rates, end float64) {
	v.cut, v.arc = make([]float64, len(p.left)), make([]float64, len(p.left))
	end = stop
	for i := range p.zones {
		z := &p.zones[i]
		if z.From > p.t {
			end = math.Min(end, z.From)
			continue
		}
		if p.t >= z.To {
			continue
		}
		end = math.Min(end, z.To)
		v.slip += z.SlipRate
		v.heave += z.SlipRate * z.Heave()
		v.throw += z.SlipRate * z.Throw()
		if l := p.target(z); l >= 0 {
			v.cut[l] += z.SlipRate * z.VerticalLoss()
		}
		if loss := z.VerticalLoss(); loss != 0 && p.atRoot(z) {
			for _, n := range z.Cuts {
				if l := p.index[n]; p.set.Layers[l].Root {
					v.arc[l] += math.Copysign(z.SlipRate*z.Heave(), loss)
				}
			}
		}
	}
	for i, r := range v.cut {
		if r > 0 {
			end = math.Min(end, p.t+p.left[i]/r)
		}
	}
	return v, end
}

// move advances to end, which must be finite.
func (p *progress) move(v rates, end float64) {
	dt := end - p.t
	p.slip += v.slip * dt
	p.heave += v.heave * dt
	p.throw += v.throw * dt
	for i, r := range v.cut {
		cut := r * dt
		if r > 0 && end == p.t+p.left[i]/r { // exactly used up
			cut = p.left[i]
		}
		p.left[i] -= cut
		p.arc[i] += v.arc[i] * dt
		p.gap += cut * p.set.Layers[i].Density * p.set.Gravity
		if p.set.Layers[i].Root {
			p.lost += cut * p.set.Layers[i].Density
		}
	}
	p.t = end
}

// meanTime returns when the arc mean has lost the share, between now and end; +Inf
// where it has not.
func (p *progress) meanTime(v rates, end, share float64) float64 {
	arc := make([]float64, len(p.arc))
	over := func(t float64) bool {
		for i := range arc {
			arc[i] = p.arc[i]
			if v.arc[i] != 0 { // not 0 × ∞
				arc[i] += v.arc[i] * (t - p.t)
			}
		}
		_, s := p.mean(arc)
		return s >= share
	}
	if !over(end) {
		return math.Inf(1)
	}
	lo, hi := p.t, end
	if math.IsInf(end, 1) {
		for hi = lo + p.set.Window; !over(hi); hi = p.t + 2*(hi-p.t) {
			if hi > 1e12*p.set.Window { // only the limit itself reaches the share
				return math.Inf(1)
			}
		}
	}
	for i := 0; i < 100 && hi-lo > 1e-14*hi; i++ {
		if mid := lo + (hi-lo)/2; over(mid) {
			hi = mid
		} else {
			lo = mid
		}
	}
	return hi
}
