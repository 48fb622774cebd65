package configs

import (
	"encoding/json"
	"math"
	"strings"
	"testing"

	"gonum.org/v1/gonum/floats/scalar"

	"keelfall/rheology"
	"keelfall/solver/excision"
)

// zoned is small with one zone, or with several, on line 9 and arc.width on line 10.
func zoned(zones ...string) string {
	return small + "excision: {zones: [" + strings.Join(zones, ", ") + "]}\narc: {width: 160 km}\n"
}

// Mistakes of shear zones: each with its line and key, and only once.
func TestZoneMistakes(t *testing.T) {
	const (
		pushed = "friction: {cohesion: 10 MPa, angle: 30 deg}, width: 400 m, force: {far-field: 2e12 N/m}"
		at     = "s.yaml:9: excision.zones[0] (z)"
		plain  = "{name: z, dip: 30 deg, cuts: [root], slip-rate: 1 mm/yr, from: 2 Myr, to: 10 Myr}"
	)
	for _, c := range []struct{ name, in, want string }{
		{"both rate and force", zoned("{name: z, dip: 30 deg, cuts: [root], slip-rate: 1 mm/yr, " + pushed + "}"),
			at + ": has slip-rate and force; only one of them may be given"},
		{"both share and gap", zoned("{name: z, dip: 30 deg, cuts: [root], share: 0.4, pressure-gap: 0.1 GPa}") + "strain: {extension-rate: 1e-16 1/s}\n",
			at + ": has share and pressure-gap; only one of them may be given"},
		{"before the start", zoned("{name: z, dip: 30 deg, cuts: [root], slip-rate: 1 mm/yr, from: 91 Ma}"),
			at + ".from: 91 Ma lies before the start, 0 Myr; put what happened earlier into the column"},
		{"share without a width", strings.Replace(zoned("{name: z, dip: 30 deg, cuts: [root], share: 0.4}"), "arc: {width: 160 km}", "strain: {extension-rate: 1e-16 1/s}", 1),
			at + ".share: is a share of the arc's extension, which needs its width; add arc.width, for example arc: {width: 160 km}"},
		{"share of nothing", zoned("{name: z, dip: 30 deg, cuts: [root], share: 0.4, to: 10 Myr}"),
			at + ".share: is a share of the arc's extension, and nothing extends the arc from 0 Myr to 10 Myr; add strain.extension-rate or a stretch event"},
		{"share of a later stretch", zoned("{name: z, dip: 30 deg, cuts: [root], share: 0.4, to: 10 Myr}") + "events: [{stretch: {from: 10 Myr, to: 12 Myr, rate: 1e-15 1/s}}]\n",
			at + ".share: is a share of the arc's extension, and nothing extends the arc from 0 Myr to 10 Myr; add strain.extension-rate or a stretch event"},
		{"share of a shortening", zoned("{name: z, dip: 30 deg, cuts: [root], share: 0.4, from: 4 Myr, to: 10 Myr}") + "strain: {extension-rate: 1e-16 1/s}\nevents: [{stretch: {from: 3 Myr, to: 12 Myr, rate: -1e-15 1/s}}]\n",
			at + ".share: is a share of the arc's extension, and nothing extends the arc from 4 Myr to 10 Myr; add strain.extension-rate or a stretch event"},
		{"share of a vertical zone", zoned("{name: z, dip: 90 deg, cuts: [root], share: 0.4}") + "strain: {extension-rate: 1e-16 1/s}\n",
			at + ".dip: 90 deg: a vertical zone extends nothing, so that no share of the extension can be its own"},
		{"shares of more than all", zoned("{name: z, dip: 30 deg, cuts: [root], share: 0.7}", "{name: y, dip: 30 deg, cuts: [crust], share: 0.4, from: 3 Myr}") + "strain: {extension-rate: 1e-16 1/s}\n",
			"s.yaml:9: excision.zones[1] (y).share: makes the zones' shares 1.1 together from 3 Myr on; needs 1 or less"},
		{"gap of a repetition", zoned("{name: z, dip: 30 deg, layering-dip: 40 deg, cuts: [root], pressure-gap: 0.1 GPa}"),
			at + ".layering-dip: 40 deg is not less than the zone's dip of 30 deg: such a zone leaves no rock out, so that no pressure is missing across it"},
		{"force without a width", zoned("{name: z, dip: 30 deg, cuts: [root], friction: {angle: 30 deg}, force: {far-field: 2e12 N/m}}"),
			at + ".width: is missing; a force balance needs it, for example width: 400 m"},
		{"force without friction", zoned("{name: z, dip: 30 deg, cuts: [root], width: 400 m, force: {far-field: 2e12 N/m}}"),
			at + ".friction: is missing, and the rock at the surface, crust, has none either: nothing could break it; a force balance needs one, for example friction: {cohesion: 10 MPa, angle: 30 deg, pore-fluid-factor: 0.4}"},
		{"force on a vertical zone", zoned("{name: z, dip: 90 deg, cuts: [root], " + pushed + "}"),
			at + ".dip: 90 deg: no horizontal force moves a vertical zone; needs less than 90 deg"},
		{"force without a temperature", "layers:\n" + crustLine + "  - {name: root, root: true, thickness: 12 km, density: 3450 kg/m3, viscosity: 1e21 Pa s}\nexcision: {zones: [{name: z, dip: 30 deg, cuts: [root], " + pushed + "}]}\n",
			"s.yaml:4: excision.zones[0] (z).force: needs a temperature and the experiment has none; add base.temperature or base.heat-flow, or a geotherm\n" +
				"s.yaml:4: excision.zones[0] (z).force: stretches what lies below the zone over the arc's width; add arc.width, for example arc: {width: 160 km}"},
		{"friction of a given slip", zoned("{name: z, dip: 30 deg, cuts: [root], slip-rate: 1 mm/yr, friction: {angle: 30 deg}, creep: dry eclogite Zhang 2007, strength-factor: 2}"),
			at + ".creep: has no use in a zone whose slip is given; it belongs to force\n" +
				at + ".friction: has no use in a zone whose slip is given; it belongs to force\n" +
				at + ".strength-factor: has no use in a zone whose slip is given; it belongs to force"},
		{"water without creep", zoned("{name: z, dip: 30 deg, cuts: [root], water: {fugacity: 100 MPa}, grain-size: 1 mm, " + pushed + "}"),
			at + ".grain-size: belongs to creep, and the zone has none of its own: it creeps as the rock of each layer does\n" +
				at + ".water: belongs to creep, and the zone has none of its own: it creeps as the rock of each layer does"},
		{"force without an arc", strings.Replace(zoned("{name: z, dip: 30 deg, cuts: [root], "+pushed+"}"), "arc: {width: 160 km}", "arc: {length: 300 km}", 1),
			at + ".force: stretches what lies below the zone over the arc's width; add arc.width, for example arc: {width: 160 km}"},
		{"creep without water", zoned("{name: z, dip: 30 deg, cuts: [root], creep: wet olivine dislocation Hirth 2003, " + pushed + "}"),
			at + ".water: is missing; wet olivine dislocation Hirth 2003 needs a fugacity, for example water: {fugacity: 250 MPa}"},
		{"creep that asks for a grain size", zoned("{name: z, dip: 30 deg, cuts: [root], creep: dry olivine diffusion Hirth 2003, " + pushed + "}"),
			at + ".grain-size: is missing; dry olivine diffusion Hirth 2003 needs one, for example grain-size: 2 mm"},
		{"creep of no catalogue, and more", zoned("{name: z, dip: 30 deg, cuts: [rot], creep: dry eclogyte Zhang 2007, " + pushed + "}"),
			at + ".creep: no creep law \"dry eclogyte Zhang 2007\"; the nearest: dry eclogite Zhang 2007, …\n" +
				at + ".cuts[0]: rot is not a layer; did you mean root?"},
		{"one layer, two zones", zoned(plain, "{name: y, dip: 40 deg, cuts: [crust, root], slip-rate: 1 mm/yr, from: 82 Ma}"),
			"s.yaml:9: excision.zones[1] (y).cuts[1]: root is cut from 82 Ma to 30 Myr, and by excision.zones[0] (z) from 2 Myr to 10 Myr (line 9); one zone cuts a layer at a time"},
		{"two forces", zoned("{name: z, dip: 30 deg, cuts: [root], "+pushed+"}", "{name: y, dip: 40 deg, cuts: [crust], from: 31 Myr, to: 33 Myr, "+strings.Replace(pushed, "2e12", "3e12", 1)+"}"),
			"s.yaml:9: excision.zones[1] (y).force.far-field: 3e12 N/m is not the 2e12 N/m of excision.zones[0] (z) (line 9), which is active at the same time; both lie in one plate and bear one force"},
		{"several at once", zoned("{name: z, dip: 0 deg, cuts: [root], slip-rate: 1 mm/yr}", "{name: y, dip: 30 deg, cuts: [root, crust], force: {far-field: 2e12}}", "{name: x, dip: 30 deg, cuts: [root], share: 2}"),
			"s.yaml:9: excision.zones[0] (z).dip: 0 deg is out of range; needs a value above 0 deg and at most 90 deg\n" +
				"s.yaml:9: excision.zones[1] (y).cuts[0]: root is cut from 0 Myr to 30 Myr, and by excision.zones[0] (z) from 0 Myr to 30 Myr (line 9); one zone cuts a layer at a time\n" +
				"s.yaml:9: excision.zones[1] (y).cuts[1]: crust does not lie directly below root; a zone cuts adjacent layers, named from above\n" +
				"s.yaml:9: excision.zones[1] (y).force.far-field: 2e12 has no unit; needs a force per length of strike, for example 2e12 N/m\n" +
				"s.yaml:9: excision.zones[1] (y).friction: is missing, and the rock at the surface, crust, has none either: nothing could break it; a force balance needs one, for example friction: {cohesion: 10 MPa, angle: 30 deg, pore-fluid-factor: 0.4}\n" +
				"s.yaml:9: excision.zones[2] (x).cuts[0]: root is cut from 0 Myr to 30 Myr, and by excision.zones[0] (z) from 0 Myr to 30 Myr (line 9); one zone cuts a layer at a time\n" +
				"s.yaml:9: excision.zones[2] (x).share: 2 is out of range; needs a value of at least 0 and at most 1"},
	} {
		_, err := Read("s.yaml", strings.NewReader(c.in))
		if err == nil || !same(err.Error(), c.want) {
			t.Errorf("%s:\n got %v\nwant %s", c.name, err, c.want)
		}
	}
}

// Every kind of zone reaches the problem in SI, with its rock; one without an end has
// none, but for a gap, which is that at the window's end.
func TestZones(t *testing.T) {
	const myr = 1e6 * 365.25 * 86400
	in := zoned(
		"{name: a, dip: 30 deg, layering-dip: 4 deg, cuts: [root], share: 0.4, from: 86 Ma, to: 80 Ma}",
		"{name: b, dip: 60 deg, cuts: [crust], pressure-gap: 0.2 GPa}",
		"{name: c, dip: 45 deg, cuts: [root, mantle], from: 12 Myr, width: 2 km, creep: [wet olivine dislocation Hirth 2003, wet olivine diffusion Hirth 2003], water: {fugacity: 150 MPa}, grain-size: 20 um, friction: {cohesion: 10 MPa, angle: 20 deg}, strength-factor: 0.5, force: {far-field: 1.5e12 N/m}}") + "strain: {extension-rate: 1e-16 1/s}\n"
	e := mustRead(t, "s.yaml", in)
	p := mustProblem(t, e)
	if len(p.Zones) != 3 {
		t.Fatalf("%d zones", len(p.Zones))
	}
	a, b, c := p.Zones[0], p.Zones[1], p.Zones[2]
	for _, n := range []struct {
		what      string
		got, want float64
	}{
		{"share", a.Share, 0.4}, {"its start", a.From, 4 * myr}, {"its end", a.To, 10 * myr}, {"layering", a.LayeringDip, 4 * math.Pi / 180},
		{"gap", b.PressureGap, 2e8}, {"its end", b.To, 30 * myr}, {"dip", b.Dip, math.Pi / 3},
		{"far field", c.FarField, 1.5e12}, {"width", c.Width, 2e3}, {"its end", c.To, math.Inf(1)}, {"water", c.Water, 150e6}, {"grain", c.GrainSize, 20e-6},
		{"factor", c.StrengthFactor, 0.5}, {"cohesion", c.Friction.Cohesion, 10e6}, {"angle", c.Friction.Angle, 20 * math.Pi / 180}, {"pore fluid", c.Friction.PoreFluid, 0},
	} {
		if !scalar.EqualWithinRel(n.got, n.want, 1e-14) {
			t.Errorf("%s: %v, want %v", n.what, n.got, n.want)
		}
	}
	if a.Drive != excision.ExtensionShare || b.Drive != excision.PressureStep || c.Drive != excision.ForceBalance {
		t.Errorf("drives %v, %v, %v", a.Drive, b.Drive, c.Drive)
	}
	if c.Creep == nil || len(c.Creep.Laws) != 2 || c.WaterMeasure != rheology.WaterFugacity || a.Creep != nil || a.Friction != nil {
		t.Errorf("rocks %+v, %+v", a, c)
	}
	if b, _ := json.Marshal(e.Resolved()); !strings.Contains(string(b), `"far_field_N_m":1500000000000`) || !strings.Contains(string(b), `"wet olivine diffusion Hirth 2003"`) {
		t.Errorf("the resolved experiment lacks the zone: %s", b)
	}
}

// same compares messages line by line; … in what is wanted stands for anything.
func same(got, want string) bool {
	g, w := strings.Split(got, "\n"), strings.Split(want, "\n")
	if len(g) != len(w) {
		return false
	}
	for i := range w {
		head, open := strings.CutSuffix(w[i], "…")
		if g[i] != w[i] && !(open && strings.HasPrefix(g[i], head)) {
			return false
		}
	}
	return true
}
