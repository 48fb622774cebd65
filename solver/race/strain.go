package race

import (
	"math"

	"keelfall/solver/drip"
	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// StrainRate returns the second invariant at which creep is evaluated, 1/s: that of the
// background where the column is strained, the reference rate elsewhere.
func (p *Problem) StrainRate() float64 {
	if e := math.Abs(p.Strain.ExtensionRate); e > 0 {
		return e
	}
	return p.Strain.ReferenceRate
}

// GrowthColumn returns what the growth solver needs of a prepared column: strained as
// the problem says, with its thermal buoyancy.
func GrowthColumn(p *Problem, s *state.State) *growth.Column {
	b := drip.Background{ExtensionRate: p.Strain.ExtensionRate, AlongStrike: p.Strain.Wavevector == AlongStrike}
	return drip.Strained(s, b, p.ThermalBuoyancy)
}
