package race

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"math"
	"slices"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/excision"
	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// ErrInput marks what is wrong with the experiment rather than with the computation.
var ErrInput = errors.New("the experiment cannot be run")

// Prepare returns the state of p's column at its strain rate; the state keeps a copy of
// the column that knows the sense of the strain.
func Prepare(p *Problem) (*state.State, error) {
	c := p.Column
	c.Sense = float64(cmp.Compare(p.Strain.ExtensionRate, 0))
	s, err := state.New(&c, p.StrainRate())
	if err != nil {
		return nil, fmt.Errorf("%w: %w", ErrInput, err)
	}
	return s, nil
}

// Spectrum returns growth against wavelength of a prepared column.
func Spectrum(ctx context.Context, p *Problem, s *state.State) (*growth.Spectrum, error) {
	return growth.Compute(ctx, GrowthColumn(p, s), growth.Options{From: p.SpectrumFrom, To: p.SpectrumTo, Workers: p.Workers})
}

// Limit returns the longest wavelength in m that the arc has room for and what that
// is, in words: the arc's length along strike, its width along the stretch; 0 where
// the experiment does not give it.
func (p *Problem) Limit() (float64, string) {
	switch {
	case p.Strain.Wavevector == AlongStrike && p.ArcLength > 0:
		return p.ArcLength, fmt.Sprintf("the arc's length, %.3g km", p.ArcLength/1e3)
	case p.Strain.Wavevector == AlongStretch && p.ArcWidth > 0:
		return p.ArcWidth, fmt.Sprintf("the arc's width, %.3g km", p.ArcWidth/1e3)
	}
	return 0, ""
}

func (p *Problem) dripOptions() drip.Options {
	o := drip.Options{From: p.SpectrumFrom, To: p.SpectrumTo, Workers: p.Workers}
	o.Limit, o.LimitIs = p.Limit()
	return o
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
	return RunSaying(ctx, p, func(string) {})
}

// RunSaying is Run; it calls say with what is computed next, in words.
func RunSaying(ctx context.Context, p *Problem, say func(string)) (*Result, error) {
	if err := p.zonesStill(); err != nil {
		return nil, err
	}
	_, _, root := p.Column.RootSpan()
	if root {
		if err := p.canDrip(); err != nil {
			return nil, err
		}
	} else if len(p.Zones) > 0 {
		return nil, fmt.Errorf("%w: shear zones but no layer marked root: true", ErrInput)
	}
	say("the column")
	s, err := Prepare(p)
	if err != nil {
		return nil, err
	}
	r := &Result{Problem: p, State: s, Warnings: Warnings(p, s)}
	say("growth against wavelength")
	if r.Spectrum, err = Spectrum(ctx, p, s); err != nil {
		return nil, err
	}
	if !root {
		r.Limits = p.limits(Peeling{}, nil)
		r.Verdict.Time, r.Verdict.Margin, r.Verdict.MarginLog10Viscosity = math.Inf(1), math.Inf(1), math.Inf(1)
		r.Verdict.WindowMargin = math.Inf(1)
		r.Warnings = append(r.Warnings, "no layer is marked root: true, so growth is computed and no fate is judged")
		return r, nil
	}
	say("the drip")
	if r.Drip, err = Drip(ctx, p, s); err != nil {
		return nil, err
	}
	if t := r.Drip.Thermal; t != nil && t.Included && !math.IsInf(t.With, 1) {
		own := *p
		own.warmth = t.Ratio()
		p, r.Problem = &own, &own
	}
	if r.Excision, err = ExciseStudy(ctx, p, s); err != nil {
		return nil, err
	}
	r.peeling()
	r.Limits = p.limits(r.Peeling, r.Drip.Thermal)
	say("the drip at other strain rates")
	if err := r.strainRates(ctx); err != nil {
		return nil, err
	}
	if err := r.study(ctx, say); err != nil {
		return nil, err
	}
	r.Warnings = append(r.Warnings, r.Drip.Warnings...)
	r.Warnings = append(r.Warnings, r.Excision.Warnings...)
	r.judge()
	if err := r.flips(ctx, say); err != nil {
		return nil, err
	}
	return r, nil
}

// Warnings returns what a prepared column is warned about, whatever is asked of it.
func Warnings(p *Problem, s *state.State) []string {
	w := append(slices.Clone(s.Warnings), p.measured(s)...)
	if p.Strain.ExtensionRate == 0 && !p.softens() && drip.RateDependent(s) {
		w = append(w, fmt.Sprintf("stress exponents above 1, nothing that strains the column and no softening by the drip: viscosities are isotropic, those of the reference rate of %.3g 1/s", s.StrainRate))
	}
	return w
}

// softens says whether the drip's own strain rate softens its rock: asked for, and some
// rock's viscosity depends on it.
func (p *Problem) softens() bool {
	if p.Drip.Softening != "self" {
		return false
	}
	c := &p.Column
	stiff := c.Base.Boundary != column.HalfSpace || drip.Newtonian(&c.Base.Rock)
	for i := range c.Layers {
		stiff = stiff && drip.Newtonian(&c.Layers[i].Rock)
	}
	for i := range p.Events {
		e := &p.Events[i]
		stiff = stiff && (len(e.Names()) == 0 || drip.Newtonian(&e.Rock))
	}
	return !stiff
}
