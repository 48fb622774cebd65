package growth

// eliminate factors R (its lower triangle in f.l, plus diag on the diagonal) as
// L D Lᵀ without square roots and carries the four right-hand sides forward. On
// return f.l holds L below the diagonal and 1/D on it. R is symmetric positive
// definite for positive viscosities, so no pivoting is needed.
//
// Column by column, each column's update of all that follows it: the updates do not
// wait for one another, which a dot product's sum would.
func (f *factor) eliminate(diag *[stages]float64) {
	l := &f.l
	for j := 0; j < stages; j++ {
		jj := j*(j+1)/2 + j
		inv := 1 / (l[jj] + diag[j])
		l[jj] = inv
		nw, nu, bw, bu := f.nw[j], f.nu[j], f.bw[j], f.bu[j]
		var ld [stages]float64 // L_ij D_j, the column as it was
		for i, at := j+1, jj+j+1; i < stages; i++ {
			ld[i] = l[at]
			at += i + 1
		}
		for i, at := j+1, jj+j+1; i < stages; i++ {
			lij := ld[i] * inv
			l[at] = lij
			f.nw[i] -= lij * nw
			f.nu[i] -= lij * nu
			f.bw[i] -= lij * bw
			f.bu[i] -= lij * bu
			for m := j + 1; m <= i; m++ {
				l[at+m-j] -= lij * ld[m]
			}
			at += i + 1
		}
	}
}
