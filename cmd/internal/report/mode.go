package report

import (
	"fmt"
	"math"

	"keelfall/solver/growth"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

// RootBase returns the interface below the lowest root layer, −1 without a root.
func RootBase(s *state.State) int {
	if _, last, ok := s.Column.RootSpan(); ok {
		return last + 1
	}
	return -1
}

// ModesJSON is what `keelfall mode` prints.
type ModesJSON struct {
	Wavelength number     `json:"wavelength_m"`
	Modes      []modeJSON `json:"modes"`
	Warnings   []string   `json:"warnings"`
}

type modeJSON struct {
	Label      string            `json:"label"`
	Growth     number            `json:"growth_rate_per_s"`
	Imaginary  number            `json:"imaginary_per_s"`
	EFold      number            `json:"efold_time_s"`
	Residual   number            `json:"budget_residual"`
	Layers     []modeLayerJSON   `json:"layers"`
	Interfaces []modeContactJSON `json:"interfaces"`
	Profile    profileJSON       `json:"profile"`
}

type modeLayerJSON struct {
	layerShareJSON
	Gradient number `json:"gradient_work_share"`
	Thermal  number `json:"thermal_work_share"`
}

type modeContactJSON struct {
	contactWorkJSON
	Strain number `json:"strain_work_share"`
}

type profileJSON struct {
	Depth  []number `json:"depth_m"`
	W      []number `json:"vertical_velocity_per_s"`
	U      []number `json:"horizontal_velocity_per_s"`
	Shear  []number `json:"shear_stress_Pa_per_m"`
	Normal []number `json:"normal_stress_Pa_per_m"`
}

// valueAt returns x[i], no value where it is not there.
func valueAt(x []float64, i int) number {
	if i < len(x) {
		return number(x[i])
	}
	return none
}

// Modes returns the modes of s at one wavelength.
func Modes(s *state.State, wavelength float64, modes []*growth.Mode, warnings []string) ModesJSON {
	j := ModesJSON{number(wavelength), []modeJSON{}, list(warnings)}
	depths := depthsOf(s)
	for _, m := range modes {
		q := modeJSON{Label: m.Label(RootBase(s), depths), Growth: number(m.Growth), Imaginary: number(m.Imaginary),
			EFold: number(efold(m.Growth)), Residual: number(m.Residual),
			Profile: profileJSON{numbers(m.Depth), numbers(m.W), numbers(m.U), numbers(m.Shear), numbers(m.Normal)}}
		for i := 0; i <= len(s.Column.Layers); i++ {
			name := "base"
			if i < len(s.Column.Layers) {
				name = s.Column.Layers[i].Name
			}
			q.Layers = append(q.Layers, modeLayerJSON{
				layerShareJSON{name, valueAt(m.DissipationShare, i), valueAt(m.DlnqDlnEta, i), valueAt(m.DqDrho, i), valueAt(m.DqDh, i)},
				valueAt(m.GradientWork, i), valueAt(m.ThermalWork, i)})
		}
		for i := range s.Jumps {
			q.Interfaces = append(q.Interfaces, modeContactJSON{
				contactWorkJSON{number(depths[i]), valueAt(m.WorkShare, i), valueAt(m.Displacement, i), number(s.Jumps[i])},
				valueAt(m.StrainShare, i)})
		}
		j.Modes = append(j.Modes, q)
	}
	return j
}

func depthsOf(s *state.State) []float64 {
	d := []float64{0}
	for i := range s.Column.Layers {
		d = append(d, d[i]+s.Column.Layers[i].Thickness)
	}
	return d
}

// rateWords says a growth rate, with its oscillation where it has one.
func rateWords(m *growth.Mode) string {
	w := fmt.Sprintf("%s 1/Myr", sig(m.Growth*Myr, 4))
	if m.Growth > 0 {
		w += ", e-folding time " + myr(1/m.Growth)
	}
	if m.Imaginary != 0 {
		w += fmt.Sprintf(", oscillating with a period of %s", myr(2*math.Pi/m.Imaginary))
	}
	return w
}

// ModesPage is the text of `keelfall mode`: every growing mode, one in full.
func ModesPage(p *race.Problem, s *state.State, wavelength float64, modes []*growth.Mode, which int) string {
	pg := titled(p)
	depths := depthsOf(s)
	pg.section("MODES")
	pg.say("At a wavelength of %s km, fastest first:", sig(wavelength/km, 5))
	for i, m := range modes {
		pg.line("%2d  %s: %s", i+1, m.Label(RootBase(s), depths), rateWords(m))
	}
	if len(modes) == 1 && modes[0].Growth <= 0 {
		pg.say("Nothing grows at this wavelength; that is the slowest decay.")
	}
	m := modes[which]
	pg.section(fmt.Sprintf("MODE %d", which+1))
	pg.say("How far each contact moves, the furthest 1; the work that gravity and the background strain do there, in %% of the dissipation:")
	pg.line("%10s  %-24s  %12s  %12s  %12s", "depth km", "contact", "moves", "gravity %", "strain %")
	most := 0.0
	for _, x := range m.Displacement {
		if math.Abs(x) > math.Abs(most) {
			most = x
		}
	}
	if most == 0 {
		most = 1
	}
	for i := range s.Jumps {
		name := "surface"
		switch {
		case i == len(s.Column.Layers):
			name = "base"
		case i > 0:
			name = s.Column.Layers[i-1].Name + " on " + s.Column.Layers[i].Name
		}
		pg.line("%10s  %-24s  %12.3f  %12s  %12s", sig(depths[i]/km, 4), cut(name, 24), math.Round(1000*m.Displacement[i]/most)/1000+0, percentAt(m.WorkShare, i), percentAt(m.StrainShare, i))
	}
	if w := shares(s, m); w != "" {
		pg.say("Resistance: %s.", w)
	}
	for _, part := range []struct {
		what string
		work []float64
	}{{"gradients of composition", m.GradientWork}, {"temperature perturbations", m.ThermalWork}} {
		var sum float64
		for _, v := range part.work {
			sum += v
		}
		if math.Abs(sum) > 5e-4 {
			pg.say("Work done by gravity on %s: %.1f %% of the dissipation.", part.what, 100*sum)
		}
	}
	controls(pg, s, m, nil)
	return pg.b.String()
}

func percentAt(x []float64, i int) string {
	if i < len(x) {
		return fmt.Sprintf("%.1f", math.Round(1000*x[i])/10+0)
	}
	return "-"
}
