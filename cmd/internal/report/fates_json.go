package report

import (
	"math"

	"keelfall/solver/drip"
	"keelfall/solver/excision"
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
	Curve             curveJSON   `json:"curve"`
	Warnings          []string    `json:"warnings"`
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

const noRoot = "no layer is marked root: true"

// Drip returns a drip result; d may be nil where the column has no root.
func Drip(p *race.Problem, s *state.State, d *drip.Result) DripJSON {
	if d == nil {
		return DripJSON{Time: none, Wavelength: none, InitialWavelength: none, TimeLow: none, TimeHigh: none, Events: []eventJSON{},
			Reason: noRoot, SpacingFrom: none, SpacingTo: none, Growth: none, StrainRate: none, StrainRateEnd: none,
			Curve: curveJSON{[]number{}, []number{}, []number{}, []number{}}, Warnings: list(race.Warnings(p, s))}
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
	if d.Outcome == "drips" {
		j.Events = dripEvents(p, s, d)
	}
	return j
}

// ExcisionJSON is what `keelfall excise` prints.
type ExcisionJSON struct {
	Outcome     *string     `json:"outcome"`
	Time        number      `json:"time_s"`
	Share       number      `json:"removed_share"`
	Slip        number      `json:"slip_m"`
	Heave       number      `json:"heave_m"`
	Throw       number      `json:"throw_m"`
	Extension   number      `json:"extension_demanded"`
	PressureGap number      `json:"pressure_gap_Pa"`
	CutTime     number      `json:"cut_through_time_s"`
	CutSlip     number      `json:"cut_through_slip_m"`
	CutHeave    number      `json:"cut_through_heave_m"`
	ArcMeanTime number      `json:"arc_mean_time_s"`
	History     historyJSON `json:"history"`
	Warnings    []string    `json:"warnings"`
}

type historyJSON struct {
	Time      []number `json:"time_s"`
	Root      []number `json:"root_thickness_m"`
	ArcMean   []number `json:"arc_mean_root_thickness_m"`
	Slip      []number `json:"slip_m"`
	Heave     []number `json:"heave_m"`
	Throw     []number `json:"throw_m"`
	MassShare []number `json:"root_mass_share_removed"`
}

// Excision returns an excision result; x may be nil where the column has no root.
func Excision(p *race.Problem, s *state.State, x *excision.Result) ExcisionJSON {
	if x == nil {
		empty := []number{}
		return ExcisionJSON{Time: none, Share: none, Slip: none, Heave: none, Throw: none, Extension: none, PressureGap: none,
			CutTime: none, CutSlip: none, CutHeave: none, ArcMeanTime: none,
			History: historyJSON{empty, empty, empty, empty, empty, empty, empty}, Warnings: append(list(race.Warnings(p, s)), noRoot)}
	}
	j := ExcisionJSON{Outcome: &x.Outcome, Time: number(x.LocalBeyond), Share: number(x.Share), Slip: number(x.Slip), Heave: number(x.Heave),
		Throw: number(x.Throw), Extension: none, PressureGap: number(x.PressureGap),
		CutTime: number(x.CutThroughTime), CutSlip: none, CutHeave: none, ArcMeanTime: number(x.ArcMeanTime),
		History: historyJSON{numbers(x.History.Time), numbers(x.History.RootThickness), numbers(x.History.ArcMean),
			numbers(x.History.Slip), numbers(x.History.Heave), numbers(x.History.Throw), numbers(x.History.RootMassShare)},
		Warnings: list(ExcisionWarnings(p, s, x))}
	if x.Outcome == "excised" {
		j.Time = number(x.Time)
	}
	if p.ArcWidth > 0 {
		j.Extension = number(x.ExtensionDemanded)
	}
	if !math.IsInf(x.CutThroughTime, 1) {
		j.CutSlip, j.CutHeave = number(x.CutThroughSlip), number(x.CutThroughHeave)
	}
	return j
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
