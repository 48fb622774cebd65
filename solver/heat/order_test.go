package heat

import (
	"context"
	"math"
	"testing"

	"keelfall/column"
)

// oneLayer is a rock of κ 1e-6 m²/s on n equal cells, the mesh kept; its temperature a
// straight line with a sine on it.
func oneLayer(t *testing.T, n int, k column.Conductivity, swing float64) *Evolution {
	const L = 100e3
	r := column.Rock{Density: column.Uniform(3000), HeatCapacity: 1000, Conductivity: k,
		Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1}}
	c := &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: 500}, Layers: []column.Layer{{Name: "a", Thickness: L, Rock: r}},
		Base: column.Base{Boundary: column.Rigid, HasTemperature: true, Temperature: 500}}
	start, err := Solve(c)
	if err != nil {
		t.Fatal(err)
	}
	ev, err := Begin(Plan{Column: c, Start: start, Points: n})
	if err != nil {
		t.Fatal(err)
	}
	ev.fixedMesh = true
	ev.cells = ev.cells[:0]
	d := L / float64(n)
	for i := range n {
		a, b := math.Pi*float64(i)/float64(n), math.Pi*float64(i+1)/float64(n)
		T := 500 + swing*(math.Cos(a)-math.Cos(b))/(b-a)
		ev.cells = append(ev.cells, cell{m: 3000 * d, T: T, e: 1000 * T})
	}
	ev.index()
	for i := range ev.cells {
		ev.touch(&ev.cells[i])
	}
	ev.press(false)
	return ev
}

// fixed advances by m equal steps.
func (ev *Evolution) fixed(t *testing.T, to float64, m int) {
	h := to / float64(m)
	ev.smooth = true
	for range m {
		ev.h = h
		if err := ev.prepare(h); err != nil {
			t.Fatal(err)
		}
		ev.setStreams(h)
		if _, err := ev.attempt(h); err != nil {
			t.Fatal(err)
		}
		ev.accept(h)
	}
}

// TestOrders: a decaying sine of constant conductivity, refined in space with small steps
// against exp(−π²κt/L²) (derived), and in time against the same cells with many steps.
func TestOrders(t *testing.T) {
	const L, kappa = 100e3, 1e-6
	const at = 0.1 * L * L / kappa
	middle := func(n, m int) float64 {
		ev := oneLayer(t, n, column.Conductivity{Reference: 3}, 300)
		ev.fixed(t, at, m)
		c := &ev.cells[n/3]
		return (c.T - 500) / 300
	}
	exact := func(n int) float64 {
		a, b := math.Pi*float64(n/3)/float64(n), math.Pi*float64(n/3+1)/float64(n)
		return (math.Cos(a) - math.Cos(b)) / (b - a) * math.Exp(-math.Pi*math.Pi*kappa/(L*L)*at)
	}
	var errs []float64
	for _, n := range []int{24, 48, 96} {
		errs = append(errs, math.Abs(middle(n, 800)-exact(n)))
	}
	report(t, "space", errs)
	errs = errs[:0]
	const n = 48
	own := middle(n, 1600)
	for _, m := range []int{10, 20, 40} {
		errs = append(errs, math.Abs(middle(n, m)-own))
	}
	report(t, "time", errs)
}

// TestOrdersNonlinear: conductivity that falls with temperature, stretching and erosion
// together, against the same with many steps: second order in time.
func TestOrdersNonlinear(t *testing.T) {
	run := func(m int) float64 {
		ev := oneLayer(t, 60, column.Conductivity{Reference: 3, PerKelvin: 1e-3, At: 300}, 300)
		ev.tolerance = 1e-6 // of the iteration
		ev.rate, ev.eroding = 3e-16, 2e-13
		ev.fixed(t, 3e14, m)
		return ev.cells[20].T
	}
	ref := run(2000)
	var errs []float64
	for _, m := range []int{25, 50, 100} {
		errs = append(errs, math.Abs(run(m)-ref))
	}
	report(t, "time, nonlinear", errs)
}

func report(t *testing.T, what string, errs []float64) {
	t.Helper()
	for i := 1; i < len(errs); i++ {
		order := math.Log2(errs[i-1] / errs[i])
		t.Logf("%s: error %.3g, then %.3g: order %.2f", what, errs[i-1], errs[i], order)
		if order < 1.85 || order > 2.3 {
			t.Errorf("%s: observed order %.2f, want 2", what, order)
		}
	}
}

// TestDamping: of a rate λ the method's step leaves R(z) with |R| → 0: a sawtooth on the
// finest cells is gone after a long step, where a method that is only A-stable keeps it.
func TestDamping(t *testing.T) {
	ev := oneLayer(t, 100, column.Conductivity{Reference: 3}, 0)
	for i := range ev.cells {
		ev.cells[i].T = 500 + 100*math.Pow(-1, float64(i))
		ev.cells[i].e = 1000 * ev.cells[i].T
	}
	ev.fresh = false
	ev.fixed(t, 1e16, 1)
	for i := range ev.cells {
		if d := math.Abs(ev.cells[i].T - 500); d > 0.1 {
			t.Fatalf("cell %d is %g K off", i, d)
		}
	}
}

// TestNoAllocation: steps do not allocate.
func TestNoAllocation(t *testing.T) {
	ev := oneLayer(t, 100, column.Conductivity{Reference: 3, PerKelvin: 1e-3}, 300)
	ev.fixedMesh = false
	if err := ev.Advance(context.Background(), 1e13); err != nil {
		t.Fatal(err)
	}
	if n := testing.AllocsPerRun(100, func() {
		if err := ev.step(1e12); err != nil {
			t.Fatal(err)
		}
	}); n > 0 {
		t.Errorf("%g allocations a step", n)
	}
}
