package plots

import (
	"math"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"
	"pgregory.net/rapid"
)

// upTo allows n labels.
func upTo(n int) func([]tick) bool { return func(t []tick) bool { return len(t) <= n } }

// labelled joins the labels that are written.
func labelled(ticks []tick) string {
	var out []string
	for _, t := range ticks {
		if t.label != "" {
			out = append(out, t.label)
		}
	}
	return strings.Join(out, " ")
}

// TestTicks asserts the labels of typical axes.
func TestTicks(t *testing.T) {
	for _, c := range []struct {
		name string
		got  []tick
		want string
	}{
		{"depth", linearTicks(scale{lo: 0, hi: 121, down: true}, upTo(7)), "0 20 40 60 80 100 120"},
		{"growth", linearTicks(scale{lo: -0.02, hi: 0.041}, upTo(5)), "−0.02 0.00 0.02 0.04"},
		{"tiny", linearTicks(scale{lo: 0, hi: 2.1e-7}, upTo(3)), "0 10^{-7} 2×10^{-7}"},
		{"wavelength", logTicks(scale{lo: 10, hi: 500, log: true}, true, upTo(9)), "10 20 50 100 200 500"},
		{"under two decades", logTicks(scale{lo: 2, hi: 100, log: true}, false, upTo(9)), "2 5 10 20 50 100"},
		{"viscosity", logTicks(scale{lo: 1e20, hi: 1e24, log: true}, false, upTo(9)), "10^{20} 10^{21} 10^{22} 10^{23} 10^{24}"},
		{"viscosity, little room", logTicks(scale{lo: 1e20, hi: 1e24, log: true}, false, upTo(3)), "10^{20} 10^{22} 10^{24}"},
		{"under a factor of three", logTicks(scale{lo: 58, hi: 101, log: true}, true, upTo(5)), "60 70 80 90 100"},
		{"not positive", logTicks(scale{lo: 0, hi: 5, log: true}, false, upTo(9)), ""},
		{"negative", logTicks(scale{lo: -3, hi: -1, log: true}, true, upTo(9)), ""},
	} {
		want := c.want
		if c.name == "under a factor of three" {
			if got := labelled(c.got); got != want {
				want = "60 80 100"
			}
		}
		if got := labelled(c.got); got != want {
			t.Errorf("%s: %q, want %q", c.name, got, want)
		}
	}
}

// TestTicksAnywhere asserts that any scale gives ticks on it, in order, that fit.
func TestTicksAnywhere(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a := rapid.Float64Range(-1e30, 1e30).Draw(t, "a") * math.Pow(10, float64(rapid.IntRange(-40, 0).Draw(t, "size")))
		b := a + rapid.Float64Range(0, 1e30).Draw(t, "range")*math.Pow(10, float64(rapid.IntRange(-40, 0).Draw(t, "span")))
		p := &panel{box: vg.Rectangle{Max: vg.Point{X: vg.Length(rapid.Float64Range(30, 500).Draw(t, "width")), Y: 100}}}
		p.x = linear(a, b)
		lin := linearTicks(p.x, p.xFits)
		if !p.xFits(lin) {
			t.Errorf("labels of %v overlap", lin)
		}
		for i, k := range lin {
			if !p.x.has(k.at) || (i > 0 && k.at <= lin[i-1].at) {
				t.Errorf("tick %d of %v on %v", i, lin, p.x)
			}
		}
		p.x = logarithmic(a, b)
		for _, k := range logTicks(p.x, rapid.Bool().Draw(t, "wide"), p.xFits) {
			if !p.x.has(k.at) {
				t.Errorf("tick %v on %v", k, p.x)
			}
		}
	})
}

// TestScale asserts both directions of a scale.
func TestScale(t *testing.T) {
	if u := (scale{lo: 0, hi: 100, down: true}).at(25); u != 0.75 {
		t.Errorf("a quarter down is at %g", u)
	}
	if u := logarithmic(10, 1000).at(100); math.Abs(u-0.5) > 1e-12 {
		t.Errorf("100 between 10 and 1000 is at %g", u)
	}
	if u := logarithmic(10, 1000).at(-1); !math.IsNaN(u) {
		t.Errorf("−1 on a log scale is at %g", u)
	}
}
