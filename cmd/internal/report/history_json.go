package report

import "keelfall/solver/heat"

// HistoryJSON is what `keelfall history` prints. Lists against time have one value a
// step; times count from the start.
type HistoryJSON struct {
	TimeZero      number            `json:"time_zero_s"` // age of time 0; null where not given
	Time          []number          `json:"time_s"`
	SurfaceFlow   []number          `json:"surface_heat_flow_W_m2"`
	RootBase      []number          `json:"root_base_temperature_K"`
	RootThickness []number          `json:"root_thickness_m"`
	OwnRock       []number          `json:"own_rock_depth_m"`
	Melt          []number          `json:"melt_fraction_max"`
	Reacted       []number          `json:"reacted_share"`
	Elevation     []number          `json:"elevation_m"`
	Potential     []number          `json:"potential_energy_N_m"`
	Force         []number          `json:"extensional_force_N_m"`
	Reference     *referenceJSON    `json:"reference"`
	Events        []happeningJSON   `json:"events"`
	Snapshots     []snapshotJSON    `json:"snapshots"`
	Markers       []markerJSON      `json:"markers"`
	Clocks        []clockJSON       `json:"clocks"`
	Fit           *fitJSON          `json:"geotherm_fit"`
	Energy        map[string]number `json:"energy_J_m2"`
	EnergyError   number            `json:"energy_missing_share"` // of the heat that moved
	MassError     number            `json:"mass_missing_share"`   // of the mass that moved
	Steps         int               `json:"steps"`
	Rejected      int               `json:"rejected_steps"`
	Limits        []string          `json:"limits"`
	Warnings      []string          `json:"warnings"`
}

type happeningJSON struct {
	Verb  string `json:"verb"`
	Name  string `json:"name"`
	Layer string `json:"layer"`
	From  number `json:"from_s"`
	To    number `json:"to_s"`
	Words string `json:"words"`
}

type snapshotJSON struct {
	Time        number           `json:"time_s"`
	Layers      []layerDepthJSON `json:"layers"`
	Layer       []string         `json:"layer"`
	Depth       []number         `json:"depth_m"`
	Temperature []number         `json:"temperature_K"`
	Pressure    []number         `json:"pressure_Pa"`
}

type layerDepthJSON struct {
	Name   string `json:"name"`
	Root   bool   `json:"root"`
	Top    number `json:"top_m"`
	Bottom number `json:"bottom_m"`
}

type markerJSON struct {
	Name        string   `json:"name"`
	Layer       string   `json:"layer"`
	Time        []number `json:"time_s"`
	Depth       []number `json:"depth_m"`
	Temperature []number `json:"temperature_K"`
	Pressure    []number `json:"pressure_Pa"`
	Peak        number   `json:"peak_temperature_K"`
	Deepest     number   `json:"highest_pressure_Pa"`
	Ended       bool     `json:"ended"`
	Reason      string   `json:"reason"`
}

type clockJSON struct {
	Name        string `json:"name"`
	Marker      string `json:"marker"`
	Found       bool   `json:"found"`
	Time        number `json:"closure_time_s"`
	Age         number `json:"age_s"` // null without a time zero
	Temperature number `json:"closure_temperature_K"`
	CoolingRate number `json:"cooling_rate_K_per_s"`
	Diffused    number `json:"diffused_after"` // 1 for cooling with 1/T linear in time
	Reason      string `json:"reason"`
	Caution     string `json:"caution"`
}

type fitJSON struct {
	Fitted     []fittedJSON `json:"fitted"`
	Covariance [][]number   `json:"covariance"`
	ChiSquare  number       `json:"chi_square"`
	Freedom    int          `json:"degrees_of_freedom"`
	Condition  number       `json:"condition"`
	Samples    []sampleJSON `json:"samples"`
	Notes      []string     `json:"notes"`
}

type fittedJSON struct {
	Key   string `json:"key"`
	Start number `json:"start"`
	Value number `json:"value"`
	Error number `json:"error"`
}

type sampleJSON struct {
	Name             string `json:"name"`
	Depth            number `json:"depth_m"`
	Pressure         number `json:"pressure_Pa"`
	DepthError       number `json:"depth_error_m"`     // null where the sample has a pressure
	PressureError    number `json:"pressure_error_Pa"` // null where the sample has a depth
	Temperature      number `json:"temperature_K"`
	TemperatureError number `json:"temperature_error_K"`
	Model            number `json:"geotherm_K"`
	Residual         number `json:"residual_K"`
	Uncertainty      number `json:"residual_error_K"`
}

// History returns a thermal history.
func History(p *Past) HistoryJSON {
	h := p.History
	j := HistoryJSON{TimeZero: none, Time: numbers(h.Time), SurfaceFlow: numbers(h.SurfaceFlow), OwnRock: numbers(h.Depth), Melt: numbers(h.MeltFraction),
		Events: []happeningJSON{}, Snapshots: []snapshotJSON{}, Markers: []markerJSON{}, Clocks: []clockJSON{}, EnergyError: none, MassError: none,
		Reference: reference(p.Problem), Steps: h.Steps, Rejected: h.Rejected, Limits: list(p.limits()), Warnings: list(p.Warnings())}
	if p.Problem.HasTimeZero {
		j.TimeZero = number(p.Problem.TimeZero)
	}
	for i := range h.Time {
		j.RootBase = append(j.RootBase, number(p.root(h.RootBase, i)))
		j.RootThickness = append(j.RootThickness, number(h.RootThickness[i]))
		j.Reacted = append(j.Reacted, number(p.reacted(i)))
		j.Elevation = append(j.Elevation, number(p.standing(i, elevation)))
		j.Potential = append(j.Potential, number(p.standing(i, potential)))
		j.Force = append(j.Force, number(p.standing(i, driving)))
	}
	for _, e := range heat.InOrder(p.Problem.Events) {
		j.Events = append(j.Events, happeningJSON{e.Verb, e.Name, e.Layer, number(e.From), number(e.To), eventWords(&e)})
	}
	for _, s := range p.snapshots() {
		j.Snapshots = append(j.Snapshots, snapshot(s))
	}
	for i := range h.Paths {
		m := &h.Paths[i]
		j.Markers = append(j.Markers, markerJSON{m.Name, m.Layer, numbers(m.Time), numbers(m.Depth), numbers(m.T), numbers(m.P),
			number(m.Peak), number(m.Deepest), m.Ended, m.Reason})
	}
	for i := range p.Closures {
		j.Clocks = append(j.Clocks, p.clock(i))
	}
	if p.Problem.GeothermFit != nil {
		j.Fit = fit(p.Problem.GeothermFit)
	}
	e := &h.Energy
	j.Energy = map[string]number{"stored": number(e.Stored), "surface": number(e.Surface), "conducted_at_base": number(e.Conducted),
		"produced": number(e.Produced), "given": number(e.Given), "compression": number(e.Compression), "from_below": number(e.FromBelow),
		"added": number(e.Added), "taken": number(e.Taken), "sideways": number(e.Sideways), "missing": number(e.Missing), "moved": number(e.Moved)}
	if s, ok := closed(e.Missing, e.Moved); ok {
		j.EnergyError = number(s)
	}
	if s, ok := closedMass(&h.Mass); ok {
		j.MassError = number(s)
	}
	return j
}

func snapshot(s heat.Snapshot) snapshotJSON {
	j := snapshotJSON{Time: number(s.Time)}
	for i := range s.Profile.Layers {
		l, name := &s.Profile.Layers[i], s.Column.Layers[i].Name
		j.Layers = append(j.Layers, layerDepthJSON{name, s.Column.Layers[i].Root, number(l.Top), number(l.Bottom)})
		for _, n := range l.Nodes {
			j.Layer, j.Depth = append(j.Layer, name), append(j.Depth, number(n.Depth))
			j.Temperature, j.Pressure = append(j.Temperature, number(n.T)), append(j.Pressure, number(n.P))
		}
	}
	return j
}

func (p *Past) clock(i int) clockJSON {
	k, c := &p.Problem.Clocks[i], &p.Closures[i]
	j := clockJSON{Name: k.Name, Marker: k.Marker, Found: c.Found, Time: none, Age: none, Temperature: none, CoolingRate: none, Diffused: none, Reason: c.Reason, Caution: c.Caution}
	if c.Found {
		j.Time, j.Age, j.Temperature = number(c.Time), number(p.age(c.Time)), number(c.Temperature)
		j.CoolingRate, j.Diffused = number(c.CoolingRate), number(c.Diffused)
	}
	return j
}

func fit(f *heat.Fit) *fitJSON {
	j := &fitJSON{Fitted: []fittedJSON{}, Covariance: [][]number{}, ChiSquare: number(f.ChiSquare), Freedom: f.Freedom, Condition: number(f.Condition), Samples: []sampleJSON{}, Notes: list(f.Notes)}
	for _, v := range f.Fitted {
		j.Fitted = append(j.Fitted, fittedJSON{v.Key, number(v.Start), number(v.Value), number(v.Error)})
	}
	for _, row := range f.Covariance {
		j.Covariance = append(j.Covariance, numbers(row))
	}
	for i := range f.Residuals {
		r := &f.Residuals[i]
		s := sampleJSON{Name: sampleName(f, i), Depth: number(r.Depth), Pressure: number(r.Pressure), DepthError: none, PressureError: none,
			Temperature: number(r.Temperature), TemperatureError: number(r.TemperatureError), Model: number(r.Model), Residual: number(r.Residual), Uncertainty: number(r.Uncertainty)}
		if r.HasPressure {
			s.PressureError = number(r.PressureError)
		} else {
			s.DepthError = number(r.DepthError)
		}
		j.Samples = append(j.Samples, s)
	}
	return j
}
