package race

import (
	"context"
	"errors"
	"fmt"
	"math"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/excision"
	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// ErrInput marks what is wrong with the experiment rather than with the computation.
var ErrInput = errors.New("the experiment cannot be run")

// Prepare returns the state of p's column at its reference strain rate.
func Prepare(p *Problem) (*state.State, error) {
	s, err := state.New(&p.Column, p.Strain.ReferenceRate)
	if err != nil {
		return nil, fmt.Errorf("%w: %w", ErrInput, err)
	}
	return s, nil
}

// Spectrum returns growth against wavelength of a prepared column.
func Spectrum(ctx context.Context, p *Problem, s *state.State) (*growth.Spectrum, error) {
	return growth.Compute(ctx, drip.Model(s), growth.Options{From: p.SpectrumFrom, To: p.SpectrumTo, Workers: p.Workers})
}

// Drip returns when the root of a prepared column drips.
func Drip(ctx context.Context, p *Problem, s *state.State) (*drip.Result, error) {
	if err := p.rootCanMove(); err != nil {
		return nil, err
	}
	return drip.Solve(ctx, s, p.Drip, p.dripOptions())
}

// rootCanMove refuses a root on a wall: nothing could drip from it.
func (p *Problem) rootCanMove() error {
	_, last, ok := p.Column.RootSpan()
	if !ok {
		return fmt.Errorf("%w: %w", ErrInput, drip.ErrNoRoot)
	}
	if last == len(p.Column.Layers)-1 && p.Column.Base.Boundary != column.HalfSpace && p.Column.Base.Boundary != column.Inviscid {
		return fmt.Errorf("%w: the root lies on a wall that cannot move; give it a half-space or inviscid base, or a layer below", ErrInput)
	}
	return nil
}

func (p *Problem) dripOptions() drip.Options {
	o := drip.Options{From: p.SpectrumFrom, To: p.SpectrumTo, Workers: p.Workers}
	if p.Strain.Wavevector == AlongStrike && p.ArcLength > 0 {
		o.Limit, o.LimitIs = p.ArcLength, fmt.Sprintf("the arc's length, %.0f km", p.ArcLength/1e3)
	}
	if p.Strain.Wavevector == AlongStretch && p.ArcWidth > 0 {
		o.Limit, o.LimitIs = p.ArcWidth, fmt.Sprintf("the arc's width, %.0f km", p.ArcWidth/1e3)
	}
	return o
}

// Excise returns when the zones have taken the verdict's share of the root.
func Excise(p *Problem, s *state.State) (*excision.Result, error) {
	r, err := excision.Solve(p.Zones, p.excisionSetting(s))
	if err != nil {
		return nil, fmt.Errorf("%w: %w", ErrInput, err)
	}
	return r, nil
}

func (p *Problem) excisionSetting(s *state.State) excision.Setting {
	set := excision.Setting{Gravity: p.Column.Gravity, ArcWidth: p.ArcWidth, Share: p.Share(), Window: p.Drip.Window}
	for i := range p.Column.Layers {
		l := &p.Column.Layers[i]
		set.Layers = append(set.Layers, excision.Layer{Name: l.Name, Thickness: l.Thickness, Density: meanDensity(s, i), Root: l.Root})
	}
	return set
}

// meanDensity returns a layer's mean in-situ density, kg/m³.
func meanDensity(s *state.State, layer int) float64 {
	var mass float64
	pts := s.Layers[layer].Points
	for i := 1; i < len(pts); i++ {
		mass += (pts[i].Depth - pts[i-1].Depth) * (pts[i].Density + pts[i-1].Density) / 2
	}
	return mass / (pts[len(pts)-1].Depth - pts[0].Depth)
}

// Share is the part of the root's mass at which the verdict's clock stops. Only one
// drip is computed in this version, so what one drip removes stands in for the share
// that counts as removal.
func (p *Problem) Share() float64 { return p.Drip.Removes }

// Run does the whole job: state, spectrum, both fates, verdict.
func Run(ctx context.Context, p *Problem) (*Result, error) {
	s, err := Prepare(p)
	if err != nil {
		return nil, err
	}
	r := &Result{Problem: p, State: s}
	if r.Spectrum, err = Spectrum(ctx, p, s); err != nil {
		return nil, err
	}
	r.Warnings = append(r.Warnings, s.Warnings...)
	r.Limits = p.limits()
	if _, _, ok := p.Column.RootSpan(); !ok {
		if len(p.Zones) > 0 {
			return nil, fmt.Errorf("%w: shear zones but no layer marked root: true", ErrInput)
		}
		r.Verdict.Time, r.Verdict.Margin, r.Verdict.MarginLog10Viscosity = math.Inf(1), math.Inf(1), math.Inf(1)
		r.Warnings = append(r.Warnings, "no layer is marked root: true, so growth is computed and no fate is judged")
		return r, nil
	}
	if r.Drip, err = Drip(ctx, p, s); err != nil {
		return nil, err
	}
	if r.Excision, err = Excise(p, s); err != nil {
		return nil, err
	}
	r.peeling()
	if err := r.strainRates(ctx); err != nil {
		return nil, err
	}
	r.Warnings = append(r.Warnings, r.Drip.Warnings...)
	r.Warnings = append(r.Warnings, r.Excision.Warnings...)
	r.judge()
	if err := r.flips(ctx); err != nil {
		return nil, err
	}
	return r, nil
}

// RateDependent says whether any viscosity of the column depends on strain rate.
func RateDependent(s *state.State) bool {
	const newtonian = 1 + 1e-6
	for _, l := range s.Layers {
		for _, p := range l.Points {
			if p.Exponent > newtonian {
				return true
			}
		}
	}
	return s.Base.Exponent > newtonian
}

// strainRates holds the drip's own strain rate against the reference rate, and
// computes the drip time at three times and a third of that.
func (r *Result) strainRates(ctx context.Context) error {
	p := r.Problem
	r.Rate = RateBand{Used: RateDependent(r.State), AtThrice: math.Inf(1), AtOneThird: math.Inf(1)}
	if !r.Rate.Used {
		r.Rate.AtThrice, r.Rate.AtOneThird = r.Drip.Time, r.Drip.Time
		return nil
	}
	if !math.IsInf(r.Drip.Time, 1) {
		start, end, ref := r.Drip.StrainRate, r.Drip.StrainRateEnd, p.Strain.ReferenceRate
		if end > 3*ref || end < ref/3 || start > 3*ref || start < ref/3 {
			r.Warnings = append(r.Warnings, fmt.Sprintf(
				"the drip's own strain rate in the root goes from %.1e to %.1e 1/s, the viscosities are for %.1e 1/s: more than a factor of 3 apart, and the rock is not Newtonian",
				start, end, ref))
		}
	}
	for _, f := range []float64{3, 1.0 / 3} {
		q := *p
		q.Strain.ReferenceRate *= f
		t, err := dripTime(ctx, &q, r.Drip.Wavelength)
		if err != nil {
			return err
		}
		if f > 1 {
			r.Rate.AtThrice = t
		} else {
			r.Rate.AtOneThird = t
		}
	}
	return nil
}

// dripTime returns the drip time of a problem alone; near, where not 0, is a
// wavelength in m to look around.
func dripTime(ctx context.Context, p *Problem, near float64) (float64, error) {
	s, err := Prepare(p)
	if err != nil {
		return 0, err
	}
	o := p.dripOptions()
	o.Near = near
	return drip.Time(ctx, s, p.Drip, o)
}

// peeling looks for the weakest rock above the root.
func (r *Result) peeling() {
	first, _, _ := r.Problem.Column.RootSpan()
	weakest := math.Inf(1)
	for i := range first {
		for _, p := range r.State.Layers[i].Points {
			if p.Viscosity < weakest {
				weakest = p.Viscosity
				r.Peeling = Peeling{r.Problem.Column.Layers[i].Name, p.Viscosity, p.Viscosity <= BirdViscosity}
			}
		}
	}
}

// limits says what this computation leaves out.
func (p *Problem) limits() []string {
	l := []string{
		"linear theory carried to a full drip: about 10 % slow for Newtonian rock beside two-dimensional solutions (ratio 0.89 to 0.93, derived)",
		"the column is frozen: no cooling, heating, reaction, melting or stretching while the root drips or is cut",
		"one drip only: what one drip removes stands in for the share that counts as removal",
	}
	for i := range p.Column.Layers {
		v := &p.Column.Layers[i].Viscosity
		if v.Creep != nil || v.Exponent > 1 {
			l = append(l, "power-law softening of the root by its own drip is left out: viscosities are isotropic, at the reference strain rate")
			break
		}
	}
	for i := range p.Column.Layers {
		if p.Column.Layers[i].Density.NeedsTemperature() {
			l = append(l, "thermal buoyancy of the undulation is left out: rock keeps the density of its composition at the contact")
			break
		}
	}
	return append(l,
		"peeling from an edge (delamination), subduction drag and the third dimension are outside one dimension")
}
