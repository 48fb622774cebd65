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
	Study    Study
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
	Key, Label               string   // several of the user's names in one key are joined by +
	Keys                     []Change // what to set in the experiment, all together; nil where no key says it
	From, To                 float64  // the value in use and the one at which the verdict changes
	Unit                     string   // of From and To: "x" a factor, else SI
	Found                    bool     // a change lies within what was searched
	Outcome                  string   // the verdict's outcome at To; "" where not found
	at                       float64  // the change in units of the search, signed
	Distance                 float64  // |Δ ln p|; for a density |Δρ|/100 kg/m³, a temperature |ΔT|/100 K, a slip rate from 0 in mm/yr
	Searched                 string   // how far either way, in words: "× 1000"
	Default                  bool     // the value in use is a default that nobody has measured
	HasContrast              bool     // for a density: the contrast with what lies below the root, kg/m³
	ContrastFrom, ContrastTo float64
}

// Change is one value of the experiment to set instead of the one in use.
type Change struct {
	Key, Unit string // unit "x" for a factor, else SI
	From, To  float64
}

// Verdict says which fate comes first, by what margin and why. Times are +Inf where
// the thing does not happen; reports print null.
type Verdict struct {
	Outcome                string  // "dripped", "excised", "both" or "preserved"; "" without a root
	Time                   float64 // s, when the clock stops
	Margin                 float64 // s from Time to the other fate, or to the first one after the window
	MarginTo               string  // what that is: "drip" or "excision"
	WindowMargin           float64 // s from Time to the window's end
	MarginLog10Viscosity   float64 // log₁₀ factor of root viscosity that changes the verdict; +Inf where none within 3
	MarginViscosityOutcome string  // the verdict's outcome then
	Share                  float64 // share of the root's mass at which the clock stops
	Shares                 Shares  // in the user's column, at Time
	ArcMean                Shares  // averaged over the arc; Excision 0 without a width
	Sentence               string
	Reasons                []string
	Flips                  []Flip // by increasing distance; those not found last
}

// Decider returns the flip nearest to the values in use; ok is false where none was
// found.
func (v *Verdict) Decider() (Flip, bool) {
	if len(v.Flips) == 0 || !v.Flips[0].Found {
		return Flip{}, false
	}
	return v.Flips[0], true
}
