package drip

import (
	"context"
	"errors"
	"math"
)

// fits says whether a drip is within the limit on wavelength.
func (q *softThrough) fits(w *softWave) bool {
	return q.o.Limit <= 0 || w.last <= q.o.Limit*(1+1e-9)
}

// search follows wavelengths between from and to and refines the first to drip, of those
// within the limit, to a relative width of its wavelength. One is given up when it has
// taken softMargin times as long as the quickest so far: it can neither win nor come
// within the 10 % of the spacing. Time is +Inf where none drips.
func (q *softThrough) search(ctx context.Context, from, to float64, perOctave int, width float64) (softWave, error) {
	n := max(3, int(math.Ceil(float64(perOctave)*math.Log2(to/from)))+1)
	q.list, q.failed = make([]softWave, n), 0
	begin := q.course.first().t
	win, at := softWave{Descent: Descent{Time: math.Inf(1)}}, -1
	try := func(wavelength float64) (softWave, error) {
		limit := math.Min(q.until, begin+softMargin*(win.Time-begin))
		if !(limit > begin) {
			limit = begin + 1e-3*(q.until-begin)
		}
		return q.follow(ctx, wavelength, best, limit)
	}
	for j := range n { // the middle goes first: what is slow beside it is soon given up
		i := (n/2 + (j+1)/2*(1-2*(j%2)) + n) % n
		w, err := try(from * math.Pow(to/from, float64(i)/float64(n-1)))
		if err != nil {
			return w, err
		}
		if q.list[i] = w; w.Time < win.Time && q.fits(&w) {
			win, at = w, i
		}
	}
	if at < 0 && q.failed == n {
		return win, errors.New("drip: the viscosities of a root that softens itself settle at no wavelength")
	}
	a, b := from, to
	if at >= 0 {
		a, b = q.list[max(at-1, 0)].Wavelength, q.list[min(at+1, n-1)].Wavelength
	}
	var fail error
	look := func(x float64) float64 {
		w, err := try(math.Exp(x))
		if err != nil {
			fail = err
			return math.Inf(1)
		}
		if !q.fits(&w) {
			return math.Inf(1)
		}
		if w.Time < win.Time {
			win = w
		}
		return w.Time
	}
	if l := q.o.Limit; l > 0 { // the first wavelength that just fits at its drip
		x := math.Min(b, l)
		for range 4 {
			w, err := try(x)
			if err != nil {
				return w, err
			}
			if q.fits(&w) && w.Time < win.Time {
				win = w
			}
			next := math.Min(b, l*x/w.last)
			if math.IsInf(w.Time, 1) || math.Abs(next/x-1) < 1e-4 {
				break
			}
			x = next * (1 - 1e-6)
		}
		b = math.Min(b, x)
	}
	if at >= 0 && b > a {
		minimum(look, math.Log(a), math.Log(b), width)
	}
	return win, fail
}
