package race

import (
	"fmt"
	"math"

	"keelfall/column"
	"keelfall/solver/drip"
)

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

// words says what the screen for peeling found.
func (v Peeling) words() string {
	if v.Viscosity == 0 {
		return "peeling from an edge (delamination) is outside one dimension, and is not excluded"
	}
	weakest := fmt.Sprintf("the weakest rock above the root, %s at 10^%.1f Pa s", v.Layer, math.Log10(v.Viscosity))
	if v.Possible {
		return "peeling from an edge (delamination) is possible by Bird's criterion: " + weakest +
			", is not stiffer than 1e18 Pa s (Bird 1979); it is outside one dimension"
	}
	return "peeling from an edge (delamination) is not expected by Bird's criterion (" + weakest +
		", is stiffer than 1e18 Pa s; Bird 1979), and is not excluded: it is outside one dimension"
}

// thermalLimit says how far the heat that an undulation carries along counts; thermal is
// what it makes of the drip, nil where that is not known.
func (p *Problem) thermalLimit(thermal *drip.Thermal) string {
	switch {
	case p.ThermalBuoyancy == "none":
		return "thermal buoyancy of the undulation is left out: there, rock keeps the density of its composition"
	case thermal == nil:
		return "thermal buoyancy of the undulation counts for the growth rates (" + p.ThermalBuoyancy + ") and not for the drip, which is looked for by composition alone: heat might bring down what that does not"
	case !thermal.Included:
		return "thermal buoyancy of the undulation counts for the growth rates (" + p.ThermalBuoyancy + ") and is left out of the drip, whose softening does not know it; " + thermal.Words()
	case p.Moving():
		return "thermal buoyancy of the undulation counts for the drip near the wavelength that goes first without it; the times of all other wavelengths, and where the first drip is looked for, are without it, and what the answer hangs on has it by its ratio"
	}
	return "thermal buoyancy of the undulation counts for the drip near the wavelength that goes first without it; the times of all other wavelengths, and where the first drip is looked for, are without it"
}

// limits says what this computation leaves out; thermal is what heat makes of the drip.
func (p *Problem) limits(peel Peeling, thermal *drip.Thermal) []string {
	l := []string{
		"linear theory carried to a full drip: about 10 % slow for Newtonian rock beside two-dimensional solutions (ratio 0.89 to 0.93, derived)",
	}
	if p.Moving() {
		l = append(l, "heat, reaction, strain and events go on while the root drips; nothing is followed beyond twice the window, and the verdict's clock stops at the first drip")
		if len(p.Zones) > 0 {
			l = append(l, "the root drips as if no zone cut it, and the zones cut it as if nothing dripped")
		}
	} else {
		frozen := "the column is frozen: no cooling, heating, reaction, melting or stretching while the root drips or is cut"
		if p.followsZones() {
			frozen = "the root drips in a frozen column, as if no zone cut it: no cooling, heating, reaction, melting or stretching; the zones are followed through a column that changes"
		}
		l = append(l, frozen, "one drip only: what one drip removes stands in for the share that counts as removal")
	}
	var soft, warm bool
	for i := range p.Column.Layers {
		soft = soft || !drip.Newtonian(&p.Column.Layers[i].Rock)
		warm = warm || p.Column.Layers[i].Density.NeedsTemperature()
	}
	switch b := &p.Column.Base; b.Boundary {
	case column.HalfSpace:
		soft = soft || !drip.Newtonian(&b.Rock)
		warm = warm || b.Density.NeedsTemperature()
	case column.Inviscid:
		warm = warm || b.Density.NeedsTemperature()
	}
	if p.softens() {
		l[0] = "softening by the drip itself: the variational closure of one harmonic, too slow by 2 to 32 % in rate for n of 2 to 5, which the best estimate puts right with what two-dimensional solutions showed for uniform rock over a fluid; so it does for the finite amplitude of a full drip (derived)"
		if p.Strain.ExtensionRate != 0 {
			l[0] += "; beside a background's strain rate the shortfall is interpolated, and checked by nothing"
		}
	} else if soft && p.Strain.ExtensionRate != 0 {
		l = append(l, "power-law softening by the drip itself is left out: viscosities are those of the background strain rate, with the tangent response of power-law rock; once the drip strains its rock faster than the background, it drips sooner")
	} else if soft {
		l = append(l, "power-law softening by the drip itself is left out: viscosities are isotropic, at the reference strain rate; rock drips sooner or later than that as its own strain rate is above or below it")
	}
	if warm {
		l = append(l, p.thermalLimit(thermal))
	}
	return append(l, peel.words(), "subduction drag and the third dimension are left out")
}
