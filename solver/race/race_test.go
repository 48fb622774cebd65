package race_test

import (
	"context"
	"errors"
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/excision"
	"keelfall/solver/race"
)

const (
	year = 365.25 * 86400
	myr  = 1e6 * year
)

// problem is an invented arc: crust, root, half-space, one shear zone.
func problem(slip float64) *race.Problem {
	rock := func(rho, eta float64) column.Rock {
		return column.Rock{Density: column.Uniform(rho), Viscosity: column.Viscosity{Top: eta, Bottom: eta, Exponent: 1, Factor: 1}}
	}
	return &race.Problem{
		Column: column.Column{Gravity: 9.81, Surface: column.Surface{Boundary: column.Free},
			Layers: []column.Layer{
				{Name: "crust", Thickness: 40e3, Rock: rock(2850, 1e22)},
				{Name: "root", Thickness: 12e3, Root: true, Rock: rock(3450, 2e20)},
			},
			Base: column.Base{Boundary: column.HalfSpace, Rock: rock(3270, 1e20)}},
		ArcWidth: 150e3, ArcLength: 400e3, Strain: race.Strain{ReferenceRate: 1e-15},
		Drip:  drip.Settings{Amplitude: 500, Criterion: 1, Window: 30 * myr, Removes: 0.3, Spectrum: "white", Softening: "none"},
		Zones: []excision.Zone{{Name: "zone", Dip: math.Pi / 6, Cuts: []string{"root"}, To: 30 * myr, SlipRate: slip * 1e-3 / year}},
	}
}

func run(t *testing.T, p *race.Problem) *race.Result {
	t.Helper()
	r, err := race.Run(context.Background(), p)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// The faster mechanism is named; the verdict's time and shares are its own.
func TestVerdict(t *testing.T) {
	slow := run(t, problem(0.01))
	drips := slow.Drip.Time
	if slow.Verdict.Outcome != "dripped" || slow.Verdict.Time != drips {
		t.Fatalf("slow zone: %s at %g Myr", slow.Verdict.Outcome, slow.Verdict.Time/myr)
	}
	// 1 mm/yr on a 30° zone takes 0.5 km/Myr: 30 % of 12 km after 7.2 Myr
	rate := 7.2 * myr / drips // mm/yr at which both would be equal
	fast := run(t, problem(rate*1.05))
	if fast.Verdict.Outcome != "excised" || math.Abs(fast.Verdict.Time/(drips/1.05)-1) > 1e-9 {
		t.Errorf("fast zone: %s at %g Myr", fast.Verdict.Outcome, fast.Verdict.Time/myr)
	}
	if m := fast.Verdict.Margin; math.Abs(m/(drips-drips/1.05)-1) > 1e-6 {
		t.Errorf("margin %g Myr", m/myr)
	}
	// when the drip comes, a zone at 0.8 of that rate has taken 0.24: both
	both := run(t, problem(rate*0.8))
	if v := both.Verdict; v.Outcome != "both" || math.Abs(v.Shares.Excision-0.24) > 1e-6 || math.Abs(v.Shares.Drip-0.3*0.76) > 1e-6 {
		t.Errorf("near race: %s, shares %+v", v.Outcome, v.Shares)
	}
	kept := problem(0.01)
	kept.Drip.Window = drips / 2
	kept.Zones[0].To = kept.Drip.Window
	if v := run(t, kept).Verdict; v.Outcome != "preserved" || v.Time != kept.Drip.Window {
		t.Errorf("short window: %s at %g Myr", v.Outcome, v.Time/myr)
	}
}

// A flip that was found is one: a run a little beyond it has another verdict, a run a
// little before it has not.
func TestFlipsAreConfirmed(t *testing.T) {
	for name, p := range map[string]*race.Problem{"dripped": problem(0.05), "excised": problem(8)} {
		r := run(t, p)
		if r.Verdict.Outcome != name {
			t.Fatalf("%s, want %s", r.Verdict.Outcome, name)
		}
		confirmed := 0
		for _, f := range r.Verdict.Flips {
			if !f.Found {
				continue
			}
			for _, beyond := range []bool{true, false} {
				to := f.From * math.Pow(f.To/f.From, 0.97)
				if beyond {
					to = f.From * math.Pow(f.To/f.From, 1.03)
				}
				q := problem(p.Zones[0].SlipRate * year * 1e3)
				switch f.Key {
				case "layers.root.viscosity-factor":
					q.Column.Layers[1].Viscosity.Factor = to
				case "drip.amplitude":
					q.Drip.Amplitude = to
				case "layers.root.density":
					q.Column.Layers[1].Density = column.Uniform(3270 + to)
				case "excision.zones.zone.slip-rate":
					q.Zones[0].SlipRate = to
				default:
					t.Fatalf("no way to confirm %s", f.Key)
				}
				if got := run(t, q).Verdict.Outcome; (got != name) != beyond {
					t.Errorf("%s: %s at %g: %s (flip at %g from %g)", name, f.Key, to, got, f.To, f.From)
				}
			}
			confirmed++
		}
		if confirmed < 2 {
			t.Errorf("%s: only %d flips found", name, confirmed)
		}
		if d, ok := r.Verdict.Decider(); !ok || d.Distance > r.Verdict.Flips[1].Distance && r.Verdict.Flips[1].Found {
			t.Errorf("%s: the decider %+v is not the nearest", name, d)
		}
	}
}

// What is wrong with the experiment is marked as that.
func TestInputErrors(t *testing.T) {
	wall := problem(1)
	wall.Column.Base.Boundary = column.Rigid
	noRoot := problem(1)
	noRoot.Column.Layers[1].Root = false
	thick := problem(1)
	thick.Column.Layers[0].Thickness = -1
	for name, p := range map[string]*race.Problem{"root on a wall": wall, "zones without a root": noRoot, "negative thickness": thick} {
		if _, err := race.Run(context.Background(), p); !errors.Is(err, race.ErrInput) {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// Creep makes the answer depend on the reference strain rate, numbers do not.
func TestRateBand(t *testing.T) {
	r := run(t, problem(0.05))
	if r.Rate.Used || r.Rate.AtThrice != r.Drip.Time {
		t.Errorf("given viscosities: %+v", r.Rate)
	}
}
