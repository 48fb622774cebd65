package plots

import (
	"math"
	"slices"
	"strings"
	"testing"

	"keelfall/solver/race"
)

// figure draws the named figure of the made-up result, changed.
func figure(t *testing.T, name string, change func(*race.Result)) (Figure, *sheet) {
	t.Helper()
	r := madeUp(fiveRocks)
	if change != nil {
		change(r)
	}
	figures, err := All(r, 0)
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range figures {
		if f.Name == name {
			return f, checkFigure(t, f)
		}
	}
	t.Fatalf("no figure %q", name)
	return Figure{}, nil
}

// near reports whether two numbers agree to six digits, more than a figure shows.
func near(a, b float64) bool { return math.Abs(a-b) <= 1e-6*math.Max(math.Abs(a), math.Abs(b)) }

// TestColumnData asserts that curves are the state's own numbers in the axes' units.
func TestColumnData(t *testing.T) {
	r := madeUp(fiveRocks)
	f, s := figure(t, "column", nil)
	want := []string{"Depth (km)", "Density\n(kg/m³)", "Temperature\n(°C)", "Viscosity\n(log_{10} Pa s)", "Pressure (GPa)"}
	if !slices.Equal(s.axes, want) {
		t.Errorf("axes %q, want %q", s.axes, want)
	}
	rho, temp, eta := s.named(t, "density"), s.named(t, "temperature"), s.named(t, "viscosity")
	i := 0
	for _, l := range r.State.Layers {
		for _, p := range l.Points {
			if !near(rho.x[i], p.Density) || !near(rho.y[i], p.Depth/1e3) || !near(temp.x[i], p.T-273.15) || !near(eta.x[i], math.Log10(p.Viscosity)) {
				t.Errorf("point %d: %g kg/m³, %g °C, 10^%g Pa s at %g km", i, rho.x[i], temp.x[i], eta.x[i], rho.y[i])
			}
			i++
		}
	}
	if len(rho.x) != i+2 || rho.x[i] != 3270 {
		t.Errorf("the half-space is missing below the %d points", i)
	}
	if !s.has("+140\nkg/m³") && !s.has("+140 kg/m³") {
		t.Error("the root's excess density is not written")
	}
	for _, l := range []string{"(a)", "(b)", "(c)", "half-space", "garnet\npyroxenite"} {
		if !s.has(l) {
			t.Errorf("no %q", l)
		}
	}
	if !strings.Contains(f.Caption, "strain rate of 3×10^-16 1/s") {
		t.Errorf("caption: %s", f.Caption)
	}
}

// TestRootOfSeveralLayers asserts that the whole root is tinted, and filled where it is
// denser than the rock below the root.
func TestRootOfSeveralLayers(t *testing.T) {
	rocks := slices.Clone(fiveRocks)
	rocks[2].rho, rocks[2].root = 3400, true // above garnet pyroxenite of 3450, also root
	f, err := Column(madeUp(rocks).State, 0)
	if err != nil {
		t.Fatal(err)
	}
	s := checkFigure(t, f)
	for _, l := range []string{"+90", "+140"} { // 3360 and 3410 kg/m³ at their bases, 3270 below
		if !s.says(l + " kg/m³") {
			t.Errorf("no %q", l)
		}
	}
	if !strings.Contains(f.Caption, "of the root, than the rock below the root") {
		t.Errorf("caption: %s", f.Caption)
	}
	layers, err := newStrata(madeUp(rocks).State.Column)
	if err != nil {
		t.Fatal(err)
	}
	for i, l := range layers.all {
		if root := i == 2 || i == 3; (l.fill(i) == rootTint) != root {
			t.Errorf("%s: filled with %v", l.name, l.fill(i))
		}
	}
}

// TestColumnWithoutTemperature asserts two panels.
func TestColumnWithoutTemperature(t *testing.T) {
	_, s := figure(t, "column", func(r *race.Result) { r.State.HasTemperature = false })
	if s.has("(c)") || slices.ContainsFunc(s.axes, func(a string) bool { return strings.HasPrefix(a, "Temperature") }) {
		t.Errorf("axes %q", s.axes)
	}
}

// TestSpectrumData asserts curves, axes and the labels that matter.
func TestSpectrumData(t *testing.T) {
	r := madeUp(fiveRocks)
	_, s := figure(t, "spectrum", nil)
	q, d := s.named(t, "growth rate"), s.named(t, "drip time")
	for i, rate := range r.Spectrum.Rates {
		if !near(q.x[i], rate.Wavelength/1e3) || !near(q.y[i], rate.Growth*1e6*365.25*86400) {
			t.Errorf("rate %d: %g 1/Myr at %g km", i, q.y[i], q.x[i])
		}
	}
	if len(d.x) != len(r.Drip.Curve.Time) || !math.IsInf(d.y[0], 1) {
		t.Errorf("drip times %v", d.y)
	}
	for _, l := range []string{"Growth rate (1/Myr)", "e-folding time (Myr)", "Drip time (Myr)", "Wavelength (km)",
		"86 km, 7.87 Myr", "86 km, 10.6 Myr", "window, 15 Myr", "undulation × 3", "undulation ÷ 3", "no drip", "wider than\nthe arc"} {
		if !s.has(l) {
			t.Errorf("no %q", l)
		}
	}
}

// TestSpectrumInAnyOrder asserts that wavelengths given in any order make one curve.
func TestSpectrumInAnyOrder(t *testing.T) {
	_, s := figure(t, "spectrum", func(r *race.Result) {
		slices.Reverse(r.Spectrum.Rates)
		slices.Reverse(r.Drip.Curve.Time)
		slices.Reverse(r.Drip.Curve.Wavelength)
	})
	if !slices.IsSorted(s.named(t, "growth rate").x) || !slices.IsSorted(s.named(t, "drip time").x) {
		t.Error("wavelengths go back and forth")
	}
}

// TestModeData asserts normalisation, its sign and the shares.
func TestModeData(t *testing.T) {
	_, s := figure(t, "mode", func(r *race.Result) {
		m := r.Spectrum.Mode // the sign of a mode is free: upside down it is the same
		for i := range m.W {
			m.W[i], m.U[i] = -m.W[i], -m.U[i]
		}
		for i := range m.Displacement {
			m.Displacement[i] = -m.Displacement[i]
		}
	})
	if w := s.named(t, "vertical velocity"); math.Abs(slices.Max(w.x)-1) > 1e-3 { // the curve is smooth between the points
		t.Errorf("largest vertical velocity %g", slices.Max(w.x))
	}
	if d := s.named(t, "displacement"); slices.Max(d.x) != 1 || slices.Min(d.x) < -1 {
		t.Errorf("displacements %v", d.x)
	}
	var sum float64
	for _, v := range s.named(t, "dissipation").x {
		sum += v
	}
	if !near(sum, 100) {
		t.Errorf("the shares sum to %g %%", sum)
	}
	for _, l := range []string{"vertical", "horizontal", "34 %", "Wavelength 86 km, e-folding time 7.87 Myr"} {
		if !s.has(l) {
			t.Errorf("no %q", l)
		}
	}
}

// TestFatesData asserts curves, both time axes and the words.
func TestFatesData(t *testing.T) {
	f, s := figure(t, "fates", nil)
	h := s.named(t, "root thickness, column")
	if h.y[0] != 12 || !near(h.y[len(h.y)-1], 12-0.15*15) || !near(h.x[len(h.x)-1], 15) {
		t.Errorf("root thickness %v at %v", h.y, h.x)
	}
	if a := s.named(t, "amplitude"); a.y[0] != 0.5 {
		t.Errorf("amplitude %v", a.y)
	}
	for _, l := range []string{"Age (Ma)", "Time (Myr)", "Root thickness (km)", "Undulation amplitude (km)", "The root drips first, at 10.6 Myr",
		"drips at 10.6 Myr", "window ends", "arc mean", "column crossed\nby the zones", "112", "drips", "undulation\n× 3", "undulation ÷ 3"} {
		if !s.has(l) {
			t.Errorf("no %q", l)
		}
	}
	if !strings.HasSuffix(f.Caption, madeUp(fiveRocks).Verdict.Sentence) {
		t.Errorf("caption: %s", f.Caption)
	}
	if _, s := figure(t, "fates", func(r *race.Result) { r.Problem.HasTimeZero = false }); s.has("Age (Ma)") {
		t.Error("ages without a time zero")
	}
}
