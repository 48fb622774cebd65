// Package excision computes how shear zones cut a root out of a column.
package excision

// Zone is one shear zone with a given slip rate.
type Zone struct {
	Name        string
	Dip         float64  // rad, 0 < dip <= π/2
	LayeringDip float64  // rad, towards the zone's dip direction
	Cuts        []string // names of the layers it cuts out, in order
	From, To    float64  // s, active interval
	SlipRate    float64  // m/s
	Width       float64  // m, normal to the zone; 0 where not given
}

// History is one zone or the sum of all, against time.
type History struct {
	Time          []float64 // s
	RootThickness []float64 // m, in the column the zones cross
	ArcMean       []float64 // m, averaged over the arc's original width; nil without a width
	Slip, Heave   []float64 // m, summed over zones
	Throw         []float64 // m
	RootMassShare []float64 // share of the root's initial mass that is gone, 0 to 1
}

// Result is the answer to: when has excision taken the asked share of the root?
type Result struct {
	Outcome            string  // "excised", "window" or "no zones"
	Time               float64 // s; +Inf where it does not happen
	Share              float64 // the share of the root's mass asked for
	Slip, Heave, Throw float64 // m, at Time, or at the window's end
	ExtensionDemanded  float64 // heave over the arc's width at that moment; 0 without a width
	CutThroughTime     float64 // s until the root is wholly gone; +Inf where never
	CutThroughSlip     float64 // m
	CutThroughHeave    float64 // m
	ArcMeanTime        float64 // s until the arc mean has lost the share; +Inf where never or no width
	PressureGap        float64 // Pa missing across the zones at Time
	History            History
	Warnings           []string
}
