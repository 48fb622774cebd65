package race

import (
	"context"
	"math"

	"keelfall/solver/state"
)

// Undulation is a drip time for one initial undulation.
type Undulation struct {
	Amplitude float64 // m, at the first drip's wavelength
	Time      float64 // s; +Inf where it never drips, or was not followed so far
}

// How many undulations are tried, by what a drip time costs, and the least of them.
const (
	manyUndulations   = 25
	fewUndulations    = 7
	fewestUndulations = 5
	leastUndulation   = 50.0 // m
)

// TimeAgainstAmplitude returns the drip time for undulations from 50 m to the root's
// thickness times the criterion, the whole spectrum scaled together. first is the first
// drip's wavelength in m at the start.
func TimeAgainstAmplitude(ctx context.Context, p *Problem, s *state.State, first float64) ([]Undulation, error) {
	n := manyUndulations
	switch {
	case p.Moving() && p.softens():
		n = fewestUndulations
	case p.Moving() || p.softens():
		n = fewUndulations
	}
	used := p.Drip.AmplitudeAt(first)
	tip := p.Drip.Criterion * p.Column.RootThickness()
	from, to := math.Min(leastUndulation, used/4), 0.9*tip
	if !(used > 0) || !(to > from) {
		return nil, nil
	}
	var out []Undulation
	for i := range n {
		a := from
		if i > 0 { // even in ln ln(tip/a): so is ln of the time that one mode takes
			x := math.Log(tip / from)
			a = tip * math.Exp(-x*math.Pow(math.Log(tip/to)/x, float64(i)/float64(n-1)))
		}
		q := *p
		q.Drip = p.Drip.Scaled(a / used)
		t, err := q.dripTime(ctx, s, first, 0)
		if err != nil {
			return nil, err
		}
		out = append(out, Undulation{a, t})
	}
	return out, nil
}
