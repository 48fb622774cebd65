package growth

// Loads inside an element. A vertical force per area p_i at Gauss point i adds to
// the condensed element (the same R, so the discrete flow stays reciprocal)
//
//	v_b = Φ v_t + Ψ t_b + Λ p      t_t = Φᵀ t_b − Q v_t + Γᵀ p      W = Γ v_t + Λᵀ t_b + Θ p
//	W(c) = E y + F v_t,  E = −x a²,  F = (1 − x²c²/2, −xc + x³c³/6)
//	Λ = h Bᵀ R⁻¹ Eᵀ,  Γ = F − E R⁻¹ N,  Θ = h E R⁻¹ Eᵀ
type inner struct {
	lw, lu [stages]float64         // Λ
	gw, gu [stages]float64         // Γ
	th     [stages][stages]float64 // Θ
	rows   [stages][stages]float64 // L⁻¹ Eᵀ, one row a node
}

// nodal computes an element's inner response at k from its factorisation.
func (e *element) nodal(k float64, f *factor, in *inner) {
	x := k * e.h
	g := &in.rows
	for i := range g {
		for j := range g[i] {
			v := -x * butcher2[i][j]
			for m := 0; m < j; m++ {
				v -= f.l[j*(j+1)/2+m] * g[i][m]
			}
			g[i][j] = v
		}
	}
	for i := range g {
		var lw, lu, gw, gu float64
		for m := range g[i] {
			d := g[i][m] * f.d[m]
			lw += d * f.bw[m]
			lu += d * f.bu[m]
			gw += d * f.nw[m]
			gu += d * f.nu[m]
		}
		c := nodeC[i]
		in.lw[i], in.lu[i] = e.h*lw, e.h*lu
		in.gw[i], in.gu[i] = 1-x*x*c*c/2-gw, -x*c+x*x*x*c*c*c/6-gu
		for j := 0; j <= i; j++ {
			var t float64
			for m := range g[i] {
				t += g[i][m] * f.d[m] * g[j][m]
			}
			in.th[i][j], in.th[j][i] = e.h*t, e.h*t
		}
	}
}

// carry takes a velocity from an element's top to its base.
func (l *link) carry(v response) response {
	return response{l.x.ww*v.w + l.x.wu*v.u, l.x.uw*v.w + l.x.uu*v.u}
}

// close joins an element's inner response to all that lies below it:
// Γ ← Γ − Λᵀ T Φ, Θ ← Θ − Λᵀ T Λ, Λ ← M Λ.
func (in *inner) close(jt *jointAt) {
	var tlw, tlu [stages]float64
	for q := range tlw {
		tlw[q] = jt.t.ww*in.lw[q] + jt.t.wu*in.lu[q]
		tlu[q] = jt.t.wu*in.lw[q] + jt.t.uu*in.lu[q]
	}
	for q := range tlw {
		for r := range tlw {
			in.th[q][r] -= in.lw[q]*tlw[r] + in.lu[q]*tlu[r]
		}
		in.gw[q] -= tlw[q]*jt.pww + tlu[q]*jt.puw
		in.gu[q] -= tlw[q]*jt.pwu + tlu[q]*jt.puu
	}
	for q := range tlw {
		lw, lu := in.lw[q], in.lu[q]
		in.lw[q], in.lu[q] = jt.m.ww*lw+jt.m.wu*lu, jt.m.uw*lw+jt.m.uu*lu
	}
}
