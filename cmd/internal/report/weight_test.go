package report

import (
	"strings"
	"testing"

	"keelfall/rheology"
	"keelfall/solver/state"
)

// TestNeed words every case of what it takes to sink.
func TestNeed(t *testing.T) {
	for _, c := range []struct {
		k    state.Sinking
		n    state.Need
		want string
	}{
		{state.Sinking{Contrast: 50}, state.Need{What: "garnet share", Now: 0.4, To: 1, At: 0.214, Found: true, Rises: true}, "The root sinks with a garnet share above 0.21; it has 0.40."},
		{state.Sinking{Contrast: 50}, state.Need{What: "melt fraction", Now: 0.02, To: 1, At: 0.0812, Found: true}, "The root sinks with a melt fraction below 0.081; it has 0.020."},
		{state.Sinking{Contrast: 50}, state.Need{What: "garnet share", Now: 0.4, To: 1, Rises: true}, "The root sinks at every garnet share from 0 to 1; it has 0.40: floating is never in range."},
		{state.Sinking{Contrast: -50}, state.Need{What: "reaction extent", Now: 0, To: 1, Rises: true}, "The root floats at every reaction extent from 0 to 1; it has 0: sinking is never in range."},
	} {
		if got := need("The root", c.k, c.n); got != c.want {
			t.Errorf("%s\nwant %s", got, c.want)
		}
	}
}

// TestMixes words the three rules and a mixture within a mixture.
func TestMixes(t *testing.T) {
	eclogite, quartzite, olivine := law(t, "dry eclogite Zhang 2007"), law(t, "wet quartzite Gleason 1995"), law(t, "dry olivine dislocation Hirth 2003")
	phase := func(f float64, laws ...rheology.Law) rheology.Phase { return rheology.Phase{Fraction: f, Laws: laws} }
	m := rheology.Mixture{Rule: rheology.Geometric, Phases: []rheology.Phase{phase(0.6, eclogite), phase(0.4, quartzite)}}
	if got, want := mixes(&m), "dry eclogite (0.60) and wet quartzite (0.40) mix geometrically"; got != want {
		t.Errorf("%q, want %q", got, want)
	}
	for rule, want := range map[rheology.Mixing]string{rheology.IsoStress: "share one stress", rheology.IsoStrainRate: "share one strain rate"} {
		m.Rule = rule
		if got := mixes(&m); !strings.Contains(got, want) {
			t.Errorf("%s: %q", rule, got)
		}
	}
	outer := rheology.Mixture{Phases: []rheology.Phase{{Fraction: 0.5, Mixtures: []rheology.Mixture{m}}, phase(0.5, olivine)}}
	if got := mixes(&outer); !strings.HasPrefix(got, "0.50 of a mixture of dry eclogite (0.60) and wet quartzite (0.40) and dry olivine (0.50)") {
		t.Errorf("%q", got)
	}
}
