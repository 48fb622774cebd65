package race

import "math"

// trial is a verdict's outcome, and ln of the drip time over the time at which another
// outcome begins: it changes its sign where the drip decides, and guides the search.
type trial struct {
	outcome string
	late    float64
}

// nearestWidth is half the last of three printed digits of a logarithm's number.
const nearestWidth = 1e-3

// nearest returns the x of smallest |x| up to most at which the outcome is another than
// at 0, and that outcome; "" where there is none. Steps grow outwards on both sides in
// turn; then the interval is narrowed to nearestWidth. The x returned is on the far side
// of the change.
func nearest(look func(float64) trial, now trial, most float64) (x float64, to string) {
	lo := 0.0
	last := map[float64]trial{1: now, -1: now}
	for step := 0.1; lo < most; step *= 2 {
		hi := math.Min(lo+step, most)
		for _, sign := range []float64{1, -1} {
			there := look(sign * hi)
			if there.outcome == now.outcome {
				last[sign] = there
				continue
			}
			b, outcome := narrow(func(x float64) trial { return look(sign * x) }, now.outcome, lo, hi, last[sign], there)
			if to == "" || b < math.Abs(x) {
				x, to = sign*b, outcome
			}
		}
		if to != "" {
			return x, to
		}
		lo = hi
	}
	return 0, ""
}

// narrow returns the far end of an interval nearestWidth wide, between a and b, in which
// the outcome stops being now, and the outcome there. It looks a little to either side of
// where the straight line through both ends is 0, and in the middle where that is of no
// use.
func narrow(look func(float64) trial, now string, a, b float64, at, bt trial) (float64, string) {
	for i := 0; b-a > nearestWidth; i++ {
		mid := (a + b) / 2
		if f := at.late / (at.late - bt.late); at.late*bt.late < 0 && !math.IsInf(at.late, 0) && !math.IsInf(bt.late, 0) && i%4 != 3 {
			s := a + f*(b-a)
			if aside := 0.45 * nearestWidth; b-s > s-a {
				mid = math.Min(s+aside, mid)
			} else {
				mid = math.Max(s-aside, mid)
			}
		}
		if t := look(mid); t.outcome != now {
			b, bt = mid, t
		} else {
			a, at = mid, t
		}
	}
	return b, bt.outcome
}
