package plots

import (
	"math"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"

	"keelfall/solver/drip"
	"keelfall/solver/race"
)

// says reports whether a text of the sheet, its lines joined, contains words.
func (s *sheet) says(words string) bool {
	return slices.ContainsFunc(s.texts, func(p placed) bool {
		return strings.Contains(strings.ReplaceAll(p.text, "\n", " "), words)
	})
}

// TestLimitInForce: along strike the arc's length is the limit.
func TestLimitInForce(t *testing.T) {
	along := func(r *race.Result) {
		r.Problem.Strain.Wavevector, r.Problem.ArcLength = race.AlongStrike, 200e3
	}
	f, s := figure(t, "spectrum", along)
	if !s.says("longer than the arc") || s.says("wider than the arc") || !strings.Contains(f.Caption, "grey: longer than the arc (200 km)") {
		t.Errorf("along strike: %q", f.Caption)
	}
	f, s = figure(t, "spectrum", func(r *race.Result) { along(r); r.Problem.ArcLength = 0 })
	if s.says("than the arc") || strings.Contains(f.Caption, "than the arc") {
		t.Errorf("no length given: %q", f.Caption)
	}
	if f, _ = figure(t, "spectrum", nil); !strings.Contains(f.Caption, "grey: wider than the arc (160 km)") {
		t.Errorf("across the arc: %q", f.Caption)
	}
}

// TestNoDripWhereItGrows: only what does not grow is said not to drip.
func TestNoDripWhereItGrows(t *testing.T) {
	grow := func(r *race.Result) {
		for i := range r.Spectrum.Rates {
			r.Spectrum.Rates[i].Growth = 1e-3 / myr
		}
	}
	if _, s := figure(t, "spectrum", grow); s.says("no drip") || !s.says("later than shown") {
		t.Error("short wavelengths grow and are said not to drip")
	}
	if _, s := figure(t, "spectrum", func(r *race.Result) { r.Spectrum.Rates = nil }); !s.says("no drip found") {
		t.Error("without growth rates nothing is known of what has no drip time")
	}
	_, s := figure(t, "spectrum", func(r *race.Result) {
		for i := 50; i < 60; i++ {
			r.Drip.Curve.Time[i] = 1e6 * myr
		}
	})
	if !s.has("later") || !s.has("no drip") {
		t.Error("wavelengths that drip beyond the axis are not marked")
	}
	f, _ := figure(t, "spectrum", func(r *race.Result) {
		for i := range r.Drip.Curve.Time {
			r.Drip.Curve.Time[i] = math.Inf(1)
		}
	})
	if !strings.HasSuffix(f.Caption, "growth is too slow.") {
		t.Errorf("caption: %s", f.Caption)
	}
}

// TestModePace: the mode's wavelength and pace stand in the figure.
func TestModePace(t *testing.T) {
	for q, want := range map[float64]string{0.127 / myr: "Wavelength 86 km, e-folding time 7.87 Myr", -0.05 / myr: "Wavelength 86 km, decays by 1/e in 20 Myr", 0: "Wavelength 86 km, neither grows nor decays"} {
		f, s := figure(t, "mode", func(r *race.Result) { r.Spectrum.Mode.Growth = q })
		if !s.has(want) {
			t.Errorf("%g 1/s: no %q", q, want)
		}
		if _, pace, _ := strings.Cut(want, ", "); !strings.Contains(f.Caption, pace) {
			t.Errorf("caption: %s", f.Caption)
		}
	}
	r := madeUp(fiveRocks)
	slices.Reverse(r.Spectrum.Mode.Depth)
	if _, err := All(r, 0); err == nil || !strings.Contains(err.Error(), "from the top down") {
		t.Errorf("a profile upside down: %v", err)
	}
}

// TestFatesWords: a drip that is not in sight is told in words.
func TestFatesWords(t *testing.T) {
	slow := func(r *race.Result) {
		d := r.Drip
		d.Outcome, d.Time, d.TimeLow, d.TimeHigh = "window", 2050*myr, 1300*myr, 2900*myr
		for i := range d.History.Time {
			d.History.Time[i] = 2050 * myr * float64(i) / 59
		}
	}
	for _, c := range []struct {
		name   string
		change func(*race.Result)
		want   string
	}{
		{"slow", slow, "would drip at 2050 Myr, far beyond the time shown"},
		{"a little late", func(r *race.Result) { r.Drip.Outcome, r.Drip.Time = "window", 40*myr }, "would drip at 40 Myr, beyond the time shown"},
		{"never in sight", func(r *race.Result) {
			r.Drip = &drip.Result{Outcome: "window", Time: math.Inf(1), Unrestricted: drip.Fastest{Time: math.Inf(1)}}
		}, "no drip: growth is too slow"},
		{"arc too small", func(r *race.Result) {
			r.Drip = &drip.Result{Outcome: "window", Time: math.Inf(1), Unrestricted: drip.Fastest{Time: 9 * myr}}
		}, "no drip: only undulations too long for the arc would"},
		{"buoyant", func(r *race.Result) {
			r.Drip = &drip.Result{Outcome: "buoyant", Time: math.Inf(1), Unrestricted: drip.Fastest{Time: math.Inf(1)}}
		}, "the root does not drip"},
	} {
		_, s := figure(t, "fates", c.change)
		if !s.says(c.want) && !s.says(strings.Replace(c.want, " far", "", 1)) {
			t.Errorf("%s: no %q", c.name, c.want)
		}
	}
}

// TestFatesLabelsKeepOffLines: no label sits on the window's or the drip's line, also
// where the drip of a smaller undulation falls onto the window's end; the headline
// begins where the axes do.
func TestFatesLabelsKeepOffLines(t *testing.T) {
	for _, w := range []vg.Length{ColumnWidth, 120 * vg.Millimeter, PageWidth} {
		for _, high := range []float64{14.5, 14.97, 15, 15.03, 15.5} {
			r := madeUp(fiveRocks)
			r.Drip.TimeHigh = high * myr
			f, err := Fates(r, w)
			if err != nil {
				t.Fatal(err)
			}
			s := checkFigure(t, f)
			uprights, axis := 0, vg.Length(math.Inf(1))
			for _, l := range s.lines {
				axis = min(axis, l[0].X)
				if len(l) != 2 || l[0].X != l[1].X || l[1].Y-l[0].Y < 50 {
					continue
				}
				uprights++
				for _, p := range s.texts {
					if crosses(l[0], l[1], p.box) {
						t.Errorf("%v pt, ÷ 3 at %g Myr: %q sits on a line", w, high, p.text)
					}
				}
			}
			if uprights < 4 {
				t.Errorf("only %d upright lines; want window and drip in both panels", uprights)
			}
			for _, p := range s.texts {
				if strings.HasPrefix(p.text, "The root drips") && math.Abs(float64(p.box.Min.X-axis)) > 0.5 {
					t.Errorf("the headline begins at %v, the axes at %v", p.box.Min.X, axis)
				}
			}
			for _, word := range []string{"undulation × 3", "undulation ÷ 3"} {
				if !s.says(word) {
					t.Errorf("%v pt, ÷ 3 at %g Myr: no %q", w, high, word)
				}
			}
		}
	}
}

// TestWordsKeepUnits asserts that a number stays with its unit however narrow a column is.
func TestWordsKeepUnits(t *testing.T) {
	const name = "wet quartz 700 to 1600 MPa below 1250 degC Hirth 2003"
	if got, want := words(name), []string{"wet", "quartz", "700", "to", "1600 MPa", "below", "1250 degC", "Hirth", "2003"}; !slices.Equal(got, want) {
		t.Errorf("%q, want %q", got, want)
	}
	for w := vg.Length(40); w < 200; w += 3 {
		if got := wrap(name, typeSize, w, 12); strings.Contains(got, "\nMPa") || strings.Contains(got, "\ndegC") {
			t.Errorf("%v: %q", w, got)
		}
	}
}
