// Package race holds a whole experiment in SI and sets its two fates against each
// other: does the root drip first, or is it cut out first?
package race

import (
	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/excision"
	"keelfall/solver/growth"
	"keelfall/solver/heat"
	"keelfall/solver/state"
)

// Wavevector says along which direction the undulation varies.
type Wavevector int

// Along the stretch (across the arc), or along the arc's strike.
const (
	AlongStretch Wavevector = iota
	AlongStrike
)

// Strain is the background deformation of the whole column.
type Strain struct {
	ExtensionRate float64 // 1/s, positive in extension
	Wavevector    Wavevector
	ReferenceRate float64 // 1/s, at which creep is evaluated where nothing moves
}

// Problem is a whole experiment in SI. Sections whose solver is not in this version
// stay empty; configs refuses them.
type Problem struct {
	Title, Notes        string
	Column              column.Column
	ArcWidth, ArcLength float64 // m; 0 where not given
	HasTimeZero         bool
	TimeZero            float64 // s, age of model time 0
	Strain              Strain
	ThermalBuoyancy     string // "none", "frozen" or "diffusive"
	Drip                drip.Settings
	SpectrumFrom        float64 // m; 0: chosen from the layers
	SpectrumTo          float64 // m
	Zones               []excision.Zone
	Removed             float64 // share of the root that counts as its removal
	Events              []heat.Event
	Markers             []heat.Marker
	Clocks              []heat.Clock
	Reference           *column.Column // elevation and potential energy are measured against it
	ReferenceElevation  float64        // m
	Reversal            []Range
	EvolvedCrust        float64 // m; 0 where no budget is asked
	ResidueShare        float64
	Observations        []Observation
	Defaults            []Default // every default taken, in the order of the contract
	Workers             int       // 0: as many as there are cores
}

// Default is one default that was taken because the experiment is silent.
type Default struct {
	Key, Value string
	Starred    bool // bears on the verdict and nobody has measured it
}

// Range is a key's bounds for a reversal.
type Range struct {
	Key      string
	From, To float64 // SI
	Log      bool
}

// Observation is something measured that a run can be held against.
type Observation struct {
	Quantity, Marker, Clock string
	At                      float64 // s
	Value, Error            float64 // SI
	Between                 [2]float64
}

// Result is everything a run found.
type Result struct {
	Problem  *Problem
	State    *state.State
	Growth   *growth.Column
	Spectrum *growth.Spectrum
	Drip     *drip.Result
	Excision *excision.Result
	Verdict  Verdict
	Warnings []string
	Limits   []string // what the method leaves out, in words
}

// Shares are the parts of the root's initial mass that each mechanism took.
type Shares struct{ Drip, Excision float64 }

// Flip is the value of one quantity at which the verdict changes, all else equal.
type Flip struct {
	Key, Label string
	From, To   float64
	Unit       string // of From and To: "x" for a factor, else SI
	Found      bool
	Decides    bool // the flip nearest to the value used
}

// Verdict says which fate comes first, by what margin and why. Times are +Inf where
// the thing does not happen within the search; reports print null.
type Verdict struct {
	Outcome              string  // "dripped", "excised", "both" or "preserved"
	Time                 float64 // s
	Margin               float64 // s between the first and the next thing that would stop the clock
	MarginLog10Viscosity float64 // log₁₀ factor of root viscosity that flips the verdict; ±Inf where none within 3
	Shares               Shares  // in the user's column
	ArcMean              Shares  // averaged over the arc
	Share                float64 // share of the root's mass at which the clock stops
	Reasons              []string
	Sentence             string
	Flips                []Flip
}
