package plots

import (
	"fmt"
	"image/color"
	"math"

	"gonum.org/v1/plot/vg"

	"keelfall/solver/excision"
	"keelfall/solver/race"
)

// Excisions returns the figures of shear zones that a result has the data for: the
// root's thickness, heave and slip against time; the section they cut, before and after;
// and, where zones balance forces, their strength against what drives them. width is
// ColumnWidth where 0.
func Excisions(res *race.Result, width vg.Length) ([]Figure, error) {
	if res == nil || res.Problem == nil || res.Excision == nil || len(res.Excision.Zones) == 0 || len(res.Excision.History.Time) < 2 {
		return nil, nil
	}
	z, err := newZones(res)
	if err != nil {
		return nil, err
	}
	var out []Figure
	for _, draw := range []func(*race.Result, *zones, vg.Length) (*Figure, error){excisionHistory, excisionSection, excisionForce} {
		f, err := draw(res, z, width)
		if err != nil {
			return nil, err
		}
		if f != nil {
			out = append(out, *f)
		}
	}
	return out, nil
}

// zoneLines tell zones apart, in colour and in grey.
var zoneLines = []struct {
	colour color.NRGBA
	dashes []vg.Length
}{{blue, solid}, {vermillion, []vg.Length{6, 1.5}}, {green, []vg.Length{6, 1.5, 1, 1.5}}, {purple, []vg.Length{3, 1}}, {orange, []vg.Length{2, 2}}}

// mostZones is how many zones a figure draws.
const mostZones = 5

// zones are shear zones against time, in km and Myr; only those that can be told apart.
type zones struct {
	time []float64
	all  []zoneCurves
	more int // that are not drawn
}

// zoneCurves is one zone; lists are NaN where it does not move.
type zoneCurves struct {
	name        string
	from, to    float64
	slip, heave []float64 // km
	rate        []float64 // mm/yr
	drive, bear []float64 // 1e12 N/m; nil unless its forces are balanced
}

func newZones(res *race.Result) (*zones, error) {
	x := res.Excision
	if err := sameLength("zones and their histories", len(x.Zones), len(res.Problem.Zones)); err != nil {
		return nil, err
	}
	z := &zones{time: divided(x.History.Time, myr)}
	if err := finite("time", z.time...); err != nil {
		return nil, err
	}
	for i := range x.Zones {
		if i == mostZones {
			z.more = len(x.Zones) - i
			break
		}
		c, err := newZoneCurves(&x.Zones[i], &res.Problem.Zones[i], z.time)
		if err != nil {
			return nil, err
		}
		z.all = append(z.all, c)
	}
	return z, nil
}

func newZoneCurves(h *excision.ZoneHistory, zone *excision.Zone, time []float64) (zoneCurves, error) {
	c := zoneCurves{name: literal(zone.Name), from: zone.From / myr, to: zone.To / myr, slip: divided(h.Slip, km), heave: divided(h.Heave, km)}
	moves := func(v []float64, unit float64) []float64 {
		out := divided(v, unit)
		for i := range out {
			if t := time[min(i, len(time)-1)]; t < c.from*(1-1e-12) || t > c.to*(1+1e-12) {
				out[i] = math.NaN()
			}
		}
		return out
	}
	const perYear = 1e-3 / (myr / 1e6)
	c.rate = moves(h.Rate, perYear)
	if zone.Drive == excision.ForceBalance {
		c.drive, c.bear = moves(h.Force, 1e12), moves(h.Strength, 1e12)
		for i := range c.bear { // 0: it bears nothing any more
			if c.bear[i] == 0 && i < len(c.drive) {
				c.bear[i], c.drive[i] = math.NaN(), math.NaN()
			}
		}
	}
	for _, v := range []struct {
		what   string
		values []float64
		drawn  bool
	}{{"slip", h.Slip, true}, {"heave", h.Heave, true}, {"slip rate", h.Rate, true}, {"driving force", h.Force, c.drive != nil}, {"strength", h.Strength, c.drive != nil}} {
		if !v.drawn {
			continue
		}
		if err := sameLength(v.what+" and time", len(v.values), len(time)); err != nil {
			return c, err
		}
		if err := finite(v.what, v.values...); err != nil {
			return c, err
		}
	}
	return c, nil
}

// remark says in a caption how many zones are not drawn.
func (z *zones) remark() string {
	if z.more == 0 {
		return ""
	}
	return fmt.Sprintf(" %d more zones are not drawn.", z.more)
}

// end is the last time of the axis, Myr.
func (z *zones) end() float64 { return z.time[len(z.time)-1] }
