package report

import (
	"slices"

	"keelfall/solver/excision"
	"keelfall/solver/race"
)

// drives says whether any zone's slip is set in this way.
func drives(p *race.Problem, by excision.Drive) bool {
	return slices.ContainsFunc(p.Zones, func(z excision.Zone) bool { return z.Drive == by })
}

// excisionMethods says how what zones cut out was found.
func excisionMethods(w func(string, ...any), p *race.Problem) {
	if len(p.Zones) == 0 {
		w("No shear zone cuts the column.\n")
		return
	}
	w("A zone of dip θ slipping at s through layering that dips δ towards it takes s sin(θ − δ) of stratigraphic and s sin(θ − δ)/cos δ of vertical thickness per time from the rock directly above it, the lowest of its layers first; what lies below rises by as much and rock of the base comes in at the foot. When its layers are used up in this column it slips on until its interval ends. Heave is s cos θ, throw s sin θ. A layer of thickness h is wholly gone over a strip of the arc as wide as heave − h/tan θ; averaged over an arc of width B it loses h × heave/(B + heave), as uniform stretching by the same extension would take, from when the zones have reached it [omission].\n")
	if drives(p, excision.ExtensionShare) {
		w("A zone that takes a share f of the arc's extension slips at s = f ė B/cos θ, ė the arc's rate and B its present width; the column itself stretches by what no zone takes [omission].\n")
	}
	if drives(p, excision.PressureStep) {
		w("A pressure gap ΔP measured across a zone is the weight of what is missing: the omission is that of ΔP in the layers it cuts, from below, with their in-situ densities, and the slip rate that leaves it by the end of the interval is constant [omission].\n")
	}
	if drives(p, excision.ForceBalance) {
		w("%s", forceMethods)
	}
}

const forceMethods = `A zone whose slip follows from forces slips as fast as its strength F(s) equals the driving force, the far-field force and the column's own potential energy against the reference column together, per length of strike:

    F(s) = (2/sin 2θ) ∫ τ_creep dz                                        where creep is the weaker
         + ∫ [C + μ(1 − λ)P]/[sin θ (cos θ + μ sin θ)] dz                 where friction is
         + ∫ 4η(e) e dz, e = s cos θ/B                                    below the zone's root

Creep is that of the zone's rock at its second invariant s/(2b), b its width; the weaker is the one with the smaller differential stress at that depth; extension unloads the plane (Anderson). Its root is the base of the lowest layer it cuts. The plate beside it bears the same force and stretches at the rate e' at which ∫ min(4η e', 2τ_y) dz does. The zone's rock is as warm as the column at that depth; its shear heat, τ s/cos θ per map area, goes into the column where the zone crosses it. Steps follow the slip rate; faster than 1 m/yr it is held and said to run away [zone-forces].
`
