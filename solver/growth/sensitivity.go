package growth

import "math"

// sensitivities fills the exact derivatives of a simple eigenvalue q of A = R + V G L.
// With right and left vectors x and y, the flow w of the forces L x and the flow v of
// the forces Vᵀ y (both complex for a complex mode, products without conjugation),
// dq = (Vᵀy)ᵀ dG (Lx)/(yᵀx) + the change of L, and dG follows from the variational form
// a(v, w) = ∫ [η_S s_v s_w + 4 η_N k² U_v U_w] dz:
//
//	∂q/∂ln η_ℓ = {−∫_ℓ [η_S s_v s_w + 4η_N k² U_v U_w] dz + 4kd Σ U_v,i ξ_i ∂[η]_i/∂ln η_ℓ}/(yᵀx)
//	∂q/∂[ρ]_i  = −g V_i ξ_i/(yᵀx)
//
// For d = 0, v = w up to a factor, and the first is −q × the dissipation share.
//
// A layer that thickens, its profile stretched and everything below moving down with
// it, maps the column onto itself; every load and material point is carried along, so
// only the metric changes:
//
//	∂q/∂h_ℓ = (1/h_ℓ) ∫_ℓ F dz/(yᵀx),
//	F = S_v S_w/η_S + k(V S_w + W S_v) − 4η_N k² U_v U_w − k(Σ_w U_v + Σ_v U_w).
//
// It holds the density jumps, the viscosity profile against relative depth, and the
// total of each gradient. (All derived; tested against differences.) Left out with
// diffusing temperature, whose own terms change too: the derivative of thickness.
func (f *flow) sensitivities(m *Mode, q complex128, x, y []complex128, b *budget) {
	s, c := f.s, f.s.c
	layers := f.layers()
	if m.DissipationShare == nil || q == 0 {
		return
	}
	var norm complex128
	for i := range x {
		norm += y[i] * x[i]
	}
	if abs2(norm) == 0 || defective(x, y, norm) {
		return // two modes meet: no simple eigenvalue, no derivative
	}
	var v [2]*field
	for i, part := range parts(y) {
		if part != nil {
			if f.c.mass != nil { // Vᵀ y with V = M⁻¹ × rate
				f.c.mass.solve(part[f.c.heat:], 1)
			}
			v[i] = f.solve(f.forces(part, f.c.rate))
		}
	}
	w := b.flow
	// sum adds the bilinear product of two complex fields by parts
	sum := func(product func(v, w *field) float64) complex128 {
		var re, im float64
		for i, vi := range v {
			for j, wj := range w {
				if vi == nil || wj == nil {
					continue
				}
				switch p := product(vi, wj); {
				case i == 0 && j == 0:
					re += p
				case i == 1 && j == 1:
					re -= p
				default:
					im += p
				}
			}
		}
		return complex(re, im) / norm
	}
	k := f.k
	eta := make([]complex128, layers+1)
	for l := range eta {
		eta[l] = -sum(func(v, w *field) float64 { return f.bilinear(v, w, l) })
	}
	jump := make([]complex128, layers+1) // ∂q/∂[ρ]_i
	for i := range jump {
		at := f.p.contact[i]
		if at < 0 && !s.movable(i) {
			continue
		}
		vi, xi := f.complexAt(v, i), f.displacement(m, x, w, q, i)
		jump[i] = complex(-c.Gravity, 0) * vi.w * xi / norm
		if c.ShearRate != 0 {
			drive := complex(4*k*c.ShearRate, 0) * vi.u * xi / norm
			if i > 0 {
				above, _ := c.Layers[i-1].Viscosity(s.depths[i])
				eta[i-1] -= drive * complex(above, 0)
			}
			if i < layers {
				below, _ := c.Layers[i].Viscosity(s.depths[i])
				eta[i] += drive * complex(below, 0)
			} else if c.Base == HalfSpace {
				eta[layers] += drive * complex(c.EtaS, 0)
			}
		}
	}
	m.DlnqDlnEta, m.DqDrho = make([]float64, layers+1), make([]float64, layers+1)
	for l := range eta {
		m.DlnqDlnEta[l] = real(eta[l]) / real(q)
		m.DqDrho[l] = real(jump[l])
		if l < layers {
			m.DqDrho[l] -= real(jump[l+1])
		}
	}
	if c.Diffusion != nil {
		return
	}
	m.DqDh = make([]float64, layers)
	for l := range m.DqDh {
		m.DqDh[l] = real(sum(func(v, w *field) float64 { return f.metric(v, w, l) })) / c.Layers[l].Thickness
	}
}

// defective says whether left and right vectors are so nearly orthogonal that the
// eigenvalue is a double one to rounding.
func defective(x, y []complex128, norm complex128) bool {
	var sum float64
	for i := range x {
		sum += math.Sqrt(abs2(x[i] * y[i]))
	}
	return !(math.Sqrt(abs2(norm)) > 1e-10*sum)
}

// complexAt returns the velocity of a complex field at an interface.
func (f *flow) complexAt(v [2]*field, i int) (out struct{ w, u complex128 }) {
	for part, p := range v {
		if p != nil {
			unit := complex(1, 0)
			if part == 1 {
				unit = 1i
			}
			out.w += unit * complex(p.contact[i].w, 0)
			out.u += unit * complex(p.contact[i].u, 0)
		}
	}
	return out
}

// displacement returns ξ of interface i, carried where it exerts no force.
func (f *flow) displacement(m *Mode, x []complex128, w [2]*field, q complex128, i int) complex128 {
	for j, what := range f.c.what {
		if what == i {
			return x[j]
		}
	}
	if d := q - complex(f.s.c.VerticalStrain, 0); d != 0 {
		return f.complexAt(w, i).w / d
	}
	return 0
}

// bilinear is ∫ [η_S s_v s_w + 4η_N k² U_v U_w] dz over a layer, the half-space last.
func (f *flow) bilinear(v, w *field, layer int) float64 {
	var sum float64
	for i := range v.points {
		a, b := &v.points[i], &w.points[i]
		l := min(a.layer, f.layers())
		if l == layer && a.weight > 0 {
			sum += a.weight * (a.shear*b.shear/a.etaS + 4*a.etaN*f.k*f.k*a.u*b.u)
		}
	}
	for i := range f.m.elems { // half-spaces on both sides of an opaque stretch
		if e := &f.m.elems[i]; e.opaque && e.layer == layer {
			at := f.firstPoint(i)
			a, b := &v.points[at], &w.points[at]
			c, d := &v.points[at+1], &w.points[at+1]
			sum += f.k * (e.zTop*(a.w*b.w+a.u*b.u) + e.zBase*(c.w*d.w+c.u*d.u))
		}
	}
	if c := f.s.c; layer == f.layers() && c.Base == HalfSpace {
		a, b := &v.points[len(v.points)-1], &w.points[len(w.points)-1]
		sum += 2 * f.k * math.Sqrt(c.EtaS*c.EtaN) * (a.w*b.w + a.u*b.u)
	}
	return sum
}

// firstPoint returns the index of element i's first point.
func (f *flow) firstPoint(i int) int {
	at := 0
	for j := range f.m.elems[:i] {
		if f.m.elems[j].opaque {
			at += 2
		} else {
			at += stages + 2
		}
	}
	return at
}

// metric is ∫ F dz over a layer. Where an opaque stretch decouples the layer's two
// sides, F vanishes inside it, as in a half-space.
func (f *flow) metric(v, w *field, layer int) float64 {
	k := f.k
	var sum float64
	for i := range v.points {
		a, b := &v.points[i], &w.points[i]
		if a.layer != layer || a.weight == 0 {
			continue
		}
		sum += a.weight * (a.shear*b.shear/a.etaS + k*(a.w*b.shear+b.w*a.shear) -
			4*a.etaN*k*k*a.u*b.u - k*(b.normal*a.u+a.normal*b.u))
	}
	return sum
}
