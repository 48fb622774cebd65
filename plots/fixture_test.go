package plots

import (
	"math"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/excision"
	"keelfall/solver/growth"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

// rock is a made-up layer of the tests.
type rock struct {
	name           string
	thickness, rho float64 // km, kg/m³
	top, bottom    float64 // log₁₀ Pa s
	root           bool
}

var fiveRocks = []rock{
	{"granodiorite batholith", 22, 2720, 24, 21.7, false},
	{"diorite, tonalite", 18, 2880, 23.4, 21.3, false},
	{"mafic granulite", 18, 3060, 21.3, 20.2, false},
	{"garnet pyroxenite", 12, 3450, 21.2, 20.9, true},
	{"peridotite", 40, 3270, 21.3, 20.4, false},
}

// madeUp fabricates a plausible result from smooth curves. No solver made it: it is
// good only for drawing.
func madeUp(rocks []rock) *race.Result {
	st := madeUpState(rocks)
	col := st.Column
	p := &race.Problem{Title: "invented", Column: *col, ArcWidth: 160e3, HasTimeZero: true, TimeZero: 112 * myr,
		Drip: drip.Settings{Amplitude: 500, Criterion: 1, Window: 15 * myr, Removes: 0.3}, Removed: 0.5,
		Zones: []excision.Zone{{Name: "Ruska"}}}
	r := &race.Result{Problem: p, State: st, Spectrum: madeUpSpectrum(len(rocks)), Drip: madeUpDrip(), Excision: madeUpExcision()}
	r.Spectrum.Mode = madeUpMode(st)
	r.Verdict = race.Verdict{Outcome: "dripped", Time: 10.6 * myr, Share: 0.3,
		Sentence: "The root drips first, at about 101.4 Ma (10.6 Myr)."}
	return r
}

func madeUpState(rocks []rock) *state.State {
	col := &column.Column{Gravity: 9.81, Base: column.Base{Boundary: column.HalfSpace}}
	st := &state.State{Column: col, StrainRate: 3e-16, HasTemperature: true}
	z, pr, above := 0.0, 0.0, 0.0
	for _, r := range rocks {
		h := r.thickness * km
		col.Layers = append(col.Layers, column.Layer{Name: r.name, Thickness: h, Root: r.root})
		var l state.Profile
		for i := range 21 {
			x := float64(i) / 20
			d := z + x*h
			rho := r.rho - 40*x
			eta := math.Pow(10, r.top+(r.bottom-r.top)*x)
			l.Points = append(l.Points, state.Point{Depth: d, T: zeroCelsius + 1400*(1-math.Exp(-d/50e3)), P: pr + r.rho*9.81*x*h,
				Density: rho, Viscosity: math.Min(eta, 5e23), Exponent: 3.5, Capped: eta > 5e23, Stress: 2 * math.Min(eta, 5e23) * st.StrainRate})
		}
		st.Layers = append(st.Layers, l)
		st.Jumps = append(st.Jumps, r.rho-above)
		above = r.rho - 40
		z, pr = z+h, pr+r.rho*9.81*h
	}
	st.Base = state.Point{Depth: z, T: zeroCelsius + 1300, P: pr, Density: 3270, Viscosity: 2e20, Stress: 2 * 2e20 * st.StrainRate}
	st.Jumps = append(st.Jumps, 3270-above)
	return st
}

func madeUpSpectrum(layers int) *growth.Spectrum {
	s := &growth.Spectrum{}
	for i := range 80 {
		l := 10e3 * math.Pow(50, float64(i)/79)
		x := math.Log(l / 86e3)
		q := (0.139*math.Exp(-x*x/0.5) - 0.012) / myr
		s.Rates = append(s.Rates, growth.Rate{Wavelength: l, Growth: q})
	}
	s.Fastest = growth.Peak{Wavelength: 86e3, Growth: 0.127 / myr}
	s.Peaks = []growth.Peak{s.Fastest}
	return s
}

func madeUpMode(st *state.State) *growth.Mode {
	n := len(st.Column.Layers)
	m := &growth.Mode{Wavelength: 86e3, Growth: 0.127 / myr}
	depth, centre := st.Column.Depth(), 0.62*st.Column.Depth()
	for i := range 120 {
		z := depth * 1.3 * float64(i) / 119
		x := (z - centre) / (0.22 * depth)
		m.Depth = append(m.Depth, z)
		m.W = append(m.W, 1e-15*math.Exp(-x*x/2))
		m.U = append(m.U, 6e-16*x*math.Exp(-x*x/2))
	}
	z := 0.0
	var sum float64
	for i := range n + 1 {
		x := (z - centre) / (0.16 * depth)
		m.Displacement = append(m.Displacement, math.Exp(-x*x/2)*float64(1-2*(i%2)*0))
		w := math.Exp(-math.Abs(float64(i) - 0.7*float64(n)))
		m.DissipationShare = append(m.DissipationShare, w)
		sum += w
		if i < n {
			z += st.Column.Layers[i].Thickness
		}
	}
	for i := range m.DissipationShare {
		m.DissipationShare[i] /= sum
	}
	return m
}

func madeUpDrip() *drip.Result {
	d := &drip.Result{Outcome: "drips", Time: 10.6 * myr, Wavelength: 86e3, InitialWavelength: 88e3,
		TimeLow: 6.1 * myr, TimeHigh: 16.2 * myr, SpacingFrom: 58e3, SpacingTo: 101e3}
	for i := range 60 {
		l := 20e3 * math.Pow(20, float64(i)/59)
		x := math.Log(l / 86e3)
		t := 10.6 * myr * math.Exp(0.9*x*x)
		if l < 26e3 {
			t = math.Inf(1)
		}
		d.Curve.Wavelength = append(d.Curve.Wavelength, l)
		d.Curve.Time = append(d.Curve.Time, t)
		d.Curve.Low = append(d.Curve.Low, 0.57*t)
		d.Curve.High = append(d.Curve.High, 1.53*t)
	}
	for i := range 60 {
		t := 10.6 * myr * float64(i) / 59
		d.History.Time = append(d.History.Time, t)
		d.History.Base = append(d.History.Base, 500*math.Exp(math.Log(24)*math.Pow(t/(10.6*myr), 1.6)))
	}
	return d
}

func madeUpExcision() *excision.Result {
	e := &excision.Result{Outcome: "window", Time: 24 * myr, Share: 0.3, CutThroughTime: math.Inf(1)}
	for i := range 41 {
		t := 15 * myr * float64(i) / 40
		e.History.Time = append(e.History.Time, t)
		e.History.RootThickness = append(e.History.RootThickness, 12e3-150*t/myr)
		e.History.ArcMean = append(e.History.ArcMean, 12e3-28*t/myr)
		e.History.RootMassShare = append(e.History.RootMassShare, 150*t/myr/12e3)
	}
	return e
}
