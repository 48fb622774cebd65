package plots

import "math"

// scale maps values to the unit interval.
type scale struct {
	lo, hi float64 // lo < hi; both > 0 on a log scale
	log    bool
	down   bool // lo at the top or the right
}

// linear returns a scale from lo to hi, widened where they are the same.
func linear(lo, hi float64) scale {
	if hi < lo {
		lo, hi = hi, lo
	}
	if least := 1e-9 * math.Max(math.Abs(lo), math.Abs(hi)); hi-lo <= least {
		d := 0.1 * math.Max(math.Abs(hi), least)
		if d == 0 {
			d = 1
		}
		lo, hi = lo-d, hi+d
	}
	return scale{lo: lo, hi: hi}
}

// padded returns a linear scale with room of share times its range at both ends.
func padded(lo, hi, share float64) scale {
	s := linear(lo, hi)
	d := share * (s.hi - s.lo)
	return scale{lo: s.lo - d, hi: s.hi + d}
}

// logarithmic returns a log scale from lo to hi, widened where they are the same and
// cut at a millionth of hi where lo is not positive. Without a positive hi it is 0.1 to 10.
func logarithmic(lo, hi float64) scale {
	if hi < lo {
		lo, hi = hi, lo
	}
	if !(hi > 0) {
		return scale{lo: 0.1, hi: 10, log: true}
	}
	lo = math.Max(lo, hi*1e-6)
	if hi/lo < 1.02 {
		lo, hi = lo/1.5, hi*1.5
	}
	return scale{lo: lo, hi: hi, log: true}
}

// at returns v's place: 0 at lo, 1 at hi (the other way about where the scale runs
// down). It is NaN where a log scale cannot show v.
func (s scale) at(v float64) float64 {
	var u float64
	switch {
	case !s.log:
		u = (v - s.lo) / (s.hi - s.lo)
	case v <= 0:
		return math.NaN()
	default:
		u = math.Log(v/s.lo) / math.Log(s.hi/s.lo)
	}
	if s.down {
		return 1 - u
	}
	return u
}

// has reports whether v lies on the scale, its ends included.
func (s scale) has(v float64) bool {
	u := s.at(v)
	return u >= -1e-9 && u <= 1+1e-9
}

// bounds returns the least and largest of the finite values; ok is false without one.
func bounds(values ...[]float64) (lo, hi float64, ok bool) {
	lo, hi = math.Inf(1), math.Inf(-1)
	for _, vs := range values {
		for _, v := range vs {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				continue
			}
			lo, hi, ok = math.Min(lo, v), math.Max(hi, v), true
		}
	}
	return lo, hi, ok
}
