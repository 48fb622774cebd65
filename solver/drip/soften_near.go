package drip

import (
	"context"
	"math"
)

// nearStep is the ratio of the wavelengths that a quick search looks at. A drip time is
// a parabola in ln λ over so short a stretch, to a few parts in 1e4 (tested).
const nearStep = 1.25

// around returns the best estimate of the drip time in s at the wavelength, near a given one
// and between from and to (m), at which the closure's own time is least: where the parabola
// of its ln against ln λ through three wavelengths has its vertex, the three moved until the
// one in the middle is the quickest. +Inf where none of them drips before the horizon.
func (q *softSearch) around(ctx context.Context, near, from, to float64) (float64, error) {
	near = math.Min(math.Max(near, from), to)
	if near*nearStep*nearStep > to && to > from*nearStep {
		near = to / nearStep // the longest there may be is one of those looked at
	}
	quickest := math.Inf(1)
	at := func(i int) (lnTimes, error) {
		w := near * math.Pow(nearStep, float64(i))
		if w < from/1.0001 || w > to*1.0001 {
			return lnTimes{math.Inf(1), math.Inf(1)}, nil
		}
		d, err := q.follow(ctx, w, quickest)
		quickest = math.Min(quickest, d.Time)
		return lnTimes{math.Log(d.Time), math.Log(q.best(d))}, err
	}
	var y [3]lnTimes // by increasing wavelength
	var err error
	for _, j := range []int{1, 0, 2} {
		if y[j], err = at(j - 1); err != nil {
			return 0, err
		}
	}
	for i := 0; ; {
		switch {
		case y[0].slow < y[1].slow && y[0].slow <= y[2].slow && i > -mostShifts:
			i--
			y[2], y[1] = y[1], y[0]
			y[0], err = at(i - 1)
		case y[2].slow < y[1].slow && i < mostShifts:
			i++
			y[0], y[1] = y[1], y[2]
			y[2], err = at(i + 1)
		default:
			return math.Exp(vertex(y)), nil
		}
		if err != nil {
			return 0, err
		}
	}
}

// mostShifts is how many times nearStep the search may go.
const mostShifts = 12

// lnTimes are ln of the closure's own time and of the best estimate.
type lnTimes struct{ slow, best float64 }

// vertex is ln of the best estimate where the parabola through the slow times is least; in
// the middle where there is no such parabola.
func vertex(y [3]lnTimes) float64 {
	bend := y[0].slow - 2*y[1].slow + y[2].slow
	if !(bend > 0) || math.IsInf(bend, 1) {
		return y[1].best
	}
	x := (y[0].slow - y[2].slow) / (2 * bend)
	return y[1].best + x*(y[2].best-y[0].best)/2 + x*x*(y[0].best-2*y[1].best+y[2].best)/2
}
