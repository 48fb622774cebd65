package checks

import (
	"context"
	"fmt"
	"math"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/drip"
	"keelfall/solver/state"
)

// reactionChecks holds identities of rocks that react and melt.
func reactionChecks() []Check {
	is := func(value func() float64) func(context.Context) (float64, error) {
		return func(context.Context) (float64, error) { return value(), nil }
	}
	numbers := column.Reaction{Protolith: column.Uniform(2900), Product: column.Uniform(3500), Extent: 0.25, Cap: 0.8,
		Field:    &column.StabilityField{Above: 1e9, Slope: 1.2e6, At: 1073.15},
		Kinetics: &column.Kinetics{Prefactor: 2e-5, ActivationEnergy: 210e3}}
	melt := &column.Melt{Solidus: &column.Curve{Surface: 1293.15, Slope: 1e-7}, Liquidus: &column.Curve{Surface: 1533.15, Slope: 8e-8}, Density: 2750}
	pyrope := []column.Mode{{Mineral: "pyrope", Share: 1}}
	return []Check{
		{"rock a quarter of whose mass has reacted, 2900 to 3500", "kg/m³", 10150.0 / 3.35, 1e-14, "1/ρ = 0.75/2900 + 0.25/3500: mass is conserved", Derived,
			is(func() float64 { return numbers.At(0, 0, 0) })},
		{"rock that has reacted to pyrope at 900 degC and 1.5 GPa", "kg/m³", 3514.6195477, 1e-10, "the end-member X = 1: pyrope alone, V_T (1 − 4P/(K_T + 4P))^¼ in 30 digits; " + hp98, Derived,
			ofModes(pyrope, false, func(m *column.Modes) float64 {
				return column.Reaction{Protolith: column.Uniform(2900), Product: m, Extent: 1, Cap: 1}.At(1173.15, 1.5e9, 0)
			})},
		{"expansivity of rock that has not reacted, over its protolith's", "", 1, 1e-14, "the end-member X = 0", Derived,
			ofModes(pyrope, false, func(m *column.Modes) float64 {
				r := column.Reaction{Protolith: m, Product: column.Uniform(3500), Cap: 1}
				return column.Expansivity(r, 1000, 1e9, 0) / column.Expansivity(m, 1000, 1e9, 0)
			})},
		{"reacted share after two e-folding times at 800 degC, from 0.1 towards 0.8", "", 0.8 - 0.7*math.Exp(-2), 1e-9, "X = X_max − (X_max − X₀) exp(−r₀ exp(−E/RT) t)", Derived,
			is(func() float64 { return reacted(numbers, 1073.15, 0.1, 2) })},
		{"pressure of the product's boundary at 900 degC, 1 GPa at 800 degC and 1.2 MPa/K", "Pa", 1.12e9, 1e-12, "P₀ + slope (T − T₀)", Derived,
			is(func() float64 {
				return switches(0, 3e9, func(P float64) bool { return numbers.Stable(1173.15, P) })
			})},
		{"slope of the solidus, 1 to 2 GPa", "K/Pa", 1e-7, 1e-9, "100 K/GPa as given, found from where melt begins", Derived,
			is(func() float64 {
				begins := func(P float64) float64 {
					return switches(1000, 2000, func(T float64) bool { phi, _ := melt.At(T, P); return phi > 0 })
				}
				return (begins(2e9) - begins(1e9)) / 1e9
			})},
		{"melt fraction halfway from the solidus to the liquidus at 1 GPa", "", 0.5, 1e-12, "1120 and 1340 degC", Derived,
			is(func() float64 { phi, _ := melt.At(1503.15, 1e9); return phi })},
		{"density of rock of 3400 kg/m³ at its solidus", "kg/m³", 3400, 1e-12, "the limit φ = 0", Derived,
			is(func() float64 { return column.Molten{Solid: column.Uniform(3400), Melt: melt}.At(1393.15, 1e9, 0) })},
		{"density of the same above its liquidus", "kg/m³", 2750, 1e-14, "the limit φ = 1: the melt's", Derived,
			is(func() float64 { return column.Molten{Solid: column.Uniform(3400), Melt: melt}.At(1700, 1e9, 0) })},
		{"thermal density slope of the same, melting", "kg/m³/K", -650.0 / 220, 1e-12, "(ρ_m − ρ_s)/(T_l − T_s) at 1 GPa", Derived,
			is(func() float64 { return column.Molten{Solid: column.Uniform(3400), Melt: melt}.PerKelvin(1450, 1e9, 0) })},
		{"contrast of a garnet rock over peridotite at the garnet share said to bring it to 0, relative", "", 1, 1e-12, "two ways to one density", Derived, garnetShare},
		{"depth of 1 GPa in rock of 2800 kg/m³", "m", 1e9 / (2800 * g), 1e-10, "P/(ρg)", Derived,
			func(context.Context) (float64, error) {
				s, err := state.New(twoRocks(column.Uniform(2800), column.Uniform(3300)), 0)
				if err != nil {
					return 0, err
				}
				z, ok := s.DepthOf(1e9)
				if !ok {
					return 0, fmt.Errorf("checks: 1 GPa not reached")
				}
				return z, nil
			}},
		{"growth rate of a root that melts at its base, over that of the same cut at its solidus", "", 1, 5e-6, "one flow, two meshes; λ = 60 km, heat diffusing, α = 30. Pressure is integrated in steps that straddle the solidus in the one", Derived, cutAtSolidus},
		{"growth rate of a molten root whose tabulated solidus has a corner in it, over that of the same cut there", "", 1, 1e-6, "one flow, two meshes; λ = 60 km, heat diffusing, α = 30", Derived, cutAtCorner},
	}
}

// reacted integrates dX/dt at one T over so many e-folding times, by the midpoint rule.
func reacted(r column.Reaction, T, X, times float64) float64 {
	const steps = 20000 // second order: (times/steps)² of the result, 1e-8/6
	unit := r.Rate(T, X) / (r.Cap - X)
	h := times / unit / steps
	for range steps {
		X += h * r.Rate(T, X+h/2*r.Rate(T, X))
	}
	return X
}

// switches returns where between a and b it becomes true.
func switches(a, b float64, is func(float64) bool) float64 {
	for range 60 {
		if mid := (a + b) / 2; is(mid) {
			b = mid
		} else {
			a = mid
		}
	}
	return (a + b) / 2
}

// twoRocks is 40 km of one density over 20 km of another and a base of that, at 15 K/km.
func twoRocks(upper, lower column.Density) *column.Column {
	rock := func(d column.Density) column.Rock {
		return column.Rock{Density: d, Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1}, Conductivity: column.Conductivity{Reference: 2.5}, HeatCapacity: 1000}
	}
	return &column.Column{Gravity: g, Surface: column.Surface{Boundary: column.Free, Temperature: 283.15},
		Layers: []column.Layer{{Name: "upper", Thickness: 40e3, Rock: rock(upper)}, {Name: "lower", Thickness: 20e3, Rock: rock(lower)}},
		Base:   column.Base{Boundary: column.HalfSpace, Temperature: 1183.15, HasTemperature: true, Rock: rock(lower)}}
}

// garnetShare is the density of an invented garnet pyroxenite with the share of garnet
// that package state says, over that of the peridotite below, at one T and P.
func garnetShare(context.Context) (float64, error) {
	root, err := column.NewModes([]column.Mode{{Mineral: "pyrope", Share: 0.1}, {Mineral: "almandine", Share: 0.1}, {Mineral: "diopside", Share: 0.8}}, false)
	if err != nil {
		return 0, err
	}
	mantle, err := column.NewModes([]column.Mode{{Mineral: "forsterite", Share: 0.9}, {Mineral: "fayalite", Share: 0.1}}, false)
	if err != nil {
		return 0, err
	}
	s, err := state.New(twoRocks(root, mantle), 0)
	if err != nil {
		return 0, err
	}
	all, err := s.Sinking()
	if err != nil {
		return 0, err
	}
	k := all[0]
	if len(k.Needs) != 1 || !k.Needs[0].Found {
		return 0, fmt.Errorf("checks: no garnet share found: %+v", k.Needs)
	}
	return root.WithGarnet(k.Needs[0].At).At(k.T, k.P, 0) / mantle.At(k.T, k.P, 0), nil
}

// cutAtSolidus compares a root with melt in its lower part on one mesh with the same
// root as two layers that meet where melting begins.
func cutAtSolidus(context.Context) (float64, error) {
	return cutAtKink(&column.Curve{Surface: 870, Slope: 1e-7})
}

// cutAtCorner compares a root that is molten throughout, its solidus a table with a corner
// amid the root's pressures, 1.1 to 1.6 GPa, with the same root as two layers that meet
// there.
func cutAtCorner(context.Context) (float64, error) {
	t, err := column.NewCurveTable("invented", []column.CurvePoint{{P: 0, T: 950}, {P: 1.35e9, T: 830}, {P: 4e9, T: 1150}})
	if err != nil {
		return 0, err
	}
	return cutAtKink(&column.Curve{Table: t})
}

// cutAtKink is the growth rate of a root whose state has one kink over that of the same
// root as two layers that meet there.
func cutAtKink(solidus *column.Curve) (float64, error) {
	law, err := rheology.Find("dry eclogite Zhang 2007")
	if err != nil {
		return 0, err
	}
	expands := func(rho float64) column.EquationOfState {
		return column.EquationOfState{Reference: rho, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15}
	}
	c := twoRocks(expands(2850), expands(3330))
	melt := &column.Melt{Solidus: solidus, Liquidus: &column.Curve{Surface: 1500, Slope: 8e-8}, Density: 2750, Weakening: 30}
	root := column.Layer{Name: "root", Thickness: 15e3, Root: true, Rock: c.Layers[0].Rock}
	root.Density, root.Melt = column.Molten{Solid: expands(3500), Melt: melt}, melt
	root.Viscosity = column.Viscosity{Creep: &rheology.Creep{Laws: []rheology.Law{law}}}
	c.Layers[1].Thickness, c.Base.Temperature = 30e3, 1583.15
	grows := func(roots ...column.Layer) (float64, *state.State, error) {
		cut := *c
		cut.Layers = append(append([]column.Layer{c.Layers[0]}, roots...), c.Layers[1])
		s, err := state.New(&cut, 1e-15)
		if err != nil {
			return 0, nil, err
		}
		q, err := rate(drip.Strained(s, drip.Background{}, "diffusive"), 2*math.Pi/60e3)
		return q, s, err
	}
	one, s, err := grows(root)
	if err != nil {
		return 0, err
	}
	kinks := s.Kinks(1)
	if len(kinks) != 1 {
		return 0, fmt.Errorf("checks: the root has the kinks %v, not one", kinks)
	}
	dry, molten := root, root
	dry.Thickness = kinks[0] - 40e3
	molten.Name, molten.Thickness = "molten root", root.Thickness-dry.Thickness
	two, _, err := grows(dry, molten)
	if err != nil {
		return 0, err
	}
	return one / two, nil
}
