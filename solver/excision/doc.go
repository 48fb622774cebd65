// Package excision computes how shear zones cut a root out of a column, and whether the
// force on the plate makes them slip.
//
// # Geometry
//
// A zone of dip θ slips at s; layering dips δ towards the zone's dip direction. The
// column it crosses loses s sin(θ − δ) of stratigraphic and s sin(θ − δ)/cos δ of
// vertical thickness per time, from the rock directly above the zone; negative is
// repetition. The zone lies below the layers it cuts, so the lowest of them goes
// first; what lay below rises, and rock of the base comes in at the foot. A zone that has
// used its layers up stops cutting the column, but slips on until its interval ends: it
// goes on to widen the strip of the arc in which they are missing,
//
//	cos θ (s t − h cos δ/sin(θ − δ)),  s t cos θ − h/tan θ for flat layers.
//
// Heave is s cos θ, throw s sin θ.
//
// A zone moves rock aside, it does not destroy it. Averaged over an arc of original
// width B a root layer of thickness h loses what uniform stretching by the same
// extension would take, h × heave/(B + heave), by the heave of the zones that cut it.
// A zone's heave counts from when it has reached the root to the end of its interval,
// as it goes on clearing the arc after it has cut this column through; it counts as
// negative where the zone repeats rock, which thickens by h × |heave|/(B + |heave|).
// Heave in an arc that also stretches counts by the width it would have had at the start.
// (Derived; structural geometry, common practice.)
//
// # Rates
//
// A slip rate is given, or it is a share of the arc's extension, s cos θ = share × rate in
// force × B now, while the column itself stretches by what no zone takes (nothing where
// the arc shortens); or it is the constant rate at which a zone leaves a pressure gap by
// its end: the omission is that of the lowest rock of its layers, as they are when it
// begins, that weighs as much, and slip = omission × cos δ/sin(θ − δ).
//
// # Balance of forces
//
// A zone of width b that slips at s strains at the second invariant s/(2b), which is half
// of the engineering rate s/b. Its shear stress τ is borne by the plate as a differential
// stress 2τ/sin 2θ. Friction on the plane, unloaded by the extension itself, bears
// [C + μ(1 − λ_p)P]/[sin θ(cos θ + μ sin θ)]; at each depth the weaker of the two counts.
// Below the zone's root, the base of the lowest layer it still cuts, the column flows at
// e_b = s cos θ/B. Per length of strike, positive in tension,
//
//	F(s) = ∫_zone min(2τ/sin 2θ, friction) dz + ∫_below min(4η(e_b) e_b, 2τ_y) dz
//
// rises with s, and s solves F(s) = far field + ΔΓ, ΔΓ the force of the column's own
// weight. The plate beside bears the same force and stretches at e, ∫min(4ηe, 2τ_y) dz =
// F, which is added to the column's own stretching. Zones at one time bear it one
// after the other, each in full. The laws are used as they are, with the temperatures and
// pressures of this column; sources: Mohr–Coulomb friction, Hubbert & Rubey 1959 for λ_p,
// the rest derived.
//
// The zone heats the column where it crosses it, at the base of the lowest layer it still
// cuts, by τ s/cos θ per map area over the height b/cos θ. Elsewhere along itself it is
// taken to be as warm as the column is at that depth, which its own heat there would
// exceed: softening is underestimated. Zones whose rate is not that of a balance make no
// heat here, their stress is not known. Steps follow the softening (step.go); a zone that
// would slip faster than FastestSlip has run away and is held at it, one that has heaved
// as far as the arc was wide is stopped, and where the plate itself gives way (stretched
// faster than 1e-13 1/s) no force is carried from there on. All are reported.
//
// # Two ways
//
// Solve is the closed form for given rates in a column that stays as it is, in
// microseconds: searches call it thousands of times. Run and Evolution follow zones of any
// kind in a column that stretches, heats, reacts, is intruded and drips; they come to
// Solve's numbers where that holds. A column without a temperature is followed at one
// that is the same everywhere, of which its rocks know nothing.
package excision
