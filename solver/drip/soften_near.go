package drip

import (
	"context"
	"math"
)

// nearStep is the ratio of the wavelengths that a quick search looks at. A drip time is
// a parabola in ln λ over so short a stretch, to a few parts in 1e4 (tested).
const nearStep = 1.25

// around returns the best estimate of the quickest drip time in s near a wavelength,
// between from and to (m): the vertex of the parabola of ln t against ln λ through three
// wavelengths, moved until the one in the middle is the quickest. +Inf where none of the
// three drips before the horizon.
func (q *softSearch) around(ctx context.Context, near, from, to float64) (float64, error) {
	near = math.Min(math.Max(near, from), to)
	if near*nearStep*nearStep > to && to > from*nearStep {
		near = to / nearStep // the longest there may be is one of those looked at
	}
	quickest := math.Inf(1)
	at := func(i int) (float64, error) {
		w := near * math.Pow(nearStep, float64(i))
		if w < from/1.0001 || w > to*1.0001 {
			return math.Inf(1), nil
		}
		d, err := q.follow(ctx, w, quickest)
		quickest = math.Min(quickest, d.Time)
		return math.Log(q.best(d)), err
	}
	var y [3]float64
	for j := range y {
		var err error
		if y[j], err = at([]int{0, -1, 1}[j]); err != nil {
			return 0, err
		}
	}
	y[0], y[1] = y[1], y[0] // by increasing wavelength
	for i := 0; ; {
		var err error
		switch {
		case y[0] < y[1] && y[0] <= y[2] && i > -8:
			i--
			y[2], y[1] = y[1], y[0]
			y[0], err = at(i - 1)
		case y[2] < y[1] && i < 8:
			i++
			y[0], y[1] = y[1], y[2]
			y[2], err = at(i + 1)
		default:
			least := math.Min(y[1], math.Min(y[0], y[2]))
			if bend := y[0] - 2*y[1] + y[2]; bend > 0 && !math.IsInf(bend, 1) {
				least = math.Min(least, y[1]-(y[2]-y[0])*(y[2]-y[0])/(8*bend))
			}
			return math.Exp(least), nil
		}
		if err != nil {
			return 0, err
		}
	}
}
