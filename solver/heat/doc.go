// Package heat conducts heat through a column of layers: the steady state, a given
// geotherm, and the history of a column whose rock moves.
//
// # Steady state
//
// With z downward and q the heat flow upward,
//
//	dq/dz = −H(z)    q = κ_c(T, P) dT/dz    dP/dz = ρ(T, P, x) g
//
// so the heat flow is exact (H is integrated in closed form) and temperature and
// pressure follow together from one ordinary differential equation, downward from a
// surface at known temperature and zero pressure. With a basal heat flow that is all;
// with a basal temperature the surface heat flow is the unknown, and T at the base
// rises monotonically with it. Physics: Fourier's law and the hydrostatic balance;
// Carslaw & Jaeger 1959. Left out: advection, shear heating, latent heat.
//
// # History
//
// Begin checks a Plan and returns an Evolution; Advance moves it to a time; Run does both
// and collects a History. What is solved, in rock that moves with velocity w,
//
//	ρ c_p (∂T/∂t + w ∂T/∂z) = ∂z(κ_c ∂zT) + H − ρ L dφ/dt + α T ρ g w + given sources,
//
// is the first law for parcels of constant mass m (per area of their own rock),
//
//	m de/dt = q_below − q_above + m H_m + m (α T/ρ) dP/dt + …,    e = c_p T + L φ(T, P),
//
// with P the weight of the mass above, dP/dt therefore known from the rates at which rock
// comes, goes and stretches, and H_m in W/kg, which stays with its rock. The unknown is the
// enthalpy e, so that melting within a step is not missed; φ is the equilibrium fraction,
// linear from solidus to liquidus. A parcel's thickness is m/ρ(T, P, x, X): heating,
// melting and reaction change it at constant mass, and everything below moves.
//
// Space: finite volumes, one parcel a cell. Half a cell has the resistance d/2κ_c, a face
// the sum of the two beside it, which is (d₁+d₂)/(d₁/κ₁+d₂/κ₂) in conductivity and keeps
// the heat flow continuous where materials meet. A cell's T is
// its mean: towards a face the heat made in it adds H_m m d/6κ_c, which keeps the flow right
// between cells of different size. At the surface, and at a base of given temperature,
// the flow is that of the parabola through the wall and the two cells beside it, in the
// scheme itself: what is reported is what leaves. Cells are halved where the temperature
// curves (down to 1/64 of the coarsest, beside a sheet just intruded) and joined where it
// does not; both keep mass, enthalpy, heat production and composition.
//
// Time: the two-stage diagonally implicit method with γ = 1 − 1/√2, of second order and
// L-stable. A stage is one tridiagonal system, repeated with renewed properties until
// these no longer matter. The error of a step is estimated from the second difference of
// the rates at its start and stages, damped twice by the stage's own matrix so that it
// follows the true error for slow and for fast modes; a step that is off by more than
// Plan.Tolerance is repeated shorter. A second-order method keeps no strict maximum
// principle: overshoot stays within the tolerance.
//
// Motion: stretching at the rate e thins all cells by exp(−et) and widens them as much.
// Rock that comes or goes at a layer's edge is a flux of mass through the face of its
// first or last cell: it brings its own enthalpy, or takes that of the face's
// temperature (second order, where the cell's own would be first). Cells that lose are
// joined to their neighbours before they are used up; a layer of less than a millimetre
// is gone, and so is one that stretching has made thinner than a tenth of it over a base
// whose rock comes in. A column deeper than 3000 km, renewed more than 500 times, or over
// another base thinner than 1 m, is refused.
//
// Base: over a half-space or an inviscid base the thermal base stays at the depth it has
// at the start. Where the column thins, rock of the base comes in below, at the basal
// temperature; where it thickens, that rock goes first. Where the column's own rock
// reaches deeper, the condition is applied at the deepest rock. What a step's heating,
// melting and reaction do to the thickness is made good in the steps after it. Rigid and
// free-slip bases move with the rock.
//
// Two-state rock: dX/dt = r₀ exp(−E/RT)(X_max − X) in every cell along its own path where
// the product is stable, no retrogression; a step may react 5 % at most before the next
// is shortened. The reaction releases no heat.
//
// Balance: every term of energy and mass is integrated with the method's own weights, so
// that Missing is round-off; the tests ask for 1e-10 of what moved, over random histories.
// Sources: Carslaw & Jaeger 1959; finite volumes and enthalpy method are common practice.
package heat
