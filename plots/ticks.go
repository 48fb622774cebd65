package plots

import (
	"math"
	"strconv"
)

// tick is a mark on an axis; an empty label makes it a short one.
type tick struct {
	at    float64
	label string
}

// linearTicks returns ticks at 1, 2 or 5 times a power of ten within s, as many as fit
// says there is room for. Where that leaves fewer than two labels, a few more ticks are
// drawn and only the first and the last are labelled.
func linearTicks(s scale, fits func([]tick) bool) []tick {
	var best []tick
	step := niceStep((s.hi - s.lo) / 25)
	for range 12 {
		if best = steps(s, step); fits(best) {
			break
		}
		step = niceStep(step * 1.5)
	}
	if len(best) >= 2 {
		return best
	}
	for _, parts := range []float64{4, 8} {
		all := steps(s, niceStep((s.hi-s.lo)/parts))
		for i := 1; i < len(all)-1; i++ {
			all[i].label = ""
		}
		if len(all) >= 2 && fits([]tick{all[0], all[len(all)-1]}) {
			return all
		}
	}
	return best[:min(len(best), 1)]
}

// niceStep returns the least 1, 2 or 5 times a power of ten that is >= v; 1 where v is
// not a positive number.
func niceStep(v float64) float64 {
	if !(v > 0) || math.IsInf(v, 1) {
		return 1
	}
	p := math.Pow(10, math.Floor(math.Log10(v)))
	for _, m := range []float64{1, 2, 5} {
		if m*p >= v*(1-1e-9) {
			return m * p
		}
	}
	return 10 * p
}

// steps returns a tick at every multiple of step within s.
func steps(s scale, step float64) []tick {
	digits := max(0, int(-math.Floor(math.Log10(step)+1e-9)))
	first, last := math.Ceil(s.lo/step-1e-6), math.Floor(s.hi/step+1e-6)
	var out []tick
	for i := first; i <= last && len(out) < 100; i++ {
		v := i * step
		if !s.has(v) {
			continue
		}
		label := sign(i) + strconv.FormatFloat(math.Abs(v), 'f', digits, 64)
		if big := math.Max(math.Abs(s.lo), math.Abs(s.hi)); big >= 1e5 || digits > 4 {
			label = number(v, 4)
		}
		out = append(out, tick{v, label})
	}
	return out
}

// logTicks returns ticks on a log scale: linear steps over less than a factor of
// three, 1-2-5 over less than two decades (or where wide asks for it and there is
// room), else powers of ten; with unlabelled ticks between. It is empty where the
// scale is not positive.
func logTicks(s scale, wide bool, fits func([]tick) bool) []tick {
	if !(s.lo > 0) || !(s.hi > s.lo) || math.IsInf(s.hi, 1) {
		return nil
	}
	decades := math.Log10(s.hi / s.lo)
	if decades < math.Log10(3) {
		return linearTicks(s, fits)
	}
	if decades < 2 || wide {
		for _, mantissas := range [][]float64{{1, 2, 5}, {1, 3}, {1}} {
			if t := decadeTicks(s, mantissas); len(t) >= 2 && fits(t) {
				return withMinor(s, t)
			}
		}
	}
	for every := 1; every < 40; every++ {
		var t []tick
		for e := math.Ceil(math.Log10(s.lo) - 1e-9); e <= math.Log10(s.hi)+1e-9; e++ {
			if int(e)%every == 0 {
				t = append(t, tick{math.Pow(10, e), power(int(e))})
			}
		}
		if fits(t) {
			return withMinor(s, t)
		}
	}
	return nil
}

// decadeTicks returns a labelled tick at every mantissa of every decade within s.
func decadeTicks(s scale, mantissas []float64) []tick {
	var out []tick
	for e := math.Floor(math.Log10(s.lo)); e <= math.Log10(s.hi); e++ {
		for _, m := range mantissas {
			if v := m * math.Pow(10, e); s.has(v) {
				out = append(out, tick{v, number(v, 2)})
			}
		}
	}
	return out
}

// withMinor adds unlabelled ticks at 2 to 9 of every decade, over up to six decades.
func withMinor(s scale, major []tick) []tick {
	if math.Log10(s.hi/s.lo) > 6 {
		return major
	}
	for _, t := range decadeTicks(s, []float64{1, 2, 3, 4, 5, 6, 7, 8, 9}) {
		major = append(major, tick{at: t.at})
	}
	return major
}
