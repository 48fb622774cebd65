package growth

import "math"

// shift returns how the fastest wavelength moves with the column. Where dq/dx = 0 in
// x = ln λ, a change dp moves the maximum by dx = −(∂²q/∂x∂p)/(∂²q/∂x²) dp. The mixed
// derivative is a central difference in x of the exact first derivatives ∂q/∂p, the
// other one of q itself, both of fourth order.
func (s *Solver) shift(wavelength float64) (*Shift, error) {
	const h = 0.02
	var modes [5]*Mode
	for i := range modes {
		m, err := s.Mode(wavelength * math.Exp(h*float64(i-2)))
		if err != nil {
			return nil, err
		}
		if m.DlnqDlnEta == nil {
			return nil, nil
		}
		modes[i] = m
	}
	q := func(i int) float64 { return modes[i].Growth }
	curvature := (-q(0) + 16*q(1) - 30*q(2) + 16*q(3) - q(4)) / (12 * h * h)
	if !(curvature < 0) || math.Abs(q(1)-q(3)) > 0.02*h*math.Abs(curvature) {
		return nil, nil // a corner where branches cross
	}
	move := func(n int, of func(m *Mode, i int) float64) []float64 {
		out := make([]float64, n)
		for i := range out {
			mixed := (of(modes[0], i) - 8*of(modes[1], i) + 8*of(modes[3], i) - of(modes[4], i)) / (12 * h)
			out[i] = -mixed / curvature
		}
		return out
	}
	return &Shift{
		DlnEta: move(len(modes[2].DlnqDlnEta), func(m *Mode, i int) float64 { return m.DlnqDlnEta[i] * m.Growth }),
		Drho:   move(len(modes[2].DqDrho), func(m *Mode, i int) float64 { return m.DqDrho[i] }),
		Dh:     move(len(modes[2].DqDh), func(m *Mode, i int) float64 { return m.DqDh[i] }),
	}, nil
}
