package heat

// Event is one thing that happens to the column. Verb says which; the fields that
// the verb does not use are zero. Times are seconds of model time.
type Event struct {
	Verb        string  // intrude, accumulate, stretch, erode, bury, change-base or remove
	Name, Layer string  // of the new rock; the layer acted on or intruded below
	From, To    float64 // s; equal for what happens at once
	Rate        float64 // m/s, or 1/s for stretch
	Thickness   float64 // m
	Temperature float64 // K
	Share       float64 // removed share
	Times       int     // repeats
	Every       float64 // s between repeats
}

// Marker is a point carried with the rock, at a depth or at a layer's base.
type Marker struct {
	Name, BaseOf string
	Depth        float64 // m
}

// Clock is a closure-temperature system read at a marker (Dodson 1973).
type Clock struct {
	Name, Marker     string
	ActivationEnergy float64 // J/mol
	Diffusivity      float64 // m²/s
	Radius           float64 // m
	Geometry         string  // sphere, cylinder or sheet
}
