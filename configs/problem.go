package configs

import (
	"math"
	"slices"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/drip"
	"keelfall/solver/race"
)

var surfaceBoundaries = map[string]column.Boundary{"free": column.Free, "free-slip": column.FreeSlip, "rigid": column.Rigid}

var baseBoundaries = map[string]column.Boundary{"half-space": column.HalfSpace, "inviscid": column.Inviscid, "free-slip": column.FreeSlip, "rigid": column.Rigid}

// build makes the problem from the decoded experiment. What only shows here (a law
// that is in no catalogue, a geotherm that does not cover the column) becomes a
// mistake of w. It is called once the tree has no other mistakes.
func (e *Experiment) build(w *walker) race.Problem {
	d := &e.data
	p := race.Problem{
		Title: d.Title.Value, Notes: d.Notes.Value,
		Column:          e.column(w),
		HasTimeZero:     d.TimeZero.given(),
		TimeZero:        d.TimeZero.SI,
		Strain:          race.Strain{ExtensionRate: d.Strain.ExtensionRate.SI, ReferenceRate: d.Strain.ReferenceRate.SI},
		ThermalBuoyancy: d.Buoyancy.Thermal.Value,
		Drip: drip.Settings{
			Amplitude: d.Drip.Amplitude.SI, Criterion: d.Drip.Criterion.SI, Window: d.Drip.Window.SI,
			Removes: d.Drip.Removes.SI, Softening: d.Drip.Softening.Value,
		},
		Removed:   d.Race.Removed.SI,
		Reference: d.Reference.problem(),
		Defaults:  slices.Clone(e.taken),
	}
	if n := d.Buoyancy.Thermal.n; n.from != fromDefault && n.text != "none" && !hasTemperature(e.filled) {
		w.addf(n, "buoyancy.thermal", "%s needs a temperature and the experiment has none; %s", n.show(), howWarm)
	}
	if d.Strain.Wavevector.Value == "strike" {
		p.Strain.Wavevector = race.AlongStrike
	}
	if d.Arc != nil {
		p.ArcWidth, p.ArcLength = d.Arc.Width.SI, d.Arc.Length.SI
	}
	if d.Spectrum != nil {
		p.SpectrumFrom, p.SpectrumTo = d.Spectrum.From.SI, d.Spectrum.To.SI
	}
	e.spectrum(w, &p)
	e.fitGeotherm(w, &p)
	p.Events = e.events(w)
	p.Markers, p.Clocks = e.markers()
	p.Measured = e.measured()
	p.Zones = e.zoneProblems(w)
	if err := p.Column.Validate(); err != nil && len(w.mistakes) == 0 { // whatever the checks with positions missed
		w.add(e.filled.get("layers"), "layers", err.Error())
	}
	return p
}

func (e *Experiment) column(w *walker) column.Column {
	d := &e.data
	c := column.Column{
		Gravity: d.Gravity.SI,
		Surface: column.Surface{Boundary: surfaceBoundaries[d.Surface.Boundary.Value], Temperature: d.Surface.Temperature.SI},
		Limits:  rheology.Limits{Lowest: d.Limits.Lowest.SI, Highest: d.Limits.Highest.SI},
		Base: column.Base{
			Boundary:    baseBoundaries[d.Base.Boundary.Value],
			Temperature: d.Base.Temperature.SI, HasTemperature: d.Base.Temperature.given(),
			HeatFlow: d.Base.HeatFlow.SI, HasHeatFlow: d.Base.HeatFlow.given(),
		},
	}
	for i := range d.Layers {
		l := d.Layers[i].Layer
		c.Layers = append(c.Layers, column.Layer{Name: l.Name.Value, Thickness: l.Thickness.SI, Root: l.Root.On, Rock: e.rock(w, &l.rock)})
	}
	c.Geotherm = e.points(w, c.Depth())
	c.Base.Rock = e.rock(w, &d.Base.rock)
	warm := hasTemperature(e.filled) // also where the geotherm itself has a mistake
	for i := range d.Layers {
		e.temperatureNeeds(w, &d.Layers[i].Layer.rock, &c.Layers[i].Rock, warm)
	}
	if c.Base.Boundary == column.HalfSpace {
		e.temperatureNeeds(w, &d.Base.rock, &c.Base.Rock, warm)
	}
	return c
}

func (e *Experiment) rock(w *walker, r *rock) column.Rock {
	out := column.Rock{
		Density:      e.density(w, r.Density),
		Viscosity:    column.Viscosity{Factor: 1, Exponent: 1},
		HeatCapacity: r.HeatCapacity.SI,
		Source:       r.Source.Value, Notes: r.Notes.Value,
	}
	if r.Factor.given() {
		out.Viscosity.Factor = r.Factor.SI
	}
	if r.StressExponent.given() {
		out.Viscosity.Exponent = r.StressExponent.SI
	}
	switch v := r.Viscosity; {
	case r.Creep != nil:
		out.Viscosity.Creep = &rheology.Creep{Factor: 1}
		out.Viscosity.Creep.Laws, out.Viscosity.Creep.Mixtures = r.Creep.laws(w, r.path+".creep", e.laws)
	case v != nil && v.Linear != nil:
		out.Viscosity.Top, out.Viscosity.Bottom = v.Linear.Top.SI, v.Linear.Bottom.SI
	case v != nil:
		out.Viscosity.Top, out.Viscosity.Bottom = v.Value.SI, v.Value.SI
	}
	if r.Melt != nil {
		out.Melt = e.melt(w, r.Melt)
		if out.Density != nil && out.Melt.Density > 0 {
			out.Density = column.Molten{Solid: out.Density, Melt: out.Melt}
		}
	}
	if g := r.GrainSize; g != nil {
		out.GrainSize = g.Value.SI
		if g.Piezometer != nil { // the schema has checked the mineral
			out.Piezometer, _ = rheology.FindPiezometer(g.Piezometer.Piezometer.Value)
		}
	}
	if r.Creep != nil {
		out.Friction = r.Friction.problem()
	}
	out.Water, out.WaterMeasure = r.Water.problem()
	if k := r.Conductivity; k != nil {
		out.Conductivity = column.Conductivity{Reference: k.Value.SI, At: celsiusZero}
		if s := k.State; s != nil {
			out.Conductivity = column.Conductivity{Reference: s.Reference.SI, PerKelvin: s.Temperature.SI, PerPascal: s.Pressure.SI, At: s.At.SI}
		}
	}
	if h := r.HeatProduction; h != nil {
		out.HeatProduction.Top = h.Value.SI
		if h.Decay != nil {
			out.HeatProduction = column.HeatProduction{Top: h.Decay.Top.SI, DecayLength: h.Decay.Decay.SI}
		}
	}
	return out
}

// problem is friction as package rheology takes it; nil where there is none.
func (f *friction) problem() *rheology.Friction {
	if f == nil {
		return nil
	}
	return &rheology.Friction{Cohesion: f.Cohesion.SI, Angle: f.Angle.SI, PoreFluid: f.PoreFluid.SI}
}

// problem is an amount of water and its measure.
func (f *water) problem() (float64, rheology.WaterMeasure) {
	switch {
	case f == nil:
		return 0, rheology.NoWater
	case f.Fugacity.given():
		return f.Fugacity.SI, rheology.WaterFugacity
	}
	return f.Content.SI, rheology.WaterContent
}

// howWarm says how an experiment gets a temperature.
const howWarm = "add base.temperature or base.heat-flow, or a geotherm"

// temperatureNeeds reports a rock that needs a temperature the experiment does not
// give, or water and grain size its creep laws ask for.
func (e *Experiment) temperatureNeeds(w *walker, r *rock, out *column.Rock, warm bool) {
	solid := out.Density
	if m, ok := solid.(column.Molten); ok {
		solid = m.Solid
	}
	if out.Melt.NeedsTemperature() && !warm {
		w.addf(r.at.get("melt"), r.path+".melt", "has a solidus, which needs a temperature, and the experiment has none; %s", howWarm)
	}
	if solid != nil && solid.NeedsTemperature() && !warm {
		w.addf(r.at.get("density"), r.path+".density", "depends on temperature and the experiment has none; %s", howWarm)
	}
	creep := out.Viscosity.Creep
	if creep == nil {
		return
	}
	at := r.at.get("creep")
	if !warm {
		w.addf(at, r.path+".creep", "needs a temperature and the experiment has none; %s", howWarm)
	}
	lawNeeds(w, creep, at, r.path, out.GrainSize > 0 || out.Piezometer != nil, out.WaterMeasure)
}

// lawNeeds reports, at the creep's node, grain size and water that its laws ask for and
// the rock at path does not have.
func lawNeeds(w *walker, creep *rheology.Creep, at *node, path string, grained bool, measure rheology.WaterMeasure) {
	said := map[string]bool{}
	say := func(key, format string, args ...any) {
		if !said[key] {
			w.addf(at, path+"."+key, format, args...)
		}
		said[key] = true
	}
	for _, l := range creep.AllLaws() {
		if l.M != 0 && !grained {
			say("grain-size", "is missing; %s needs one, for example grain-size: 2 mm", l.Name)
		}
		if l.R == 0 || l.Water == measure {
			continue
		}
		needs := "a fugacity, for example water: {fugacity: 250 MPa}"
		if l.Water == rheology.WaterContent {
			needs = "a content in H per 10⁶ Si, for example water: {content: 1000}"
		}
		if measure == rheology.NoWater {
			say("water", "is missing; %s needs %s", l.Name, needs)
		} else {
			say("water", "is given in the other measure; %s needs %s", l.Name, needs)
		}
	}
}

// finite is what every number that leaves the package is.
func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }
