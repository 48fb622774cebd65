package configs

import (
	"fmt"
	"math"

	"keelfall/column"
)

// rock is what a layer, the base or an intrusion is made of.
type rock struct {
	_ struct{} `most:"viscosity creep"`
	block
	Density        *density        `key:"density" doc:"a number, a gradient, an equation of state, mineral modes, a table, or a reaction"`
	Viscosity      *viscosity      `key:"viscosity" doc:"a number, or top and bottom (log-linear in depth)"`
	StressExponent quantity        `key:"stress-exponent" dim:"number" range:"[1,100]" eg:"3" doc:"of a viscosity given as a number; 1 if left out"`
	Creep          *creep          `key:"creep" doc:"creep laws in place of a viscosity"`
	Water          *water          `key:"water" doc:"for creep laws that need it"`
	GrainSize      *grainSize      `key:"grain-size" doc:"for creep laws that need it"`
	Factor         quantity        `key:"viscosity-factor" dim:"number" range:"[1e-6,1e6]" eg:"1" doc:"multiplies the viscosity; 1 if left out"`
	Friction       *friction       `key:"friction" doc:"frictional yield of creep laws; a viscosity given as a number takes none"`
	Melt           *melt           `key:"melt" doc:"partial melt"`
	Conductivity   *conductivity   `key:"conductivity" doc:"2.5 W/m/K if left out"`
	HeatProduction *heatProduction `key:"heat-production" doc:"0 if left out"`
	HeatCapacity   quantity        `key:"heat-capacity" dim:"heat-capacity" range:"(0 J/kg/K,100000 J/kg/K]" doc:"1000 J/kg/K if left out"`
}

func (r *rock) check(w *walker) {
	if r.StressExponent.given() && r.Creep != nil && r.Viscosity == nil {
		w.addf(r.StressExponent.n, r.path+".stress-exponent", "belongs to a viscosity given as a number; creep laws bring their own")
	}
	if r.Friction != nil && r.Viscosity != nil && r.Creep == nil {
		w.addf(r.Friction.at, r.path+".friction", "belongs to creep laws; a viscosity given as a number is used as it is")
	}
	if r.Melt != nil && r.Melt.Weakening.SI != 0 && r.Viscosity != nil && r.Creep == nil {
		w.addf(r.Melt.Weakening.n, r.Melt.path+".weakening", "belongs to creep laws; a viscosity given as a number is used as it is")
	}
}

type layerEntry struct {
	_       struct{} `kind:"union"`
	Layer   *layer   `form:"map"`
	Section *section `form:"map"`
}

type layer struct {
	_ struct{} `required:"density" exactly:"viscosity creep"`
	rock
	Name      text     `key:"name,required" as:"name" doc:"of the layer"`
	Thickness quantity `key:"thickness,required" dim:"length" range:"(0 m,3000 km]" doc:"of the layer at the start"`
	Root      flag     `key:"root" doc:"part of the root whose fate is asked; root layers are adjacent"`
}

type section struct {
	rock
	Section text `key:"section,required" as:"file" doc:"CSV file whose rows, from the top down, become layers: name; thickness_km, or top_km and bottom_km below the section's own top, or top_pressure_GPa and bottom_pressure_GPa (a thickness by ΔP = ρ g h with the row's density); density_kg_m3 and density_error_kg_m3 (one standard deviation), or mode_MINERAL by volume; viscosity_Pa_s, heat_production_uW_m3, conductivity_W_m_K, heat_capacity_J_kg_K, grain_size_mm, root, source, notes, in any unit; temperature_degC and pressure_GPa, kept with the results. Rows of one name follow one another and are one layer, its numbers their means weighted by thickness (conductivity harmonic, viscosity and grain size geometric). The other keys of this entry fill what a layer's rows leave out; where both give a key, the rows win"`
	Root    flag `key:"root" doc:"all rows are part of the root whose fate is asked, but for those that say otherwise"`
}

type density struct {
	_        struct{}         `kind:"union"`
	Value    quantity         `form:"scalar" dim:"density" range:"(0 kg/m3,20000 kg/m3]" doc:"in situ, without thermal buoyancy"`
	Linear   *densityLinear   `form:"map"`
	State    *densityState    `form:"map"`
	Modes    *densityModes    `form:"map"`
	Table    *densityTable    `form:"map"`
	Reaction *densityReaction `form:"map"`
}

type densityLinear struct {
	block
	Top    quantity `key:"top,required" dim:"density" range:"(0 kg/m3,20000 kg/m3]" doc:"at the layer's top"`
	Bottom quantity `key:"bottom,required" dim:"density" range:"(0 kg/m3,20000 kg/m3]" doc:"at the layer's bottom; the gradient is compositional"`
}

type densityState struct {
	block
	Reference       quantity `key:"reference,required" dim:"density" range:"(0 kg/m3,20000 kg/m3]" doc:"at the temperature at and zero pressure"`
	Expansivity     quantity `key:"expansivity" dim:"per-kelvin" range:"[-1e-3 1/K,1e-3 1/K]" doc:"thermal; 0 if left out"`
	Compressibility quantity `key:"compressibility" dim:"per-pressure" range:"[0 1/Pa,1e-9 1/Pa]" doc:"0 if left out"`
	At              quantity `key:"at" dim:"temperature" range:"[0 K,5000 K]" eg:"20 degC" doc:"20 degC if left out"`
}

type densityModes struct {
	block
	Modes shares `key:"modes,required" doc:"mineral modes, summing to 1: full names or approved symbols; the rock keeps its composition"`
	By    text   `key:"by" one:"volume|weight" doc:"what the modes are shares of, volume at 25 degC and no pressure; volume if left out"`
}

func (m *densityModes) check(w *walker) {
	if m.Modes.n == nil {
		return
	}
	before := map[string]bool{}
	for _, name := range m.Modes.Names {
		known, err := column.FindMineral(name)
		at, path := m.Modes.n.get(name), m.path+".modes."+shorten(name)
		switch {
		case err != nil:
			w.add(at, path, err.Error())
		case before[known.Name]:
			w.addf(at, path, "%s stands twice among the modes", known.Name)
		default:
			before[known.Name] = true
		}
	}
	var sum float64
	for _, v := range m.Modes.Values {
		sum += v
	}
	if len(m.Modes.Values) == len(m.Modes.n.keys) && math.Abs(sum-1) > 0.01 {
		w.addf(m.Modes.n, m.path+".modes", "sum to %.4g; need 1 (within 0.01)", sum)
	}
}

type densityTable struct {
	block
	Table         text `key:"table,required" as:"file" doc:"CSV file with the columns temperature_degC, pressure_GPa, density_kg_m3: every temperature with every pressure; nothing is extrapolated"`
	Interpolation text `key:"interpolation" one:"bilinear" doc:"between the table's points; bilinear if left out"`
}

type densityReaction struct {
	block
	Protolith *density      `key:"protolith,required" doc:"rock before the reaction; no reaction itself"`
	Product   *density      `key:"product,required" doc:"rock after it; no reaction itself"`
	Extent    quantity      `key:"extent" dim:"number" range:"[0,1]" doc:"reacted share of the mass at the start; 0 if left out"`
	Cap       quantity      `key:"cap" dim:"number" range:"[0,1]" doc:"the reacted share of the mass never passes this; 1 if left out"`
	Stable    *stability    `key:"stable" doc:"where the product is stable; everywhere if left out"`
	Rate      *reactionRate `key:"rate" doc:"of the reaction, first order in what is left up to cap; none if left out"`
}

type stability struct {
	block
	Above quantity `key:"above,required" dim:"pressure" range:"[0 Pa,100 GPa]" eg:"1.0 GPa" doc:"pressure above which the product is stable, at the temperature at"`
	At    quantity `key:"at" dim:"temperature" range:"[0 K,5000 K]" doc:"temperature of above; needed with a slope"`
	Slope quantity `key:"slope" dim:"pressure-per-kelvin" range:"[-1e9 Pa/K,1e9 Pa/K]" doc:"of the boundary; 0 Pa/K if left out"`
}

type reactionRate struct {
	block
	Prefactor        quantity `key:"prefactor,required" dim:"strain-rate" range:"[0 1/s,)" eg:"2e-5 1/s" doc:"of exp(-E/RT)"`
	ActivationEnergy quantity `key:"activation-energy,required" dim:"molar-energy" range:"[0 J/mol,)" doc:"E"`
}

type viscosity struct {
	_      struct{}         `kind:"union"`
	Value  quantity         `form:"scalar" dim:"viscosity" range:"[1 Pa s,1e40 Pa s]"`
	Linear *viscosityLinear `form:"map"`
}

type viscosityLinear struct {
	block
	Top    quantity `key:"top,required" dim:"viscosity" range:"[1 Pa s,1e40 Pa s]" doc:"at the layer's top"`
	Bottom quantity `key:"bottom,required" dim:"viscosity" range:"[1 Pa s,1e40 Pa s]" doc:"at the layer's bottom; log-linear in between"`
}

type water struct {
	_ struct{} `exactly:"fugacity content"`
	block
	Fugacity quantity `key:"fugacity" dim:"pressure" range:"(0 Pa,100 GPa]" doc:"water fugacity"`
	Content  quantity `key:"content" dim:"number" range:"(0,1e7]" eg:"1000" doc:"water content in H per 10⁶ Si, a bare number"`
}

type grainSize struct {
	_          struct{}    `kind:"union"`
	Value      quantity    `form:"scalar" dim:"length" range:"(0 m,1 m]" eg:"5 mm"`
	Piezometer *piezometer `form:"map"`
}

type piezometer struct {
	block
	Piezometer text `key:"piezometer,required" one:"olivine" doc:"mineral whose grain size follows the stress: olivine (van der Wal et al. 1993, from memory)"`
}

type friction struct {
	block
	Cohesion  quantity `key:"cohesion" dim:"pressure" range:"[0 Pa,10 GPa]" eg:"20 MPa" doc:"0 Pa if left out"`
	Angle     quantity `key:"angle" dim:"angle" range:"[0 deg,90 deg)" doc:"of internal friction; 0 deg if left out"`
	PoreFluid quantity `key:"pore-fluid-factor" dim:"number" range:"[0,1]" eg:"0.4" doc:"pore pressure over lithostatic pressure; 0 if left out"`
}

func (f *friction) check(w *walker) {
	if f.Cohesion.SI == 0 && (f.Angle.SI == 0 || f.PoreFluid.SI == 1) {
		w.addf(f.at, f.path, "leaves the rock no strength; needs a cohesion, or an angle and a pore-fluid-factor below 1")
	}
}

type melt struct {
	block
	Fraction   quantity   `key:"fraction" dim:"number" range:"[0,1]" doc:"given share of the volume that is melt, in place of solidus and liquidus"`
	Solidus    *meltCurve `key:"solidus" doc:"where melting begins; the melt fraction rises linearly with temperature from here to the liquidus"`
	Liquidus   *meltCurve `key:"liquidus" doc:"where it ends"`
	LatentHeat quantity   `key:"latent-heat" dim:"latent-heat" range:"[0 J/kg,1e7 J/kg]" doc:"without effect in a steady geotherm"`
	Density    quantity   `key:"density" dim:"density" range:"(0 kg/m3,20000 kg/m3]" doc:"of the melt; if left out, melt leaves the rock's density as it is"`
	Weakening  quantity   `key:"weakening" dim:"number" range:"[0,1000]" eg:"30" doc:"a in exp(a x melt fraction), of the strain rate of creep laws; 0 if left out"`
}

type meltCurve struct {
	_     struct{}   `kind:"union"`
	Value quantity   `form:"scalar" dim:"temperature" range:"[0 K,5000 K]"`
	Line  *meltSlope `form:"map"`
	Table *meltTable `form:"map"`
}

type meltSlope struct {
	block
	Surface quantity `key:"surface,required" dim:"temperature" range:"[0 K,5000 K]" doc:"at zero pressure"`
	Slope   quantity `key:"slope,required" dim:"kelvin-per-pressure" range:"[-1e-5 K/Pa,1e-5 K/Pa]" doc:"the curve is surface + slope x pressure"`
}

type meltTable struct {
	block
	Table text `key:"table,required" as:"file" doc:"CSV file with the columns pressure_GPa and temperature_degC (or other units), pressures increasing from row to row; straight between the rows, and nothing is extrapolated"`
}

type conductivity struct {
	_     struct{}           `kind:"union"`
	Value quantity           `form:"scalar" dim:"conductivity" range:"(0 W/m/K,1000 W/m/K]"`
	State *conductivityState `form:"map"`
}

type conductivityState struct {
	block
	Reference   quantity `key:"reference,required" dim:"conductivity" range:"(0 W/m/K,1000 W/m/K]"`
	Temperature quantity `key:"temperature-coefficient" dim:"per-kelvin" range:"[-1e-1 1/K,1e-1 1/K]" eg:"1.5e-3 1/K" doc:"0 if left out"`
	Pressure    quantity `key:"pressure-coefficient" dim:"per-pressure" range:"[-1e-6 1/Pa,1e-6 1/Pa]" eg:"0.04 1/GPa" doc:"0 if left out"`
	At          quantity `key:"at" dim:"temperature" range:"[0 K,5000 K]" eg:"0 degC" doc:"temperature of reference; 0 degC if left out"`
}

type heatProduction struct {
	_     struct{}  `kind:"union"`
	Value quantity  `form:"scalar" dim:"heat-production" range:"[0 W/m3,1e-3 W/m3]"`
	Decay *heatFall `form:"map"`
}

type heatFall struct {
	block
	Top   quantity `key:"top,required" dim:"heat-production" range:"[0 W/m3,1e-3 W/m3]" doc:"at the layer's top"`
	Decay quantity `key:"decay-length,required" dim:"length" range:"(0 m,1000 km]" doc:"over which it falls by e"`
}

// increasing reports bounds that are not in order.
func (w *walker) increasing(from, to quantity, path string) {
	if !from.given() || !to.given() || from.SI < to.SI {
		return
	}
	n := to.n
	if n.from == fromDefault {
		n = from.n
	}
	w.add(n, path, fmt.Sprintf("from %s is not before to %s", from.n.show(), to.n.show()))
}
