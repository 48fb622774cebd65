package checks

import (
	"context"
	"fmt"
	"math"

	"keelfall/solver/heat"
)

// clockChecks hold Dodson's closure against diffusion itself. A grain with D falling as
// exp(−s), s = t/τ, which makes its daughter at unit rate, ends with the mean
// concentration s_end − ln A: for it alone is A what it is.
func clockChecks() []Check {
	var list []Check
	for _, g := range dodson {
		list = append(list, Check{"closure of a " + g.name + ": Dodson's ln A by diffusion on a grid", "", g.lnA, 1e-5,
			"problem of Dodson 1973; ln A = γ + Σ c ln α² in closed form", Derived,
			func(context.Context) (float64, error) { return lnA(g.dims), nil }})
		list = append(list, Check{"closure of a " + g.name + ": age on a path with 1/T linear in time", "Myr", dodsonAge(g.printed), 1e-6,
			"Dodson 1973", Published,
			func(context.Context) (float64, error) { return pathAge(g.name) }})
	}
	for _, h := range []struct{ rate, want float64 }{{5, 490}, {500, 578}} {
		c := hornblende("sphere")
		c.ActivationEnergy = 64.1e3 * 4.184
		list = append(list, Check{fmt.Sprintf("closure of argon in hornblende, 80 µm, at %g K/Myr", h.rate), "degC", h.want, 2e-3,
			"Harrison 1981, rounded to 1 °C there", FromMemory,
			func(context.Context) (float64, error) { return c.ClosureTemperature(h.rate/myr) - 273.15, nil }})
	}
	return list
}

// dodson holds A as printed by Dodson 1973 and its logarithm in closed form (see
// TestDodsonA).
var dodson = []struct {
	name         string
	dims         int
	printed, lnA float64
}{
	{"sphere", 3, 55, 4.006597422790},
	{"cylinder", 2, 27, 3.295053363075},
	{"sheet", 1, 8.7, 2.158204941296},
}

// hornblende is argon in hornblende: Harrison 1981, from memory.
func hornblende(geometry string) heat.Clock {
	return heat.Clock{Name: "hornblende", ActivationEnergy: 268e3, Diffusivity: 2.4e-6, Radius: 80e-6, Geometry: geometry}
}

const (
	coolingTime = 2 * myr // τ of the path below: D falls by e in this time
	coolsFrom   = 1100.0  // K
	gas         = 8.31446261815324
)

// dodsonAge is when D has fallen so far that A τ D/a² = 1, in Myr.
func dodsonAge(A float64) float64 {
	c := hornblende("")
	d := c.Diffusivity * math.Exp(-c.ActivationEnergy/(gas*coolsFrom)) / (c.Radius * c.Radius)
	return coolingTime * math.Log(A*coolingTime*d) / myr
}

// pathAge is the same from the path, point by point.
func pathAge(geometry string) (float64, error) {
	c := hornblende(geometry)
	var t, T []float64
	for at := 0.0; at < 40*myr; at += 0.05 * myr {
		t = append(t, at)
		T = append(T, 1/(1/coolsFrom+gas/c.ActivationEnergy*at/coolingTime))
	}
	r, err := c.Close(t, T)
	return r.Time / myr, err
}

// lnA takes the grid's error, which falls with its square, off.
func lnA(dims int) float64 {
	coarse, fine := lnAOn(200, dims), lnAOn(400, dims)
	return fine + (fine-coarse)/3
}

// lnAOn diffuses and makes the daughter in finite volumes, fine at the rim, with the
// second-order backward differences in time.
func lnAOn(cells, dims int) float64 {
	const from, to, step, grade = -6.0, 28.0, 0.008, 12.0
	face := make([]float64, cells+1) // radius, from the rim inwards
	volume, area, apart := make([]float64, cells), make([]float64, cells), make([]float64, cells)
	for i := range face {
		face[i] = 1 - math.Expm1(grade*float64(i)/float64(cells))/math.Expm1(grade)
	}
	power := func(r float64) float64 { return math.Pow(r, float64(dims)) / float64(dims) }
	for i := range cells { // area and apart belong to the cell's outer face
		volume[i] = power(face[i]) - power(face[i+1])
		area[i] = math.Pow(face[i], float64(dims-1))
		apart[i] = (face[i] - face[i+1]) / 2
		if i > 0 {
			apart[i] = (face[i-1] - face[i+1]) / 2
		}
	}
	u, old := make([]float64, cells), make([]float64, cells)
	cp, dp := make([]float64, cells), make([]float64, cells)
	// solve gives u with weight·V u − D L u = right hand side.
	solve := func(D, weight float64, rhs func(i int) float64) {
		for i := range cells {
			out := D * area[i] / apart[i]
			in := 0.0
			if i+1 < cells {
				in = D * area[i+1] / apart[i+1]
			}
			b, r := weight*volume[i]+out+in, rhs(i)*volume[i]
			if i > 0 {
				b -= out * cp[i-1]
				r += out * dp[i-1]
			}
			cp[i], dp[i] = in/b, r/b
		}
		for i := cells - 1; i >= 0; i-- {
			old[i], u[i] = u[i], dp[i]
			if i+1 < cells {
				u[i] += cp[i] * u[i+1]
			}
		}
	}
	solve(math.Exp(-from), 0, func(int) float64 { return 1 }) // nothing is kept yet
	copy(old, u)
	n := int(math.Round((to - from) / step))
	for k := 1; k <= n; k++ {
		solve(math.Exp(-(from + float64(k)*step)), 1.5/step, func(i int) float64 { return 1 + (2*u[i]-old[i]/2)/step })
	}
	var sum, all float64
	for i := range cells {
		sum, all = sum+u[i]*volume[i], all+volume[i]
	}
	return to - sum/all
}
