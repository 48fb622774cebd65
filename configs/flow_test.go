package configs

import (
	"math"
	"strings"
	"testing"

	"keelfall/rheology"
)

const rootCreep = "creep: dry eclogite Zhang 2007"

func TestFlow(t *testing.T) {
	mix := "creep: [dry eclogite Zhang 2007, {mix: geometric, of: [{fraction: 0.6, creep: [dry olivine dislocation Hirth 2003, dry olivine diffusion Hirth 2003]}, " +
		"{fraction: 0.4, creep: {mix: iso-stress, of: [{fraction: 0.5, creep: dry Columbia diabase Mackwell 1998}, " +
		"{fraction: 0.5, creep: {prefactor: 398.1 MPa^-3 s^-1, stress-exponent: 3, activation-energy: 356 kJ/mol, test: axial}}]}}]}], " +
		"grain-size: {piezometer: olivine}, friction: {cohesion: 20 MPa, angle: 30 deg, pore-fluid-factor: 0.37}"
	e := mustRead(t, "s.yaml", swap(rootCreep, mix))
	p := mustProblem(t, e)
	r := &p.Column.Layers[1].Rock
	c := r.Viscosity.Creep
	if len(c.Laws) != 1 || len(c.Mixtures) != 1 || len(c.AllLaws()) != 5 {
		t.Fatalf("%d laws, %d mixtures, %d in all; want 1, 1, 5", len(c.Laws), len(c.Mixtures), len(c.AllLaws()))
	}
	m := c.Mixtures[0]
	inner := m.Phases[1].Mixtures[0]
	if m.Rule != rheology.Geometric || m.Phases[0].Fraction != 0.6 || inner.Rule != rheology.IsoStress || inner.Phases[1].Laws[0].N != 3 {
		t.Errorf("mixture %+v", m)
	}
	if r.Piezometer == nil || r.Piezometer.Mineral != "olivine" || r.GrainSize != 0 {
		t.Errorf("grain size %g, piezometer %+v", r.GrainSize, r.Piezometer)
	}
	if f := r.Friction; f == nil || f.Cohesion != 20e6 || math.Abs(f.Angle/(math.Pi/6)-1) > 1e-15 || f.PoreFluid != 0.37 {
		t.Errorf("friction %+v", r.Friction)
	}
	if laws := e.Resolved()["creep_laws"].([]any); len(laws) != 6 { // and the mantle's
		t.Errorf("%d laws resolved", len(laws))
	}
	// A base of the last layer's rock takes its friction too; what is left out is listed.
	e = mustRead(t, "s.yaml", strings.Replace(small, "water: {fugacity: 100 MPa}", "water: {fugacity: 100 MPa}, friction: {cohesion: 1 MPa}", 1))
	if f := mustProblem(t, e).Column.Base.Friction; f == nil || f.Cohesion != 1e6 || f.Angle != 0 {
		t.Errorf("base %+v", f)
	}
	listed := false
	for _, d := range mustProblem(t, e).Defaults {
		listed = listed || d.Key == "layers.mantle.friction.angle" && d.Value == "0 deg"
	}
	if !listed {
		t.Error("layers.mantle.friction.angle is not among the defaults")
	}
}

func TestFlowMistakes(t *testing.T) {
	const at = "s.yaml:7: layers[1] (root)."
	for _, c := range []struct{ name, in, want string }{
		{"one part", swap(rootCreep, "creep: {mix: geometric, of: [{fraction: 1, creep: dry eclogite Zhang 2007}]}"),
			at + "creep.of: has 1 part; a mixture needs two or more"},
		{"fractions", swap(rootCreep, "creep: {mix: iso-stress, of: [{fraction: 0.6, creep: dry eclogite Zhang 2007}, {fraction: 0.5, creep: dry eclogite Zhang 2007}]}"),
			at + "creep.of: has fractions that sum to 1.1; need 1 (within 0.01)"},
		{"unknown law", swap(rootCreep, "creep: {mix: iso-stress, of: [{fraction: 0.5, creep: dry eclogite Zhang 2007}, {fraction: 0.5, creep: [dry eclogit Zhang 2007]}]}"),
			at + "creep.of[1].creep[0]: no creep law \"dry eclogit Zhang 2007\"; the nearest: dry eclogite Zhang 2007"},
		{"grain size", swap(rootCreep, "creep: {mix: iso-stress, of: [{fraction: 0.5, creep: dry eclogite Zhang 2007}, {fraction: 0.5, creep: dry olivine diffusion Hirth 2003}]}"),
			at + "grain-size: is missing; dry olivine diffusion Hirth 2003 needs one, for example grain-size: 2 mm"},
		{"rule", swap(rootCreep, "creep: {mix: voigt, of: [{fraction: 0.5, creep: dry eclogite Zhang 2007}, {fraction: 0.5, creep: dry eclogite Zhang 2007}]}"),
			at + "creep.mix: voigt is not known; needs one of geometric, iso-stress, iso-strain-rate"},
		{"piezometer", swap(rootCreep, rootCreep+", grain-size: {piezometer: quartz}"),
			at + "grain-size.piezometer: quartz is not known; needs olivine"},
		{"no strength", swap(rootCreep, rootCreep+", friction: {angle: 30 deg, pore-fluid-factor: 1}"),
			at + "friction: leaves the rock no strength"},
		{"a number", swap("viscosity: 1e22 Pa s", "viscosity: 1e22 Pa s, friction: {cohesion: 1 MPa}"),
			"s.yaml:6: layers[0] (crust).friction: belongs to creep laws; a viscosity given as a number is used as it is"},
	} {
		_, err := Read("s.yaml", strings.NewReader(c.in))
		if err == nil || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("%s: got %v\nwant %s", c.name, err, c.want)
		}
	}
}
