package excision

import "math"

// grower is a logarithm that changes with time, and how fast it does.
type grower struct {
	now, slope, curve float64 // and its derivatives
	middle, span      float64 // slope over the last step, and that step, s; span 0: unknown
	expected          float64 // where to look for it next
}

// ahead is its value h later; no step is to change it by more than a little.
func (g *grower) ahead(h float64) float64 {
	return g.now + min(max(h*(g.slope+g.curve*h/2), -1), 1)
}

// mean is that of its exponential over the next h: the middle's, and what both derivatives
// add.
func (g *grower) mean(h float64) float64 {
	d := g.slope + g.curve*h/2
	return math.Exp(g.ahead(h/2)) * (1 + min(max((d*d+g.curve)*h*h, -0.1), 0.1)/24)
}

// learn takes the derivatives from a step of h, before which it was a, and the step before.
func (g *grower) learn(a *grower, h float64) {
	middle := (g.now - a.now) / h
	if math.IsInf(middle, 0) || math.IsNaN(middle) {
		g.forget()
		return
	}
	g.curve = 0
	if a.span > 0 {
		g.curve = (middle - a.middle) / ((h + a.span) / 2)
	}
	g.slope, g.middle, g.span = middle+g.curve*h/2, middle, h
}

// forget is what a jump does to the derivatives.
func (g *grower) forget() { g.slope, g.curve, g.middle, g.span = 0, 0, 0, 0 }
