package drip_test

import (
	"context"
	"math"
	"strings"
	"testing"

	"keelfall/configs"
	"keelfall/solver/drip"
	"keelfall/solver/heat"
	"keelfall/solver/race"
)

// example is the plan of a built-in experiment, its heat to a tolerance in K in so many
// cells; edits are those of --set.
func example(t *testing.T, name string, tol float64, points int, edits ...string) (drip.Plan, drip.Settings) {
	t.Helper()
	text, err := configs.Example(name)
	if err != nil {
		t.Fatal(err)
	}
	e, err := configs.Read(name, strings.NewReader(text), edits...)
	if err != nil {
		t.Fatal(err)
	}
	p, err := e.Problem()
	if err != nil {
		t.Fatal(err)
	}
	h, err := race.HeatPlan(&p)
	if err != nil {
		t.Fatal(err)
	}
	h.Tolerance, h.Points, h.Markers = tol, points, nil
	return drip.Plan{AlongStrike: p.Strain.Wavevector == race.AlongStrike, Reference: p.Strain.ReferenceRate,
		Begin: func() (drip.Motion, error) {
			ev, err := heat.Begin(h)
			return drip.Heated{Evolution: ev}, err
		}}, p.Drip
}

// rundal is the example whose root reacts and grows by rock at its base while sheets come
// in, the arc stretches and is worn down, with an undulation so large that it drips.
func rundal(t *testing.T, tol float64, points int) (drip.Plan, drip.Settings) {
	p, set := example(t, "rundal", tol, points)
	set.Amplitude, set.Criterion = 1.9e3, 0.3
	return p, set
}

var rundalList = []float64{25e3, 50e3, 100e3}

// timesApart is the largest relative difference of drip times, and of how many.
func timesApart(t *testing.T, name string, a, b [][3]float64) (worst float64, n int) {
	t.Helper()
	for i := range a {
		for j, x := range a[i] {
			y := b[i][j]
			if math.IsInf(x, 1) != math.IsInf(y, 1) {
				t.Errorf("%s: λ %g: %g and %g s", name, rundalList[i], x, y)
			} else if !math.IsInf(x, 1) && x > 0 {
				n++
				worst = math.Max(worst, math.Abs(x/y-1))
			}
		}
	}
	t.Logf("%s: %d drips, times differ by %.2g", name, n, worst)
	return worst, n
}

// Twice the parts, in the same column at the same times, move no drip of rundal by 0.1 %.
func TestRundalParts(t *testing.T) {
	p, set := rundal(t, 0.02, 0)
	own, finer, err := drip.Finer(context.Background(), p, set, rundalList)
	if err != nil {
		t.Fatal(err)
	}
	if worst, n := timesApart(t, "parts", own, finer); n == 0 || worst > 1e-3 {
		t.Errorf("%d drips, times differ by %.2g", n, worst)
	}
}

// With steps halved, drips of rundal move by up to 0.5 %, with the heat in twice the cells
// by up to 0.9 %, and from 600 to 1200 cells by 0.3 % more. The aim is 0.1 %, and is not met
// here: rock that reacts within the last cells above the base it came to, and mixes with
// them, is not resolved by 300 cells, and the growth is slow, so that 1e-3 of ln amplitude
// are 0.3 % of the time. The bound is what was measured, and catches what is worse.
func TestRundalRuns(t *testing.T) {
	if testing.Short() {
		t.Skip("a minute under the race detector")
	}
	run := func(points int, tol float64, ends []float64) (*drip.Path, []float64) {
		p, set := rundal(t, tol, points)
		a, halves, err := drip.FollowAll(context.Background(), p, set, rundalList, 1, ends)
		if err != nil {
			t.Fatal(err)
		}
		return a, halves
	}
	whole, ends := run(0, 0.02, nil)
	steps, _ := run(0, 0.02, ends)
	heat, _ := run(600, 0.01, nil)
	for name, b := range map[string]*drip.Path{"steps": steps, "heat": heat} {
		if worst, n := timesApart(t, name, whole.Times, b.Times); n == 0 || worst > 1e-2 {
			t.Errorf("%s: %d drips, times differ by %.2g", name, n, worst)
		}
	}
}
