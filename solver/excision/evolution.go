package excision

import (
	"context"
	"fmt"
	"maps"
	"math"
	"slices"

	"keelfall/column"
	"keelfall/solver/heat"
)

// Evolution is a column through time with zones that cut it: a heat.Evolution whose rock
// they move, heat and stretch. Begin makes it, Advance moves it on. It is not for several
// goroutines at once; copies are.
type Evolution struct {
	plan     Plan
	heat     *heat.Evolution
	start    *column.Column // as the plan has it
	cold     bool           // it has no temperature
	zones    []acting
	rocks    map[string]*rock // of layers, by name
	width    float64          // of the arc, m; 0 where not given
	mass     float64          // of the root at the start, kg/m²
	first    map[string]heat.LayerState
	layers   []layer // that zones cut, from above
	arc      []float64
	density  []float64 // of each of layers, kg/m³; the last one while it was there
	taken    float64   // share of the arc's extension that zones take now
	broken   float64   // s when the plate gave way; +Inf
	plate    grower    // ln of the plate's own stretching, 1/s
	h        float64   // s, the next step while forces are balanced
	stride   float64   // of steps while forces are balanced; 1 but in tests
	solved   bool      // forces are those of the present column
	seen     *seen     // nil where the column has changed since
	cutAt    float64   // s when the root was cut through; +Inf
	cut      sums      // what zones had done then
	warnings []string
}

// layer is one that zones cut.
type layer struct {
	name string
	root bool
}

// sums are over all zones, m and Pa.
type sums struct{ slip, heave, throw, gap float64 }

// acting is a zone and what it has done.
type acting struct {
	Zone
	sums
	stratigraphic, vertical  float64          // omission, m
	rocks                    map[string]*rock // of its own creep, by layer
	given                    float64          // constant slip rate, m/s; NaN: not known yet
	slipping                 grower           // ln s
	shear                    grower           // ln of the shear stress where it crosses the column, Pa
	force                    float64          // N/m
	rate                     float64          // now, m/s
	least, held              float64          // what it bears at SlowestSlip and the force when it first held, N/m
	ended                    bool             // it has cleared the arc
	usedUp, runaway, holding float64          // s; +Inf
}

// Begin checks the plan and returns the column at time 0.
//
// A column without a temperature takes zones of all kinds but ForceBalance; its rocks need
// no conductivity and no heat capacity.
//
// Errors: those of heat.Begin; a zone that cuts layers that are not there or not one below
// the other, or has no dip; shares above 1 together, or of an extension that is none; a
// pressure gap that the layers cannot leave or that has no end; a force balance without a
// width, in a vertical zone or without a temperature; two forces from outside at one time;
// what needs the arc's width without one.
func Begin(p Plan) (*Evolution, error) {
	ev := &Evolution{plan: p, start: p.Heat.Column, width: p.ArcWidth, rocks: map[string]*rock{}, first: map[string]heat.LayerState{},
		h: firstStep, stride: 1, cutAt: math.Inf(1), broken: math.Inf(1)}
	if err := ev.check(); err != nil {
		return nil, err
	}
	h := p.Heat
	if ev.cold = !h.Column.HasTemperature(); ev.cold {
		h.Column, h.Start, h.Points = lukewarm(h.Column), nil, coldPoints
	}
	var err error
	if ev.heat, err = heat.Begin(h); err != nil {
		return nil, err
	}
	ev.mass = ev.heat.Root().Mass
	for i := range ev.start.Layers {
		l := &ev.start.Layers[i]
		if !slices.ContainsFunc(p.Zones, func(z Zone) bool { return slices.Contains(z.Cuts, l.Name) }) {
			continue
		}
		now, _ := ev.heat.Layer(l.Name)
		ev.first[l.Name] = now
		ev.layers = append(ev.layers, layer{l.Name, l.Root})
		ev.density = append(ev.density, now.Mass/now.Thickness)
	}
	ev.arc = make([]float64, len(ev.layers))
	inf := math.Inf(1)
	for _, z := range p.Zones {
		a := acting{Zone: z, given: z.SlipRate, usedUp: inf, runaway: inf, holding: inf, rocks: map[string]*rock{}}
		if z.Drive == PressureStep {
			a.given = math.NaN()
		}
		ev.zones = append(ev.zones, a)
	}
	return ev, ev.turn()
}

// Copy returns the evolution as it is now, to go its own way.
func (ev *Evolution) Copy() *Evolution {
	c := *ev
	c.heat = ev.heat.Copy()
	c.zones, c.rocks = slices.Clone(ev.zones), maps.Clone(ev.rocks)
	for i := range c.zones {
		c.zones[i].rocks = maps.Clone(ev.zones[i].rocks)
	}
	c.arc, c.density, c.warnings = slices.Clone(ev.arc), slices.Clone(ev.density), slices.Clone(ev.warnings)
	return &c
}

// Time returns the model time, s.
func (ev *Evolution) Time() float64 { return ev.heat.Time() }

// ExtensionRate returns the rate at which the column itself stretches now, 1/s: without
// what zones take of the arc's extension, with what the force on them stretches beside.
func (ev *Evolution) ExtensionRate() float64 { return ev.heat.ExtensionRate() }

// Spread returns the integral of ExtensionRate over time since the start.
func (ev *Evolution) Spread() float64 { return ev.heat.Spread() }

// ArcWidth returns the arc's width now, m: what it was, stretched and heaved; 0 where not
// given.
func (ev *Evolution) ArcWidth() float64 { return ev.width }

// Energy and Mass return the balances of heat.Evolution.
func (ev *Evolution) Energy() heat.Energy { return ev.heat.Energy() }

// Mass returns the balance of mass since the start.
func (ev *Evolution) Mass() heat.Mass { return ev.heat.Mass() }

// Remove takes a share of a layer's mass away, as heat.Evolution.Remove does: a drip.
func (ev *Evolution) Remove(name string, share float64) error {
	if err := ev.heat.Remove(name, share); err != nil {
		return err
	}
	return ev.jumped()
}

// Snapshot returns the column now and its temperature and pressure; a column without a
// temperature has no profile.
func (ev *Evolution) Snapshot() (*column.Column, *heat.Profile, error) {
	c, p, err := ev.heat.Snapshot()
	if err != nil || !ev.cold {
		return c, p, err
	}
	return ev.unheated(c), nil, nil
}

// Advance moves the column on to the model time in s; what happens at that time itself
// has happened when it returns.
//
// Errors: a time before the present one, those of heat.Evolution and of rheology.
func (ev *Evolution) Advance(ctx context.Context, to float64) error {
	if !(to >= ev.Time()) || math.IsInf(to, 1) {
		return fmt.Errorf("excision: a column at %g s cannot advance to %g s", ev.Time(), to)
	}
	for {
		if ev.heat.Next() <= ev.Time() { // what is due
			if err := ev.heat.Advance(ctx, ev.Time()); err != nil {
				return err
			}
			if err := ev.jumped(); err != nil {
				return err
			}
		}
		if ev.Time() >= to {
			return ctx.Err()
		}
		if _, err := ev.step(ctx, to, false); err != nil {
			return err
		}
	}
}

// Next returns the next time in s at which an event of the plan happens, a zone begins,
// ends or has used up the layer it cuts at its present rate; +Inf where there is none.
func (ev *Evolution) Next() float64 {
	next := ev.heat.Next()
	now := ev.Time()
	for i := range ev.zones {
		z := &ev.zones[i]
		if z.From > now {
			next = min(next, z.From)
		} else if z.To > now {
			next = min(next, z.To)
		}
		if ev.acts(z) {
			next = min(next, now+ev.lasts(z))
		}
	}
	return next
}

// acts says whether a zone moves now, or might.
func (ev *Evolution) acts(z *acting) bool {
	return z.From <= ev.Time() && ev.Time() < z.To && !z.ended
}

// target is the layer a zone cuts now: the lowest of its own that is there.
func (ev *Evolution) target(z *Zone) (string, bool) {
	for _, n := range slices.Backward(z.Cuts) {
		if _, ok := ev.heat.Layer(n); ok {
			return n, true
		}
	}
	return "", false
}

// crosses is the layer at whose base a zone crosses the column: the one it cuts, or where
// it has used these up the next one above; "" at the surface.
func (ev *Evolution) crosses(z *Zone) string {
	if n, ok := ev.target(z); ok {
		return n
	}
	above := slices.IndexFunc(ev.start.Layers, func(l column.Layer) bool { return l.Name == z.Cuts[0] })
	for i := above - 1; i >= 0; i-- {
		if _, ok := ev.heat.Layer(ev.start.Layers[i].Name); ok {
			return ev.start.Layers[i].Name
		}
	}
	return ""
}

// lasts is how long in s the layer that a zone cuts lasts at the present rates, of others
// that cut it too: its thickness goes as dh/dt = −e h − c.
func (ev *Evolution) lasts(z *acting) float64 {
	n, ok := ev.target(&z.Zone)
	var c float64
	for i := range ev.zones {
		o := &ev.zones[i]
		if m, _ := ev.target(&o.Zone); o.rate != 0 && m == n {
			c += o.rate * o.VerticalLoss()
		}
	}
	if !ok || !(c > 0) {
		return math.Inf(1)
	}
	l, _ := ev.heat.Layer(n)
	x := ev.ExtensionRate() * l.Thickness / c
	if math.Abs(x) < 1e-12 {
		return l.Thickness / c
	}
	if !(x > -1) {
		return math.Inf(1)
	}
	return math.Log1p(x) / x * l.Thickness / c
}
