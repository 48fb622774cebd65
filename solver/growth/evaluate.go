package growth

import (
	"cmp"
	"context"
	"fmt"
	"math"
	"runtime"
	"slices"
	"sync"
	"sync/atomic"
)

// Options of a spectrum.
type Options struct {
	From, To  float64 // m; 0: chosen from the layers, and extended until the fastest wavelength is inside
	Tolerance float64 // relative, of the leading rate; 0: DefaultTolerance
	Workers   int     // 0: as many as there are cores
}

// Evaluate returns the leading growth rate at each wavelength (m), in the order given.
// The result does not depend on the number of workers: a worker takes whole bands of
// wavenumbers, and a band's mesh depends on nothing but the band.
func Evaluate(ctx context.Context, c *Column, wavelengths []float64, o Options) ([]Rate, error) {
	for _, l := range wavelengths {
		if !positive(l) {
			return nil, fmt.Errorf("%w: %g m", ErrWavelength, l)
		}
	}
	first, err := newSolver(c, o.Tolerance, takeWorkspace())
	if err != nil {
		return nil, err
	}
	order := make([]int, len(wavelengths))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(i, j int) int { return cmp.Compare(wavelengths[i], wavelengths[j]) })
	starts := []int{0} // of each band in order
	for i := 1; i < len(order); i++ {
		a, _ := first.bandOf(2 * math.Pi / wavelengths[order[i-1]])
		if b, _ := first.bandOf(2 * math.Pi / wavelengths[order[i]]); a != b {
			starts = append(starts, i)
		}
	}
	bands := len(starts)
	starts = append(starts, len(order))

	rates := make([]Rate, len(wavelengths))
	errs := make([]error, bands)
	var next atomic.Int64
	work := func(s *Solver) {
		defer s.release()
		for {
			b := int(next.Add(1)) - 1
			if b >= bands {
				return
			}
			for _, i := range order[starts[b]:starts[b+1]] {
				if errs[b] = ctx.Err(); errs[b] != nil {
					return
				}
				if rates[i], errs[b] = s.Rate(wavelengths[i]); errs[b] != nil { // band b owns its slots
					return
				}
			}
		}
	}
	workers := o.Workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	var wg sync.WaitGroup
	for range min(workers, bands) - 1 {
		s := first.twin()
		wg.Go(func() { work(s) })
	}
	work(first)
	wg.Wait()
	for _, err := range errs {
		if err != nil {
			return nil, err
		}
	}
	return rates, nil
}

// Compute returns the spectrum over a range of wavelengths: points where the curve
// bends, every maximum resolved to better than 1e-6 in wavelength, and the fastest
// mode in full.
func Compute(ctx context.Context, c *Column, o Options) (*Spectrum, error) {
	s, err := NewSolver(c, o.Tolerance)
	if err != nil {
		return nil, err
	}
	from, to, auto := o.From, o.To, false
	if from == 0 || to == 0 {
		auto = true
		f, t := s.Range()
		if from == 0 {
			from = f
		}
		if to == 0 {
			to = t
		}
		to = math.Max(to, 2*from)
	}
	if !(from > 0 && to > from) {
		return nil, ErrWavelength
	}
	rates, err := Evaluate(ctx, c, logSpace(from, to, 12), o)
	if err != nil {
		return nil, err
	}
	for try := 0; auto && try < 8; try++ { // look further where the fastest is at an end
		i := fastest(rates)
		var more []float64
		switch {
		case i == 0 && o.From == 0:
			more = logSpace(rates[0].Wavelength/4, rates[0].Wavelength, 12)
			more = more[:len(more)-1]
		case i == len(rates)-1 && o.To == 0:
			more = logSpace(rates[i].Wavelength, rates[i].Wavelength*4, 12)[1:]
		}
		if more == nil || rates[i].Growth <= 0 {
			break
		}
		r, err := Evaluate(ctx, c, more, o)
		if err != nil {
			return nil, err
		}
		rates = merge(rates, r)
	}
	for round := 0; round < 3; round++ { // halve intervals where the curve bends
		more := bends(rates)
		if len(more) == 0 || len(rates)+len(more) > 600 {
			break
		}
		r, err := Evaluate(ctx, c, more, o)
		if err != nil {
			return nil, err
		}
		rates = merge(rates, r)
	}
	sp := &Spectrum{}
	var peaks []Rate
	for i := 1; i < len(rates)-1; i++ {
		if rates[i].Growth > rates[i-1].Growth && rates[i].Growth >= rates[i+1].Growth {
			p, err := s.peak(rates[i-1].Wavelength, rates[i].Wavelength, rates[i+1].Wavelength)
			if err != nil {
				return nil, err
			}
			peaks = append(peaks, p)
		}
	}
	sp.Rates = merge(rates, peaks)
	for _, p := range peaks {
		sp.Peaks = append(sp.Peaks, Peak{p.Wavelength, p.Growth, false})
	}
	slices.SortStableFunc(sp.Peaks, func(a, b Peak) int { return cmp.Compare(b.Growth, a.Growth) })
	i := fastest(sp.Rates)
	r := sp.Rates[i]
	sp.Fastest = Peak{r.Wavelength, r.Growth, i == 0 || i == len(sp.Rates)-1}
	if sp.Mode, err = s.Mode(r.Wavelength); err != nil {
		return nil, err
	}
	if !sp.Fastest.AtRangeEdge {
		sp.Shift, err = s.shift(r.Wavelength)
	}
	return sp, err
}

// Range returns the wavelengths in m that a spectrum covers where none are asked:
// from the thinnest layer to twenty times the column.
func (s *Solver) Range() (from, to float64) {
	layers := s.c.Layers
	if s.below { // not the stretch of half-space that only temperature sees
		layers = layers[:len(layers)-1]
	}
	depth := s.depths[len(layers)]
	thinnest := depth
	for i := range layers {
		thinnest = math.Min(thinnest, layers[i].Thickness)
	}
	return math.Max(thinnest, depth/100), 20 * depth
}

// logSpace returns wavelengths from a to b, both included, at least n an octave.
func logSpace(a, b float64, n int) []float64 {
	m := max(1, int(math.Ceil(math.Log2(b/a)*float64(n))))
	x := make([]float64, m+1)
	for i := range x {
		x[i] = a * math.Pow(b/a, float64(i)/float64(m))
	}
	x[m] = b
	return x
}

func fastest(r []Rate) int {
	best := 0
	for i := range r {
		if r[i].Growth > r[best].Growth {
			best = i
		}
	}
	return best
}

// merge joins two lists by increasing wavelength, without repeats.
func merge(a, b []Rate) []Rate {
	all := append(slices.Clone(a), b...)
	slices.SortStableFunc(all, func(x, y Rate) int { return cmp.Compare(x.Wavelength, y.Wavelength) })
	return slices.CompactFunc(all, func(x, y Rate) bool { return x.Wavelength == y.Wavelength })
}

// bends returns midpoints of the intervals beside a point where the curve's second
// difference exceeds 2 % of its range.
func bends(r []Rate) []float64 {
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, x := range r {
		lo, hi = math.Min(lo, x.Growth), math.Max(hi, x.Growth)
	}
	if lo < 0 && hi > 0 {
		lo = math.Max(lo, -hi) // deep decay needs no detail
	}
	var more []float64
	split := func(i int) { // between i and i+1, once
		m := math.Sqrt(r[i].Wavelength * r[i+1].Wavelength)
		if len(more) == 0 || m > more[len(more)-1] {
			more = append(more, m)
		}
	}
	for i := 1; i < len(r)-1; i++ {
		if math.Max(r[i].Growth, math.Max(r[i-1].Growth, r[i+1].Growth)) < lo {
			continue
		}
		l, m, n := math.Log(r[i-1].Wavelength), math.Log(r[i].Wavelength), math.Log(r[i+1].Wavelength)
		line := r[i-1].Growth + (r[i+1].Growth-r[i-1].Growth)*(m-l)/(n-l)
		if math.Abs(r[i].Growth-line) > 0.02*(hi-lo) {
			split(i - 1)
			split(i)
		}
	}
	return more
}

// peak resolves a maximum bracketed by three wavelengths: golden sections first, then
// Newton steps on the derivative from a seven-point stencil (order 6), which sees the
// position to about 1e-10 where comparing values would stop at 1e-8. One mesh serves
// the whole bracket, so that truncation stays smooth in k.
func (s *Solver) peak(a, b, c float64) (Rate, error) {
	const step = 0.015 // of ln λ between stencil points
	lowK, highK := 2*math.Pi/c*math.Exp(-4*step), 2*math.Pi/a*math.Exp(4*step)
	s.divide(&s.mesh, lowK, highK, rule{s.rule.span * 0.8, s.rule.depth + 1})
	s.mesh.low, s.mesh.high = 0, 0 // not a standard band: the next Rate makes its own
	var fail error
	growth := func(x float64) float64 {
		re, _, _, err := s.leading(&s.mesh, 2*math.Pi/math.Exp(x))
		if err != nil {
			fail = err
		}
		return re
	}
	lo, hi := math.Log(a), math.Log(c)
	x := math.Log(b)
	const ratio = 0.3819660112501051
	fx := growth(x)
	for i := 0; i < 40 && hi-lo > 4e-3 && fail == nil; i++ {
		t := x + ratio*(hi-x)
		if x-lo > hi-x {
			t = x - ratio*(x-lo)
		}
		if ft := growth(t); ft > fx {
			if t > x {
				lo = x
			} else {
				hi = x
			}
			x, fx = t, ft
		} else if t > x {
			hi = t
		} else {
			lo = t
		}
	}
	for i := 0; i < 3 && fail == nil; i++ {
		var f [7]float64
		for j := range f {
			f[j] = growth(x + step*float64(j-3))
		}
		d1 := (-f[0] + 9*f[1] - 45*f[2] + 45*f[4] - 9*f[5] + f[6]) / 60
		d2 := (2*f[0] - 27*f[1] + 270*f[2] - 490*f[3] + 270*f[4] - 27*f[5] + 2*f[6]) / 180
		if !(d2 < 0) || math.Abs(d1/d2) > 3 {
			break // a corner where branches cross: the golden section stands
		}
		x -= step * d1 / d2
	}
	if fail != nil {
		return Rate{}, fail
	}
	return s.Rate(math.Exp(x))
}
