package race

import "math"

// nearest returns the x of smallest |x| up to most at which outcome is another than
// now, and that outcome; "" where there is none. Steps grow outwards on both sides in
// turn; then the interval is halved to 1e-3, half the last of three printed digits of
// a logarithm's number. The x returned is on the far side of the change.
func nearest(outcome func(float64) string, now string, most float64) (x float64, to string) {
	const width = 1e-3
	lo := 0.0
	for step := 0.1; lo < most; step *= 1.6 {
		hi := math.Min(lo+step, most)
		for _, sign := range []float64{1, -1} {
			there := outcome(sign * hi)
			if there == now {
				continue
			}
			a, b := lo, hi
			for b-a > width {
				mid := (a + b) / 2
				if o := outcome(sign * mid); o != now {
					b, there = mid, o
				} else {
					a = mid
				}
			}
			if to == "" || b < math.Abs(x) {
				x, to = sign*b, there
			}
		}
		if to != "" {
			return x, to
		}
		lo = hi
	}
	return 0, ""
}
