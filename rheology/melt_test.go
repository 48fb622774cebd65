package rheology_test

import (
	"math"
	"strings"
	"testing"

	"keelfall/rheology"
)

// TestMelt: exp(αφ) on the rates of creep; neither on the upper limit nor on yield.
// Source: derived.
func TestMelt(t *testing.T) {
	at := rheology.Conditions{T: 1500, P: 1e9, GrainSize: 1e-3}
	c := rheology.Creep{Laws: []rheology.Law{find(t, "dry olivine dislocation Hirth 2003"), find(t, "dry olivine diffusion Hirth 2003"), find(t, mei)}, Limits: rheology.Limits{Highest: 1e22}}
	dry, err1 := c.StrainRate(1e6, at)
	c.Melt, c.Weakening = func(T, P float64) float64 { return 0.04 * T / 1500 * P / 1e9 }, 30
	wet, err2 := c.StrainRate(1e6, at)
	limit := 1e6 / 2e22
	if err1 != nil || err2 != nil || !close(wet-limit, (dry-limit)*math.Exp(1.2), 1e-12) {
		t.Errorf("%g with melt, %g without, limit %g; %v %v", wet, dry, limit, err1, err2)
	}
	r, err := c.Respond(wet, at)
	if err != nil || !close(r.Stress, 1e6, 1e-12) {
		t.Errorf("back: %+v, %v", r, err)
	}
	c.Friction = &rheology.Friction{Cohesion: 1e4}
	if r, err = c.Respond(1e-9, at); err != nil || !r.Yielding || !close(r.Stress, 1e4, 1e-8) {
		t.Errorf("yield: %+v, %v", r, err)
	}
	c.Friction = nil
	for _, phi := range []float64{-0.1, 1.1, math.NaN()} {
		c.Melt = func(T, P float64) float64 { return phi }
		_, err1 := c.Respond(1e-15, at)
		_, err2 := c.StrainRate(1e6, at)
		if err1 == nil || err2 == nil || !strings.Contains(err1.Error(), "melt fraction") {
			t.Errorf("φ = %g: %v, %v", phi, err1, err2)
		}
	}
	c.Melt, c.Weakening = func(T, P float64) float64 { return 0.1 }, -1
	if _, err := c.Respond(1e-15, at); err == nil || !strings.Contains(err.Error(), "weakening by melt -1") {
		t.Errorf("α < 0: %v", err)
	}
	c.Weakening = 30
	c.Melt = func(T, P float64) float64 { return (T - 1400) / 500 }
	used := []rheology.Use{{T: 1400}, {T: 1550}}
	if s := strings.Join(c.Cautions(used), "; "); !strings.Contains(s, "up to 30 % of melt") {
		t.Errorf("30 %% of melt: %q", s)
	}
	if s := strings.Join(c.Cautions(used[:1]), "; "); strings.Contains(s, "melt") {
		t.Errorf("no melt: %q", s)
	}
}
