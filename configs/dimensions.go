package configs

// dimension is what a key's value measures.
type dimension struct {
	name   string
	words  string // "a length"
	eg     string // an example with unit
	si     string // the SI unit, as a quantity may be written
	suffix string // of the key in SI output
	vec    vec
	kind   dimKind
}

type dimKind int

const (
	plainDim    dimKind = iota
	bareDim             // no unit
	tempDim             // absolute temperature: K, or degC with its offset
	tempDiffDim         // difference of temperature: K only
	timeDim             // model time: Myr from the start, or an age in Ma
	durationDim         // length of time: Myr, not Ma
	ageDim              // Ma only
	anyDim              // any unit; checked elsewhere
)

var dimensions = func() map[string]*dimension {
	all := map[string]*dimension{}
	for _, d := range []dimension{
		{name: "number", words: "a bare number", eg: "0.5", kind: bareDim},
		{name: "length", words: "a length", eg: "12 km", si: "m", suffix: "m", vec: vec{1}},
		{name: "temperature", words: "a temperature", eg: "850 degC", si: "K", suffix: "K", vec: vec{0, 0, 0, 1}, kind: tempDim},
		{name: "temperature-difference", words: "a difference of temperature in K", eg: "40 K", si: "K", suffix: "K", vec: vec{0, 0, 0, 1}, kind: tempDiffDim},
		{name: "time", words: "a time since the start or an age", eg: "6 Myr or 89 Ma", si: "s", suffix: "s", vec: vec{0, 0, 1}, kind: timeDim},
		{name: "duration", words: "a length of time", eg: "30 Myr", si: "s", suffix: "s", vec: vec{0, 0, 1}, kind: durationDim},
		{name: "age", words: "an age in Ma", eg: "95 Ma", si: "Ma", suffix: "s", vec: vec{0, 0, 1}, kind: ageDim},
		{name: "density", words: "a density", eg: "3300 kg/m3", si: "kg/m3", suffix: "kg_m3", vec: vec{-3, 1}},
		{name: "viscosity", words: "a viscosity", eg: "1e21 Pa s", si: "Pa s", suffix: "Pa_s", vec: vec{-1, 1, -1}},
		{name: "pressure", words: "a pressure", eg: "250 MPa", si: "Pa", suffix: "Pa", vec: vec{-1, 1, -2}},
		{name: "acceleration", words: "an acceleration", eg: "9.81 m/s2", si: "m/s2", suffix: "m_s2", vec: vec{1, 0, -2}},
		{name: "strain-rate", words: "a strain rate", eg: "1e-15 1/s", si: "1/s", suffix: "per_s", vec: vec{0, 0, -1}},
		{name: "velocity", words: "a velocity", eg: "1.2 mm/yr", si: "m/s", suffix: "m_s", vec: vec{1, 0, -1}},
		{name: "angle", words: "an angle", eg: "30 deg", si: "rad", suffix: "rad", vec: vec{0, 0, 0, 0, 0, 1}},
		{name: "conductivity", words: "a thermal conductivity", eg: "2.5 W/m/K", si: "W/m/K", suffix: "W_m_K", vec: vec{1, 1, -3, -1}},
		{name: "heat-production", words: "a heat production", eg: "1.5 uW/m3", si: "W/m3", suffix: "W_m3", vec: vec{-1, 1, -3}},
		{name: "heat-flow", words: "a heat flow", eg: "30 mW/m2", si: "W/m2", suffix: "W_m2", vec: vec{0, 1, -3}},
		{name: "heat-capacity", words: "a heat capacity", eg: "1000 J/kg/K", si: "J/kg/K", suffix: "J_kg_K", vec: vec{2, 0, -2, -1}},
		{name: "latent-heat", words: "a latent heat", eg: "400 kJ/kg", si: "J/kg", suffix: "J_kg", vec: vec{2, 0, -2}},
		{name: "per-kelvin", words: "a number per kelvin", eg: "3e-5 1/K", si: "1/K", suffix: "per_K", vec: vec{0, 0, 0, -1}},
		{name: "per-pressure", words: "a number per pressure", eg: "8e-12 1/Pa", si: "1/Pa", suffix: "per_Pa", vec: vec{1, -1, 2}},
		{name: "pressure-per-kelvin", words: "a slope in pressure per kelvin", eg: "1.2 MPa/K", si: "Pa/K", suffix: "Pa_K", vec: vec{-1, 1, -2, -1}},
		{name: "kelvin-per-pressure", words: "a slope in kelvin per pressure", eg: "100 K/GPa", si: "K/Pa", suffix: "K_Pa", vec: vec{1, -1, 2, 1}},
		{name: "kelvin-per-length", words: "a temperature gradient", eg: "20 K/km", si: "K/m", suffix: "K_m", vec: vec{-1, 0, 0, 1}},
		{name: "molar-energy", words: "an energy per mole", eg: "210 kJ/mol", si: "J/mol", suffix: "J_mol", vec: vec{2, 1, -2, 0, -1}},
		{name: "molar-volume", words: "a volume per mole", eg: "14 cm3/mol", si: "m3/mol", suffix: "m3_mol", vec: vec{3, 0, 0, 0, -1}},
		{name: "diffusivity", words: "a diffusivity", eg: "1e-6 m2/s", si: "m2/s", suffix: "m2_s", vec: vec{2, 0, -1}},
		{name: "force", words: "a force per length of strike", eg: "2e12 N/m", si: "N/m", suffix: "N_m", vec: vec{0, 1, -2}},
		{name: "mass-per-area", words: "a mass per area", eg: "1e6 kg/m2", si: "kg/m2", suffix: "kg_m2", vec: vec{-2, 1}},
		{name: "prefactor", words: "a prefactor with the unit its exponents ask for", eg: "1.1e5 MPa^-3.5 s^-1", suffix: "SI", kind: anyDim},
	} {
		all[d.name] = &d
	}
	return all
}()

// named returns the dimension that has these exponents, for messages.
func named(v vec) string {
	if v.equal(vec{}) {
		return "a bare number"
	}
	for _, n := range []string{"length", "duration", "density", "viscosity", "pressure", "velocity", "strain-rate", "angle", "temperature",
		"conductivity", "heat-production", "heat-flow", "heat-capacity", "latent-heat", "per-kelvin", "per-pressure",
		"kelvin-per-length", "molar-energy", "molar-volume", "diffusivity", "force", "acceleration", "pressure-per-kelvin", "kelvin-per-pressure"} {
		if dimensions[n].vec.equal(v) {
			return dimensions[n].words
		}
	}
	return ""
}
