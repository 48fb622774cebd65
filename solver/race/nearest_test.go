package race

import (
	"math"
	"testing"
)

// TestNearest: the change nearest to 0 is found from the far side, to half a digit of the
// third, whatever the drip time does on the way; where it is smooth, in few looks.
func TestNearest(t *testing.T) {
	for name, c := range map[string]struct {
		late  func(x float64) float64 // > 0: "kept"
		want  float64
		looks int
	}{
		"straight":        {func(x float64) float64 { return 1.3 - x }, 1.3, 14},
		"on the far side": {func(x float64) float64 { return 2.2 + x }, -2.2, 17},
		"curved":          {func(x float64) float64 { return 5 - math.Exp(x) }, math.Log(5), 20},
		"never, then":     {func(x float64) float64 { return []float64{math.Inf(1), -1}[min(1, max(0, int(x/0.7)))] }, 0.7, 30},
		"all but upright": {func(x float64) float64 { return -math.Atan(1e4 * (x - 0.777)) }, 0.777, 30},
		"both sides":      {func(x float64) float64 { return 0.5 - math.Abs(x+0.2) }, 0.3, 30},
	} {
		looks := 0
		look := func(x float64) trial {
			looks++
			l := c.late(x)
			return trial{map[bool]string{true: "kept", false: "dripped"}[l > 0], l}
		}
		x, to := nearest(look, trial{"kept", c.late(0)}, 6)
		if to != "dripped" || math.Abs(x) < math.Abs(c.want)-1e-12 || math.Abs(x-c.want) > nearestWidth {
			t.Errorf("%s: %q at %g, want %g", name, to, x, c.want)
		}
		if looks > c.looks {
			t.Errorf("%s: %d looks", name, looks)
		}
	}
	if x, to := nearest(func(float64) trial { return trial{"kept", 1} }, trial{"kept", 1}, 6); to != "" || x != 0 {
		t.Errorf("nothing changes: %q at %g", to, x)
	}
}
