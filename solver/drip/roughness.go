package drip

import "math"

// Roughness is how the undulation of the root's base at time 0 depends on wavelength. Its
// zero value is white: Settings.Amplitude at every wavelength. Otherwise, with Exponent,
// it is red,
//
//	a(λ) = Amplitude · (λ/At)^Exponent,
//
// or with Wavelength a table of amplitudes, both in m, wavelengths increasing, log-log
// linear between them. Beyond a table's ends there is no undulation.
type Roughness struct {
	Exponent, At          float64
	Wavelength, Amplitude []float64
}

// AmplitudeAt returns the amplitude in m that an undulation of a wavelength in m starts
// with; 0 beyond the ends of a table.
func (set *Settings) AmplitudeAt(wavelength float64) float64 {
	r := &set.Rough
	switch n := len(r.Wavelength); {
	case n > 0:
		if wavelength < r.Wavelength[0] || wavelength > r.Wavelength[n-1] {
			return 0
		}
		for i := 1; i < n; i++ {
			if w := r.Wavelength; wavelength <= w[i] {
				t := math.Log(wavelength/w[i-1]) / math.Log(w[i]/w[i-1])
				return r.Amplitude[i-1] * math.Pow(r.Amplitude[i]/r.Amplitude[i-1], t)
			}
		}
		return r.Amplitude[0]
	case r.Exponent != 0:
		return set.Amplitude * math.Pow(wavelength/r.At, r.Exponent)
	}
	return set.Amplitude
}

// Trace is one wavelength's undulation of the root's base through time, until it drips
// or is not followed any further.
type Trace struct {
	Time       []float64 // s, increasing
	Wavelength []float64 // m, then: it moves with the stretch
	Base       []float64 // |displacement| of the root's base, m
	StrainRate []float64 // 1/s, second invariant of the drip's own strain rate, the largest at the root's base; nil where not asked for
	Stress     []float64 // Pa, second invariant of its stress there; nil with StrainRate
	Background []float64 // 1/s, second invariant of the background's strain rate; nil with StrainRate
}
