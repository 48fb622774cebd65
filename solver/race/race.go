// Package race holds a whole experiment in SI and sets its two fates against each
// other: does the root drip first, or is it cut out first?
package race

import (
	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/excision"
	"keelfall/solver/heat"
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
	ThermalBuoyancy     string  // "none", "frozen" or "diffusive"
	warmth              float64 // drip time with perturbations of temperature over that without, of the run; 0: not known
	Drip                drip.Settings
	SpectrumFrom        float64 // m; 0: chosen from the layers
	SpectrumTo          float64 // m
	Zones               []excision.Zone
	Removed             float64    // share of the root that counts as its removal
	GeothermFit         *heat.Fit  // Column's geotherm as fitted to samples; nil where it was not; not to be changed
	Measured            []Measured // layers that came from measured sections
	Events              []heat.Event
	Markers             []heat.Marker
	Clocks              []heat.Clock
	Reference           *Reference // elevation and potential energy are measured against it
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
