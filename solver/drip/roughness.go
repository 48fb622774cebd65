package drip

import (
	"fmt"
	"math"
	"slices"
)

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

// check refuses what is no spectrum.
func (r *Roughness) check() error {
	for i, w := range r.Wavelength {
		if len(r.Amplitude) != len(r.Wavelength) {
			return fmt.Errorf("drip: %d amplitudes of undulations for %d wavelengths", len(r.Amplitude), len(r.Wavelength))
		}
		if !(w > 0) || i > 0 && !(w > r.Wavelength[i-1]) || math.IsInf(w, 0) {
			return fmt.Errorf("drip: undulation %d has a wavelength of %g m; they must be positive and increase", i+1, w)
		}
		if a := r.Amplitude[i]; !(a > 0) || math.IsInf(a, 0) {
			return fmt.Errorf("drip: the undulation of %g m wavelength has an amplitude of %g m; must be positive", w, a)
		}
	}
	if r.Exponent != 0 && (!(r.At > 0) || math.IsInf(r.At, 0) || math.IsNaN(r.Exponent) || math.IsInf(r.Exponent, 0)) {
		return fmt.Errorf("drip: undulations grow with wavelength to the power %g from %g m on", r.Exponent, r.At)
	}
	return nil
}

// White says whether the undulation has the same amplitude at every wavelength.
func (set *Settings) White() bool { return set.Rough.Exponent == 0 && len(set.Rough.Wavelength) == 0 }

// Scaled returns the settings with every amplitude multiplied by m.
func (set Settings) Scaled(m float64) Settings {
	set.Amplitude *= m
	set.Rough.Amplitude = slices.Clone(set.Rough.Amplitude)
	for i := range set.Rough.Amplitude {
		set.Rough.Amplitude[i] *= m
	}
	return set
}

// Least returns the smallest amplitude in m of a table, else Amplitude.
func (set *Settings) Least() float64 {
	if len(set.Rough.Amplitude) > 0 {
		return slices.Min(set.Rough.Amplitude)
	}
	return set.Amplitude
}

// Dripped says whether the undulation already is the drip at the start, at every
// wavelength that has one: it reaches tip, in m.
func (set *Settings) Dripped(tip float64) bool { return set.Rough.Exponent == 0 && set.Least() >= tip }

// Start is AmplitudeAt, or 0 where that already reaches stop, in m, at which it has
// dripped: in a spectrum that is not white such a wavelength is the base's own shape, and
// not an undulation that could drip.
func (set *Settings) Start(wavelength, stop float64) float64 {
	if a := set.AmplitudeAt(wavelength); a < stop || set.White() {
		return a
	}
	return 0
}

// within cuts a range of wavelengths to that of a table, where they meet.
func (set *Settings) within(from, to float64) (float64, float64) {
	if w := set.Rough.Wavelength; len(w) > 0 {
		a, b := math.Max(from, w[0]), math.Min(to, w[len(w)-1])
		if b > a {
			return a, b
		}
	}
	return from, to
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
