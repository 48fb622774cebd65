package excision

import (
	"fmt"
	"math"
)

// jumped makes what hangs on the column's state anew after a jump.
func (ev *Evolution) jumped() error {
	ev.solved, ev.seen = false, nil
	ev.plate.forget()
	for i := range ev.zones {
		ev.zones[i].slipping.forget()
		ev.zones[i].shear.forget()
	}
	return ev.turn()
}

// over ends zones that begin after the plate has given way.
func (ev *Evolution) over() {
	for i := range ev.zones {
		if z := &ev.zones[i]; z.Drive == ForceBalance && z.From <= ev.Time() {
			z.ended = true
		}
	}
}

// turn lets zones begin and end, and sets the rates of all of them to those of now.
func (ev *Evolution) turn() error {
	now := ev.Time()
	forced, shares := false, 0.0
	if !math.IsInf(ev.broken, 1) {
		ev.over()
	}
	for i := range ev.zones {
		z := &ev.zones[i]
		z.rate, z.force = 0, 0
		if !ev.acts(z) {
			continue
		}
		if z.Drive == ForceBalance && ev.width > 0 && z.heave >= ev.plan.ArcWidth*(1-1e-12) {
			z.ended = true
			ev.warnings = append(ev.warnings, fmt.Sprintf("zone %s has heaved as far as the arc was wide, %.4g km, by %.4g Myr and is stopped", z.Name, ev.plan.ArcWidth/1e3, now/myr))
			continue
		}
		if math.IsNaN(z.given) {
			if err := ev.paceGap(z); err != nil {
				return err
			}
		}
		if _, ok := ev.target(&z.Zone); !ok && math.IsInf(z.usedUp, 1) {
			z.usedUp = now
		}
		forced = forced || z.Drive == ForceBalance
		if z.Drive == ExtensionShare && ev.heat.ArcRate() > 0 {
			shares += z.Share
		}
	}
	if forced {
		if err := ev.balance(); err != nil {
			return err
		}
	} else {
		ev.plate = grower{now: math.Inf(-1), expected: math.Inf(-1)}
	}
	for i := range ev.zones {
		z := &ev.zones[i]
		if !ev.acts(z) {
			continue
		}
		switch z.Drive {
		case ExtensionShare:
			z.rate = z.Share * max(ev.heat.ArcRate(), 0) * ev.width / z.Heave()
		case ForceBalance:
			z.rate = math.Exp(z.slipping.now)
		default:
			z.rate = z.given
		}
	}
	if ev.mass > 0 && math.IsInf(ev.cutAt, 1) && ev.heat.Root().Mass <= 1e-9*ev.mass {
		ev.cutAt, ev.cut = now, ev.sums()
	}
	ev.taken = shares
	return ev.heat.Stretch(1-shares, math.Exp(ev.plate.now))
}

// paceGap sets the constant rate at which a zone leaves its pressure gap: slip is
// omission × cos δ/sin(θ − δ), the omission that of the lowest of its layers' rock.
func (ev *Evolution) paceGap(z *acting) error {
	want := z.PressureGap / ev.start.Gravity
	left, omitted := want, 0.0
	for i := len(z.Cuts) - 1; i >= 0 && left > 0; i-- {
		d, m := ev.heat.BaseMass(z.Cuts[i], left)
		left -= m
		omitted += d
	}
	if left > 1e-9*want {
		return fmt.Errorf("excision: zone %q: a pressure gap of %.4g GPa; the layers it cuts make up %.4g GPa at %.4g Myr", z.Name, z.PressureGap/1e9, (want-left)*ev.start.Gravity/1e9, ev.Time()/myr)
	}
	z.given = omitted / z.VerticalLoss() / (z.To - z.From)
	return nil
}

const myr = 1e6 * 365.25 * 86400
