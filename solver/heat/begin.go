package heat

import (
	"fmt"
	"math"

	"keelfall/column"
)

// Evolution is a column whose temperature changes while its rock moves. Begin makes it,
// Advance moves it on; between the two calls may be set what a caller decides (Flux,
// Heat, Remove). It is not for several goroutines at once.
type Evolution struct {
	column    *column.Column
	gravity   float64
	surfaceT  float64
	driven    func(float64) float64
	base      column.Base
	open      bool    // rock of the base comes in at the foot
	depth0    float64 // where the thermal base stays, m
	tolerance float64
	points    int
	dmax      float64
	nonlinear float64 // relative change of properties by temperature, 1/K
	fixedMesh bool
	heater    func(t float64, given []float64) // of tests: fills the cells' sources, W/m²

	t, h       float64
	rate       float64 // at which the column itself stretches: own × arc + extra, 1/s
	arc        float64 // extension rate in force, 1/s
	own, extra float64
	background float64
	spread     float64 // ∫ rate dt since the start
	strata     []stratum
	cells      []cell
	spare      []cell

	moments  []moment
	next     int // the first moment still to come
	eroding  float64
	growing  []Flux // of events
	fluxes   []Flux // of the caller
	sources  []Source
	flown    map[string]float64 // see Flown
	streams  []stream
	foot     int // the basal stream; -1: none
	feet     int
	taken    map[string]bool // names that rock of the base leaves alone
	gap      float64         // by which the column is too short, m
	short    int             // listings in which the column was too short and without a foot
	loss     float64         // thickness it loses, m/s
	footRho  float64
	tracks   []carried
	record   func()
	steps    int
	rejected int
	warnings []string

	w        work
	one, two stage
	f0       []float64 // what comes into a cell now, without streams, W/m²
	start    []float64 // the same with streams
	fresh    bool      // f0 belongs to the present column
	smooth   bool      // no jump since the last step
	reacted  float64
	marks    []int8
	curve    []float64
	thick    []float64
	coarse   float64
	err      error
	domain   outside

	energy   Energy
	massBook Mass
	content0 float64
	mass0    float64
}

// Begin checks the whole plan and returns the column at time 0.
//
// The column needs a temperature. Where neither a basal temperature nor a heat flow is
// given (a given geotherm), the base keeps the temperature it has at the start. Rock of the
// base without a conductivity or heat capacity has those of the last layer.
//
// Errors: those of column.Validate and Solve; a heat capacity that is not positive; an
// event that is not possible or overlaps another, and one by which the column becomes
// deeper than 3000 km or thinner than 1 m, as *EventError; a marker outside the column.
func Begin(p Plan) (*Evolution, error) {
	c := p.Column
	if err := c.Validate(); err != nil {
		return nil, fmt.Errorf("heat: %w", err)
	}
	if !c.HasTemperature() {
		return nil, fmt.Errorf("heat: a column without a temperature has no thermal history: give a basal temperature, a basal heat flow or a geotherm")
	}
	if p.Tolerance < 0 || math.IsNaN(p.Tolerance) || p.Points < 0 || math.IsNaN(p.ExtensionRate) || math.IsInf(p.ExtensionRate, 0) {
		return nil, fmt.Errorf("heat: tolerance %g K, %d points, extension rate %g 1/s", p.Tolerance, p.Points, p.ExtensionRate)
	}
	start := p.Start
	if start == nil {
		var err error
		if start, err = Solve(c); err != nil {
			return nil, err
		}
	}
	if len(start.Layers) != len(c.Layers) || !start.HasTemperature {
		return nil, fmt.Errorf("heat: the start has %d layers, the column %d", len(start.Layers), len(c.Layers))
	}
	ev := &Evolution{column: c, gravity: c.Gravity, surfaceT: c.Surface.Temperature, driven: p.SurfaceTemperature,
		base: c.Base, depth0: c.Depth(), tolerance: p.Tolerance, points: p.Points, rate: p.ExtensionRate, arc: p.ExtensionRate, own: 1, background: p.ExtensionRate, flown: map[string]float64{}, coarse: 1}
	if ev.tolerance == 0 {
		ev.tolerance = 0.1
	}
	if ev.points == 0 {
		ev.points = 300
	}
	ev.open = c.Base.Boundary == column.HalfSpace || c.Base.Boundary == column.Inviscid
	if len(c.Geotherm) > 0 && !ev.base.HasHeatFlow && !ev.base.HasTemperature {
		l := &start.Layers[len(start.Layers)-1]
		T, _, _ := l.At(l.Bottom)
		ev.base.HasTemperature, ev.base.Temperature = true, T
	}
	if ev.base.HasTemperature {
		ev.base.HasHeatFlow = false
	}
	last := &c.Layers[len(c.Layers)-1]
	if ev.base.HeatCapacity == 0 {
		ev.base.HeatCapacity = last.HeatCapacity
	}
	if ev.base.Conductivity.Reference == 0 {
		ev.base.Conductivity = last.Conductivity
	}
	if err := ev.rocks(p.Events); err != nil {
		return nil, err
	}
	if err := ev.schedule(p.Events); err != nil {
		return nil, err
	}
	ev.dmax = 2 * ev.depth0 / float64(ev.points)
	ev.taken = map[string]bool{}
	for i := range c.Layers {
		ev.taken[c.Layers[i].Name] = true
	}
	for i := range p.Events {
		for _, n := range p.Events[i].Names() {
			ev.taken[n] = true
		}
	}
	ev.lay(start)
	if err := ev.placeMarkers(p.Markers); err != nil {
		return nil, err
	}
	ev.press(false)
	if ev.err != nil {
		return nil, ev.err
	}
	ev.content0 = ev.content()
	for i := range ev.cells {
		ev.mass0 += ev.cells[i].m
	}
	if err := ev.restart(); err != nil {
		return nil, err
	}
	ev.begun()
	return ev, ev.err
}

// rocks checks what conduction needs of every rock, and notes how much the properties
// change with temperature.
func (ev *Evolution) rocks(events []Event) error {
	check := func(name string, r *column.Rock) error {
		if !(r.HeatCapacity > 0) || math.IsInf(r.HeatCapacity, 1) {
			return fmt.Errorf("%s: heat capacity %g J/kg/K, must be > 0", name, r.HeatCapacity)
		}
		if !(r.Conductivity.Reference > 0) {
			return fmt.Errorf("%s: conductivity %g W/m/K, must be > 0", name, r.Conductivity.Reference)
		}
		if r.Density == nil {
			return fmt.Errorf("%s: no density", name)
		}
		ev.nonlinear = max(ev.nonlinear, abs(r.Conductivity.PerKelvin))
		if r.Density.NeedsTemperature() {
			ev.nonlinear = max(ev.nonlinear, 1e-4)
		}
		return nil
	}
	for i := range ev.column.Layers {
		if err := check(ev.column.Layers[i].Name, &ev.column.Layers[i].Rock); err != nil {
			return fmt.Errorf("heat: %w", err)
		}
	}
	if ev.open {
		if err := check("base", &ev.base.Rock); err != nil {
			return fmt.Errorf("heat: %w", err)
		}
	}
	for i := range events {
		if e := &events[i]; e.Verb == "intrude" || e.Verb == "bury" {
			if err := check(e.Name, &e.Rock); err != nil {
				return e.mistake(i, err)
			}
		}
	}
	return nil
}

// lay makes the layers' first cells, of the start's mean temperatures.
func (ev *Evolution) lay(start *Profile) {
	c := ev.column
	each := ev.depth0 / float64(ev.points)
	ev.cells = make([]cell, 0, 4*ev.points)
	ev.spare = make([]cell, 0, 4*ev.points)
	for j := range c.Layers {
		l := &c.Layers[j]
		p := &start.Layers[j]
		s := newStratum(l.Name, l.Rock, l.Root, l.Thickness)
		n := int(math.Max(leastEach, math.Ceil(l.Thickness/each)))
		d := l.Thickness / float64(n)
		s.lo = len(ev.cells)
		for i := range n {
			z := p.Top + (p.Bottom-p.Top)*float64(i)/float64(n)
			dz := (p.Bottom - p.Top) / float64(n)
			Ta, _, _ := p.At(z)
			Tm, Pm, _ := p.At(z + dz/2)
			Tb, _, _ := p.At(z + dz)
			k := cell{layer: j, x: (float64(i) + 0.5) / float64(n), T: (Ta + 4*Tm + Tb) / 6, P: Pm}
			if s.react != nil {
				k.X = s.react.Extent
			}
			k.m = d * s.bulk(s.density(k.T, k.P, k.x, k.X), k.T, k.P)
			top := d * float64(i)
			k.H = (l.HeatProduction.Integral(top+d) - l.HeatProduction.Integral(top)) / k.m
			k.e, _ = s.enthalpy(k.T, k.P)
			ev.cells = append(ev.cells, k)
		}
		s.hi = len(ev.cells)
		ev.strata = append(ev.strata, s)
	}
	for i := range ev.cells {
		ev.touch(&ev.cells[i])
	}
}

// restart makes the mesh and the first step fit what a jump has made of the column.
func (ev *Evolution) restart() error {
	ev.streams = ev.streams[:0] // of the step before
	ev.w.run, ev.w.sourced = ev.rate != 0, false
	if err := ev.refine(); err != nil {
		return err
	}
	n := len(ev.cells)
	ev.two.size(n)
	ev.one.size(n)
	ev.w.size(n)
	if err := ev.rates(); err != nil {
		return err
	}
	fastest := ev.tolerance / 1e16
	for i := range ev.cells {
		c := &ev.cells[i]
		fastest = max(fastest, abs(ev.f0[i])/(c.m*ev.strata[c.layer].c))
	}
	ev.fresh = false
	ev.h = 10 * ev.tolerance / fastest
	return nil
}
