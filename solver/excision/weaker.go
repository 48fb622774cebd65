package excision

import "math"

// weaker is the smaller of the differential stresses that creep and friction bear, along
// a panel.
type weaker struct {
	l, n, friction parabola
	k              float64
	yields         bool
}

func (w *weaker) creep(t float64) float64 { return w.k * math.Exp(w.l.at(t)) }

func (w *weaker) at(t float64) float64 {
	if !w.yields {
		return w.creep(t)
	}
	return min(w.creep(t), w.friction.at(t))
}

// integral returns that from −1 to 1 and its derivative to ln ε; where creep and friction
// change places it goes in pieces.
func (w *weaker) integral() (F, slope float64) {
	if !w.yields {
		return w.piece(-1, 1, true)
	}
	t := -1.0
	excess := func(t float64) float64 { return w.creep(t) - w.friction.at(t) }
	before := excess(t)
	for _, next := range [2]float64{0, 1} {
		after := excess(next)
		if before < 0 != (after < 0) {
			mid := crossing(excess, t, next, before, after)
			dF, dS := w.piece(t, mid, before < 0)
			F, slope = F+dF, slope+dS
			dF, dS = w.piece(mid, next, after < 0)
			F, slope = F+dF, slope+dS
		} else {
			dF, dS := w.piece(t, next, before < 0)
			F, slope = F+dF, slope+dS
		}
		t, before = next, after
	}
	return F, slope
}

// piece integrates creep, or friction, from a to b.
func (w *weaker) piece(a, b float64, creep bool) (F, slope float64) {
	for _, g := range gauss {
		t := (a+b)/2 + (b-a)/2*g[0]
		if !creep {
			F += g[1] * w.friction.at(t)
			continue
		}
		d := g[1] * w.creep(t)
		F += d
		slope += d * w.n.at(t)
	}
	return F * (b - a) / 2, slope * (b - a) / 2
}

// crossing returns where f changes its sign between a and b (Illinois method).
func crossing(f func(float64) float64, a, b, fa, fb float64) float64 {
	for range 60 {
		t := b - fb*(b-a)/(fb-fa)
		ft := f(t)
		if ft == 0 || math.Abs(b-a) < 1e-13 {
			return t
		}
		if ft < 0 != (fb < 0) {
			a, fa = b, fb
		} else {
			fa /= 2
		}
		if b, fb = t, ft; math.Abs(fb) < 1e-12*(math.Abs(fa)+math.Abs(fb)) {
			return t
		}
	}
	return b
}

// gauss are the nodes and weights of three points on −1 to 1.
var gauss = [3][2]float64{{-math.Sqrt(0.6), 5. / 9}, {0, 8. / 9}, {math.Sqrt(0.6), 5. / 9}}
