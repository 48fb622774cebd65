package excision

import (
	"context"
	"math"

	"keelfall/solver/heat"
)

// The steps of a force balance. ln s is carried over a step by what it did in the last two,
// so that slip and heat are its mean: second order at least. The error is what this has
// missed by at the end.
const (
	firstStep = 3e11 // s, some 10,000 years
	fine      = 0.01 // error of ln s in a step that counts
	most      = 0.1  // change of ln s in a step that counts
	counts    = 10   // m of slip
	strained  = 1e-3 // stretching of the plate beside that counts
	turning   = 0.02 // change of the arc's width in a step while zones take a share of it
)

// paces are the mean rates of a step, and what they do to the arc's width.
type paces struct {
	slip  []float64 // m/s
	stiff float64   // 1/s, own stretching and shares: dB/dt = stiff B + heave
	heave float64   // m/s, of zones that take no share
	width float64   // m, at the end
}

// pace returns the mean rates over h.
func (ev *Evolution) pace(h float64) paces {
	p := paces{slip: make([]float64, len(ev.zones)), stiff: ev.ExtensionRate()}
	E := max(ev.heat.ArcRate(), 0)
	for i := range ev.zones {
		z := &ev.zones[i]
		if !ev.acts(z) {
			continue
		}
		switch z.Drive {
		case ExtensionShare:
			p.stiff += z.Share * E
			continue
		case ForceBalance:
			if p.slip[i] = 0; !math.IsInf(z.slipping.now, -1) {
				p.slip[i] = min(z.slipping.mean(h), FastestSlip)
			}
		default:
			p.slip[i] = z.given
		}
		p.heave += p.slip[i] * z.Heave()
	}
	grown := expm1Over(p.stiff*h) * h // ∫exp(stiff t) dt
	p.width = ev.width*math.Exp(p.stiff*h) + p.heave*grown
	mean := ev.width // ∫B dt/h
	if x := p.stiff * h; math.Abs(x) > 1e-6 {
		mean = (p.width - ev.width - p.heave*h) / x
	} else {
		mean += (p.stiff*ev.width + p.heave) * h / 2
	}
	for i := range ev.zones {
		if z := &ev.zones[i]; ev.acts(z) && z.Drive == ExtensionShare {
			p.slip[i] = z.Share * E * mean / z.Heave()
		}
	}
	return p
}

// expm1Over is (exp x − 1)/x.
func expm1Over(x float64) float64 {
	if math.Abs(x) < 1e-8 {
		return 1 + x/2
	}
	return math.Expm1(x) / x
}

// step moves on, at most to a time; with keep it returns the column as it was before.
func (ev *Evolution) step(ctx context.Context, to float64, keep bool) (was *Evolution, err error) {
	now := ev.Time()
	end := min(to, ev.Next())
	forced, shared := ev.limited(&end)
	if shared {
		if k := math.Abs(ev.heat.ArcRate()); k > 0 {
			end = min(end, now+turning/k)
		}
	}
	turns := ev.Next() // then something begins or ends, and rates of change are others
	if !forced {
		if keep {
			was = ev.Copy()
		}
		if err := ev.drive(ctx, end); err != nil {
			return nil, err
		}
		if end >= turns {
			return was, ev.jumped()
		}
		return was, ev.turn()
	}
	was = new(Evolution)
	*was = *ev // what follows leaves it alone
	h := min(end-now, ev.h)
	if end-now < 1.5*h {
		h = end - now
	}
	for {
		until := now + h
		if h == end-now {
			until = end
		}
		try := ev.Copy()
		if err := try.drive(ctx, until); err != nil {
			return nil, err
		}
		if until >= turns {
			*ev = *try
			return was, ev.jumped()
		}
		if err := try.turn(); err != nil {
			return nil, err
		}
		factor, ok := ev.judged(try, h)
		if ok || h < 1e-10*max(now, myr) {
			try.learn(ev, h)
			if h >= ev.h*0.9 || factor < 1 {
				try.h = h * factor
			}
			*ev = *try
			return was, nil
		}
		h *= min(factor, 0.7)
		ev.h = h
	}
}

// limited shortens a step to where a zone has cleared the arc, and says whether forces are
// balanced and shares taken now.
func (ev *Evolution) limited(end *float64) (forced, shared bool) {
	for i := range ev.zones {
		z := &ev.zones[i]
		if !ev.acts(z) {
			continue
		}
		forced = forced || z.Drive == ForceBalance
		shared = shared || z.Drive == ExtensionShare
		if v := z.rate * z.Heave(); z.Drive == ForceBalance && v > 0 {
			if left := (ev.plan.ArcWidth - z.heave) / v; left > 0 {
				*end = min(*end, ev.Time()+left)
			}
		}
	}
	return forced, shared
}

// judged says whether a step of h was short enough, and by what factor the next may differ.
func (ev *Evolution) judged(after *Evolution, h float64) (factor float64, ok bool) {
	factor, ok = 2, true
	held := func(a, b *grower, weight, counts float64) {
		if math.IsInf(a.now, -1) && math.IsInf(b.now, -1) || weight < counts {
			return
		}
		d, miss := math.Abs(b.now-a.now), math.Abs(b.now-a.ahead(h))
		big, off := most*ev.stride, fine*ev.stride*ev.stride
		f := 0.9 * min(big/d, math.Sqrt(off/miss))
		factor = min(factor, max(f, 0.2))
		ok = ok && d <= big && miss <= off
	}
	for i := range ev.zones {
		a, b := &ev.zones[i], &after.zones[i]
		if a.Drive == ForceBalance && ev.acts(a) && after.acts(b) {
			held(&a.slipping, &b.slipping, max(a.rate, b.rate)*h, counts)
		}
	}
	held(&ev.plate, &after.plate, max(math.Exp(ev.plate.now), math.Exp(after.plate.now))*h, strained)
	return factor, ok
}

// learn takes the rates of change from a step of h; a step much shorter than is usual
// would tell more of round-off.
func (ev *Evolution) learn(before *Evolution, h float64) {
	if h < 0.01*before.h {
		return
	}
	for i := range ev.zones {
		ev.zones[i].slipping.learn(&before.zones[i].slipping, h)
		ev.zones[i].shear.learn(&before.zones[i].shear, h)
	}
	ev.plate.learn(&before.plate, h)
}

// drive moves the column to a time at the mean rates until then and books what zones have done.
func (ev *Evolution) drive(ctx context.Context, end float64) error {
	h := end - ev.Time()
	if err := ev.heat.Stretch(1-ev.taken, ev.plate.mean(h)); err != nil {
		return err
	}
	p := ev.pace(h)
	net := map[string]float64{}
	var order []string
	var sources []heat.Source
	for i := range ev.zones {
		z := &ev.zones[i]
		if p.slip[i] == 0 {
			continue
		}
		if n, ok := ev.target(&z.Zone); ok {
			if _, seen := net[n]; !seen {
				order = append(order, n)
			}
			net[n] -= p.slip[i] * z.VerticalLoss()
		}
		if z.Drive == ForceBalance {
			q := math.Exp(z.shear.ahead(h/2)) * p.slip[i] / z.Heave()
			sources = append(sources, heat.Source{BaseOf: ev.crosses(&z.Zone), Power: q, Height: z.Width / z.Heave()})
		}
	}
	var fluxes []heat.Flux
	for _, n := range order {
		fluxes = append(fluxes, heat.Flux{Layer: n, Rate: net[n]})
	}
	if err := ev.heat.Flux(fluxes...); err != nil {
		return err
	}
	if err := ev.heat.Heat(sources...); err != nil {
		return err
	}
	for i := range ev.zones {
		z := &ev.zones[i]
		z.slipping.expected = z.slipping.ahead(h)
	}
	ev.plate.expected = ev.plate.ahead(h)
	before := ev.marks()
	if err := ev.heat.Advance(ctx, end); err != nil {
		return err
	}
	ev.book(p, h, before)
	ev.solved, ev.seen = false, nil
	return nil
}
