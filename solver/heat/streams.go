package heat

import (
	"fmt"
	"math"
	"slices"
)

// prepare lists the streams of rock and the sources of the next step, makes the layers
// they need and takes away those they have used up, and limits ev.h.
func (ev *Evolution) prepare(limit float64) error {
	before := len(ev.streams)
	if len(ev.strata) == 0 || len(ev.cells) == 0 {
		return fmt.Errorf("heat: at %s nothing is left of the column", inMyr(ev.t))
	}
	if err := ev.thinned(); err != nil {
		return err
	}
	for tries := 0; ; tries++ {
		h := min(ev.h, limit)
		ev.list(h)
		again, err := ev.starve(h)
		if err != nil {
			return err
		}
		if !again {
			break
		}
		if tries > len(ev.cells)+100 {
			return fmt.Errorf("heat: at %s the layers that lose rock cannot be followed", inMyr(ev.t))
		}
	}
	if len(ev.streams) != before {
		ev.fresh = false
	}
	ev.w.run = ev.rate != 0 || len(ev.streams) > 0
	ev.place()
	return nil
}

// list makes the streams in force for a step of about h.
func (ev *Evolution) list(h float64) {
	ev.streams = ev.streams[:0]
	var lost float64 // m/s of the column's thickness
	if ev.eroding > 0 {
		c := &ev.cells[0]
		ev.streams = append(ev.streams, stream{cell: 0, top: true, mass: -ev.eroding * ev.rho(c)})
		lost += ev.eroding
	}
	for k := range ev.fluxes {
		f := &ev.fluxes[k]
		j, ok := ev.find(f.Layer)
		if !ok || f.Rate == 0 {
			continue // gone
		}
		s := ev.edge(j, f)
		s.flux = f.Layer
		ev.streams = append(ev.streams, s)
		lost -= f.Rate
	}
	ev.growing = slices.DeleteFunc(ev.growing, func(f Flux) bool {
		_, ok := ev.find(f.Layer)
		if !ok {
			ev.warnings = append(ev.warnings, fmt.Sprintf("%s is used up at %s and no longer grows", f.Layer, inMyr(ev.t)))
		}
		return !ok
	})
	for k := range ev.growing {
		f := &ev.growing[k]
		j, _ := ev.find(f.Layer)
		ev.streams = append(ev.streams, ev.edge(j, f))
		lost -= f.Rate
	}
	ev.basal(lost, h)
}

// edge is the stream at a layer's edge.
func (ev *Evolution) edge(j int, f *Flux) stream {
	s := &ev.strata[j]
	out := stream{cell: s.hi - 1, top: f.AtTop}
	if f.AtTop {
		out.cell = s.lo
	}
	c := &ev.cells[out.cell]
	if f.Rate < 0 {
		out.mass = f.Rate * ev.rho(c)
		return out
	}
	out.T = f.Temperature
	T := f.Temperature
	if T == 0 {
		T = c.T
	}
	if !f.AtTop {
		out.x = 1
	}
	if s.react != nil {
		out.X = s.react.Extent
	}
	rho := s.bulk(s.density(T, c.P, out.x, out.X), T, c.P)
	out.mass = f.Rate * rho
	out.H = s.rock.HeatProduction.At(out.x*s.born) / rho
	return out
}

// thinFoot is the thickness in m of rock of the base, where none comes or goes, that is
// taken out again: a thinner cell's flow is the difference of nearly equal temperatures,
// and costs the balance of energy more than 1e-10.
const thinFoot = 0.1

// basal adds the stream that keeps the foot of the column at its depth: rock of the base
// comes in where the column thins, and goes before the column's own rock sinks deeper.
func (ev *Evolution) basal(lost, h float64) {
	ev.foot = -1
	if !ev.open {
		return
	}
	all, _ := ev.depths()
	ev.gap = ev.depth0 - all
	if ev.gap = math.Copysign(max(abs(ev.gap)-2*sliver, 0), ev.gap); ev.gap == 0 {
		ev.gap = 0
	}
	ev.loss = lost + ev.rate*all
	last := len(ev.strata) - 1
	there := ev.strata[last].below
	if s := &ev.strata[last]; there && last > 0 && s.hi-s.lo == 1 {
		d := ev.thickness(&ev.cells[s.lo])
		rests := ev.loss == 0 && d < thinFoot && ev.gap+d < ev.dmax*finest/2
		if d < sliver/4 || rests {
			ev.takeOut(s.lo, "pushed out at the column's foot", true)
			there = false
		}
	}
	if !there {
		switch {
		case ev.gap == 0 && ev.loss > 0 && ev.loss*(ev.Next()-ev.t) < sliver:
			return // it stays within what a column may be too short by
		case ev.gap < 0 || ev.loss <= 0 && ev.gap < ev.dmax*finest:
			if ev.gap < 0 && ev.loss > 0 { // to where rock of the base begins to come in
				ev.h = min(ev.h, (2*sliver-ev.gap)/ev.loss)
			}
			ev.short = 0
			return
		case ev.loss <= 0 && ev.gap < -ev.loss*h && ev.short < 2:
			ev.short++ // it may close by itself
			return
		}
		ev.short = 0
		ev.insertFoot()
	}
	i := len(ev.cells) - 1
	c := &ev.cells[i]
	s := &ev.strata[c.layer]
	out := stream{cell: i, below: true}
	T := ev.base.Temperature
	if ev.base.HasHeatFlow {
		T = c.T
	} else {
		out.T = T
	}
	ev.footRho = s.bulk(s.density(T, c.P, 0, c.X), T, c.P)
	out.H, out.X = s.rock.HeatProduction.Top/ev.footRho, c.X
	ev.foot = len(ev.streams)
	ev.streams = append(ev.streams, out)
}

// setStreams sets what depends on the length of the step.
func (ev *Evolution) setStreams(h float64) {
	if ev.foot < 0 {
		return
	}
	f := &ev.streams[ev.foot]
	c := &ev.cells[f.cell]
	// What the column is too short by comes in during the step, but no faster than
	// conduction evens out the cell it goes to.
	st := &ev.strata[c.layer]
	fastest := st.k.Value(c.T, c.P) / (c.m * st.c)
	f.mass = (ev.loss + min(max(ev.gap/h, -fastest), fastest)) * ev.footRho
	f.mass = max(f.mass, -mostLost*c.m/h)
	f.T = 0
	if f.mass > 0 && !ev.base.HasHeatFlow {
		f.T = ev.base.Temperature
	}
}

// starve looks after cells from which a step of length h would take too much: they are
// joined to their neighbours in the layer, the step is shortened, or a layer that has
// come to its end is taken out. It says whether the streams have to be listed again.
func (ev *Evolution) starve(h float64) (bool, error) {
	for k := range ev.streams {
		f := &ev.streams[k]
		mass := f.mass
		c := &ev.cells[f.cell]
		if f.below {
			if mass = ev.loss * ev.footRho; mass < 0 && ev.gap > -ev.loss*h {
				continue
			}
		}
		if mass > 0 { // a cell may not outgrow the mesh in a step
			ev.h = min(ev.h, ev.dmax*ev.rho(c)/mass)
			continue
		}
		if -mass*h <= mostLost*c.m {
			continue
		}
		s := &ev.strata[c.layer]
		d := ev.thickness(c)
		if s.hi-s.lo > 1 && d < ev.dmax {
			if f.top {
				ev.join(f.cell)
			} else {
				ev.join(f.cell - 1)
			}
			return true, nil
		}
		if s.hi-s.lo == 1 && d <= sliver {
			if f.flux != "" { // the last of it
				ev.flown[f.flux] -= c.m * math.Exp(ev.spread)
			}
			ev.takeOut(f.cell, ev.reason(f), f.below)
			if len(ev.strata) == 0 {
				return false, fmt.Errorf("heat: at %s the whole column is gone", inMyr(ev.t))
			}
			ev.press(false)
			return true, ev.err
		}
		ev.h = min(ev.h, mostLost*c.m/-mass)
		h = min(h, ev.h)
	}
	return false, nil
}

// takeOut ends a layer of one cell.
func (ev *Evolution) takeOut(i int, reason string, below bool) {
	c := &ev.cells[i]
	layer := c.layer
	ev.gain(-c.m, c.e, below)
	ev.end(layer, reason)
	ev.cells = append(ev.cells[:i], ev.cells[i+1:]...)
	ev.drop(layer)
	ev.short = 0
}

func (ev *Evolution) reason(f *stream) string {
	switch {
	case f.below:
		return "pushed out at the column's foot"
	case f.top && f.cell == 0:
		return "eroded"
	}
	return "removed"
}

// adiabat is the temperature of rock of the base brought from the column's foot, at
// pressure P0, to P.
func (ev *Evolution) adiabat(P0, P float64) float64 {
	T := ev.footT()
	const n = 8
	d := (P - P0) / n
	r := &ev.base.Rock
	for i := range n {
		p := P0 + d*float64(i)
		k1 := r.Adiabat(T, p, 0)
		k2 := r.Adiabat(T+d*k1/2, p+d/2, 0)
		k3 := r.Adiabat(T+d*k2/2, p+d/2, 0)
		T += d * (k1 + 2*k2 + 2*k3 + r.Adiabat(T+d*k3, p+d, 0)) / 6
	}
	return T
}

// footT is the temperature at the column's foot.
func (ev *Evolution) footT() float64 {
	if !ev.base.HasHeatFlow {
		return ev.base.Temperature
	}
	c := &ev.cells[len(ev.cells)-1]
	return c.T + ev.base.HeatFlow*ev.thickness(c)/(2*math.Max(ev.strata[c.layer].k.Value(c.T, c.P), 1e-300))
}
