package heat

import (
	"fmt"
	"math"

	"keelfall/column"
)

// Plan is what Begin needs.
type Plan struct {
	Column        *column.Column // at the start; not modified
	Start         *Profile       // its temperatures at the start; nil: Solve's
	ExtensionRate float64        // background, 1/s, in force wherever no stretch event is
	Events        []Event        // any number, in any order
	Markers       []Marker
	Tolerance     float64 // error of a time step, K; 0: 0.1
	Points        int     // cells of the whole column, about; 0: 300

	// SurfaceTemperature, where not nil, is the surface temperature in K against time in
	// s, in place of the column's constant one.
	SurfaceTemperature func(t float64) float64
}

// Flux is rock that comes or goes at a layer's edge, all the time until set again.
type Flux struct {
	Layer       string
	AtTop       bool    // at the layer's top, else at its base
	Rate        float64 // m/s of the thickness it has there; > 0 comes, < 0 goes
	Temperature float64 // K, of rock that comes; 0: the temperature there
}

// Source is heat released on a plane, by a shear zone.
type Source struct {
	BaseOf string  // at the base of this layer; "": at Depth
	Depth  float64 // m, now; it stays with the depth, not with the rock
	Power  float64 // W/m² of map area
	Height float64 // m, of the rock around the plane that the heat is spread over, evenly; 0: the plane
}

// Energy is every term of the balance since the start, J per m² of the column's area
// at the time each is counted. Missing is
//
//	Stored − (Conducted + Produced + Given + Compression + FromBelow + Added)
//	       + Surface + Sideways + Taken
//
// and Moved the sum of all the sizes, step by step, that it is to be compared with.
type Energy struct {
	Stored      float64 // gain of c_p T + L φ
	Surface     float64 // conducted out through the surface
	Conducted   float64 // conducted in through the base
	Produced    float64 // radioactive heat
	Given       float64 // sources set with Heat
	Compression float64 // α T dP/dt: adiabatic warming
	FromBelow   float64 // brought in by rock of the base, net
	Added       float64 // brought in by rock added elsewhere: sheets, sediment, cumulates
	Taken       float64 // carried out by rock taken: erosion, removal, excision
	Sideways    float64 // carried out by stretching
	Missing     float64
	Moved       float64
}

// Mass is the same balance of mass, kg/m².
type Mass struct {
	Stored, FromBelow, Added, Taken, Sideways, Missing, Moved float64
}

// Path is where a marker has been.
type Path struct {
	Name              string
	Layer             string    // the layer it is in, or was last
	Time, Depth, T, P []float64 // s, m, K, Pa; times increase
	Ended             bool      // it is no longer in the column, from the last time on
	Reason            string    // why: "eroded", "removed with the lower crust"
	Peak              float64   // hottest, K
	Deepest           float64   // highest pressure, Pa
}

// Snapshot is the column at one time.
type Snapshot struct {
	Time    float64
	Column  *column.Column
	Profile *Profile
}

// History is a run to the end. The lists against time have one value a step.
type History struct {
	Time            []float64       // s
	SurfaceFlow     []float64       // W/m²
	RootBase        []float64       // temperature at the root's base, K; 0 where there is no root
	RootThickness   []float64       // m
	Depth           []float64       // of the column's own rock, without what came in below, m
	MeltFraction    []float64       // the largest volume fraction anywhere
	Reacted         []float64       // reacted share of the mass of the root's two-state rocks (of all, without a root)
	Weight          []column.Weight // of the column, rock of the base that came in included
	Snapshots       []Snapshot
	Paths           []Path
	Energy          Energy
	Mass            Mass
	Steps, Rejected int
	Warnings        []string
}

var inf = math.Inf(1)

// inMyr writes a time in a message.
func inMyr(t float64) string { return fmt.Sprintf("%.4g Myr", t/myr) }
