package report

import (
	"math"

	"keelfall/solver/drip"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

// DripJSON is what `keelfall drip` prints. Times may lie beyond the window; the
// outcome says so.
type DripJSON struct {
	Outcome           *string     `json:"outcome"`
	Time              number      `json:"time_s"`
	Wavelength        number      `json:"wavelength_m"`
	InitialWavelength number      `json:"initial_wavelength_m"`
	TimeLow           number      `json:"time_low_s"`
	TimeHigh          number      `json:"time_high_s"`
	Events            []eventJSON `json:"events"`
	Reason            string      `json:"reason"`
	SpacingFrom       number      `json:"spacing_from_m"`
	SpacingTo         number      `json:"spacing_to_m"`
	Growth            number      `json:"growth_rate_per_s"`
	StrainRate        number      `json:"strain_rate_start_per_s"`
	StrainRateEnd     number      `json:"strain_rate_end_per_s"`
	Softened          *softJSON   `json:"softened"`
	Thermal           *warmJSON   `json:"thermal"`
	Curve             curveJSON   `json:"curve"`

	AlongStrike     number          `json:"drips_along_strike"` // that find room along the arc's length at that spacing
	AlongStrikeMost number          `json:"drips_along_strike_most"`
	AlongStrikeLess number          `json:"drips_along_strike_least"` // at the ends of the range of spacings
	Critical        number          `json:"critical_thickness_m"`
	CriticalReached number          `json:"critical_thickness_reached_s"`
	CriticalWords   string          `json:"critical_thickness_note"`
	AtThrice        number          `json:"time_at_three_times_reference_rate_s"`
	AtOneThird      number          `json:"time_at_a_third_of_reference_rate_s"`
	Exponents       []exponentJSON  `json:"exponents"`
	First           firstJSON       `json:"first_drip"`
	Undulations     undulationsJSON `json:"undulations"`
	Start           startJSON       `json:"start"`
	Warnings        []string        `json:"warnings"`
}

// softJSON is how a time was found where the drip softens its own rock.
type softJSON struct {
	Slow     number   `json:"slow_bound_s"`
	BestLow  number   `json:"best_low_s"`
	BestHigh number   `json:"best_high_s"`
	Exponent number   `json:"stress_exponent"`
	Centre   number   `json:"closure_over_2d_rate"`
	Finite   number   `json:"finite_amplitude_factor"`
	Inside   bool     `json:"within_2d_solutions"`
	Failed   int      `json:"wavelengths_left_out"`
	Warnings []string `json:"warnings"`
}

// warmJSON is what the heat that the undulation carries along makes of the drip time in
// linear theory, and whether time_s has it.
type warmJSON struct {
	Mode     string `json:"mode"`
	Without  number `json:"without_s"`
	With     number `json:"with_s"`
	Included bool   `json:"included"`
}

type eventJSON struct {
	Time       number `json:"time_s"`
	Wavelength number `json:"wavelength_m"`
	Share      number `json:"removed_share"`
	Thickness  number `json:"removed_thickness_m"`
	Initial    number `json:"initial_wavelength_m"`
	Depth      number `json:"root_base_depth_m"`
	Base       number `json:"root_base_temperature_K"`
}

type curveJSON struct {
	Wavelength []number `json:"wavelength_m"`
	Time       []number `json:"time_s"`
	Low        []number `json:"time_low_s"`
	High       []number `json:"time_high_s"`
}

// exponentJSON says what a layer's viscosity does to the drip time.
type exponentJSON struct {
	Layer    string `json:"layer"`
	Share    number `json:"dissipation_share"`
	Exponent number `json:"dlnt_dlneta"`
}

// firstJSON is the first drip through time, at the root's base.
type firstJSON struct {
	Time       []number `json:"time_s"`
	Wavelength []number `json:"wavelength_m"`
	Amplitude  []number `json:"amplitude_m"`
	StrainRate []number `json:"strain_rate_per_s"`
	Stress     []number `json:"stress_Pa"`
	Background []number `json:"background_strain_rate_per_s"`
}

type undulationsJSON struct {
	Amplitude []number `json:"amplitude_m"`
	Time      []number `json:"time_s"`
}

// startJSON is the undulation at the start.
type startJSON struct {
	Spectrum  string `json:"spectrum"`
	Amplitude number `json:"amplitude_m"` // at the first drip's wavelength
}

const noRoot = "no layer is marked root: true"

// Drip returns a drip result with what was studied of it; r.Drip may be nil where the
// column has no root.
func Drip(r *race.Result) DripJSON {
	p, s, d := r.Problem, r.State, r.Drip
	empty := []number{}
	if d == nil {
		return DripJSON{Time: none, Wavelength: none, InitialWavelength: none, TimeLow: none, TimeHigh: none, Events: []eventJSON{},
			Reason: noRoot, SpacingFrom: none, SpacingTo: none, Growth: none, StrainRate: none, StrainRateEnd: none,
			Curve:       curveJSON{empty, empty, empty, empty},
			AlongStrike: none, AlongStrikeMost: none, AlongStrikeLess: none, Critical: none, CriticalReached: none, AtThrice: none, AtOneThird: none,
			Exponents: []exponentJSON{}, First: firstJSON{empty, empty, empty, empty, empty, empty}, Undulations: undulationsJSON{empty, empty},
			Start: startJSON{"", none}, Warnings: list(race.Warnings(p, s))}
	}
	or := func(x float64) number { // 0 where nothing drips
		if math.IsInf(d.Time, 1) {
			return none
		}
		return number(x)
	}
	j := DripJSON{Outcome: &d.Outcome, Time: number(d.Time), Wavelength: or(d.Wavelength), InitialWavelength: or(d.InitialWavelength),
		TimeLow: number(d.TimeLow), TimeHigh: number(d.TimeHigh), Events: []eventJSON{}, Reason: d.Reason,
		SpacingFrom: or(d.SpacingFrom), SpacingTo: or(d.SpacingTo), Growth: or(d.Rate),
		StrainRate: or(d.StrainRate), StrainRateEnd: or(d.StrainRateEnd),
		Curve:    curveJSON{numbers(d.Curve.Wavelength), numbers(d.Curve.Time), numbers(d.Curve.Low), numbers(d.Curve.High)},
		Warnings: list(DripWarnings(p, s, d))}
	if s := d.Soft; s != nil {
		j.Softened = &softJSON{number(s.Slow), number(s.BestLow), number(s.BestHigh), number(s.Exponent),
			number(s.Correction.Centre), number(s.Correction.Finite), s.Correction.Inside, s.Failed, list(nil)}
	}
	if t := d.Thermal; t != nil {
		j.Thermal = &warmJSON{t.Mode, number(t.Without), number(t.With), t.Included}
	}
	if d.Outcome == "drips" {
		j.Events = dripEvents(p, s, d)
	}
	j.study(r)
	return j
}

// study fills what was studied of a drip.
func (j *DripJSON) study(r *race.Result) {
	d := r.Drip
	room := func(spacing float64) number {
		if n, ok := r.DripsAlongStrike(spacing); ok {
			return number(n)
		}
		return none
	}
	j.AlongStrike, j.AlongStrikeMost, j.AlongStrikeLess = room(d.Wavelength), room(d.SpacingFrom), room(d.SpacingTo)
	j.Critical, j.CriticalReached, j.CriticalWords = none, none, criticalWords(r)
	if c := r.Study.Critical; c != nil {
		j.Critical, j.CriticalReached = number(c.Thickness), number(c.Reached)
	}
	j.AtThrice, j.AtOneThird = none, none
	if r.Rate.Used {
		j.AtThrice, j.AtOneThird = number(r.Rate.AtThrice), number(r.Rate.AtOneThird)
	}
	j.Exponents = []exponentJSON{}
	for _, e := range exponents(r) {
		j.Exponents = append(j.Exponents, exponentJSON{e.layer, number(e.share), number(e.exponent)})
	}
	f := d.First
	j.First = firstJSON{numbers(f.Time), numbers(f.Wavelength), numbers(f.Base), numbers(f.StrainRate), numbers(f.Stress), numbers(f.Background)}
	j.Undulations = undulationsJSON{[]number{}, []number{}}
	for _, u := range r.Study.Undulations {
		j.Undulations.Amplitude, j.Undulations.Time = append(j.Undulations.Amplitude, number(u.Amplitude)), append(j.Undulations.Time, number(u.Time))
	}
	j.Start = startJSON{r.Problem.Drip.Spectrum, none}
	if !math.IsInf(d.Time, 1) {
		j.Start.Amplitude = number(r.Problem.Drip.AmplitudeAt(d.InitialWavelength))
	}
}

// dripEvents lists the drips: one of a frozen column, as many as the window holds of one
// that moves.
func dripEvents(p *race.Problem, s *state.State, d *drip.Result) []eventJSON {
	share := number(p.Drip.Removes)
	if d.Drips == nil {
		base := none
		depth := none
		if _, last, ok := s.Column.RootSpan(); ok {
			pts := s.Layers[last].Points
			depth = number(pts[len(pts)-1].Depth)
			if s.HasTemperature {
				base = number(pts[len(pts)-1].T)
			}
		}
		return []eventJSON{{number(d.Time), number(d.Wavelength), share, number(p.Column.RootThickness() * p.Drip.Removes), number(d.InitialWavelength), depth, base}}
	}
	var out []eventJSON
	for _, e := range d.Drips {
		base := none
		if e.BaseTemperature > 0 {
			base = number(e.BaseTemperature)
		}
		out = append(out, eventJSON{number(e.Time), number(e.Wavelength), share, number(e.Lost), number(e.Initial), number(e.Depth), base})
	}
	return out
}
