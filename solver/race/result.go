package race

import (
	"keelfall/solver/drip"
	"keelfall/solver/excision"
	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// Result is everything a run found. Drip and Excision are nil where no layer is
// marked as root.
type Result struct {
	Problem  *Problem
	State    *state.State
	Spectrum *growth.Spectrum
	Drip     *drip.Result
	Excision *excision.Result
	Verdict  Verdict
	Rate     RateBand
	Peeling  Peeling
	Warnings []string
	Limits   []string // what the method leaves out, in words
}

// RateBand is the drip time at three times and a third of the reference strain rate.
// Used says whether any viscosity depends on it.
type RateBand struct {
	Used                 bool
	AtThrice, AtOneThird float64 // s; +Inf where never
}

// Peeling screens for delamination from an edge, which one dimension cannot show:
// the weakest rock above the root.
type Peeling struct {
	Layer     string
	Viscosity float64 // Pa s; 0 where nothing lies above the root
	Possible  bool    // weaker than BirdViscosity
}

// BirdViscosity is the viscosity in Pa s below which a weak layer lets the mantle
// peel away: 1e19 poise, Bird 1979, J. Geophys. Res. 84, 7561 (abstract).
const BirdViscosity = 1e18

// Shares are the parts of the root's initial mass that each mechanism took.
type Shares struct{ Drip, Excision float64 }

// Flip is the value of one quantity at which the verdict changes, all else equal.
type Flip struct {
	Key, Label string
	From, To   float64
	Unit       string  // of From and To: "x" a factor, else SI
	Found      bool    // a flip lies within the bounds searched
	Distance   float64 // |Δ ln p|, for a temperature ΔT/100 K
	Default    bool    // the value in use is a default that nobody has measured
}

// Verdict says which fate comes first, by what margin and why. Times are +Inf where
// the thing does not happen; reports print null.
type Verdict struct {
	Outcome              string  // "dripped", "excised", "both" or "preserved"; "" without a root
	Time                 float64 // s, when the clock stops
	Margin               float64 // s between the first and the next thing that would stop the clock
	MarginLog10Viscosity float64 // log₁₀ factor of root viscosity that flips the verdict; +Inf where none within 3
	Share                float64 // share of the root's mass at which the clock stops
	Shares               Shares  // in the user's column, at Time
	ArcMean              Shares  // averaged over the arc; Excision 0 without a width
	Sentence             string
	Reasons              []string
	Flips                []Flip // by increasing distance; those not found last
}

// Decider returns the flip nearest to the values in use; ok is false where none was
// found.
func (v *Verdict) Decider() (Flip, bool) {
	if len(v.Flips) == 0 || !v.Flips[0].Found {
		return Flip{}, false
	}
	return v.Flips[0], true
}
