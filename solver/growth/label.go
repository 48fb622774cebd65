package growth

import (
	"fmt"
	"math"
)

// Label says in the trade's words what moves in a mode: "root drips"; "counterflow"
// (root down, buoyant layer below it up); "surface-driven"; "lid folds" or "lid necks"
// (the background strain does most of the work); "thermal" (temperature perturbations
// do); "graded layer overturns"; or the contact that drives it. rootBase is the
// interface below the lowest root layer, −1 without a root; depths are those of the
// interfaces in m. A mode that decays says so.
func (m *Mode) Label(rootBase int, depths []float64) string {
	what := m.moves(rootBase, depths)
	if m.Growth < 0 && what != "surface relaxes" && what != "decays" && what != "heat diffuses" {
		what += ", decaying"
	}
	return what
}

// moves says what moves, growing or not.
func (m *Mode) moves(rootBase int, depths []float64) string {
	if m.WorkShare == nil || m.DissipationShare == nil {
		return "neutral"
	}
	total := func(x []float64) (sum float64) {
		for _, v := range x {
			sum += v
		}
		return sum
	}
	driver := 0
	for i, w := range m.WorkShare {
		if w > m.WorkShare[driver] {
			driver = i
		}
	}
	strain, heat, grade, contact := total(m.StrainShare), total(m.ThermalWork), total(m.GradientWork), m.WorkShare[driver]
	switch most := math.Max(math.Max(strain, heat), math.Max(grade, contact)); {
	case m.Growth <= 0 && m.WorkShare[0] > 0.5:
		return "surface relaxes"
	case m.Growth <= 0 && heat > 0.5:
		return "heat diffuses"
	case most <= 0:
		return "decays"
	case m.shear != 0 && m.Growth > 0 && m.Growth <= m.vertical:
		return "carried by thickening" // its own dynamics decay
	case most == strain:
		if m.shear > 0 {
			return "lid necks"
		}
		return "lid folds"
	case most == heat:
		return "thermal"
	case most == grade:
		return "graded layer overturns"
	case driver == 0:
		return "surface-driven"
	case driver != rootBase:
		return fmt.Sprintf("contact at %.4g km sinks", depths[driver]/1e3)
	}
	// the root sinks; does something below it rise as it does?
	for i := rootBase + 1; i < len(m.Displacement); i++ {
		if m.Displacement[i]*m.Displacement[rootBase] < 0 && math.Abs(m.Displacement[i]) > 0.3*math.Abs(m.Displacement[rootBase]) {
			return "counterflow"
		}
	}
	return "root drips"
}

// Depths returns the depths of a column's interfaces, surface first, m.
func (c *Column) Depths() []float64 {
	d := []float64{0}
	for i := range c.Layers {
		d = append(d, d[i]+c.Layers[i].Thickness)
	}
	return d
}
