package report

import (
	"math"

	"keelfall/solver/drip"
	"keelfall/solver/excision"
	"keelfall/solver/growth"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

// ColumnJSON is what `keelfall column` prints: arrays from the surface down, a depth
// at a contact standing twice, the upper side first.
type ColumnJSON struct {
	Layer          []string        `json:"layer"`
	Depth          []number        `json:"depth_m"`
	Temperature    []number        `json:"temperature_K"`
	Pressure       []number        `json:"pressure_Pa"`
	Density        []number        `json:"density_kg_m3"`
	Viscosity      []number        `json:"viscosity_Pa_s"`
	StressExponent []number        `json:"stress_exponent"`
	Stress         []number        `json:"stress_Pa"`
	StrainRate     number          `json:"strain_rate_per_s"`
	Interfaces     []interfaceJSON `json:"interfaces"`
	SurfaceFlow    number          `json:"surface_heat_flow_W_m2"`
	BaseFlow       number          `json:"base_heat_flow_W_m2"`
	HeatResidual   number          `json:"heat_residual"`
	Warnings       []string        `json:"warnings"`
}

type interfaceJSON struct {
	Depth number `json:"depth_m"`
	Above string `json:"above"`
	Below string `json:"below"`
	Jump  number `json:"density_jump_kg_m3"`
}

// Column returns the column of s.
func Column(s *state.State) ColumnJSON {
	c := ColumnJSON{StrainRate: number(s.StrainRate), SurfaceFlow: none, BaseFlow: none, HeatResidual: none, Warnings: list(s.Warnings)}
	if s.HasTemperature {
		c.SurfaceFlow, c.BaseFlow = number(s.SurfaceFlow), number(s.BaseFlow)
		if len(s.Column.Geotherm) == 0 {
			c.HeatResidual = number(s.HeatResidual)
		}
	}
	for i, l := range s.Layers {
		for _, p := range l.Points {
			t := none
			if s.HasTemperature {
				t = number(p.T)
			}
			c.Layer = append(c.Layer, s.Column.Layers[i].Name)
			c.Depth, c.Temperature = append(c.Depth, number(p.Depth)), append(c.Temperature, t)
			c.Pressure, c.Density = append(c.Pressure, number(p.P)), append(c.Density, number(p.Density))
			c.Viscosity = append(c.Viscosity, number(p.Viscosity))
			c.StressExponent = append(c.StressExponent, number(p.Exponent))
			c.Stress = append(c.Stress, number(p.Stress))
		}
	}
	depth := 0.0
	for i, j := range s.Jumps {
		f := interfaceJSON{Depth: number(depth), Above: "air", Below: "base", Jump: number(j)}
		if i > 0 {
			f.Above = s.Column.Layers[i-1].Name
		}
		if i < len(s.Column.Layers) {
			f.Below = s.Column.Layers[i].Name
			depth += s.Column.Layers[i].Thickness
		}
		c.Interfaces = append(c.Interfaces, f)
	}
	return c
}

// SpectrumJSON is what `keelfall spectrum` prints.
type SpectrumJSON struct {
	Wavelength []number          `json:"wavelength_m"`
	Growth     []number          `json:"growth_rate_per_s"`
	Imaginary  []number          `json:"imaginary_per_s"`
	Error      []number          `json:"relative_error"`
	Fastest    fastestJSON       `json:"fastest"`
	Peaks      []peakJSON        `json:"peaks"`
	Layers     []layerShareJSON  `json:"layers"`
	Interfaces []contactWorkJSON `json:"interfaces"`
	Warnings   []string          `json:"warnings"`
}

type peakJSON struct {
	Wavelength number `json:"wavelength_m"`
	Growth     number `json:"growth_rate_per_s"`
	EFold      number `json:"efold_time_s"`
}

type fastestJSON struct {
	peakJSON
	AtRangeEdge bool `json:"at_range_edge"`
}

type layerShareJSON struct {
	Name        string `json:"name"`
	Dissipation number `json:"dissipation_share"`
	DlnqDlnEta  number `json:"dlnq_dlneta"`
	DqDrho      number `json:"dq_drho_per_s_per_kg_m3"`
	DqDh        number `json:"dq_dthickness_per_s_per_m"`
}

type contactWorkJSON struct {
	Depth        number `json:"depth_m"`
	Work         number `json:"work_share"`
	Displacement number `json:"displacement_m_per_m"`
	Jump         number `json:"density_jump_kg_m3"`
}

func peak(p growth.Peak) peakJSON {
	return peakJSON{number(p.Wavelength), number(p.Growth), number(efold(p.Growth))}
}

// efold is 1/q for a growing mode, without a value otherwise.
func efold(q float64) float64 {
	if q > 0 {
		return 1 / q
	}
	return math.NaN()
}

// Spectrum returns a spectrum of s; rates, where not nil, replace the wavelengths
// that the spectrum chose, in their own order.
func Spectrum(s *state.State, sp *growth.Spectrum, rates []growth.Rate) SpectrumJSON {
	if rates == nil {
		rates = sp.Rates
	}
	j := SpectrumJSON{Fastest: fastestJSON{peak(sp.Fastest), sp.Fastest.AtRangeEdge}, Peaks: []peakJSON{}, Warnings: list(nil)}
	for _, r := range rates {
		j.Wavelength, j.Growth = append(j.Wavelength, number(r.Wavelength)), append(j.Growth, number(r.Growth))
		j.Imaginary, j.Error = append(j.Imaginary, number(r.Imaginary)), append(j.Error, number(r.RelativeError))
	}
	for _, p := range sp.Peaks {
		j.Peaks = append(j.Peaks, peak(p))
	}
	m := sp.Mode
	at := func(x []float64, i int) number {
		if m == nil || i >= len(x) {
			return none
		}
		return number(x[i])
	}
	for i := range s.Column.Layers {
		j.Layers = append(j.Layers, layerShareJSON{s.Column.Layers[i].Name, at(m.DissipationShare, i), at(m.DlnqDlnEta, i), at(m.DqDrho, i), at(m.DqDh, i)})
	}
	n := len(s.Column.Layers)
	j.Layers = append(j.Layers, layerShareJSON{"base", at(m.DissipationShare, n), at(m.DlnqDlnEta, n), at(m.DqDrho, n), none})
	depth := 0.0
	for i := range s.Jumps {
		j.Interfaces = append(j.Interfaces, contactWorkJSON{number(depth), at(m.WorkShare, i), at(m.Displacement, i), number(s.Jumps[i])})
		if i < n {
			depth += s.Column.Layers[i].Thickness
		}
	}
	if sp.Fastest.AtRangeEdge {
		j.Warnings = append(j.Warnings, "the fastest wavelength is at an end of the range: no maximum was bracketed")
	}
	return j
}

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
	Curve             curveJSON   `json:"curve"`
	Warnings          []string    `json:"warnings"`
}

type eventJSON struct {
	Time       number `json:"time_s"`
	Wavelength number `json:"wavelength_m"`
	Share      number `json:"removed_share"`
	Thickness  number `json:"removed_thickness_m"`
}

type curveJSON struct {
	Wavelength []number `json:"wavelength_m"`
	Time       []number `json:"time_s"`
	Low        []number `json:"time_low_s"`
	High       []number `json:"time_high_s"`
}

const noRoot = "no layer is marked root: true"

// Drip returns a drip result; d may be nil where the column has no root.
func Drip(p *race.Problem, d *drip.Result) DripJSON {
	if d == nil {
		return DripJSON{Time: none, Wavelength: none, InitialWavelength: none, TimeLow: none, TimeHigh: none, Events: []eventJSON{},
			Reason: noRoot, SpacingFrom: none, SpacingTo: none, Growth: none, StrainRate: none, StrainRateEnd: none,
			Curve: curveJSON{[]number{}, []number{}, []number{}, []number{}}, Warnings: list(nil)}
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
		Warnings: list(d.Warnings)}
	if d.Outcome == "drips" {
		var h float64
		for _, l := range p.Column.Layers {
			if l.Root {
				h += l.Thickness
			}
		}
		j.Events = append(j.Events, eventJSON{number(d.Time), number(d.Wavelength), number(p.Drip.Removes), number(h * p.Drip.Removes)})
	}
	if d.Excluded != "" {
		j.Warnings = append(j.Warnings, d.Excluded)
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
func Excision(p *race.Problem, x *excision.Result) ExcisionJSON {
	if x == nil {
		empty := []number{}
		return ExcisionJSON{Time: none, Share: none, Slip: none, Heave: none, Throw: none, Extension: none, PressureGap: none,
			CutTime: none, CutSlip: none, CutHeave: none, ArcMeanTime: none,
			History: historyJSON{empty, empty, empty, empty, empty, empty, empty}, Warnings: []string{noRoot}}
	}
	j := ExcisionJSON{Outcome: &x.Outcome, Time: number(x.LocalBeyond), Share: number(x.Share), Slip: number(x.Slip), Heave: number(x.Heave),
		Throw: number(x.Throw), Extension: none, PressureGap: number(x.PressureGap),
		CutTime: number(x.CutThroughTime), CutSlip: none, CutHeave: none, ArcMeanTime: number(x.ArcMeanTime),
		History: historyJSON{numbers(x.History.Time), numbers(x.History.RootThickness), numbers(x.History.ArcMean),
			numbers(x.History.Slip), numbers(x.History.Heave), numbers(x.History.Throw), numbers(x.History.RootMassShare)},
		Warnings: list(x.Warnings)}
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

// VerdictJSON is the verdict of `keelfall run`.
type VerdictJSON struct {
	Outcome  *string     `json:"outcome"`
	Decided  *bool       `json:"decided"` // null: no ranges were given
	Time     number      `json:"time_s"`
	Margin   number      `json:"margin_s"`
	MarginV  number      `json:"margin_log10_viscosity"`
	Shares   sharesJSON  `json:"shares"`
	ArcMean  sharesJSON  `json:"arc_mean"`
	Share    number      `json:"clock_share"`
	Reasons  []string    `json:"reasons"`
	Sentence string      `json:"sentence"`
	Reversal []flipJSON  `json:"reversal"`
	Rate     rateJSON    `json:"reference_rate_band"`
	Peeling  peelingJSON `json:"peeling_screen"`
	Warnings []string    `json:"warnings"`
}

type sharesJSON struct {
	Drip     number `json:"drip"`
	Excision number `json:"excision"`
}

type flipJSON struct {
	Key      string `json:"key"`
	Label    string `json:"label"`
	Unit     string `json:"unit"`
	From     number `json:"from"`
	To       number `json:"to"`
	Found    bool   `json:"found"`
	Distance number `json:"distance"`
	Default  bool   `json:"is_default"`
}

type rateJSON struct {
	Used    bool   `json:"used"`
	Thrice  number `json:"drip_time_at_thrice_s"`
	OneThrd number `json:"drip_time_at_a_third_s"`
}

type peelingJSON struct {
	Layer     string `json:"weakest_layer_above_root"`
	Viscosity number `json:"viscosity_Pa_s"`
	Criterion number `json:"criterion_Pa_s"`
	Possible  bool   `json:"possible"`
}

// Verdict returns the verdict of r.
func Verdict(r *race.Result) VerdictJSON {
	v := &r.Verdict
	j := VerdictJSON{Time: none, Margin: none, MarginV: none, Shares: sharesJSON{none, none}, ArcMean: sharesJSON{none, none},
		Share: none, Reasons: list(v.Reasons), Sentence: v.Sentence, Reversal: []flipJSON{},
		Rate: rateJSON{false, none, none}, Peeling: peelingJSON{"", none, race.BirdViscosity, false}, Warnings: list(r.Warnings)}
	if v.Outcome == "" {
		return j
	}
	j.Outcome = &v.Outcome
	j.Time, j.Margin, j.MarginV = number(v.Time), number(v.Margin), number(v.MarginLog10Viscosity)
	j.Share = number(v.Share)
	j.Shares = sharesJSON{number(v.Shares.Drip), number(v.Shares.Excision)}
	j.ArcMean = sharesJSON{number(v.ArcMean.Drip), number(v.ArcMean.Excision)}
	if r.Problem.ArcWidth == 0 && len(r.Problem.Zones) > 0 {
		j.ArcMean.Excision = none
	}
	for _, f := range v.Flips {
		to, distance := none, none
		if f.Found {
			to, distance = number(f.To), number(f.Distance)
		}
		j.Reversal = append(j.Reversal, flipJSON{f.Key, f.Label, f.Unit, number(f.From), to, f.Found, distance, f.Default})
	}
	j.Rate = rateJSON{r.Rate.Used, number(r.Rate.AtThrice), number(r.Rate.AtOneThird)}
	if r.Peeling.Viscosity > 0 {
		j.Peeling = peelingJSON{r.Peeling.Layer, number(r.Peeling.Viscosity), race.BirdViscosity, r.Peeling.Possible}
	}
	return j
}

// ResultJSON is result.json.
type ResultJSON struct {
	Column     ColumnJSON     `json:"column"`
	Spectrum   SpectrumJSON   `json:"spectrum"`
	Drip       DripJSON       `json:"drip"`
	Excision   ExcisionJSON   `json:"excision"`
	Verdict    VerdictJSON    `json:"verdict"`
	Provenance ProvenanceJSON `json:"provenance"`
}

// Result returns everything a run found.
func Result(r *race.Result, p ProvenanceJSON) ResultJSON {
	return ResultJSON{Column(r.State), Spectrum(r.State, r.Spectrum, nil), Drip(r.Problem, r.Drip), Excision(r.Problem, r.Excision), Verdict(r), p}
}
