package growth

import (
	"slices"

	"gonum.org/v1/gonum/integrate/quad"
)

// stages is S, the number of Gauss points of an element; the method's order is 2S.
const stages = 8

// triangle is the number of entries of a symmetric stages × stages matrix.
const triangle = stages * (stages + 1) / 2

// Gauss–Legendre collocation on [0, 1]: nodes c, weights b, and the Butcher matrix
// a_ij = ∫₀^{c_i} l_j with its square. They satisfy b_i a_ij + b_j a_ji = b_i b_j, so
// the discrete flow keeps the reciprocity of the continuous one.
// Source: Hairer, Nørsett & Wanner, Solving Ordinary Differential Equations I, II.7
// (from memory); the identities are tested.
var (
	nodeC, nodeB [stages]float64
	butcher      [stages][stages]float64
	butcher2     [stages][stages]float64
)

// element coefficients are linear in the nodal viscosities. The tables give, for each
// coefficient, its weight on every node's η_N or η_S.
var (
	tabR2, tabR4                 [triangle][stages]float64 // a^T Dn a, a2^T Ds a2
	tabNW3, tabNU2, tabNU4       [stages][stages]float64   // a^T Dn {c, 1, c²/2}
	tabNW5, tabNU6               [stages][stages]float64   // a2^T Ds {c²/2, c³/6}
	pow2, pow3, pow4, pow5, pow6 [stages]float64           // powers of c
	endWeight                    [stages]float64           // b (1 − c)
)

func init() {
	quad.Legendre{}.FixedLocations(nodeC[:], nodeB[:], 0, 1)
	if nodeC[0] > nodeC[stages-1] { // top first
		slices.Reverse(nodeC[:])
		slices.Reverse(nodeB[:])
	}
	var x, w [stages]float64
	quad.Legendre{}.FixedLocations(x[:], w[:], 0, 1)
	lagrange := func(j int, t float64) float64 {
		p := 1.0
		for m := range nodeC {
			if m != j {
				p *= (t - nodeC[m]) / (nodeC[j] - nodeC[m])
			}
		}
		return p
	}
	for i := range nodeC {
		for j := range nodeC {
			var s float64
			for m := range x { // exact: the integrand has degree S − 1
				s += w[m] * lagrange(j, nodeC[i]*x[m])
			}
			butcher[i][j] = nodeC[i] * s
		}
	}
	for i := range nodeC {
		for j := range nodeC {
			var s float64
			for m := range nodeC {
				s += butcher[i][m] * butcher[m][j]
			}
			butcher2[i][j] = s
		}
		c := nodeC[i]
		pow2[i], pow3[i], pow4[i], pow5[i], pow6[i] = c*c, c*c*c, c*c*c*c, c*c*c*c*c, c*c*c*c*c*c
		endWeight[i] = nodeB[i] * (1 - c)
	}
	for m := range nodeC {
		bs, bn := nodeB[m], 4*nodeB[m]
		t := 0
		for i := range nodeC {
			for j := 0; j <= i; j++ {
				tabR2[t][m] = butcher[m][i] * bn * butcher[m][j]
				tabR4[t][m] = butcher2[m][i] * bs * butcher2[m][j]
				t++
			}
			tabNW3[i][m] = butcher[m][i] * bn * nodeC[m]
			tabNU2[i][m] = butcher[m][i] * bn
			tabNU4[i][m] = butcher[m][i] * bn * pow2[m] / 2
			tabNW5[i][m] = butcher2[m][i] * bs * pow2[m] / 2
			tabNU6[i][m] = butcher2[m][i] * bs * pow3[m] / 6
		}
	}
}

// element is a slice of one layer. Its coefficients do not depend on k, so one
// element serves a whole band of wavenumbers.
//
// Inside it the unknown is y_i = h U'(z_i) less two start modes that carry the
// velocity (W, U) of its top; see doc.go for the equations.
type element struct {
	z, h        float64         // top depth and thickness, m
	layer       int             // index of its layer
	last        bool            // its base is the layer's base
	opaque      bool            // so many wavelengths from every interface that nothing passes
	zTop, zBase float64         // half-space impedances per unit k of an opaque element, 2η/√n̂
	etaS, etaN  [stages]float64 // nodal viscosities, Pa s
	r0          [stages]float64
	r2, r4      [triangle]float64
	nw3, nw5    [stages]float64
	nu2, nu4    [stages]float64
	nu6         [stages]float64
	qww4, qww6  float64
	qwu3, qwu5  float64
	qwu7        float64
	quu2, quu4  float64
	quu6, quu8  float64
	gradient    *[stages]float64 // h b_i ρ_c(z_i): excess mass per area and displacement; nil where none
	field       bool             // its Gauss points are ports: a field lives here
}

// dot8 is a plain dot product; the compiler keeps it in registers.
func dot8(a, b *[stages]float64) float64 {
	return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] + a[3]*b[3] +
		a[4]*b[4] + a[5]*b[5] + a[6]*b[6] + a[7]*b[7]
}

// build fills the coefficients from the nodal viscosities.
func (e *element) build() {
	s, n := &e.etaS, &e.etaN
	t := 0
	for i := 0; i < stages; i++ {
		e.r0[i] = nodeB[i] * s[i]
		for j := 0; j <= i; j++ {
			e.r2[t] = dot8(&tabR2[t], n) + nodeB[i]*s[i]*butcher2[i][j] + nodeB[j]*s[j]*butcher2[j][i]
			e.r4[t] = dot8(&tabR4[t], s)
			t++
		}
		bs := nodeB[i] * s[i]
		e.nw3[i] = bs*pow2[i]/2 + dot8(&tabNW3[i], n)
		e.nw5[i] = dot8(&tabNW5[i], s)
		e.nu2[i] = dot8(&tabNU2[i], n)
		e.nu4[i] = bs*pow3[i]/6 + dot8(&tabNU4[i], n)
		e.nu6[i] = dot8(&tabNU6[i], s)
	}
	var ww4, ww6, wu3, wu5, wu7, uu2, uu4, uu6, uu8 float64
	for i := 0; i < stages; i++ {
		bs, bn := nodeB[i]*s[i], 4*nodeB[i]*n[i]
		ww4 += bn * pow2[i]
		ww6 += bs * pow4[i] / 4
		wu3 += bn * nodeC[i]
		wu5 += bn * pow3[i] / 2
		wu7 += bs * pow5[i] / 12
		uu2 += bn
		uu4 += bn * pow2[i]
		uu6 += bn * pow4[i] / 4
		uu8 += bs * pow6[i] / 36
	}
	e.qww4, e.qww6, e.qwu3, e.qwu5, e.qwu7 = ww4, ww6, wu3, wu5, wu7
	e.quu2, e.quu4, e.quu6, e.quu8 = uu2, uu4, uu6, uu8
}

// triple is an element at one k: v_b = Φ v_t + Ψ t_b and t_t = Φᵀ t_b − Q v_t, with
// v = (W, U) and t = (Σ, S) at its top and base. Ψ and Q are symmetric.
type triple struct {
	pww, pwu, puw, puu float64 // Φ
	sww, swu, suu      float64 // Ψ
	qww, qwu, quu      float64 // Q
}

// factor is what condensing leaves behind: R = L D Lᵀ, and the right-hand
// sides N_W, N_U, B_W, B_U after forward substitution. Back-substitution recovers y.
type factor struct {
	l      [triangle]float64 // unit lower triangle, its diagonal unused
	d      [stages]float64   // 1/D
	nw, nu [stages]float64
	bw, bu [stages]float64
}

// condense eliminates the element's inner unknowns at wavenumber k (rad/m).
func (e *element) condense(k float64, f *factor, out *triple) {
	if e.opaque {
		zt, zb := e.zTop*k, 1/(e.zBase*k)
		*out = triple{sww: zb, suu: zb, qww: zt, quu: zt}
		return
	}
	x := k * e.h
	x2 := x * x
	x3, x4 := x2*x, x2*x2
	x5, x6 := x4*x, x4*x2
	for i := 0; i < stages; i++ {
		f.nw[i] = x3*e.nw3[i] + x5*e.nw5[i]
		f.nu[i] = x2*e.nu2[i] - x4*e.nu4[i] - x6*e.nu6[i]
		f.bw[i] = -x * endWeight[i]
		f.bu[i] = nodeB[i]
	}
	for t := 0; t < triangle; t += 4 {
		f.l[t] = x2*e.r2[t] + x4*e.r4[t]
		f.l[t+1] = x2*e.r2[t+1] + x4*e.r4[t+1]
		f.l[t+2] = x2*e.r2[t+2] + x4*e.r4[t+2]
		f.l[t+3] = x2*e.r2[t+3] + x4*e.r4[t+3]
	}
	f.eliminate(&e.r0)

	var sww, swu, suu, pww, pwu, puw, puu, qww, qwu, quu float64
	for i := 0; i < stages; i++ {
		d := f.d[i]
		bw, bu, nw, nu := f.bw[i], f.bu[i], f.nw[i], f.nu[i]
		dbw, dbu, dnw := d*bw, d*bu, d*nw
		sww += dbw * bw
		swu += dbw * bu
		suu += dbu * bu
		pww += dbw * nw
		pwu += dbw * nu
		puw += dbu * nw
		puu += dbu * nu
		qww += dnw * nw
		qwu += dnw * nu
		quu += d * nu * nu
	}
	x7, x8 := x6*x, x4*x4
	h := e.h
	out.sww, out.swu, out.suu = h*sww, h*swu, h*suu
	out.pww, out.pwu = 1-x2/2-pww, -x+x3/6-pwu
	out.puw, out.puu = x-puw, 1-x2/2-puu
	out.qww = (x4*e.qww4 + x6*e.qww6 - qww) / h
	out.qwu = (x3*e.qwu3 - x5*e.qwu5 - x7*e.qwu7 - qwu) / h
	out.quu = (x2*e.quu2 - x4*e.quu4 + x6*e.quu6 + x8*e.quu8 - quu) / h
}
