package report

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// Control is what one stated change of one layer does to a mode, all else held: from
// exact derivatives, made comparable.
type Control struct {
	Layer      string `json:"layer"`
	What       string `json:"what"`           // viscosity, density or thickness
	Change     string `json:"change"`         // what it is changed by
	Rate       number `json:"dlnq"`           // relative change of the growth rate
	Wavelength number `json:"dln_wavelength"` // of the fastest wavelength; null for another mode
}

// Controls ranks what controls a mode by its effect on the growth rate: viscosity and
// thickness + 10 %, density + 10 kg/m³, each alone. shift, where not nil, says how the
// fastest wavelength moves.
func Controls(s *state.State, m *growth.Mode, shift *growth.Shift) []Control {
	out := []Control{}
	if m == nil || m.Growth == 0 {
		return out
	}
	var none growth.Shift
	if shift == nil {
		shift = &none
	}
	for i := 0; i <= len(s.Column.Layers); i++ {
		name, h := "half-space", 0.0
		if i < len(s.Column.Layers) {
			name, h = s.Column.Layers[i].Name, s.Column.Layers[i].Thickness
		}
		add := func(what, change string, rate, moved []float64, step, perRate float64) {
			if i < len(rate) {
				out = append(out, Control{name, what, change, number(step * rate[i] / perRate), number(step * float64(valueAt(moved, i)))})
			}
		}
		q := math.Abs(m.Growth)
		add("viscosity", "+ 10 %", m.DlnqDlnEta, shift.DlnEta, 0.1, 1)
		add("density", "+ 10 kg/m3", m.DqDrho, shift.Drho, 10, q)
		add("thickness", "+ 10 %", m.DqDh, shift.Dh, 0.1*h, q)
	}
	slices.SortStableFunc(out, func(a, b Control) int {
		return cmp.Compare(math.Abs(float64(b.Rate)), math.Abs(float64(a.Rate)))
	})
	return out
}

// controls writes the ranked list, effects of half a percent and more.
func controls(pg *page, s *state.State, m *growth.Mode, shift *growth.Shift) {
	all := Controls(s, m, shift)
	if len(all) == 0 {
		return
	}
	if math.Abs(float64(all[0].Rate)) < 5e-3 {
		return
	}
	pg.section("CONTROLS")
	pg.say("What a change of one layer does, all else held (exact derivatives; viscosities, temperatures and density jumps as they are):")
	last := ""
	if shift != nil {
		last = "wavelength"
	}
	pg.line("%-28s %-10s %-11s %9s %11s", "", "", "", "rate", last)
	base := false
	for i, c := range all {
		if i == 10 || math.Abs(float64(c.Rate)) < 5e-3 {
			break
		}
		base = base || c.Layer == "half-space"
		moved := ""
		if shift != nil && !math.IsNaN(float64(c.Wavelength)) {
			moved = fmt.Sprintf("%+.1f %%", 100*float64(c.Wavelength))
		}
		if math.Abs(float64(c.Rate)) > 0.3 { // the derivative is exact, the step is not small
			moved += "  (for small changes only)"
		}
		pg.line("%-28s %-10s %-11s %+7.1f %% %11s", cut(c.Layer, 28), c.What, c.Change, 100*float64(c.Rate), moved)
	}
	if base {
		pg.say("The half-space counts by itself; where the file leaves its rock out, it follows the last layer.")
	}
}
