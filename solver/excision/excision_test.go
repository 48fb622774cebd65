package excision_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"keelfall/solver/excision"
)

const (
	year = 365.25 * 86400
	myr  = 1e6 * year
)

func layers() []excision.Layer {
	return []excision.Layer{
		{Name: "crust", Thickness: 40e3, Density: 2850},
		{Name: "granulite", Thickness: 8e3, Density: 3100, Root: true},
		{Name: "pyroxenite", Thickness: 12e3, Density: 3450, Root: true},
	}
}

func zone(cuts ...string) excision.Zone {
	return excision.Zone{Name: "z", Dip: math.Pi / 6, Cuts: cuts, From: 2 * myr, To: 60 * myr, SlipRate: 1e-3 / year}
}

func setting(window float64) excision.Setting {
	return excision.Setting{Layers: layers(), Gravity: 9.81, ArcWidth: 150e3, Share: 0.3, Window: window * myr}
}

// A single zone, by hand: 1 mm/yr on a 30° zone takes 0.5 km/Myr, from the lowest of
// its layers upwards, which a user names from above downwards.
func TestByHand(t *testing.T) {
	z := zone("granulite", "pyroxenite")
	z.To = math.Inf(1)
	r, err := excision.Solve([]excision.Zone{z}, setting(60))
	if err != nil {
		t.Fatal(err)
	}
	mass := 8e3*3100.0 + 12e3*3450
	want := 2 + 0.3*mass/3450/0.5e3 // Myr
	if r.Outcome != "excised" || math.Abs(r.Time/myr/want-1) > 1e-9 {
		t.Errorf("%s at %.9g Myr, want %.9g", r.Outcome, r.Time/myr, want)
	}
	if want := 2 + 20/0.5; math.Abs(r.CutThroughTime/myr/want-1) > 1e-9 { // 12 km, then 8 km
		t.Errorf("cut through at %.9g Myr, want %g", r.CutThroughTime/myr, want)
	}
	slip := (want - 2) * 1e3
	if math.Abs(r.Slip/slip-1) > 1e-9 || math.Abs(r.Heave/(slip*math.Cos(math.Pi/6))-1) > 1e-9 || math.Abs(r.Throw/(slip/2)-1) > 1e-9 {
		t.Errorf("slip %g, heave %g, throw %g m for a slip of %g", r.Slip, r.Heave, r.Throw, slip)
	}
	if gap := 0.3 * mass * 9.81; math.Abs(r.PressureGap/gap-1) > 1e-9 {
		t.Errorf("pressure gap %g Pa, want %g", r.PressureGap, gap)
	}
	// heave/(B + heave) = 0.3
	if want := 2*myr + 150e3*0.3/0.7/(1e-3/year*math.Cos(math.Pi/6)); math.Abs(r.ArcMeanTime/want-1) > 1e-9 {
		t.Errorf("arc mean at %g s, want %g", r.ArcMeanTime, want)
	}
}

// A window that ends first, no zones, repetition.
func TestOutcomes(t *testing.T) {
	r, err := excision.Solve([]excision.Zone{zone("pyroxenite")}, setting(5))
	if err != nil || r.Outcome != "window" || !math.IsInf(r.Time, 1) || math.IsInf(r.LocalBeyond, 1) {
		t.Errorf("short window: %+v, %v", r, err)
	}
	if r, err = excision.Solve(nil, setting(5)); err != nil || r.Outcome != "no zones" || !math.IsInf(r.Time, 1) {
		t.Errorf("no zones: %+v, %v", r, err)
	}
	z := zone("pyroxenite")
	z.LayeringDip = math.Pi / 3 // steeper than the zone: rock is repeated
	if r, err = excision.Solve([]excision.Zone{z}, setting(50)); err != nil || r.Outcome != "window" {
		t.Fatalf("repetition: %+v, %v", r, err)
	}
	if h := r.History.RootThickness; h[len(h)-1] <= 20e3 {
		t.Errorf("repetition thins the root to %g m", h[len(h)-1])
	}
}

// Rock is conserved: what is gone from the root is what the zones took, whatever zones
// there are, and the history never loses more than there was.
func TestConservation(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var zones []excision.Zone
		for i := range rapid.IntRange(1, 3).Draw(t, "zones") {
			from := rapid.Float64Range(0, 20).Draw(t, "from")
			zones = append(zones, excision.Zone{Name: string(rune('a' + i)), Dip: rapid.Float64Range(0.05, math.Pi/2).Draw(t, "dip"),
				Cuts: rapid.SampledFrom([][]string{{"pyroxenite"}, {"granulite"}, {"granulite", "pyroxenite"}, {"crust", "granulite"}}).Draw(t, "cuts"),
				From: from * myr, To: (from + rapid.Float64Range(0.1, 60).Draw(t, "for")) * myr,
				SlipRate: rapid.Float64Range(0, 10e-3/year).Draw(t, "slip")})
		}
		r, err := excision.Solve(zones, setting(40))
		if err != nil {
			t.Fatal(err)
		}
		mass := 8e3*3100.0 + 12e3*3450
		for i := range r.History.Time {
			if s := r.History.RootMassShare[i]; s < 0 || s > 1+1e-10 {
				t.Fatalf("share gone %g", s)
			}
			// thickness between all granulite and all pyroxenite for the mass left
			left := mass * (1 - r.History.RootMassShare[i])
			if h := r.History.RootThickness[i]; h < left/3450-1e-6 || h > left/3100+1e-6 {
				t.Fatalf("%g m of root hold %g kg/m²", h, left)
			}
			if i > 0 && r.History.RootThickness[i] > r.History.RootThickness[i-1]+1e-9 {
				t.Fatal("the root thickens")
			}
		}
		if r.Outcome == "excised" && (r.Time < 0 || r.Time > 40*myr) {
			t.Fatalf("excised at %g Myr", r.Time/myr)
		}
	})
}

func TestRefused(t *testing.T) {
	for name, spoil := range map[string]func(*excision.Zone, *excision.Setting){
		"dip 0":         func(z *excision.Zone, _ *excision.Setting) { z.Dip = 0 },
		"dip 91":        func(z *excision.Zone, _ *excision.Setting) { z.Dip = 91 * math.Pi / 180 },
		"unknown layer": func(z *excision.Zone, _ *excision.Setting) { z.Cuts = []string{"keel"} },
		"no layer":      func(z *excision.Zone, _ *excision.Setting) { z.Cuts = nil },
		"backwards":     func(z *excision.Zone, _ *excision.Setting) { z.To = z.From },
		"NaN slip":      func(z *excision.Zone, _ *excision.Setting) { z.SlipRate = math.NaN() },
		"share 0":       func(_ *excision.Zone, s *excision.Setting) { s.Share = 0 },
		"window 0":      func(_ *excision.Zone, s *excision.Setting) { s.Window = 0 },
		"no root": func(_ *excision.Zone, s *excision.Setting) {
			s.Layers = s.Layers[:1]
		},
	} {
		z, s := zone("pyroxenite"), setting(30)
		spoil(&z, &s)
		if _, err := excision.Solve([]excision.Zone{z}, s); err == nil {
			t.Errorf("%s: accepted", name)
		}
	}
}
