package excision

import (
	"math"
)

// mark is what a step's books begin from.
type mark struct {
	flown  []float64 // of each of layers, kg/m² of the first area
	target []string  // of each zone
	atRoot []bool
	spread float64
}

func (ev *Evolution) marks() mark {
	m := mark{spread: ev.heat.Spread()}
	for i := range ev.layers {
		m.flown = append(m.flown, ev.heat.Flown(ev.layers[i].name))
	}
	for i := range ev.zones {
		n, _ := ev.target(&ev.zones[i].Zone)
		m.target = append(m.target, n)
		m.atRoot = append(m.atRoot, ev.reached(&ev.zones[i].Zone))
	}
	return m
}

// reached says whether a zone has reached the root: from below it meets a root layer
// before other rock that is still there.
func (ev *Evolution) reached(z *Zone) bool {
	for i := len(z.Cuts) - 1; i >= 0; i-- {
		k := ev.layerAt(z.Cuts[i])
		if ev.layers[k].root {
			return true
		}
		if _, there := ev.heat.Layer(z.Cuts[i]); there {
			return false
		}
	}
	return false
}

// layerAt is the index in layers of one that is cut.
func (ev *Evolution) layerAt(name string) int {
	for k := range ev.layers {
		if ev.layers[k].name == name {
			return k
		}
	}
	return -1
}

// book enters what a step of h at mean rates has done.
func (ev *Evolution) book(p paces, h float64, from mark) {
	after := ev.heat.Spread()
	shrunk := expm1Over(from.spread-after) * math.Exp(-from.spread) // mean of exp(−spread)
	net := map[string]float64{}                                     // what all zones take of a layer, of which each has its part
	for i, n := range from.target {
		net[n] += p.slip[i] * ev.zones[i].VerticalLoss()
	}
	for i := range ev.zones {
		z := &ev.zones[i]
		d := p.slip[i] * h
		if d == 0 {
			continue
		}
		z.slip += d
		z.heave += d * z.Heave()
		z.throw += d * z.Throw()
		if n := from.target[i]; n != "" {
			z.stratigraphic += d * z.StratigraphicLoss()
			z.vertical += d * z.VerticalLoss()
			k := ev.layerAt(n)
			if net[n] != 0 {
				part := p.slip[i] * z.VerticalLoss() / net[n]
				z.gap += part * (from.flown[k] - ev.heat.Flown(n)) * shrunk * ev.start.Gravity
			}
		}
		ev.bookArc(z, d*z.Heave()*shrunk, from, i)
	}
	if ev.width > 0 {
		ev.width = p.width
	}
	for k := range ev.layers {
		if l, ok := ev.heat.Layer(ev.layers[k].name); ok {
			ev.density[k] = l.Mass / l.Thickness
		}
	}
}

// bookArc adds a zone's heave, per width of the arc at the start, to the layers that it
// thins over the arc: those of the root from when it has reached the root, others from when
// it has reached them.
func (ev *Evolution) bookArc(z *acting, heave float64, from mark, i int) {
	loss := z.VerticalLoss()
	if loss == 0 {
		return
	}
	at := len(z.Cuts) // what of its layers it has reached
	for j, n := range z.Cuts {
		if n == from.target[i] {
			at = j
		}
	}
	if from.target[i] == "" {
		at = 0
	}
	for j, n := range z.Cuts {
		k := ev.layerAt(n)
		if ev.layers[k].root && from.atRoot[i] || !ev.layers[k].root && j >= at {
			ev.arc[k] += math.Copysign(heave, loss)
		}
	}
}

// gone is the share of a layer that is gone from the arc as a whole: h × heave/(B + heave),
// as uniform stretching by the same extension would take; negative where zones repeat it.
func (ev *Evolution) gone(k int) float64 {
	return ev.arc[k] / (ev.plan.ArcWidth + math.Abs(ev.arc[k]))
}

// uncut is the thickness in m that a layer would have without zones.
func (ev *Evolution) uncut(k int) float64 {
	l, _ := ev.heat.Layer(ev.layers[k].name)
	return (l.Mass - ev.heat.Flown(ev.layers[k].name)*math.Exp(-ev.heat.Spread())) / ev.density[k]
}

// Shares returns the share of the root's initial mass that zones have taken: from the
// column they cross, and from the arc as a whole, 0 where its width is not known. Negative
// where they repeat the root. What stretching moves aside counts as still there.
func (ev *Evolution) Shares() (local, arc float64) {
	if ev.mass == 0 {
		return 0, 0
	}
	for k, l := range ev.layers {
		if !l.root {
			continue
		}
		local -= ev.heat.Flown(l.name) / ev.mass
		if ev.plan.ArcWidth > 0 {
			arc += ev.first[l.name].Mass / ev.mass * ev.gone(k)
		}
	}
	return local, arc
}

// arcMean is the root's thickness averaged over the arc, m.
func (ev *Evolution) arcMean() float64 {
	mean := ev.heat.Root().Thickness
	for k, l := range ev.layers {
		if l.root {
			now, _ := ev.heat.Layer(l.name)
			mean += ev.uncut(k)*(1-ev.gone(k)) - now.Thickness
		}
	}
	return mean
}

// sums are what all zones have done.
func (ev *Evolution) sums() sums {
	var s sums
	for i := range ev.zones {
		z := &ev.zones[i]
		s.slip, s.heave, s.throw, s.gap = s.slip+z.slip, s.heave+z.heave, s.throw+z.throw, s.gap+z.gap
	}
	return s
}

// strip is the width in m over which a zone has wholly cut out a layer h thick:
//
//	cos θ (s − h cos δ/sin(θ − δ))
//
// which is s cos θ − h/tan θ for flat layers.
func (z *acting) strip(h float64) float64 {
	loss := z.VerticalLoss()
	if !(loss > 0) {
		return 0
	}
	return math.Max(0, z.Heave()*(z.slip-h/loss))
}
