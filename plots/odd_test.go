package plots

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"
	"pgregory.net/rapid"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/excision"
	"keelfall/solver/growth"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

// many are n layers of equal thickness, one of them the root.
func many(n int, total float64) []rock {
	var out []rock
	for i := range n {
		x := float64(i) / float64(max(n-1, 1))
		out = append(out, rock{fmt.Sprintf("layer %d", i+1), total / float64(n), 2700 + 700*x, 23 - 2*x, 22 - 2*x, i == n*3/4})
	}
	return out
}

// oddCases are results that lack something or have too much of it, and the stems of
// the figures that remain.
var oddCases = []struct {
	name    string
	rocks   []rock
	change  func(*race.Result)
	figures string
}{
	{"as it should be", fiveRocks, func(*race.Result) {}, "column spectrum mode fates"},
	{"one layer", many(1, 30), func(*race.Result) {}, "column spectrum mode fates"},
	{"sixty layers", many(60, 120), func(*race.Result) {}, "column spectrum mode fates"},
	{"root of two layers", []rock{fiveRocks[0], fiveRocks[1], {"mafic granulite", 18, 3400, 21.3, 20.2, true}, fiveRocks[3], fiveRocks[4]},
		func(*race.Result) {}, "column spectrum mode fates"},
	{"deep mantle", []rock{fiveRocks[0], fiveRocks[1], fiveRocks[2], fiveRocks[3], {"peridotite", 300, 3270, 21, 20, false}},
		func(*race.Result) {}, "column spectrum mode fates"},
	{"long names", []rock{{"a very long name of a batholith that nobody would ever want to print", 3, 2700, 23, 22, false},
		{"Donaudampfschifffahrtsgesellschaftsgranulit", 2, 2900, 22, 21, false}, {"⁴⁰Ar_{x}^{2} 橄榄石\tгранулит", 2, 3400, 21, 21, true},
		{"mantle", 60, 3300, 21, 20, false}}, func(*race.Result) {}, "column spectrum mode fates"},
	{"no temperature", fiveRocks, func(r *race.Result) { r.State.HasTemperature = false }, "column spectrum mode fates"},
	{"no zones", fiveRocks, func(r *race.Result) { r.Excision = &excision.Result{Outcome: "no zones", Time: math.Inf(1)} }, "column spectrum mode fates"},
	{"buoyant", fiveRocks, func(r *race.Result) {
		r.Drip = &drip.Result{Outcome: "buoyant", Time: math.Inf(1)}
		r.Verdict.Outcome, r.Verdict.Time = "preserved", math.Inf(1)
	}, "column spectrum mode fates"},
	{"neither", fiveRocks, func(r *race.Result) { r.Drip, r.Excision, r.Spectrum = nil, nil, nil }, "column"},
	{"everything decays", fiveRocks, func(r *race.Result) {
		for i := range r.Spectrum.Rates {
			r.Spectrum.Rates[i].Growth = -math.Abs(r.Spectrum.Rates[i].Growth) - 1e-18
		}
		r.Spectrum.Peaks, r.Spectrum.Fastest = nil, growth.Peak{Wavelength: 10e3, Growth: r.Spectrum.Rates[0].Growth, AtRangeEdge: true}
		for i := range r.Drip.Curve.Time {
			r.Drip.Curve.Time[i], r.Drip.Curve.Low[i], r.Drip.Curve.High[i] = math.Inf(1), math.Inf(1), math.Inf(1)
		}
		r.Drip.Time, r.Drip.TimeLow, r.Drip.TimeHigh, r.Drip.Outcome = math.Inf(1), math.Inf(1), math.Inf(1), "window"
	}, "column spectrum mode fates"},
	{"one wavelength", fiveRocks, func(r *race.Result) {
		r.Spectrum.Rates = r.Spectrum.Rates[40:41]
		r.Drip.Curve = drip.Curve{Wavelength: []float64{60e3}, Time: []float64{11 * myr}}
	}, "column spectrum mode fates"},
	{"two wavelengths", fiveRocks, func(r *race.Result) {
		r.Spectrum.Rates = []growth.Rate{r.Spectrum.Rates[50], r.Spectrum.Rates[30]}
		r.Drip.Curve = drip.Curve{Wavelength: []float64{100e3, 50e3}, Time: []float64{12 * myr, math.Inf(1)}}
	}, "column spectrum mode fates"},
	{"no change at all", []rock{{"a", 10, 3000, 21, 21, true}, {"b", 10, 3000, 21, 21, false}}, func(r *race.Result) {
		for i := range r.Spectrum.Rates {
			r.Spectrum.Rates[i].Growth = 0
		}
		for i := range r.Drip.History.Base {
			r.Drip.History.Base[i] = 500
		}
		for i := range r.Excision.History.RootThickness {
			r.Excision.History.RootThickness[i] = 0
		}
		r.Excision.History.ArcMean = nil
	}, "column spectrum mode fates"},
	{"first drip's range only", fiveRocks, func(r *race.Result) { r.Drip.Curve.Low, r.Drip.Curve.High = nil, nil }, "column spectrum mode fates"},
	{"open ended", fiveRocks, func(r *race.Result) {
		r.Drip.Curve.Low, r.Drip.Curve.High = nil, nil
		r.Drip.TimeHigh = math.Inf(1)
		r.Excision.Time = math.Inf(1)
		r.Problem.HasTimeZero, r.Problem.ArcWidth = false, 0
	}, "column spectrum mode fates"},
	{"cut out first", fiveRocks, func(r *race.Result) {
		r.Excision.Outcome, r.Excision.Time = "excised", 6*myr
		r.Drip.Outcome, r.Drip.Time, r.Drip.TimeHigh = "window", 40*myr, 90*myr
		r.Verdict.Outcome, r.Verdict.Time = "excised", 6*myr
	}, "column spectrum mode fates"},
	{"rigid base", fiveRocks, func(r *race.Result) {
		r.State.Column.Base.Boundary = column.Rigid
		r.State.Base.Viscosity, r.State.Base.Density = 0, 0
	}, "column spectrum mode fates"},
	{"inviscid base", fiveRocks, func(r *race.Result) {
		r.State.Column.Base.Boundary = column.Inviscid
		r.State.Base.Viscosity = 0
	}, "column spectrum mode fates"},
	{"floored", fiveRocks, func(r *race.Result) {
		for i := range r.State.Layers[4].Points {
			r.State.Layers[4].Points[i].Floored, r.State.Layers[4].Points[i].Viscosity = true, 1e19
		}
	}, "column spectrum mode fates"},
	{"friction", fiveRocks, func(r *race.Result) { yields(r.State, 0, 12); yields(r.State, 4, 5) }, "column spectrum mode fates"},
}

// yields makes the first n points of a layer bear 100 MPa and say that friction decides.
func yields(st *state.State, layer, n int) {
	for i := range n {
		p := &st.Layers[layer].Points[i]
		p.Yielding, p.Capped, p.Stress = true, false, 50e6
		p.Viscosity = p.Stress / 2 / st.StrainRate
	}
}

// TestOddCases draws every odd case at three widths. Where KEELFALL_LOOK names a folder
// the figures are written there for a human to look at.
func TestOddCases(t *testing.T) {
	for _, c := range oddCases {
		t.Run(c.name, func(t *testing.T) {
			for _, w := range []vg.Length{ColumnWidth, 120 * vg.Millimeter, PageWidth} {
				r := madeUp(c.rocks)
				c.change(r)
				figures, err := All(r, w)
				if err != nil {
					t.Fatal(err)
				}
				var names []string
				for _, f := range figures {
					names = append(names, f.Name)
					checkFigure(t, f)
					look(t, f, c.name)
				}
				want := c.figures
				if w < fourPanels { // the stress has a figure of its own
					want = strings.Replace(want, "column", "column strength", 1)
				}
				if got := strings.Join(names, " "); got != want {
					t.Errorf("figures %q, want %q", got, want)
				}
			}
		})
	}
}

// look writes a figure where a human asked to see it.
func look(t *testing.T, f Figure, of string) {
	dir := os.Getenv("KEELFALL_LOOK")
	if dir == "" {
		return
	}
	for _, format := range Formats() {
		if format != "png" && of != "as it should be" {
			continue
		}
		name := fmt.Sprintf("%s, %s %.0f.%s", of, f.Name, float64(f.Width/vg.Millimeter), format)
		if err := Save(filepath.Join(dir, name), f, format); err != nil {
			t.Error(err)
		}
	}
}

// TestAnything draws random columns, spectra and histories.
func TestAnything(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 20).Draw(t, "layers")
		var rocks []rock
		for i := range n {
			rocks = append(rocks, rock{
				name:      rapid.StringN(0, 30, -1).Draw(t, "name"),
				thickness: rapid.Float64Range(0.01, 80).Draw(t, "thickness"),
				rho:       rapid.Float64Range(2500, 3600).Draw(t, "density"),
				top:       rapid.Float64Range(17, 25).Draw(t, "top"),
				bottom:    rapid.Float64Range(17, 25).Draw(t, "bottom"),
				root:      i == n/2,
			})
		}
		r := madeUp(rocks)
		factor := math.Pow(10, rapid.Float64Range(-4, 4).Draw(t, "factor"))
		shift := rapid.Float64Range(-0.3, 0.3).Draw(t, "shift") / myr
		for i := range r.Spectrum.Rates {
			r.Spectrum.Rates[i].Growth = factor * (r.Spectrum.Rates[i].Growth + shift)
		}
		for i := range r.Drip.Curve.Time {
			r.Drip.Curve.Time[i] *= factor
			r.Drip.Curve.Low[i] *= factor
			r.Drip.Curve.High[i] *= factor
		}
		r.Drip.Time, r.Drip.TimeLow, r.Drip.TimeHigh = r.Drip.Time*factor, r.Drip.TimeLow*factor, r.Drip.TimeHigh*factor
		r.Excision.Time *= rapid.Float64Range(0, 3).Draw(t, "excision")
		r.Problem.Drip.Window *= rapid.Float64Range(0, 10).Draw(t, "window")
		r.Problem.ArcWidth *= rapid.Float64Range(0, 10).Draw(t, "arc")
		w := vg.Length(rapid.Float64Range(80, 200).Draw(t, "width")) * vg.Millimeter
		figures, err := All(r, w)
		if err != nil {
			t.Fatal(err)
		}
		for _, f := range figures {
			checkFigure(t, f)
		}
	})
}

// TestRefused asserts that what cannot be drawn is an error.
func TestRefused(t *testing.T) {
	nan := math.NaN()
	for name, change := range map[string]func(*race.Result){
		"density":       func(r *race.Result) { r.State.Layers[1].Points[3].Density = nan },
		"temperature":   func(r *race.Result) { r.State.Layers[1].Points[3].T = math.Inf(1) },
		"viscosity":     func(r *race.Result) { r.State.Layers[1].Points[3].Viscosity = 0 },
		"stress":        func(r *race.Result) { r.State.Layers[1].Points[3].Stress = nan },
		"no points":     func(r *race.Result) { r.State.Layers[1].Points = nil },
		"thickness":     func(r *race.Result) { r.State.Column.Layers[0].Thickness = nan },
		"layers":        func(r *race.Result) { r.State.Layers = r.State.Layers[:2] },
		"growth":        func(r *race.Result) { r.Spectrum.Rates[2].Growth = nan },
		"wavelength":    func(r *race.Result) { r.Spectrum.Rates[2].Wavelength = 0 },
		"fastest":       func(r *race.Result) { r.Spectrum.Fastest = growth.Peak{Wavelength: 1e4, Growth: nan} },
		"drip time":     func(r *race.Result) { r.Drip.Curve.Time[20] = nan },
		"drip band":     func(r *race.Result) { r.Drip.Curve.High[20] = nan },
		"drip curve":    func(r *race.Result) { r.Drip.Curve.Time = r.Drip.Curve.Time[:50] },
		"mode":          func(r *race.Result) { r.Spectrum.Mode.W[5] = nan },
		"displacement":  func(r *race.Result) { r.Spectrum.Mode.Displacement = nil },
		"amplitude":     func(r *race.Result) { r.Drip.History.Base[3] = math.Inf(1) },
		"first drip":    func(r *race.Result) { r.Drip.Time = nan },
		"root":          func(r *race.Result) { r.Excision.History.RootThickness[3] = nan },
		"excision time": func(r *race.Result) { r.Excision.Time = nan },
		"window":        func(r *race.Result) { r.Problem.Drip.Window = nan },
	} {
		r := madeUp(fiveRocks)
		change(r)
		if _, err := All(r, 0); err == nil {
			t.Errorf("%s: drawn without an error", name)
		} else if !strings.HasPrefix(err.Error(), "plots: ") {
			t.Errorf("%s: %v", name, err)
		}
	}
	if _, err := All(madeUp(fiveRocks), 20*vg.Millimeter); err == nil {
		t.Error("a width of 20 mm is accepted")
	}
	if _, err := All(nil, 0); err == nil {
		t.Error("no result is accepted")
	}
}
