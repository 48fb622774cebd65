// Package drip follows undulations of the root's base until they drip.
package drip

// Settings say what counts as a drip.
type Settings struct {
	Amplitude float64 // a₀ on the base of the lowest root layer, m
	Criterion float64 // drip when the tip has descended by Criterion × root thickness
	Window    float64 // s
	Removes   float64 // share of the root's mass one drip takes
	Spectrum  string  // "white": a₀ the same at all wavelengths
	Softening string  // "none" in this version
}

// Curve is the drip time at every wavelength.
type Curve struct {
	Wavelength []float64 // m
	Time       []float64 // s; +Inf where it never drips within 1000 windows
}

// Result is the answer to: when does the root drip?
type Result struct {
	Outcome           string  // "drips", "window" or "buoyant"
	Time              float64 // s; +Inf where never
	Wavelength        float64 // m, of the first drip
	InitialWavelength float64 // m
	TimeLow, TimeHigh float64 // s, for the amplitude × 3 and ÷ 3
	SpacingFrom       float64 // m: wavelengths whose drips would follow within 10 %
	SpacingTo         float64
	EFoldStart        float64 // s, e-folding time of the root's base at the drip's wavelength, leading mode
	StrainRate        float64 // 1/s, largest second invariant in the root at the start (amplitude a₀)
	StrainRateEnd     float64 // 1/s, the same at the drip
	Curve             Curve
	History           Amplitude // of the first drip
	Excluded          string    // wavelengths that were computed and not used, in words
	Reason            string
	Warnings          []string
}

// Amplitude is one wavelength's amplitude against time.
type Amplitude struct {
	Time []float64 // s
	Base []float64 // |displacement| of the root's base, m
}
