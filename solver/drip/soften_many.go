package drip

import (
	"context"
	"math"
)

// Descents follows undulations of many wavelengths (m) as Time does. One is dropped as
// soon as it has taken margin times as long as the quickest so far (margin >= 1; +Inf
// drops none): it cannot win, and its Time is then +Inf, margin × the quickest at least.
// Every eighth goes first, so that a quick one is found early.
func (f *Soft) Descents(ctx context.Context, wavelengths []float64, amplitude, stop, horizon, margin float64) ([]Descent, error) {
	out := make([]Descent, len(wavelengths))
	quickest := math.Inf(1)
	const stride = 8
	for _, first := range []bool{true, false} {
		for i, l := range wavelengths {
			if (i%stride == stride/2) != first {
				continue
			}
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			limit := math.Min(horizon, math.Max(margin, 1)*quickest)
			d, err := f.Time(2*math.Pi/l, amplitude, stop, limit)
			if err != nil {
				return nil, err
			}
			d.Wavelength = l
			d.Dropped = limit < horizon && math.IsInf(d.Time, 1)
			quickest = math.Min(quickest, d.Time)
			out[i] = d
		}
	}
	return out, nil
}
