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
	Stress         []number        `json:"stress_Pa"`              // τ_II
	Differential   []number        `json:"differential_stress_Pa"` // 2 τ_II
	StrainRate     number          `json:"strain_rate_per_s"`
	Interfaces     []interfaceJSON `json:"interfaces"`
	SurfaceFlow    number          `json:"surface_heat_flow_W_m2"`
	BaseFlow       number          `json:"base_heat_flow_W_m2"`
	HeatResidual   number          `json:"heat_residual"`
	standingJSON
	Level         number         `json:"compensation_depth_m"`
	Asthenosphere number         `json:"asthenosphere_kg_m3"` // at that depth
	WithoutRoot   *standingJSON  `json:"without_root"`        // asthenosphere in its place; null without a root
	Reference     *referenceJSON `json:"reference"`
	Sinking       []sinkingJSON  `json:"sinking"`  // each rock against the rock below it
	DepthOf       []depthJSON    `json:"depth_of"` // of pressures asked for
	Fit           *fitJSON       `json:"geotherm_fit"`
	Warnings      []string       `json:"warnings"`
}

type interfaceJSON struct {
	Depth number `json:"depth_m"`
	Above string `json:"above"`
	Below string `json:"below"`
	Jump  number `json:"density_jump_kg_m3"`
}

// Column returns the column of s.
func Column(p *race.Problem, s *state.State) ColumnJSON {
	c := ColumnJSON{StrainRate: number(s.StrainRate), SurfaceFlow: none, BaseFlow: none, HeatResidual: none, Warnings: list(race.Warnings(p, s))}
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
			c.Differential = append(c.Differential, number(2*p.Stress))
		}
	}
	var err error
	if c.Sinking, err = sinking(s); err != nil {
		c.Warnings = append(c.Warnings, "what the rocks weigh against one another is not known: "+err.Error())
	}
	c.isostasy(p, s)
	c.DepthOf = []depthJSON{}
	if p.GeothermFit != nil {
		c.Fit = fit(p.GeothermFit)
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
	Label      string            `json:"label"`    // what moves in the fastest mode
	Controls   []Control         `json:"controls"` // of the fastest mode, ranked
	Branches   []BranchJSON      `json:"branches"` // empty unless asked for
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
func Spectrum(p *race.Problem, s *state.State, sp *growth.Spectrum, rates []growth.Rate) SpectrumJSON {
	if rates == nil {
		rates = sp.Rates
	}
	j := SpectrumJSON{Fastest: fastestJSON{peak(sp.Fastest), sp.Fastest.AtRangeEdge}, Peaks: []peakJSON{}, Controls: Controls(s, sp.Mode, sp.Shift), Branches: []BranchJSON{}, Warnings: list(SpectrumWarnings(p, s, sp))}
	if sp.Mode != nil {
		j.Label = sp.Mode.Label(RootBase(s), depthsOf(s))
	}
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
	return j
}

// SpectrumWarnings are the warnings of a spectrum and its column.
func SpectrumWarnings(p *race.Problem, s *state.State, sp *growth.Spectrum) []string {
	w := race.Warnings(p, s)
	if sp.Fastest.AtRangeEdge {
		w = append(w, "the fastest wavelength is at an end of the range: no maximum was bracketed")
	}
	return w
}

// DripWarnings are the warnings of a drip and its column.
func DripWarnings(p *race.Problem, s *state.State, d *drip.Result) []string {
	w := append(race.Warnings(p, s), d.Warnings...)
	if d.Excluded != "" {
		w = append(w, d.Excluded)
	}
	return w
}

// ExcisionWarnings are the warnings of an excision and its column.
func ExcisionWarnings(p *race.Problem, s *state.State, x *excision.Result) []string {
	return append(race.Warnings(p, s), x.Warnings...)
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
	return ResultJSON{Column(r.Problem, r.State), Spectrum(r.Problem, r.State, r.Spectrum, nil), Drip(r), Excision(r.Problem, r.State, r.Excision), Verdict(r), p}
}
