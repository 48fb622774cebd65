package race_test

import (
	"context"
	"errors"
	"math"
	"slices"
	"strings"
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

// What is wrong with the experiment is marked as that.
func TestInputErrors(t *testing.T) {
	wall := problem(1)
	wall.Column.Base.Boundary = column.Rigid
	noRoot := problem(1)
	noRoot.Column.Layers[1].Root = false
	high := problem(1)
	high.Drip.Amplitude = 12e3
	thick := problem(1)
	thick.Column.Layers[0].Thickness = -1
	for name, p := range map[string]*race.Problem{"root on a wall": wall, "zones without a root": noRoot, "negative thickness": thick,
		"an undulation that already is the drip": high} {
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

// The arc mean of a drip is its share of what zones have left there (a drip takes its
// share of what is there), and both halves of the margin say what they lead to.
func TestArcMeanAndMargins(t *testing.T) {
	p := problem(0.1)
	r := run(t, p)
	v := r.Verdict
	if v.Outcome != "dripped" || v.MarginTo != "excision" {
		t.Fatalf("%s, margin to %q", v.Outcome, v.MarginTo)
	}
	heave := 0.1e-3 / year * v.Time * math.Cos(math.Pi/6)
	arc := heave / (150e3 + heave)
	if got := v.ArcMean.Excision; math.Abs(got/arc-1) > 1e-3 { // linear between 200 samples
		t.Errorf("arc mean of excision %g, want %g", got, arc)
	}
	if got, want := v.ArcMean.Drip, 0.3*(1-v.ArcMean.Excision); math.Abs(got/want-1) > 1e-12 {
		t.Errorf("arc mean of the drip %g, want %g", got, want)
	}
	if got := v.WindowMargin; math.Abs(got/(30*myr-v.Time)-1) > 1e-12 {
		t.Errorf("the window's end is %g Myr away", got/myr)
	}
	if v.MarginViscosityOutcome == "" || v.MarginViscosityOutcome == v.Outcome {
		t.Errorf("another viscosity leads to %q", v.MarginViscosityOutcome)
	}
}

// The limit on wavelength is the arc's size along the wavevector.
func TestLimit(t *testing.T) {
	p := problem(1)
	if l, w := p.Limit(); l != 150e3 || w != "the arc's width, 150 km" {
		t.Errorf("along the stretch: %g m, %q", l, w)
	}
	p.Strain.Wavevector = race.AlongStrike
	if l, w := p.Limit(); l != 400e3 || w != "the arc's length, 400 km" {
		t.Errorf("along strike: %g m, %q", l, w)
	}
	p.ArcLength = 40
	if _, w := p.Limit(); w != "the arc's length, 0.04 km" {
		t.Errorf("a very short arc: %q", w)
	}
}

// Stress exponents above 1 are warned about wherever they stand, the half-space too.
func TestIsotropicWarning(t *testing.T) {
	for name, set := range map[string]func(*race.Problem){
		"none": func(*race.Problem) {},
		"root": func(p *race.Problem) { p.Column.Layers[1].Viscosity.Exponent = 3 },
		"base": func(p *race.Problem) { p.Column.Base.Viscosity.Exponent = 3 },
	} {
		p := problem(1)
		set(p)
		r := run(t, p)
		warned := slices.ContainsFunc(r.Warnings, func(w string) bool { return strings.Contains(w, "isotropic") })
		limited := slices.ContainsFunc(r.Limits, func(w string) bool { return strings.Contains(w, "softening") })
		if want := name != "none"; warned != want || limited != want {
			t.Errorf("%s: %q, %q", name, r.Warnings, r.Limits)
		}
	}
}

// One zone is called by its name.
func TestZoneNames(t *testing.T) {
	for name, want := range map[string]string{"Elvik zone": "The Elvik zone cuts", "basal": "The shear zone basal cuts"} {
		p := problem(8)
		p.Zones[0].Name = name
		if s := run(t, p).Verdict.Sentence; !strings.HasPrefix(s, want) {
			t.Errorf("%q, want %q", s, want)
		}
	}
}
