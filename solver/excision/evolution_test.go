package excision_test

import (
	"context"
	"math"
	"reflect"
	"testing"

	"pgregory.net/rapid"

	"keelfall/column"
	"keelfall/solver/excision"
	"keelfall/solver/heat"
)

func begin(t testing.TB, p excision.Plan) *excision.Evolution {
	t.Helper()
	ev, err := excision.Begin(p)
	if err != nil {
		t.Fatal(err)
	}
	return ev
}

func advance(t testing.TB, ev *excision.Evolution, to float64) {
	t.Helper()
	if err := ev.Advance(context.Background(), to); err != nil {
		t.Fatal(err)
	}
}

// TestStretchedWhileCut: dh/dt = −e h − c has h = (h₀ + c/e) exp(−e t) − c/e, gone after
// ln(1 + e h₀/c)/e; the layer above, uncut, has h₀ exp(−e t) (derived).
func TestStretchedWhileCut(t *testing.T) {
	const e = 2e-15
	z := zone("pyroxenite")
	z.From, z.To = 0, math.Inf(1)
	c := z.SlipRate / 2 // of a 30° zone
	p := excision.Plan{Heat: heat.Plan{Column: still(), ExtensionRate: e}, Zones: []excision.Zone{z}, ArcWidth: 150e3}
	r := follow(t, p, 30)
	for i, at := range r.History.Time {
		pyroxenite := max(0, (12e3+c/e)*math.Exp(-e*at)-c/e)
		want := 8e3*math.Exp(-e*at) + pyroxenite
		if got := r.History.RootThickness[i]; math.Abs(got-want) > 5e-6*20e3 { // heat's steps are of second order
			t.Errorf("at %g Myr the root is %.9g m thick, want %.9g", at/myr, got, want)
		}
	}
	if want := math.Log1p(e*12e3/c) / e; !near(r.Zones[0].UsedUp, want, 5e-6) {
		t.Errorf("used up at %.12g Myr, want %.12g", r.Zones[0].UsedUp/myr, want/myr)
	}
	last := len(r.History.Time) - 1
	if got, want := r.Zones[0].Slip[last], z.SlipRate*30*myr; !near(got, want, 1e-12) {
		t.Errorf("slip %g m, want %g: a zone slips on", got, want)
	}
	// s cos θ t − h/tan θ, h what 12 km are stretched to
	strip := z.SlipRate*30*myr*math.Cos(math.Pi/6) - 12e3*math.Exp(-e*30*myr)/math.Tan(math.Pi/6)
	if got := r.Zones[0].Strips[0].Width[last]; strip <= 0 || !near(got, strip, 1e-5) {
		t.Errorf("strip %g m, want %g", got, strip)
	}
}

// TestSharesOfExtension: zones take a share of the arc's extension and the column the
// rest. Averaged over the arc the root is h₀ exp(−E t) thick whatever the share: as uniform
// stretching by the same extension leaves it. The arc is B₀ exp(E t) wide, and the heave is
// its share of what it has grown. (Derived.)
func TestSharesOfExtension(t *testing.T) {
	const E = 1.5e-15
	for _, share := range []float64{0, 0.25, 0.7, 1} {
		z := zone("granulite", "pyroxenite")
		z.From, z.To, z.Drive, z.Share = 0, math.Inf(1), excision.ExtensionShare, share
		p := excision.Plan{Heat: heat.Plan{Column: still(), ExtensionRate: E}, Zones: []excision.Zone{z}, ArcWidth: 150e3}
		r := follow(t, p, 20)
		ev := begin(t, p)
		advance(t, ev, 20*myr)
		grown := math.Exp(E * 20 * myr)
		if got, want := ev.ArcWidth(), 150e3*grown; !near(got, want, 1e-9) {
			t.Errorf("share %g: the arc is %g m wide, want %g", share, got, want)
		}
		if got, want := ev.ExtensionRate(), (1-share)*E; !near(got, want, 1e-12) {
			t.Errorf("share %g: the column stretches at %g, want %g", share, got, want)
		}
		last := len(r.History.Time) - 1
		if got, want := r.Zones[0].Heave[last], share*150e3*(grown-1); !near(got, want, 1e-9) {
			t.Errorf("share %g: heave %g m, want %g", share, got, want)
		}
		if got, want := r.Zones[0].Rate[last], share*E*150e3*grown/math.Cos(math.Pi/6); !near(got, want, 1e-9) {
			t.Errorf("share %g: slips at %g m/s, want %g", share, got, want)
		}
		// Rates are constant within a step of up to 2 % of the width.
		if got, want := r.History.ArcMean[last], 20e3/grown; !near(got, want, 2e-5) {
			t.Errorf("share %g: arc mean %g m, want %g", share, got, want)
		}
	}
}

// TestPressureGap: the gap is there at the end of the interval, across two densities; the
// slip is omission × cos δ/sin(θ − δ) (plane geometry).
func TestPressureGap(t *testing.T) {
	z := zone("granulite", "pyroxenite")
	z.Drive, z.PressureGap, z.LayeringDip, z.To = excision.PressureStep, 0.5e9, 0.1, 12*myr
	r := follow(t, excision.Plan{Heat: heat.Plan{Column: still()}, Zones: []excision.Zone{z}, ArcWidth: 150e3}, 20)
	last := len(r.History.Time) - 1
	omission := 12e3 + (0.5e9/9.81-12e3*3450)/3100
	h := r.Zones[0]
	if !near(h.PressureGap[last], 0.5e9, 1e-9) || !near(h.OmissionVertical[last], omission, 1e-9) || !near(h.OmissionStratigraphic[last], omission*math.Cos(0.1), 1e-9) {
		t.Errorf("gap %.12g Pa, omission %.12g m vertical, %.12g stratigraphic; want 0.5e9, %.12g, %.12g", h.PressureGap[last], h.OmissionVertical[last], h.OmissionStratigraphic[last], omission, omission*math.Cos(0.1))
	}
	if want := omission * math.Cos(0.1) / math.Sin(math.Pi/6-0.1); !near(h.Slip[last], want, 1e-9) {
		t.Errorf("slip %g m, want %g", h.Slip[last], want)
	}
}

// anyZones are zones of all kinds in any moving column with temperature.
func anyZones(t *rapid.T, tb testing.TB) excision.Plan {
	f := func(name string, a, b float64) float64 { return rapid.Float64Range(a, b).Draw(t, name) }
	p := excision.Plan{Heat: heat.Plan{Column: hot(tb, f("basal", 1400, 1600)), ExtensionRate: rapid.SampledFrom([]float64{-1e-15, -1e-17, 0, 1e-17, 1e-15, 3e-15}).Draw(t, "E"), Points: 100}, ArcWidth: f("arc", 50e3, 400e3), Reference: 1e-15}
	p.Heat.Column.Base.Boundary = rapid.SampledFrom([]column.Boundary{column.HalfSpace, column.Inviscid, column.Rigid}).Draw(t, "base")
	for i, cuts := range [][]string{{"granulite", "root"}, {"crust"}} {
		from := f("from", 0, 5)
		z := excision.Zone{Name: string(rune('a' + i)), Dip: f("dip", 0.2, 1.4), LayeringDip: f("layering", -0.2, 0.15), Cuts: cuts, From: from * myr, To: (from + f("for", 0.5, 12)) * myr, Width: f("width", 50, 3e3)}
		switch z.Drive = excision.Drive(rapid.IntRange(0, 3).Draw(t, "drive")); z.Drive {
		case excision.GivenRate:
			z.SlipRate = f("rate", 1e-5/year, 10e-3/year)
		case excision.ExtensionShare:
			z.Share = f("share", 0.01, 0.5)
		case excision.PressureStep:
			z.PressureGap = f("gap", 5e6, 0.4e9)
		case excision.ForceBalance:
			z.FarField, z.StrengthFactor = 2.5e12, f("factor", 0.05, 1)
		}
		p.Zones = append(p.Zones, z)
	}
	return p
}

// TestRockIsConserved: whatever zones there are, what they took of a layer and what is left
// of it is what there was, and the balance of mass closes (1e-10), that of energy too; a copy that
// is driven alike comes to the same bits, and what one does the other does not feel.
func TestRockIsConserved(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		p := anyZones(rt, t)
		ev, err := excision.Begin(p)
		if err != nil {
			rt.Skip(err)
		}
		ctx := context.Background()
		if err := ev.Advance(ctx, 4*myr); err != nil {
			rt.Skip(err) // a gap the layers cannot leave
		}
		c := ev.Copy()
		if err := ev.Advance(ctx, 9*myr); err != nil {
			rt.Skip(err)
		}
		if err := c.Advance(ctx, 9*myr); err != nil {
			rt.Fatal(err)
		}
		a, pa, err1 := ev.Snapshot()
		b, pb, err2 := c.Snapshot()
		if err1 != nil || err2 != nil || !reflect.DeepEqual(a.Layers, b.Layers) || !reflect.DeepEqual(pa, pb) {
			rt.Fatalf("the copy is another: %v %v", err1, err2)
		}
		if m := ev.Mass(); !(math.Abs(m.Missing) <= 1e-10*max(m.Moved, 1e6)) { // or of 300 m of rock: the column's 3e8 kg/m² round off
			rt.Fatalf("%g kg/m² missing of %g", m.Missing, m.Moved)
		}
		// A zone that hardly slips keeps millimetres of the base's rock at the foot for long,
		// whose heat flow is the difference of nearly equal temperatures (heat: thinFoot).
		if e := ev.Energy(); !(math.Abs(e.Missing) <= 1e-9*e.Moved) {
			rt.Fatalf("%g J/m² missing of %g", e.Missing, e.Moved)
		}
		for name, left := range excision.Balance(ev) {
			if math.Abs(left) > 1e-10 {
				rt.Fatalf("%s: taken and left are off by %g of what there was", name, left)
			}
		}
		if local, _ := ev.Shares(); local < -1 || local > 1+1e-10 {
			rt.Fatalf("share gone %g", local)
		}
	})
}
