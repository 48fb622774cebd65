package plots

import (
	"math"
	"strings"
	"testing"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/recorder"
	"pgregory.net/rapid"
)

// TestRuns asserts how markup is split.
func TestRuns(t *testing.T) {
	for _, c := range []struct{ in, want string }{
		{"density", "density"},
		{"10^{-16}", "10|^−16"},
		{"k_{x} and 10^{3}", "k|_x| and 10|^3"},
		{"open ^{brace", "open ^{brace"},
		{"snake_case ^ 2", "snake_case ^ 2"},
		{literal("10^{-16}"), "10^{-16}"},
		{literal("10⁻¹⁶"), "10|^−|^1|^6"},
	} {
		var got []string
		for _, r := range runs(c.in) {
			mark := ""
			if r.shift > 0 {
				mark = "^"
			} else if r.shift < 0 {
				mark = "_"
			}
			got = append(got, mark+r.text)
		}
		if s := strings.Join(got, "|"); s != c.want {
			t.Errorf("%q: %q, want %q", c.in, s, c.want)
		}
	}
}

// TestDrawnStrings asserts that the handler draws ordinary characters, raised ones
// smaller and higher.
func TestDrawnStrings(t *testing.T) {
	c := new(recorder.Canvas)
	markup{}.Draw(c, "10^{-16} 1/s\nx", text.Style{Font: sansFont(10), Handler: markup{}}, vg.Point{X: 5, Y: 20})
	var got []*recorder.FillString
	for _, a := range c.Actions {
		if f, ok := a.(*recorder.FillString); ok {
			got = append(got, f)
		}
	}
	if len(got) != 4 || got[0].String != "10" || got[1].String != "−16" || got[2].String != "1/s" || got[3].String != "x" {
		t.Fatalf("%d strings: %+v", len(got), got)
	}
	if !(got[1].Point.Y > got[0].Point.Y && got[1].Size < got[0].Size && got[1].Point.X > got[0].Point.X) {
		t.Errorf("the exponent at %v in %v pt", got[1].Point, got[1].Size)
	}
	if got[3].Point.Y != 20 || got[0].Point.Y <= 20 {
		t.Errorf("baselines at %v and %v; the last should be at the point", got[0].Point.Y, got[3].Point.Y)
	}
}

// TestGlyphs asserts that missing glyphs are found, and that what users write is drawn.
func TestGlyphs(t *testing.T) {
	if m := missingGlyphs("10⁻¹⁶"); string(m) != "⁻" {
		t.Errorf("missing in 10⁻¹⁶: %q", string(m))
	}
	if m := missingGlyphs("−°³×÷…·µξρη10^{-16}k_{x}"); m != nil {
		t.Errorf("missing: %q", string(m))
	}
	rapid.Check(t, func(t *rapid.T) {
		s := rapid.String().Draw(t, "text")
		l := literal(s)
		if m := missingGlyphs(l); m != nil || strings.ContainsAny(l, "\n\t") {
			t.Errorf("%q becomes %q, which lacks %q", s, l, string(m))
		}
		w := vg.Length(rapid.Float64Range(20, 200).Draw(t, "width"))
		lines := rapid.IntRange(1, 4).Draw(t, "lines")
		out := wrap(l, 7, w, lines)
		if got := width(out, 7); got > w+1e-9 || strings.Count(out, "\n") >= lines {
			t.Errorf("%q is %v pt wide in %d lines", out, got, strings.Count(out, "\n")+1)
		}
	})
}

// TestNumber asserts how numbers are written.
func TestNumber(t *testing.T) {
	for _, c := range []struct {
		v    float64
		n    int
		want string
	}{
		{86, 3, "86"}, {7.2149, 3, "7.21"}, {-0.05, 2, "−0.05"}, {0, 3, "0"}, {3e-16, 3, "3×10^{-16}"}, {1e21, 3, "10^{21}"},
		{123456, 3, "1.23×10^{5}"}, {99950, 3, "10^{5}"}, {-1e-5, 2, "−10^{-5}"}, {math.Inf(1), 3, "∞"},
	} {
		if got := number(c.v, c.n); got != c.want {
			t.Errorf("%g: %q, want %q", c.v, got, c.want)
		}
	}
}
