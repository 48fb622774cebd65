package heat

import (
	"math"
	"testing"

	"keelfall/column"
)

// manufactured is a made-up temperature in a layer that stretches, and the heat source
// that makes it a solution: with ζ = z/L, L = L₀ exp(−et), fixed in the rock,
//
//	T = 400 + 900 ζ + 250 sin(πζ) cos(ωt) + 60 sin(3πζ) sin(ωt)
//	S = ρ c ∂T/∂t|ζ − ∂z(κ ∂zT)    κ = κ₀ (1 + pP)/(1 + b(T − T₀))    P = ρ g z
//
// (method of manufactured solutions; the derivatives are by hand).
type manufactured struct {
	k       column.Conductivity
	stretch float64 // e, 1/s
	omega   float64 // ω, 1/s
}

const (
	madeRho, madeC, madeG, madeL = 3000.0, 1000.0, 9.81, 100e3
	madeEnd                      = 4e14 // s
)

func (m *manufactured) T(x, t float64) float64 {
	return 400 + 900*x + 250*math.Sin(math.Pi*x)*math.Cos(m.omega*t) + 60*math.Sin(3*math.Pi*x)*math.Sin(m.omega*t)
}

func (m *manufactured) source(x, t float64) float64 {
	L := madeL * math.Exp(-m.stretch*t)
	a, b := math.Pi, 3*math.Pi
	cos, sin := math.Cos(m.omega*t), math.Sin(m.omega*t)
	perT := m.omega * (-250*math.Sin(a*x)*sin + 60*math.Sin(b*x)*cos)
	Tz := (900 + 250*a*math.Cos(a*x)*cos + 60*b*math.Cos(b*x)*sin) / L
	Tzz := (-250*a*a*math.Sin(a*x)*cos - 60*b*b*math.Sin(b*x)*sin) / (L * L)
	P := madeRho * madeG * x * L
	below := 1 + m.k.PerKelvin*(m.T(x, t)-m.k.At)
	k := m.k.Reference * (1 + m.k.PerPascal*P) / below
	kz := m.k.Reference*m.k.PerPascal*madeRho*madeG/below - k*m.k.PerKelvin/below*Tz
	return madeRho*madeC*perT - k*Tzz - kz*Tz
}

// mean is that of f over ζ from a to b, by five-point Gauss–Legendre quadrature.
func mean(a, b float64, f func(float64) float64) float64 {
	c, h := (a+b)/2, (b-a)/2
	var sum float64
	for _, p := range [][2]float64{{0, 0.5688888888888889}, {0.5384693101056831, 0.4786286704993665}, {0.9061798459386640, 0.2369268850561891}} {
		if p[0] == 0 {
			sum += p[1] * f(c)
			continue
		}
		sum += p[1] * (f(c-h*p[0]) + f(c+h*p[0]))
	}
	return sum / 2
}

// run returns the cells' temperatures after steps equal steps, and the means they should
// have. The cells are of two sizes and more: smoothly graded by a factor of two.
func (m *manufactured) run(t *testing.T, n, steps int) (got, want []float64) {
	ev := oneLayer(t, n, m.k, 0)
	ev.surfaceT, ev.base.Temperature = 400, 1300
	ev.rate, ev.tolerance = m.stretch, 1e-7 // of the iteration
	x := func(i int) float64 {
		u := float64(i) / float64(n)
		return u + math.Sin(2*math.Pi*u)/(6*math.Pi)
	}
	for i := range ev.cells {
		c := &ev.cells[i]
		c.m = madeRho * madeL * (x(i+1) - x(i))
		c.T = mean(x(i), x(i+1), func(x float64) float64 { return m.T(x, 0) })
		c.e = madeC * c.T
		ev.touch(c)
	}
	ev.press(false)
	ev.heater = func(t float64, given []float64) {
		L := madeL * math.Exp(-m.stretch*t)
		for i := range given {
			given[i] = L * (x(i+1) - x(i)) * mean(x(i), x(i+1), func(x float64) float64 { return m.source(x, t) })
		}
	}
	ev.place()
	ev.w.size(n)
	ev.fixed(t, madeEnd, steps)
	for i := range ev.cells {
		got = append(got, ev.cells[i].T)
		want = append(want, mean(x(i), x(i+1), func(x float64) float64 { return m.T(x, madeEnd) }))
	}
	return got, want
}

func rms(a, b []float64) float64 {
	var sum float64
	for i := range a {
		sum += (a[i] - b[i]) * (a[i] - b[i])
	}
	return math.Sqrt(sum / float64(len(a)))
}

// TestManufactured: second order in space against the made-up solution, in time against
// the same cells with many steps, and in both at once against the made-up solution.
func TestManufactured(t *testing.T) {
	m := &manufactured{k: column.Conductivity{Reference: 3, PerKelvin: 1e-3, PerPascal: 5e-11, At: 300}, stretch: 1e-15, omega: 8e-15}
	orders := func(what string, errs []float64) {
		for i := 1; i < len(errs); i++ {
			order := math.Log2(errs[i-1] / errs[i])
			t.Logf("%s: error %.3g K, then %.3g K: order %.3f", what, errs[i-1], errs[i], order)
			if math.Abs(order-2) > 0.1 {
				t.Errorf("%s: observed order %.3f, want 2", what, order)
			}
		}
	}
	var space, time, both []float64
	for _, n := range []int{80, 160, 320} {
		space = append(space, rms(m.run(t, n, 1600)))
		both = append(both, rms(m.run(t, n, n)))
	}
	ref, _ := m.run(t, 40, 3200)
	for _, steps := range []int{50, 100, 200} {
		got, _ := m.run(t, 40, steps)
		time = append(time, rms(got, ref))
	}
	orders("space", space)
	orders("time", time)
	orders("space and time", both)
}
