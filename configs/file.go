package configs

// experiment is an experiment file as it is decoded.
type experiment struct {
	block
	Title    text         `key:"title" as:"line" doc:"what the experiment is about, one line"`
	Gravity  quantity     `key:"gravity" dim:"acceleration" range:"(0 m/s2,100 m/s2]" doc:"gravitational acceleration; 9.81 m/s2 if left out"`
	TimeZero quantity     `key:"time-zero" dim:"age" range:"[0 Ma,5000 Ma]" doc:"age of model time 0; needed where any other time is given as an age"`
	Arc      *arc         `key:"arc" doc:"the arc's size; no drip is wider than its width or, with wavevector strike, longer than its length"`
	Limits   *limits      `key:"viscosity-limits" doc:"bounds of creep viscosities"`
	Strain   *strain      `key:"strain" doc:"background deformation of the whole column"`
	Buoyancy *buoyancy    `key:"buoyancy" doc:"how temperature perturbations act on the instability"`
	Geotherm *geotherm    `key:"geotherm" doc:"steady, a CSV file, a list of depth and temperature, or a fit to a CSV file"`
	Surface  *surface     `key:"surface" doc:"the top of the column"`
	Base     *base        `key:"base" doc:"what lies below the last layer; rock keys left out are taken from the last layer at its bottom"`
	Layers   []layerEntry `key:"layers,required" doc:"the layers, from the surface down"`

	Events    []event    `key:"events" doc:"what happens to the column, in any order"`
	Drip      *dripping  `key:"drip" doc:"what counts as a drip"`
	Spectrum  *spectrum  `key:"spectrum" doc:"range of wavelengths; chosen from the layers if left out"`
	Excision  *excisions `key:"excision" doc:"shear zones that cut layers out"`
	Reference *reference `key:"reference" doc:"the column that elevation and potential energy are measured against; a mid-ocean ridge if left out"`
	Markers   []marker   `key:"markers" doc:"points carried with the rock"`
	Clocks    []clock    `key:"clocks" doc:"closure-temperature systems read at markers"`

	Race         *racing       `key:"race" doc:"what stops the clock, and what might reverse the verdict"`
	Budget       *budget       `key:"budget" doc:"mass balance of crust and residue"`
	Observations []observation `key:"observations" doc:"what was measured, with its error"`
	Maps         []mapping     `key:"maps" doc:"results over two keys"`
	Thresholds   []threshold   `key:"thresholds" doc:"the value of a key at which a quantity reaches its target"`
	Ensemble     *ensemble     `key:"ensemble" doc:"many experiments with keys drawn from distributions"`
}

type arc struct {
	block
	Width  quantity `key:"width" dim:"length" range:"(0 km,5000 km]" eg:"160 km" doc:"across strike"`
	Length quantity `key:"length" dim:"length" range:"(0 km,20000 km]" eg:"420 km" doc:"along strike"`
}

type limits struct {
	block
	Lowest  quantity `key:"lowest" dim:"viscosity" range:"[1 Pa s,1e40 Pa s]" eg:"1e16 Pa s" doc:"lowest creep viscosity; 1e16 Pa s if left out"`
	Highest quantity `key:"highest" dim:"viscosity" range:"[1 Pa s,1e40 Pa s]" eg:"1e25 Pa s" doc:"highest creep viscosity; 1e25 Pa s if left out"`
}

func (l *limits) check(w *walker) {
	if l.Lowest.given() && l.Highest.given() && l.Lowest.SI >= l.Highest.SI {
		n := l.Lowest.n
		if n.from == fromDefault {
			n = l.Highest.n
		}
		w.addf(n, l.path, "lowest %s is not below highest %s", l.Lowest.n.show(), l.Highest.n.show())
	}
}

type strain struct {
	block
	ExtensionRate quantity `key:"extension-rate" dim:"strain-rate" range:"[-1e-10 1/s,1e-10 1/s]" doc:"horizontal stretching of the whole column; negative thickens; 0 if left out"`
	Wavevector    text     `key:"wavevector" one:"stretch|strike" doc:"the direction along which the undulation varies; stretch if left out"`
	ReferenceRate quantity `key:"reference-rate" dim:"strain-rate" range:"(0 1/s,1e-6 1/s]" doc:"at which creep is evaluated where nothing moves (extension-rate 0); 1e-15 1/s if left out"`
}

type buoyancy struct {
	block
	Thermal text `key:"thermal" one:"none|frozen|diffusive" doc:"perturbations of temperature: left out, carried, or carried and diffusing; if left out diffusive where a density depends on temperature and the column has one, else none"`
}

type geotherm struct {
	_      struct{} `kind:"union"`
	Word   text     `form:"scalar" as:"geotherm" eg:"steady, or a CSV file with depth and temperature"`
	Points []point  `form:"list"`
	Fit    *fit     `form:"map"`
}

type point struct {
	block
	Depth       quantity `key:"depth,required" dim:"length" range:"[0 km,3000 km]" doc:"below the surface"`
	Temperature quantity `key:"temperature,required" dim:"temperature" range:"[0 K,5000 K]"`
}

type fit struct {
	block
	Fit            text `key:"fit,required" as:"file" doc:"CSV file of samples that a steady geotherm is fitted to, with the columns temperature_degC, pressure_GPa or depth_km, temperature_error_K, pressure_error_GPa or depth_error_km, name, source, notes; an error is one standard deviation. Fitted is base.heat-flow where it is given, else base.temperature; its value is where the fit begins"`
	HeatProduction flag `key:"heat-production" doc:"fit one factor on the heat production of all layers too"`
}

type surface struct {
	block
	Boundary    text     `key:"boundary" one:"free|free-slip|rigid" doc:"mechanical boundary; free if left out"`
	Temperature quantity `key:"temperature" dim:"temperature" range:"[0 K,5000 K]" eg:"10 degC" doc:"0 degC if left out"`
}

type base struct {
	_ struct{} `most:"temperature heat-flow"`
	rock
	Boundary    text     `key:"boundary" one:"half-space|inviscid|free-slip|rigid" doc:"mechanical boundary; half-space if left out"`
	Temperature quantity `key:"temperature" dim:"temperature" range:"(0 K,5000 K]" eg:"1200 degC" doc:"at the column's base"`
	HeatFlow    quantity `key:"heat-flow" dim:"heat-flow" range:"[-1 W/m2,10 W/m2]" doc:"upward into the column at its base"`
}

type dripping struct {
	block
	Amplitude quantity   `key:"amplitude" dim:"length" range:"(0 m,100 km]" eg:"500 m" doc:"initial undulation of the root's base, less than criterion times the root's thickness, of a red spectrum that at its wavelength; 500 m if left out, and not to be given beside a table"`
	Criterion quantity   `key:"criterion" dim:"number" range:"(0,10]" eg:"1.0" doc:"a drip when the tip has descended by this times the root's thickness; 1.0 if left out"`
	Window    quantity   `key:"window" dim:"duration" range:"(0 Myr,5000 Myr]" doc:"time available to both fates; 30 Myr if left out"`
	Spectrum  *roughness `key:"spectrum" doc:"the undulation against wavelength: white, the same at all; red, growing with it; or a table of its own; white if left out"`
	Removes   quantity   `key:"removes" dim:"number" range:"(0,1]" eg:"0.3" doc:"share of the root's mass one drip takes; 0.3 if left out"`
	Softening text       `key:"softening" one:"self|none" doc:"whether the drip's own strain rate softens the rock"`
}

type spectrum struct {
	block
	From quantity `key:"from,required" dim:"length" range:"[10 m,100000 km]" eg:"5 km" doc:"shortest wavelength"`
	To   quantity `key:"to,required" dim:"length" range:"[10 m,100000 km]" eg:"1000 km" doc:"longest wavelength"`
}

func (s *spectrum) check(w *walker) { w.increasing(s.From, s.To, s.path) }

type excisions struct {
	block
	Zones []zone `key:"zones,required" doc:"the shear zones"`
}

type zone struct {
	_ struct{} `exactly:"slip-rate share pressure-gap force"`
	block
	Name        text      `key:"name,required" as:"name" doc:"of the zone"`
	Dip         quantity  `key:"dip,required" dim:"angle" range:"(0 deg,90 deg]" doc:"from the horizontal"`
	LayeringDip quantity  `key:"layering-dip" dim:"angle" range:"(-90 deg,90 deg)" eg:"4 deg" doc:"of the layers, towards the zone's dip direction; 0 deg if left out"`
	Cuts        []text    `key:"cuts,required" as:"name" doc:"the layers it cuts out, adjacent, from above"`
	From        quantity  `key:"from" dim:"time" doc:"when it begins to move; the start if left out"`
	To          quantity  `key:"to" dim:"time" doc:"when it stops; the window's end if left out"`
	SlipRate    quantity  `key:"slip-rate" dim:"velocity" range:"[0 m/s,1 m/yr]" doc:"given slip rate"`
	Share       quantity  `key:"share" dim:"number" range:"[0,1]" doc:"its share of the arc's extension, as heave; the column stretches by the rest; needs arc.width"`
	PressureGap quantity  `key:"pressure-gap" dim:"pressure" range:"[0 Pa,10 GPa]" doc:"missing across the zone when it stops, as a gap between the pressures measured on its two sides; it slips steadily until then"`
	Force       *force    `key:"force" doc:"its slip rate follows from the balance of the driving force with its strength; needs a temperature and the zone's width"`
	Width       quantity  `key:"width" dim:"length" range:"(0 m,100 km]" eg:"400 m" doc:"normal to the zone"`
	Creep       *creep    `key:"creep" doc:"of the zone's rock in a force balance; that of each layer it crosses if left out"`
	Water       *water    `key:"water" doc:"in the zone's rock, for creep laws that need it"`
	GrainSize   quantity  `key:"grain-size" dim:"length" range:"(0 m,1 m]" eg:"50 um" doc:"of the zone's rock, for creep laws that need it"`
	Friction    *friction `key:"friction" doc:"frictional strength of the zone in a force balance; that of each layer it crosses if left out"`
	Factor      quantity  `key:"strength-factor" dim:"number" range:"(0,1e6]" eg:"1" doc:"multiplies the zone's strength in a force balance; 1 if left out"`
}

type force struct {
	block
	FarField quantity `key:"far-field,required" dim:"force" doc:"driving force from outside per length of strike, positive in tension; to it comes the column's own against the reference column"`
}

type racing struct {
	block
	Removed  quantity   `key:"removed" dim:"number" range:"(0,1]" eg:"0.5" doc:"share of the root that counts as its removal; 0.5 if left out"`
	Reversal []keyRange `key:"reversal" doc:"keys and bounds within which the verdict might turn"`
}
