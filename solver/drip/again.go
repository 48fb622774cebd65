package drip

import (
	"context"
	"fmt"
	"math"
)

// mostDrips is the number of drips that are followed, one after the other.
const mostDrips = 50

// drips takes the first drip out of the root and follows what is left, to the window's
// end or until the root is no thicker than an undulation needs.
func (d *through) drips(ctx context.Context, r *Result) error {
	next, first := Fastest{r.Time, r.InitialWavelength}, true
	for {
		if len(r.Drips) == mostDrips {
			r.Warnings = append(r.Warnings, fmt.Sprintf("more than %d drips before the window ends: the first %d are listed", mostDrips, mostDrips))
			return nil
		}
		grown := d.stretched(next.Time)
		n, err := d.at(ctx, next.Time)
		if err != nil {
			return err
		}
		if n.lay.rootBase < 0 {
			return nil
		}
		if first {
			if err := d.mode(n, r); err != nil {
				return err
			}
			if r.Time > d.set.Window {
				return nil
			}
			first = false
		}
		e := Event{Time: next.Time, Wavelength: next.Wavelength * grown, Initial: next.Wavelength}
		last := n.lay.rootBase - 1
		_, e.Depth = n.s.Span(last)
		e.BaseTemperature, _ = n.s.TemperatureAt(last, e.Depth)
		if d.set.Removes >= 1 { // nothing is left to follow
			e.Lost = n.root
			r.Drips = append(r.Drips, e)
			return nil
		}
		if e.Lost, err = d.take(n); err != nil {
			return err
		}
		r.Drips = append(r.Drips, e)
		if next.Time >= d.set.Window*(1-1e-6) {
			return nil
		}
		if err := d.restart(); err != nil {
			return nil // nothing that could drip is left
		}
		from, to := d.span()
		if err := d.follow(ctx, from, to, 6, 1); err != nil {
			return err
		}
		if next, err = d.best(ctx, 1, d.limit(), 5e-3); err != nil {
			return err
		}
		if next, err = d.warmNext(ctx, next); err != nil || math.IsInf(next.Time, 1) {
			return err
		}
	}
}

// take removes the drip's share of the root's mass from its base up and returns the
// thickness that went.
func (d *through) take(n *node) (lost float64, err error) {
	c := n.s.Column
	mass := make([]float64, len(c.Layers))
	var all float64
	for i := range c.Layers {
		if c.Layers[i].Root {
			p := n.s.Layers[i].Points
			for j := 1; j < len(p); j++ {
				mass[i] += (p[j].Depth - p[j-1].Depth) * (p[j].Density + p[j-1].Density) / 2
			}
			all += mass[i]
		}
	}
	left := d.set.Removes * all
	for i := len(c.Layers) - 1; i >= 0 && left > 1e-9*all; i-- {
		if !c.Layers[i].Root {
			continue
		}
		share := math.Min(1, left/mass[i])
		if share > 1-1e-9 {
			share = 1
		}
		if err := d.tape.remove(c.Layers[i].Name, share); err != nil {
			return lost, err
		}
		left -= share * mass[i]
		lost += share * c.Layers[i].Thickness
	}
	return lost, nil
}
