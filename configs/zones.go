package configs

import (
	"math"

	"keelfall/rheology"
	"keelfall/solver/excision"
)

// upright is the dip in rad from which a zone has no heave but round-off.
const upright = math.Pi/2 - 1e-9

// check reports what a zone says against itself.
func (z *zone) check(w *walker) {
	w.increasing(z.From, z.To, z.path)
	if z.From.given() && z.From.SI < 0 {
		w.addf(z.From.n, z.path+".from", "%s lies before the start, 0 Myr; put what happened earlier into the column", z.From.n.show())
	}
	if z.Dip.given() && z.Dip.SI > upright {
		if z.Share.given() {
			w.addf(z.Dip.n, z.path+".dip", "%s: a vertical zone extends nothing, so that no share of the extension can be its own", z.Dip.n.show())
		}
		if z.Force != nil {
			w.addf(z.Dip.n, z.path+".dip", "%s: no horizontal force moves a vertical zone; needs less than 90 deg", z.Dip.n.show())
		}
	}
	if z.PressureGap.given() && z.Dip.given() && z.LayeringDip.given() && z.LayeringDip.SI >= z.Dip.SI {
		w.addf(z.LayeringDip.n, z.path+".layering-dip", "%s is not less than the zone's dip of %s: such a zone leaves no rock out, so that no pressure is missing across it", z.LayeringDip.n.show(), z.Dip.n.show())
	}
	z.rock(w)
}

// rock reports what is missing, or of no use, in the rock of the zone.
func (z *zone) rock(w *walker) {
	if z.Force != nil && !z.Width.given() {
		w.addf(z.at, z.path+".width", "is missing; a force balance needs it, for example width: 400 m")
	}
	for _, key := range []string{"creep", "water", "grain-size", "friction", "strength-factor"} {
		n := z.at.get(key)
		switch {
		case n == nil:
		case z.Force == nil:
			w.addf(n, z.path+"."+key, "has no use in a zone whose slip is given; it belongs to force")
		case z.Creep == nil && (key == "water" || key == "grain-size"):
			w.addf(n, z.path+"."+key, "belongs to creep, and the zone has none of its own: it creeps as the rock of each layer does")
		}
	}
}

// zoneProblems are the zones as package excision takes them.
func (e *Experiment) zoneProblems(w *walker) []excision.Zone {
	if e.data.Excision == nil {
		return nil
	}
	var out []excision.Zone
	for i := range e.data.Excision.Zones {
		out = append(out, e.data.Excision.Zones[i].problem(w, e.laws))
	}
	return out
}

func (z *zone) problem(w *walker, extra []rheology.Law) excision.Zone {
	out := excision.Zone{Name: z.Name.Value, Dip: z.Dip.SI, LayeringDip: z.LayeringDip.SI, From: z.From.SI, To: z.To.SI, Width: z.Width.SI}
	if z.To.n.from == fromDefault && !z.PressureGap.given() { // no end: the window is where it is looked at last
		out.To = math.Inf(1)
	}
	for _, c := range z.Cuts {
		out.Cuts = append(out.Cuts, c.Value)
	}
	switch {
	case z.Force != nil:
		out.Drive, out.FarField = excision.ForceBalance, z.Force.FarField.SI
	case z.Share.given():
		out.Drive, out.Share = excision.ExtensionShare, z.Share.SI
	case z.PressureGap.given():
		out.Drive, out.PressureGap = excision.PressureStep, z.PressureGap.SI
	default:
		out.SlipRate = z.SlipRate.SI
	}
	out.Friction, out.StrengthFactor = z.Friction.problem(), z.Factor.SI
	if z.Creep != nil {
		out.Creep = &rheology.Creep{Factor: 1}
		out.Creep.Laws, out.Creep.Mixtures = z.Creep.laws(w, z.path+".creep", extra)
		out.Water, out.WaterMeasure = z.Water.problem()
		out.GrainSize = z.GrainSize.SI
		lawNeeds(w, out.Creep, z.at.get("creep"), z.path, out.GrainSize > 0, out.WaterMeasure)
	}
	return out
}
