package growth

// eliminate factors R (its lower triangle in f.l, plus diag on the diagonal) as
// L D Lᵀ without square roots and carries the four right-hand sides forward. On
// return f.l holds L below the diagonal and 1/D on it. R is symmetric positive
// definite for positive viscosities, so no pivoting is needed.
func (f *factor) eliminate(diag *[stages]float64) {
	l := &f.l
	for j := 0; j < stages; j++ {
		jj := j * (j + 1) / 2
		d := l[jj+j] + diag[j]
		nw, nu, bw, bu := f.nw[j], f.nu[j], f.bw[j], f.bu[j]
		for m := 0; m < j; m++ {
			ljm := l[jj+m]
			inv := l[m*(m+1)/2+m]
			d -= ljm * ljm * inv // ljm is still L_jm D_m
			ljm *= inv
			nw -= ljm * f.nw[m]
			nu -= ljm * f.nu[m]
			bw -= ljm * f.bw[m]
			bu -= ljm * f.bu[m]
			l[jj+m] = ljm
		}
		f.nw[j], f.nu[j], f.bw[j], f.bu[j] = nw, nu, bw, bu
		l[jj+j] = 1 / d
		for i := j + 1; i < stages; i++ {
			ii := i * (i + 1) / 2
			s := l[ii+j]
			for m := 0; m < j; m++ {
				s -= l[ii+m] * l[jj+m] // (L_im D_m) L_jm
			}
			l[ii+j] = s
		}
	}
}
