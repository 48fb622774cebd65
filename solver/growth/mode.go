package growth

import (
	"cmp"
	"fmt"
	"math"
	"slices"
)

// Mode returns the leading mode at a wavelength in m: shape, budget, sensitivities.
func (s *Solver) Mode(wavelength float64) (*Mode, error) {
	r, err := s.Rate(wavelength)
	if err != nil {
		return nil, err
	}
	return s.newFlow(2 * math.Pi / wavelength).mode(complex(r.Growth, r.Imaginary))
}

// maxModes is how many modes Modes returns at most.
const maxModes = 12

// Modes returns every growing mode at a wavelength in m, by decreasing growth rate,
// twelve at most; where none grows, the one that decays most slowly. Of a complex pair
// it returns one, with a positive imaginary part.
func (s *Solver) Modes(wavelength float64) ([]*Mode, error) {
	if !positive(wavelength) {
		return nil, fmt.Errorf("%w: %g m", ErrWavelength, wavelength)
	}
	if _, err := s.Rate(wavelength); err != nil { // makes the band's mesh
		return nil, err
	}
	f := s.newFlow(2 * math.Pi / wavelength)
	if f.n == 0 {
		m, err := s.Mode(wavelength)
		return []*Mode{m}, err
	}
	re, im := make([]float64, f.n), make([]float64, f.n)
	if err := eigenvalues(slices.Clone(f.matrix), f.n, re, im); err != nil {
		return nil, fmt.Errorf("growth: wavelength %g m: %w", wavelength, err)
	}
	var rates []complex128
	for i := range re {
		if im[i] >= 0 {
			rates = append(rates, complex(re[i], im[i]))
		}
	}
	slices.SortStableFunc(rates, func(a, b complex128) int { return cmp.Compare(real(b), real(a)) })
	var modes []*Mode
	for i, q := range rates {
		if i > 0 && !(real(q) > 0) || i == maxModes {
			break
		}
		m, err := f.mode(q)
		if err != nil {
			return nil, err
		}
		modes = append(modes, m)
	}
	return modes, nil
}

// mode describes the mode whose rate is nearest to q.
func (f *flow) mode(q complex128) (*Mode, error) {
	m := &Mode{Wavelength: 2 * math.Pi / f.k, Growth: real(q), Imaginary: imag(q), shear: f.s.c.ShearRate, vertical: f.s.c.VerticalStrain}
	x, y, err := f.eigenvectors(q)
	if err != nil {
		return nil, err
	}
	b := f.budgetOf(x)
	f.shape(m, x, b)
	f.shares(m, b)
	f.sensitivities(m, q, x, y, b)
	return m, nil
}

// budget is a complex mode's forces and flow: real and imaginary parts, the latter nil
// for a real mode.
type budget struct {
	x     [2][]float64
	force [2][]float64
	flow  [2]*field
}

// parts returns the real and imaginary parts of v, the second nil where it is zero.
func parts(v []complex128) (p [2][]float64) {
	p[0] = make([]float64, len(v))
	for i, c := range v {
		p[0][i] = real(c)
		if imag(c) != 0 && p[1] == nil {
			p[1] = make([]float64, len(v))
		}
	}
	for i, c := range v {
		if p[1] != nil {
			p[1][i] = imag(c)
		}
	}
	return p
}

// budgetOf solves the flow that states x drive.
func (f *flow) budgetOf(x []complex128) *budget {
	b := &budget{x: parts(x)}
	for i, v := range b.x {
		if v != nil {
			b.force[i] = f.forces(v, f.c.load)
			b.flow[i] = f.solve(b.force[i])
		}
	}
	return b
}

// shape fills displacements and profile from the real part.
func (f *flow) shape(m *Mode, x []complex128, b *budget) {
	s := f.s
	layers := f.layers()
	m.Displacement = make([]float64, layers+1)
	for i := range m.Displacement {
		// a contact that exerts no force is carried: (q − e_z) ξ = W
		q := complex(m.Growth-s.c.VerticalStrain, m.Imaginary)
		if f.p.contact[i] >= 0 || q == 0 || !s.movable(i) {
			continue
		}
		w := complex(b.flow[0].contact[i].w, 0)
		if b.flow[1] != nil {
			w += complex(0, b.flow[1].contact[i].w)
		}
		m.Displacement[i] = real(w / q)
	}
	for j, what := range f.c.what {
		if what >= 0 && what <= layers {
			m.Displacement[what] = real(x[j])
		}
	}
	m.StrainRate = make([]float64, layers)
	for _, p := range b.flow[0].points {
		if p.layer >= layers {
			continue // the stretch of half-space that carries temperature
		}
		m.Depth = append(m.Depth, p.z)
		m.W, m.U = append(m.W, p.w), append(m.U, p.u)
		m.Shear, m.Normal = append(m.Shear, p.shear), append(m.Normal, p.normal)
		m.Layer = append(m.Layer, p.layer)
		// ε_xx = kU cos kx, ε_xz = ½ s sin kx: the larger over a wavelength
		rate, ku := p.rates(f.k)
		m.StrainRate[p.layer] = math.Max(m.StrainRate[p.layer], math.Max(math.Abs(rate)/2, math.Abs(ku)))
	}
}

// layers returns how many layers the column has without the stretch of half-space that
// only temperature sees.
func (f *flow) layers() int {
	if f.s.below {
		return len(f.s.c.Layers) - 1
	}
	return len(f.s.c.Layers)
}

// shares fills who dissipates and who does the work, as parts of the dissipation.
func (f *flow) shares(m *Mode, b *budget) {
	layers := f.layers()
	m.DissipationShare, m.ThermalWork = make([]float64, layers+1), make([]float64, layers+1)
	m.WorkShare, m.StrainShare = make([]float64, layers+1), make([]float64, layers+1)
	m.GradientWork = make([]float64, layers)
	var loss, work float64
	for part, w := range b.flow {
		if w == nil {
			continue
		}
		for i, d := range w.loss {
			m.DissipationShare[min(i, layers)] += d
			loss += d
		}
		for j, list := range f.c.load {
			for n, l := range list {
				p := l.v * b.x[part][j] * w.velocity[l.at]
				work += p
				switch {
				case j >= f.c.heat:
					m.ThermalWork[min(f.layerOf(l.at), layers)] += p
				case f.c.what[j] < 0 && f.s.c.Layers[-1-f.c.what[j]].HeatGradient:
					m.ThermalWork[-1-f.c.what[j]] += p
				case f.c.what[j] < 0:
					m.GradientWork[-1-f.c.what[j]] += p
				case n == 0:
					m.WorkShare[f.c.what[j]] += p
				case n == 1 && f.s.c.ShearRate != 0:
					m.StrainShare[f.c.what[j]] += p
				default: // an inviscid base ties T' to its displacement
					m.ThermalWork[min(f.layerOf(l.at), layers)] += p
				}
			}
		}
	}
	if !(loss > 0) {
		m.DissipationShare = nil
		return
	}
	m.Residual = math.Abs(work/loss - 1)
	for _, list := range [][]float64{m.DissipationShare, m.ThermalWork, m.WorkShare, m.StrainShare, m.GradientWork} {
		for i := range list {
			list[i] /= loss
		}
	}
}

// layerOf returns the layer of an element's port.
func (f *flow) layerOf(port int) int {
	for i, p := range f.p.element {
		if p >= 0 && port >= p && port < p+stages {
			return f.m.elems[i].layer
		}
	}
	return 0
}
