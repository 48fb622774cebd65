package excision_test

import (
	"context"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"keelfall/column"
	"keelfall/solver/excision"
	"keelfall/solver/heat"
)

// still is the column of layers() as a whole one, without a temperature.
func still() *column.Column {
	rock := func(density float64) column.Rock {
		return column.Rock{Density: column.Uniform(density), Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1}}
	}
	c := &column.Column{Gravity: 9.81, Base: column.Base{Boundary: column.HalfSpace, Rock: rock(3250)}}
	for _, l := range layers() {
		c.Layers = append(c.Layers, column.Layer{Name: l.Name, Thickness: l.Thickness, Root: l.Root, Rock: rock(l.Density)})
	}
	return c
}

func follow(t testing.TB, p excision.Plan, window float64) *excision.Result {
	t.Helper()
	r, err := excision.Run(context.Background(), p, 0.3, window*myr)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func near(a, b, tolerance float64) bool {
	return a == b || math.Abs(a-b) <= tolerance*math.Max(math.Abs(a), math.Abs(b))
}

// TestAgreesWithSolve: in a column that stays as it is, given rates through time come to
// what the closed form has, in every number of the answer and every list against time.
func TestAgreesWithSolve(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var zones []excision.Zone
		cuts := rapid.SampledFrom([][][]string{{{"granulite", "pyroxenite"}}, {{"granulite"}, {"pyroxenite"}}, {{"crust", "granulite", "pyroxenite"}}, {{"crust"}, {"granulite", "pyroxenite"}}, {{"granulite", "pyroxenite"}, {"pyroxenite"}}}).Draw(t, "cuts")
		for i, c := range cuts {
			from := rapid.Float64Range(0, 20).Draw(t, "from")
			zones = append(zones, excision.Zone{Name: string(rune('a' + i)), Dip: rapid.Float64Range(0.1, 1.5).Draw(t, "dip"), LayeringDip: rapid.Float64Range(-0.3, 0.3).Draw(t, "layering"),
				Cuts: c, From: from * myr, To: (from + rapid.Float64Range(0.1, 60).Draw(t, "for")) * myr, SlipRate: rapid.Float64Range(1e-5/year, 10e-3/year).Draw(t, "slip")})
		}
		want, err := excision.Solve(zones, setting(40))
		if err != nil {
			t.Fatal(err)
		}
		got, err := excision.Run(context.Background(), excision.Plan{Heat: heat.Plan{Column: still()}, Zones: zones, ArcWidth: 150e3}, 0.3, 40*myr)
		if err != nil {
			t.Fatal(err)
		}
		same := func(what string, a, b, scale float64) {
			if a != b && !(math.Abs(a-b) <= 1e-9*scale) {
				t.Errorf("%s: %.12g, Solve %.12g", what, a, b)
			}
		}
		time := func(what string, a, b float64) {
			if b <= 80*myr {
				same(what, a, b, 40*myr)
			}
		}
		if got.Outcome != want.Outcome {
			t.Errorf("%s, Solve %s", got.Outcome, want.Outcome)
		}
		time("time", got.Time, want.Time)
		time("cut through", got.CutThroughTime, want.CutThroughTime)
		time("arc mean", got.ArcMeanTime, want.ArcMeanTime)
		time("share", got.LocalBeyond, want.LocalBeyond)
		same("slip", got.Slip, want.Slip, 1e4)
		same("heave", got.Heave, want.Heave, 1e4)
		same("throw", got.Throw, want.Throw, 1e4)
		same("gap", got.PressureGap, want.PressureGap, 1e9)
		for i, at := range got.History.Time {
			j := 2 * i // Solve has twice as many
			same("its time", at, want.History.Time[j], 40*myr)
			// What is thinner than a millimetre is gone in Run.
			if a, b := got.History.RootThickness[i], want.History.RootThickness[j]; math.Abs(a-b) > 2.1e-3 {
				t.Errorf("root thickness %g m, Solve %g", a, b)
			}
			same("slip", got.History.Slip[i], want.History.Slip[j], 1e4)
			same("heave", got.History.Heave[i], want.History.Heave[j], 1e4)
			same("share", got.History.RootMassShare[i], want.History.RootMassShare[j], 200) // a millimetre of 20 km
			same("arc mean share", got.History.ArcMeanShare[i], want.History.ArcMeanShare[j], 1)
			same("arc mean", got.History.ArcMean[i], want.History.ArcMean[j], 1e4)
		}
	})
}

// TestRefusedPlans: what a plan cannot have.
func TestRefusedPlans(t *testing.T) {
	for want, spoil := range map[string]func(*excision.Zone, *excision.Plan){
		"directly below": func(z *excision.Zone, _ *excision.Plan) { z.Cuts = []string{"crust", "pyroxenite"} },
		"not a layer":    func(z *excision.Zone, _ *excision.Plan) { z.Cuts = []string{"keel"} },
		"dips 0°":        func(z *excision.Zone, _ *excision.Plan) { z.Dip = 0 },
		"bear one force": func(z *excision.Zone, p *excision.Plan) {
			p.Heat.Column = even(1, 1)
			*z = excision.Zone{Name: "z", Dip: 0.5, Cuts: []string{"root"}, To: myr, Drive: excision.ForceBalance, Width: 100, FarField: 1e12}
			o := *z
			o.Name, o.FarField = "o", 2e12
			p.Zones = append(p.Zones, o)
		},
		"name of another": func(z *excision.Zone, p *excision.Plan) {
			o := *z
			o.From, o.To = z.To, z.To+1
			p.Zones = append(p.Zones, o)
		},
		"which is none":       func(z *excision.Zone, _ *excision.Plan) { z.Drive, z.Share = excision.ExtensionShare, 0.5 },
		"width is not given":  func(z *excision.Zone, p *excision.Plan) { z.Drive, p.ArcWidth = excision.ExtensionShare, 0 },
		"no temperature":      func(z *excision.Zone, _ *excision.Plan) { z.Drive, z.Width = excision.ForceBalance, 1e3 },
		"has no width":        func(z *excision.Zone, _ *excision.Plan) { z.Drive = excision.ForceBalance },
		"end that is not":     func(z *excision.Zone, _ *excision.Plan) { z.Drive, z.To = excision.PressureStep, math.Inf(1) },
		"leaves nothing out":  func(z *excision.Zone, _ *excision.Plan) { z.Drive, z.LayeringDip = excision.PressureStep, 1 },
		"layers it cuts make": func(z *excision.Zone, _ *excision.Plan) { z.Drive, z.PressureGap = excision.PressureStep, 5e9 },
		"extension are 1.2 to": func(z *excision.Zone, p *excision.Plan) {
			p.Heat.ExtensionRate = 1e-15
			z.Drive, z.Share = excision.ExtensionShare, 0.6
			o := *z
			o.Name, o.Cuts = "o", []string{"crust"}
			p.Zones = append(p.Zones, o)
		},
	} {
		z := zone("granulite", "pyroxenite")
		p := excision.Plan{Heat: heat.Plan{Column: still()}, ArcWidth: 150e3, Zones: []excision.Zone{{}}}
		spoil(&z, &p)
		p.Zones[0] = z
		if _, err := excision.Run(context.Background(), p, 0.3, 40*myr); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v", want, err)
		}
	}
}
