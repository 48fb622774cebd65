package drip

import (
	"fmt"
	"math"

	"keelfall/solver/state"
)

// Thermal is what perturbations of temperature, T' = 0 at the start and carried and
// diffused since, make of a drip time in linear theory.
type Thermal struct {
	Mode string // "frozen" or "diffusive", as in Strained
	// s: the drip times of linear theory without T', at its own best wavelength, and with
	// it, near that. +Inf: does not drip in the time that was looked at.
	Without, With float64
	Included      bool // Time and its band are those with T'; else they leave it out
}

// Ratio is With/Without.
func (t *Thermal) Ratio() float64 { return t.With / t.Without }

// Words says in a clause what T' does to the drip time.
func (t *Thermal) Words() string {
	change, kept := math.Abs(t.Ratio()-1), "it is left out"
	if t.Included {
		kept = "it is counted"
	}
	switch verb := map[bool]string{true: "lengthen", false: "shorten"}[t.With > t.Without]; {
	case math.IsInf(t.With, 1):
		return "heat carried along would keep it from dripping in linear theory; " + kept
	case change < 0.0005:
		return "heat carried along changes its time by less than 0.1 % in linear theory"
	case t.Included:
		return fmt.Sprintf("heat carried along %ss its time by %.2g %%, from %.4g Myr in linear theory", verb, 100*change, t.Without/1e6/year)
	default:
		return fmt.Sprintf("heat carried along would %s its time by %.2g %% in linear theory; %s", verb, 100*change, kept)
	}
}

// mayWarm says whether a column's temperature, perturbed, changes its densities.
func (set *Settings) mayWarm(s *state.State) bool {
	if set.Thermal == "" || set.Thermal == "none" || !s.HasTemperature {
		return false
	}
	c := s.Column
	for i := range c.Layers {
		if needsTemperature(c, i) {
			return true
		}
	}
	return false
}

// neighbour is the ratio of the wavelengths between which the first drip with T' is looked
// for.
const neighbour = 1.1

// farthest is how many neighbours onwards it is looked for.
const farthest = 24

// warmBest looks for the wavelength up to limit that drips first with T': from one that
// does so without, its neighbours, onwards while they are quicker, and where a parabola
// through the three has its least. The times are those of the quickest for each amplitude.
func warmBest(times func(wavelength float64) ([3]float64, error), wavelength, limit float64) (t [3]float64, best float64, err error) {
	for i := range t {
		t[i] = math.Inf(1)
	}
	ask := func(w float64) (float64, error) {
		got, err := times(w)
		if got[1] < t[1] {
			best = w
		}
		for i := range t {
			t[i] = math.Min(t[i], got[i])
		}
		return got[1], err
	}
	var v [3]float64 // shorter, at, longer
	for i, w := range [3]float64{wavelength / neighbour, wavelength, math.Min(limit, wavelength*neighbour)} {
		if v[i], err = ask(w); err != nil {
			return t, best, err
		}
	}
	at := wavelength
	for range farthest {
		switch {
		case v[0] < v[1] && v[0] <= v[2]:
			at /= neighbour
			v[2], v[1] = v[1], v[0]
			v[0], err = ask(at / neighbour)
		case v[2] < v[1] && at*neighbour < limit:
			at *= neighbour
			v[0], v[1] = v[1], v[2]
			v[2], err = ask(math.Min(limit, at*neighbour))
		default:
			curve := v[0] - 2*v[1] + v[2]
			if x := (v[0] - v[2]) / (2 * curve); curve > 0 && math.Abs(x) <= 1 && at*neighbour <= limit {
				_, err = ask(at * math.Pow(neighbour, x))
			}
			return t, best, err
		}
		if err != nil {
			break
		}
	}
	return t, best, err
}

// warmed makes the times those with T', with the first and the last wavelength of the
// answer; Unrestricted is moved in proportion.
func (r *Result) warmed(t [3]float64, first, last, window float64) {
	r.Unrestricted.Time *= t[1] / r.Time
	r.TimeLow, r.Time, r.TimeHigh = t[0], t[1], t[2]
	switch {
	case math.IsInf(r.Time, 1):
		r.Outcome, r.Reason = "window", "does not drip, though it would if its undulation carried no heat along"
		return
	case r.Time > window:
		r.Outcome, r.Reason = "window", "it would drip, but only after the window has closed"
	case r.Outcome == "window":
		r.Outcome, r.Reason = "drips", "the heat that its undulation carries along brings it down before the window closes"
	}
	if r.Unrestricted.Wavelength == r.Wavelength {
		r.Unrestricted.Wavelength = last
	}
	r.InitialWavelength, r.Wavelength = first, last
}
