package drip

import (
	"context"
	"errors"
	"math"
	"slices"
	"sync"

	"keelfall/solver/growth"
)

// try takes a pair of steps and the double step that measures it, and returns the
// largest error of ln amplitude of the second-order solution.
func (g *group) try(ctx context.Context, l leg) (float64, error) {
	from, mid, end := l.from, l.mid, l.end
	var lock sync.Mutex
	var worst float64
	h := mid.t - from.t
	err := g.each(func(list []*follower) error {
		if len(list) == 0 {
			return nil
		}
		forms := [3]*growth.Template{from.form.Twin(), mid.form.Twin(), end.form.Twin()}
		for _, f := range forms {
			defer f.Release()
		}
		for _, f := range list {
			to := from.lay
			to.parts = f.partsAt(end, g.wavelength(f, end), from.lay.cover)
			f.heat(from, g.wavelength(f, from), &to)
			if !sameParts(&to, &f.lay) { // a layer begins to grade, or its rock has come and gone
				f.y = f.lay.carry(&to, f.y)
				f.lay = to
				if err := matrix(&f.a, forms[0], from, g.wavelength(f, from), &f.lay); err != nil {
					return err
				}
			}
		}
		for _, f := range list {
			if f.due <= 0 {
				f.bound()
			}
			if err := matrix(&f.a1, forms[1], mid, g.wavelength(f, mid), &f.lay); err != nil {
				return err
			}
		}
		for _, f := range list {
			if err := matrix(&f.a2, forms[2], end, g.wavelength(f, end), &f.lay); err != nil {
				return err
			}
		}
		var s stepper
		var off float64
		for _, f := range list {
			off = math.Max(off, f.pair(&s, h))
		}
		lock.Lock()
		worst = math.Max(worst, off)
		lock.Unlock()
		return ctx.Err()
	})
	return worst, err
}

// sameParts says whether two layouts of the same layers have the same parts.
func sameParts(a, b *layout) bool {
	return slices.EqualFunc(a.parts, b.parts, slices.Equal[[]float64]) && slices.EqualFunc(a.heat, b.heat, slices.Equal[[]float64])
}

// pair fills the states after each of two steps, y ← exp(h A₁/2) exp(h A₀/2) y, and with
// Richardson's extrapolation of them and the double step those at the end; the
// difference is the error. The step is symmetric, hence of second order, and both its
// ends lie where a fast surface settles with the A there: exp(h (A₀ + A₁)/2) would leave
// it half a step behind, and the extrapolation would take that for an error.
func (f *follower) pair(s *stepper, h float64) float64 {
	n := len(f.y)
	if len(f.y1) != n {
		f.y1, f.y2, f.yd = make([]float64, n), make([]float64, n), make([]float64, n)
	}
	s.set(f.a, n, h/2, f.most)
	half := s.apply(f.y1, f.y)
	f.ld = half + s.apply(f.yd, f.y1)
	s.set(f.a1, n, h/2, f.most)
	f.l1 = half + s.apply(f.y1, f.y1)
	f.l2 = f.l1 + s.apply(f.y2, f.y1)
	s.set(f.a2, n, h/2, f.most)
	f.l2 += s.apply(f.y2, f.y2)
	f.ld += s.apply(f.yd, f.yd)
	f.ld += s.apply(f.yd, f.yd)
	b := f.base()
	scale := math.Exp(f.ld - f.l2)
	var off, size float64
	at, plain := math.Max(math.Abs(f.y2[b]), 1e-3), math.Abs(f.y2[b])
	off = math.Abs(f.y2[b]-scale*f.yd[b]) / 3 / at
	for i, v := range f.y2 {
		d := (v - scale*f.yd[i]) / 3
		size = math.Max(size, math.Abs(d))
		f.y2[i] = v + d
	}
	if f.fix = logSize(f.y2[b] / plain); math.IsNaN(f.fix) || math.Abs(f.fix) > 1 {
		f.fix = 0 // the base passes through where it was flat
	}
	if off = math.Max(off, 0.1*size); math.IsNaN(off) {
		return math.Inf(1)
	}
	return off
}

// base is the state of the root's base.
func (f *follower) base() int {
	contact, _, _ := f.lay.places()
	return contact[f.lay.rootBase]
}

// accept moves the followers over a pair that has been tried, and looks for drips in it.
func (g *group) accept(l leg) {
	from, mid, end := l.from, l.mid, l.end
	h := mid.t - from.t
	g.strain = end.strain
	var s stepper
	for _, f := range g.list {
		if f.done() {
			continue
		}
		b := f.base()
		fix := f.fix / 2
		begun, half, done := f.log+logSize(f.y[b]), f.log+f.l1+logSize(f.y1[b])+fix, f.log+f.l2+logSize(f.y2[b])
		first := stride{from, mid, false, f.y, f.log, f.a, f.a1, f.a2, begun, half, 0, nil}
		second := stride{mid, end, true, f.y1, f.log + f.l1, f.a, f.a1, f.a2, half, done, fix, nil}
		f.curves(&first, &second, b)
		f.drips(&s, g.set, first, b)
		f.drips(&s, g.set, second, b)
		f.inside(&s, g, first, b)
		f.note(g, mid, half)
		f.store(g, mid, f.y1, f.log+f.l1+fix)
		f.inside(&s, g, second, b)
		f.most, f.due = math.Max(f.most, 1.5*math.Max(f.l2, f.ld)/(2*h)), f.due-1
		f.y, f.y2 = f.y2, f.y
		f.log += f.l2 + normalise(f.y)
		f.note(g, end, done)
		f.store(g, end, f.y, f.log)
		f.a, f.a2 = f.a2, f.a
	}
}

func logSize(x float64) float64 { return math.Log(math.Abs(x)) }

// note adds ln |base| at a node to the trace.
func (f *follower) note(g *group, n *node, log float64) {
	if f.trace != nil {
		f.trace.add(n.t, g.wavelength(f, n), f.size*math.Exp(log))
	}
}

// amplitudes are the factors on the first amplitude that a drip is timed for.
var amplitudes = [3]float64{3, 1, 1.0 / 3}

// jump carries the followers over a jump: what happens at once leaves displacements as
// they are, unless layers come or go. The little time it may take counts for nothing
// but the growth at the rates before.
func (g *group) jump(l leg) error {
	from, to := l.from, l.end
	h := to.t - from.t
	var s stepper
	for _, f := range g.list {
		if f.done() {
			continue
		}
		b := f.base()
		out := make([]float64, len(f.y))
		s.set(f.a, len(out), h, f.most)
		d := s.apply(out, f.y)
		same := *from
		same.t = to.t
		f.drips(&s, g.set, stride{from, &same, false, f.y, f.log, f.a, f.a, f.a, f.log + logSize(f.y[b]), f.log + d + logSize(out[b]), 0, nil}, b)
		f.y, f.log = out, f.log+d
	}
	if to.lay.rootBase < 0 {
		return errRootGone
	}
	if err := g.enter(to); err != nil {
		return err
	}
	for _, f := range g.list { // a root that has thinned may be less than its undulation
		if f.done() {
			continue
		}
		for j, m := range amplitudes {
			if b := f.base(); math.IsInf(f.times[j], 1) && f.log+logSize(f.y[b]) >= math.Log(g.set.Criterion*to.root/(f.size*m)) {
				f.times[j] = to.t
			}
		}
		f.note(g, to, f.log+logSize(f.y[f.base()]))
		f.store(g, to, f.y, f.log)
	}
	return nil
}

// errRootGone ends a course: nothing is left to drip.
var errRootGone = errors.New("drip: the root is gone")

// again carries the group over a whole course that is there, until it is done or the
// course ends.
func (g *group) again(ctx context.Context, c *course) error {
	for _, l := range c.legs {
		if g.finished() {
			return nil
		}
		if l.mid == nil {
			if err := g.jump(l); err == errRootGone {
				return nil
			} else if err != nil {
				return err
			}
			continue
		}
		if _, err := g.try(ctx, l); err != nil {
			return err
		}
		g.accept(l)
	}
	return nil
}

// finished says whether there is nothing more to follow.
func (g *group) finished() bool {
	all := true
	for _, f := range g.list {
		if g.stopAt >= 0 && !math.IsInf(f.times[g.stopAt], 1) && f.first*math.Exp(g.strain-g.strain0) <= g.limit {
			return true
		}
		if !f.done() {
			all = false
		}
	}
	return all
}
