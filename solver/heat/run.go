package heat

import (
	"context"
	"fmt"
	"math"
	"slices"

	"keelfall/column"
)

// mostMissing is the share of the energy moved by which a result may be wrong.
const mostMissing = 1e-6

// Run advances a plan to the model time until, s, and returns what happened; times are
// those of the snapshots, in any order, each within the run.
//
// Errors: those of Begin and Advance, a snapshot outside the run, and a balance of energy
// that does not close to a millionth.
func Run(ctx context.Context, p Plan, until float64, times []float64) (*History, error) {
	ev, err := Begin(p)
	if err != nil {
		return nil, err
	}
	times = slices.Clone(times)
	slices.Sort(times)
	if n := len(times); n > 0 && !(times[0] >= 0 && times[n-1] <= until) {
		return nil, fmt.Errorf("heat: snapshots at %s to %s; the run is from 0 to %s", inMyr(times[0]), inMyr(times[n-1]), inMyr(until))
	}
	if err := ev.rehearse(until); err != nil {
		return nil, err
	}
	h := &History{}
	ev.record = func() { ev.note(h) }
	ev.note(h)
	for _, t := range append(times, until) {
		if err := ev.Advance(ctx, t); err != nil {
			return nil, err
		}
		if len(h.Snapshots) == len(times) {
			break
		}
		c, prof, err := ev.Snapshot()
		if err != nil {
			return nil, err
		}
		h.Snapshots = append(h.Snapshots, Snapshot{Time: ev.t, Column: c, Profile: prof})
	}
	h.Paths, h.Energy, h.Mass = ev.Paths(), ev.Energy(), ev.Mass()
	if e := h.Energy; !(math.Abs(e.Missing) <= mostMissing*e.Moved) && e.Missing != 0 {
		return nil, fmt.Errorf("heat: by %s the balance of energy misses %.3g J/m² of %.3g that moved; the result would not be true", inMyr(ev.t), e.Missing, e.Moved)
	}
	h.Steps, h.Rejected, h.Warnings = ev.steps, ev.rejected, ev.warnings
	return h, nil
}

// note appends the present column to the lists against time; where no time has passed,
// as at an event, it replaces the last.
func (ev *Evolution) note(h *History) {
	n := len(h.Time)
	if n > 0 && h.Time[n-1] == ev.t {
		n--
	}
	h.Time = append(h.Time[:n], ev.t)
	h.SurfaceFlow = append(h.SurfaceFlow[:n], ev.SurfaceFlow())
	r := ev.Root()
	h.RootBase = append(h.RootBase[:n], r.BaseTemperature)
	h.RootThickness = append(h.RootThickness[:n], r.Thickness)
	h.Depth = append(h.Depth[:n], r.Own)
	h.MeltFraction = append(h.MeltFraction[:n], r.MeltFraction)
	h.Reacted = append(h.Reacted[:n], r.Reacted)
	h.Weight = append(h.Weight[:n], ev.weight())
}

// weight is the column's, cell by cell.
func (ev *Evolution) weight() column.Weight {
	var w column.Weight
	for i := range ev.cells {
		c := &ev.cells[i]
		rho := ev.rho(c)
		w.Add(ev.thickness(c), c.m, rho, rho)
	}
	return w
}

// RootState is the root, and what else is read off the column at one time.
type RootState struct {
	Thickness       float64 // m
	Mass            float64 // kg/m²
	BaseTemperature float64 // K; 0 without a root
	Own             float64 // thickness of the column without rock of the base at its foot, m
	MeltFraction    float64 // the largest anywhere
	Reacted         float64 // reacted share of the mass of two-state rock: the root's, without a root all
}

// Root returns the root now.
func (ev *Evolution) Root() RootState {
	var out RootState
	var z, mass, reacted, all, allReacted float64
	lowest := -1
	for j := range ev.strata {
		s := &ev.strata[j]
		for i := s.lo; i < s.hi; i++ {
			c := &ev.cells[i]
			d := ev.thickness(c)
			z += d
			if s.root {
				out.Thickness += d
				out.Mass += c.m
			}
			if s.melt != nil {
				phi, _ := s.melt.At(c.T, c.P)
				out.MeltFraction = max(out.MeltFraction, phi)
			}
			if s.react != nil {
				all, allReacted = all+c.m, allReacted+c.m*c.X
				if s.root {
					mass, reacted = mass+c.m, reacted+c.m*c.X
				}
			}
		}
		if s.root {
			lowest = s.hi - 1
		}
		if !s.below {
			out.Own = z
		}
	}
	if lowest >= 0 {
		_, out.BaseTemperature = ev.facesOf(lowest)
	} else {
		mass, reacted = all, allReacted
	}
	if mass > 0 {
		out.Reacted = reacted / mass
	}
	return out
}
