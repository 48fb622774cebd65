package plots

import (
	"math"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"

	"keelfall/solver/drip"
	"keelfall/solver/race"
)

// followed gives the made-up result undulations through time: each wavelength of the
// curve grows exponentially to its drip or, soft, ever faster.
func followed(soft bool) *race.Result {
	r := madeUp(fiveRocks)
	d := r.Drip
	trace := func(l, end float64) drip.Trace {
		var t drip.Trace
		last := math.Min(end, 15*myr)
		for j := range 41 {
			at := last * float64(j) / 40
			x := math.Log(24) * at / end
			if soft {
				x = -math.Log(1 - (1-1.0/24)*at/end)
			}
			if math.IsInf(end, 1) {
				x = -0.5 * float64(j) / 40
			}
			t.Time, t.Wavelength, t.Base = append(t.Time, at), append(t.Wavelength, l), append(t.Base, 500*math.Exp(x))
			t.StrainRate, t.Stress, t.Background = append(t.StrainRate, 1e-16*math.Exp(x)), append(t.Stress, 1e5*math.Exp(x)), append(t.Background, 0)
		}
		return t
	}
	for i, l := range d.Curve.Wavelength {
		d.Traces = append(d.Traces, trace(l, d.Curve.Time[i]))
	}
	d.First = trace(d.InitialWavelength, d.Time)
	if soft {
		d.Soft = &drip.SelfSoftened{}
		d.First.StrainRate = nil
	}
	for i := range 25 {
		a := 50 * math.Pow(200, float64(i)/24)
		r.Study.Undulations = append(r.Study.Undulations, race.Undulation{Amplitude: a, Time: 10.6 * myr * math.Log(12e3/a) / math.Log(24)})
	}
	return r
}

func dripFigure(t *testing.T, r *race.Result, name string) (Figure, *sheet) {
	t.Helper()
	figures, err := Drips(r, 0)
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

// TestDripFigures asserts that curves are the result's own numbers and that what matters
// is named.
func TestDripFigures(t *testing.T) {
	r := followed(false)
	f, s := dripFigure(t, r, "drip-amplitude")
	c := s.named(t, "first drip")
	for i, at := range r.Drip.First.Time {
		if !near(c.x[6*i], at/myr) || !near(c.y[6*i], r.Drip.First.Base[i]/1e3) { // the curve is smooth between the points
			t.Errorf("point %d: %g km at %g Myr", i, c.y[6*i], c.x[6*i])
		}
	}
	for _, l := range []string{"Undulation amplitude (km)", "Time (Myr)", "88 km drips at 10.6 Myr", "window ends", "drip: tip 12 km down"} {
		if !s.has(l) {
			t.Errorf("amplitudes: no %q", l)
		}
	}
	if !strings.Contains(f.Caption, "88 km, at 10.6 Myr") || !strings.Contains(f.Caption, "2.4×10^-15 1/s") || strings.Contains(f.Caption, "exponential") {
		t.Errorf("caption: %s", f.Caption)
	}
	_, s = dripFigure(t, r, "drip-map")
	c = s.named(t, "drip time")
	for i, l := range r.Drip.Curve.Wavelength {
		if !near(c.x[i], l/1e3) || c.y[i] != r.Drip.Curve.Time[i]/myr {
			t.Errorf("point %d: %g Myr at %g km", i, c.y[i], c.x[i])
		}
	}
	for _, l := range []string{"Growth rate (1/Myr)", "Wavelength at the start (km)", "arc width", "window ends", "88 km,\n10.6 Myr"} {
		if !s.has(l) {
			t.Errorf("map: no %q", l)
		}
	}
	_, s = dripFigure(t, r, "drip-start")
	if c := s.named(t, "drip time"); !near(c.x[0], 50) || !near(c.y[0], 10.6*math.Log(240)/math.Log(24)) {
		t.Errorf("starts: %g Myr from %g m", c.y[0], c.x[0])
	}
	for _, l := range []string{"500 m: 10.6 Myr", "× 3: 6.1 Myr", "÷ 3: 16.2 Myr", "window, 15 Myr", "Undulation at the start (m)"} {
		if !s.has(l) {
			t.Errorf("starts: no %q", l)
		}
	}
}

// TestDripMapRates asserts that the map's rate is the derivative, between wavelengths too.
func TestDripMapRates(t *testing.T) {
	r := followed(false)
	all, err := undulations(r.Drip)
	if err != nil {
		t.Fatal(err)
	}
	m := mapFigure{all: all}
	for i, u := range all {
		if math.IsInf(u.drip, 1) {
			continue
		}
		if q, ok := m.at(i, 0, 0.4*u.time[len(u.time)-1]); !ok || !near(q, math.Log(24)/u.drip) {
			t.Errorf("%g km: %g 1/Myr, want %g", u.first, q, math.Log(24)/u.drip)
		}
		if _, ok := m.at(i, 0, u.drip*1.01); ok {
			t.Errorf("%g km grows after its drip", u.first)
		}
	}
	m.levels = []float64{0, 1, 2}
	for q, want := range map[float64]int{-1: -1, 0.5: 0, 1.5: 1, 7: 2} {
		if got := m.band(q); got != want {
			t.Errorf("%g lies in band %d", q, got)
		}
	}
}

// TestSoftDrip asserts that growth at the first rate stands beside the faster one.
func TestSoftDrip(t *testing.T) {
	r := followed(true)
	f, s := dripFigure(t, r, "drip-amplitude")
	plain, first := s.named(t, "exponential"), s.named(t, "first drip")
	q := math.Log(plain.y[1]/plain.y[0]) / (plain.x[1] - plain.x[0])
	if want := math.Log(first.y[len(first.y)-1] / first.y[0]); !(q*10.6 < want/2) {
		t.Errorf("exponential growth to the drip %g, the drip's %g", q*10.6, want)
	}
	if !strings.Contains(f.Caption, "exponential") {
		t.Errorf("caption: %s", f.Caption)
	}
}

// TestDripOdd draws drips that lack something, at three widths.
func TestDripOdd(t *testing.T) {
	for name, change := range map[string]func(*race.Result){
		"as it should be": func(*race.Result) {},
		"late": func(r *race.Result) {
			r.Drip.Outcome, r.Problem.Drip.Window = "window", 7*myr
		},
		"never": func(r *race.Result) {
			r.Drip.Outcome, r.Drip.Time, r.Drip.First = "window", math.Inf(1), drip.Trace{}
			for i := range r.Drip.Curve.Time {
				r.Drip.Curve.Time[i] = math.Inf(1)
			}
		},
		"no window and no arc": func(r *race.Result) { r.Problem.Drip.Window, r.Problem.ArcWidth = 0, 0 },
		"wide arc":             func(r *race.Result) { r.Problem.ArcWidth = 3e6 },
		"narrow arc":           func(r *race.Result) { r.Problem.ArcWidth = 10e3 },
		"short traces": func(r *race.Result) {
			for i := range r.Drip.Traces {
				if i%3 == 0 {
					r.Drip.Traces[i] = drip.Trace{}
				}
			}
		},
		"few undulations": func(r *race.Result) {
			r.Study.Undulations = r.Study.Undulations[3:6]
			r.Study.Undulations[1].Time = math.Inf(1)
		},
	} {
		for _, soft := range []bool{false, true} {
			for _, w := range []vg.Length{ColumnWidth, 120 * vg.Millimeter, PageWidth} {
				r := followed(soft)
				change(r)
				figures, err := Drips(r, w)
				if err != nil {
					t.Fatalf("%s: %v", name, err)
				}
				if len(figures) == 0 {
					t.Errorf("%s: no figures", name)
				}
				for _, f := range figures {
					checkFigure(t, f)
					look(t, f, "drip, "+name)
				}
			}
		}
	}
	nan := math.NaN()
	for name, change := range map[string]func(*race.Result){
		"amplitude":   func(r *race.Result) { r.Drip.Traces[3].Base[2] = nan },
		"length":      func(r *race.Result) { r.Drip.Traces[3].Base = r.Drip.Traces[3].Base[1:] },
		"wavelengths": func(r *race.Result) { r.Drip.Traces[3].Wavelength = nil },
		"order":       func(r *race.Result) { r.Drip.Traces[30], r.Drip.Traces[40] = r.Drip.Traces[40], r.Drip.Traces[30] },
		"undulation":  func(r *race.Result) { r.Study.Undulations[4].Time = nan },
		"drip":        func(r *race.Result) { r.Drip.Time = nan },
	} {
		r := followed(false)
		change(r)
		if _, err := Drips(r, 0); err == nil || !strings.HasPrefix(err.Error(), "plots: ") {
			t.Errorf("%s: %v", name, err)
		}
	}
	if _, err := Drips(followed(false), 20*vg.Millimeter); err == nil {
		t.Error("a width of 20 mm is accepted")
	}
}
