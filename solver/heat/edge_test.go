package heat_test

import (
	"context"
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"
)

// flows is a plan of a crust with heat production over a mantle, eroded and stretched in
// part at one time.
func flows(points int) heat.Plan {
	rock := func(name string, h, rho, k, H, decay float64) column.Layer {
		l := layer(name, h, column.Conductivity{Reference: k, PerKelvin: 1e-3, PerPascal: 1e-11, At: 293.15}, column.HeatProduction{Top: H, DecayLength: decay})
		l.Density = column.EquationOfState{Reference: rho, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15}
		l.HeatCapacity = 1000
		return l
	}
	c := cooled(283.15, 1573.15, rock("upper", 20e3, 2750, 2.8, 1.6e-6, 12e3), rock("lower", 25e3, 2900, 2.5, 0.3e-6, 0), rock("mantle", 75e3, 3300, 3.5, 0.02e-6, 0))
	c.Base.Boundary, c.Base.Rock = column.HalfSpace, c.Layers[2].Rock
	const mm = 1e-3 / (1e-6 * myr)
	p := heat.Plan{Column: c, Points: points, Events: []heat.Event{
		{Verb: "erode", From: 5 * myr, To: 25 * myr, Rate: 0.5 * mm},
		{Verb: "stretch", From: 15 * myr, To: 35 * myr, Rate: math.Log(1.5) / (20 * myr)},
	}}
	if points != 0 {
		p.Tolerance = 0.1 * 300 * 300 / float64(points*points)
	}
	return p
}

// TestSurfaceFlow: at the start the flow is the steady one; while rock erodes and
// stretches it follows that of four times the cells, without teeth where cells at the
// surface become one.
func TestSurfaceFlow(t *testing.T) {
	run := func(points int) *heat.History {
		h, err := heat.Run(context.Background(), flows(points), 50*myr, []float64{0})
		if err != nil {
			t.Fatal(err)
		}
		return h
	}
	h, fine := run(0), run(1200)
	want, err := heat.Steady(flows(0).Column)
	if err != nil {
		t.Fatal(err)
	}
	for name, got := range map[string][2]float64{"surface": {h.SurfaceFlow[0], want.SurfaceFlow}, "surface of the snapshot": {h.Snapshots[0].Profile.SurfaceFlow, want.SurfaceFlow},
		"base of the snapshot": {h.Snapshots[0].Profile.BaseFlow, want.BaseFlow}} {
		t.Logf("%s: %.6g, steady %.6g W/m²: %.1e", name, got[0], got[1], got[0]/got[1]-1)
		if !close(got[0], got[1], 3e-4) {
			t.Errorf("%s: %g W/m² at the start, %g in the steady state", name, got[0], got[1])
		}
	}
	var worst, at float64
	j := 0
	for i, tm := range h.Time {
		for fine.Time[j+1] < tm {
			j++
		}
		q := fine.SurfaceFlow[j] + (fine.SurfaceFlow[j+1]-fine.SurfaceFlow[j])*(tm-fine.Time[j])/(fine.Time[j+1]-fine.Time[j])
		if d := math.Abs(h.SurfaceFlow[i]/q - 1); d > worst {
			worst, at = d, tm
		}
		if i > 0 && tm <= 25*myr && h.SurfaceFlow[i] < (1-5e-4)*h.SurfaceFlow[i-1] {
			t.Errorf("while rock erodes the flow falls from %g to %g W/m² at %g Myr", h.SurfaceFlow[i-1], h.SurfaceFlow[i], tm/myr)
		}
	}
	if worst > 5e-3 {
		t.Errorf("the flow is %.2e off that of four times the cells", worst)
	}
	t.Logf("worst %.2e at %.3g Myr, %d and %d steps", worst, at/myr, h.Steps, fine.Steps)
}
