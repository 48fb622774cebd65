package heat

import (
	"fmt"
	"math"

	"keelfall/column"
)

// march integrates T and P down one layer.
type march struct {
	layer *column.Layer
	g     float64
	top   float64 // depth of the layer's top, m
	flow  float64 // heat flow at its top, W/m²
	mode  mode
	line  line // the temperature of a given geotherm
}

// mode says where the temperature comes from.
type mode int

const (
	conducted mode = iota
	given
	absent
)

// line is a temperature linear in the depth below the layer's top.
type line struct{ at, T, slope float64 }

// slopes returns dT/dz and dP/dz at a depth below the layer's top. A conductivity
// that is not positive gives NaN, which march.run turns into an error.
func (m *march) slopes(below, T, P float64) (dT, dP float64) {
	l := m.layer
	switch m.mode {
	case conducted:
		k := l.Conductivity.Value(T, P)
		if !(k > 0) {
			return math.NaN(), 0
		}
		dT = (m.flow - l.HeatProduction.Integral(below)) / k
	case given:
		dT = m.line.slope
		T = m.line.T + dT*(below-m.line.at)
	}
	return dT, m.g * l.Density.At(T, P, below/l.Thickness)
}

// step advances (T, P) by h with the explicit sixth-order method of Butcher 1964
// (J. Austral. Math. Soc. 4, 179; coefficients from memory, their order is checked by
// TestOrderOfAccuracy).
func (m *march) step(z, h, T, P float64) (float64, float64) {
	t1, p1 := m.slopes(z, T, P)
	t2, p2 := m.slopes(z+h/3, T+h*t1/3, P+h*p1/3)
	t3, p3 := m.slopes(z+2*h/3, T+h*2*t2/3, P+h*2*p2/3)
	t4, p4 := m.slopes(z+h/3, T+h*(t1+4*t2-t3)/12, P+h*(p1+4*p2-p3)/12)
	t5, p5 := m.slopes(z+h/2, T+h*(-t1+18*t2-3*t3-6*t4)/16, P+h*(-p1+18*p2-3*p3-6*p4)/16)
	t6, p6 := m.slopes(z+h/2, T+h*(9*t2-3*t3-6*t4+4*t5)/8, P+h*(9*p2-3*p3-6*p4+4*p5)/8)
	t7, p7 := m.slopes(z+h, T+h*(9*t1-36*t2+63*t3+72*t4-64*t6)/44, P+h*(9*p1-36*p2+63*p3+72*p4-64*p6)/44)
	return T + h*(11*(t1+t7)+81*(t3+t4)-32*(t5+t6))/120, P + h*(11*(p1+p7)+81*(p3+p4)-32*(p5+p6))/120
}

// DomainError says where a profile leaves the range of the physics.
type DomainError struct {
	Layer        string
	Depth        float64 // m
	T            float64 // K, the last good value above
	Conductivity float64 // W/m/K there
	Flow         float64 // W/m² there
}

func (e *DomainError) Error() string {
	return fmt.Sprintf("heat: %s: below %.0f m (T = %.4g K, conductivity %.4g W/m/K, heat flow %.4g W/m²) the temperature falls to 0 K or the conductivity is not positive", e.Layer, e.Depth, e.T, e.Conductivity, e.Flow)
}

// run integrates over the nodes, whose first holds T and P and all of which hold
// their depth, and fills the rest.
func (m *march) run(nodes []Node) error {
	for i := range nodes {
		n := &nodes[i]
		below := n.Depth - m.top
		if i > 0 {
			b := &nodes[i-1]
			n.T, n.P = m.step(b.Depth-m.top, n.Depth-b.Depth, b.T, b.P)
			if m.mode == given {
				n.T = m.line.T + m.line.slope*(below-m.line.at)
			}
			if m.mode != absent && !(n.T > 0) || math.IsNaN(n.P) || math.IsInf(n.T+n.P, 0) {
				return &DomainError{m.layer.Name, b.Depth, b.T, m.layer.Conductivity.Value(b.T, b.P), b.Flow}
			}
		}
		switch m.mode {
		case conducted:
			n.Flow = m.flow - m.layer.HeatProduction.Integral(below)
		case given:
			n.Flow = m.layer.Conductivity.Value(n.T, n.P) * m.line.slope
		}
	}
	return nil
}

// curvature returns d²T/dz² from dq/dz = −H: κ_c T” = −H − T' dκ_c/dz.
func (m *march) curvature(n *Node, dT, dP float64) float64 {
	c := &m.layer.Conductivity
	kT, kP := c.Partials(n.T, n.P)
	return (-m.layer.HeatProduction.At(n.Depth-m.top) - dT*(kT*dT+kP*dP)) / c.Value(n.T, n.P)
}

// curves appends the spans between the nodes.
func (m *march) curves(to []span, nodes []Node) []span {
	var bT, bP, bC float64
	for i := range nodes {
		n := &nodes[i]
		dT, dP := m.slopes(n.Depth-m.top, n.T, n.P)
		var c float64
		if m.mode == conducted {
			c = m.curvature(n, dT, dP)
		}
		if i > 0 {
			b := &nodes[i-1]
			h := n.Depth - b.Depth
			s := span{z: b.Depth, h: h, p: cubic(b.P, h*bP, n.P, h*dP)}
			switch m.mode {
			case conducted:
				s.t = quintic(b.T, h*bT, h*h*bC, n.T, h*dT, h*h*c)
			case given:
				s.t = [6]float64{b.T, n.T - b.T}
			}
			to = append(to, s)
		}
		bT, bP, bC = dT, dP, c
	}
	return to
}

// grid returns n+1 nodes from top to bottom.
func grid(top, bottom float64, n int) []Node {
	nodes := make([]Node, n+1)
	for i := range nodes {
		nodes[i].Depth = top + (bottom-top)*(float64(i)/float64(n))
	}
	nodes[n].Depth = bottom
	return nodes
}
