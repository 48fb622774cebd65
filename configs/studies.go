package configs

// The sections below describe studies over many experiments, and what the column is
// held against. Their keys name other keys of the same file.

type marker struct {
	_ struct{} `exactly:"depth base-of"`
	block
	Name   text     `key:"name,required" as:"name"`
	Depth  quantity `key:"depth" dim:"length" range:"[0 m,3000 km]" doc:"at the start, below the surface"`
	BaseOf text     `key:"base-of" as:"name" doc:"a layer's base"`
}

type clock struct {
	block
	Name             text     `key:"name,required" as:"name"`
	Marker           text     `key:"marker,required" as:"name"`
	ActivationEnergy quantity `key:"activation-energy,required" dim:"molar-energy" range:"(0 J/mol,2e6 J/mol]"`
	Diffusivity      quantity `key:"diffusivity,required" dim:"diffusivity" range:"(0 m2/s,)"`
	Radius           quantity `key:"radius,required" dim:"length" range:"(0 m,1 m]" eg:"80 um"`
	Geometry         text     `key:"geometry,required" one:"sphere|cylinder|sheet"`
}

type budget struct {
	block
	EvolvedCrust quantity `key:"evolved-crust,required" dim:"length" range:"(0 m,200 km]"`
	ResidueShare quantity `key:"residue-share,required" dim:"number" range:"[0,1]"`
}

// scalarQuantities are the contract's, the verdict last: a word, not a number.
var scalarQuantities = []string{"drip-time", "drip-wavelength", "fastest-wavelength", "fastest-growth-rate", "excision-time", "root-thickness",
	"root-removal-time", "density-contrast", "temperature", "pressure", "elevation", "heat-flow", "closure-age", "verdict"}

// quantityDims are what they measure.
var quantityDims = map[string]string{
	"drip-time": "time", "drip-wavelength": "length", "fastest-wavelength": "length", "fastest-growth-rate": "strain-rate",
	"excision-time": "time", "root-thickness": "length", "root-removal-time": "time", "density-contrast": "density",
	"temperature": "temperature", "pressure": "pressure", "elevation": "length", "heat-flow": "heat-flow", "closure-age": "time",
}

type observation struct {
	_ struct{} `exactly:"value between"`
	block
	Quantity text       `key:"quantity,required" one:"@quantities" doc:"what was measured"`
	Marker   text       `key:"marker" as:"name" doc:"where"`
	Clock    text       `key:"clock" as:"name" doc:"of a closure-age"`
	At       quantity   `key:"at" dim:"time" doc:"when"`
	Value    quantity   `key:"value" dim:"@quantity"`
	Error    quantity   `key:"error" dim:"@quantity-" doc:"one standard deviation"`
	Between  []quantity `key:"between" dim:"@quantity" doc:"earlier or lower bound, later or higher bound"`
}

func (o *observation) check(w *walker) {
	switch {
	case o.Value.given() && !o.Error.given():
		w.addf(o.at, o.path+".error", "is missing; a measured value needs its error, one standard deviation")
	case o.Error.given() && !o.Value.given():
		w.addf(o.Error.n, o.path+".error", "has no meaning without a value")
	case o.Error.given() && o.Error.SI <= 0:
		w.addf(o.Error.n, o.path+".error", "%s is out of range; needs a value above 0", o.Error.n.show())
	case o.at.get("between") != nil && o.at.get("between").kind == listNode && len(o.at.get("between").items) != 2:
		w.addf(o.at.get("between"), o.path+".between", "has %d entries; needs two bounds", len(o.at.get("between").items))
	}
}

type keyRange struct {
	block
	Key   text     `key:"key,required" as:"key"`
	From  quantity `key:"from,required" dim:"@key"`
	To    quantity `key:"to,required" dim:"@key"`
	Scale text     `key:"scale" one:"linear|log"`
}

func (r *keyRange) check(w *walker) {
	w.increasing(r.From, r.To, r.path)
	if r.Scale.Value == "log" && r.From.given() && r.From.SI <= 0 {
		w.addf(r.From.n, r.path+".from", "%s on a logarithmic scale; needs a value above 0", r.From.n.show())
	}
}

type mapping struct {
	block
	Name       text     `key:"name,required" as:"name"`
	X          *mapAxis `key:"x,required"`
	Y          *mapAxis `key:"y,required"`
	Quantities []text   `key:"quantities,required" one:"@results"`
}

type mapAxis struct {
	keyRange
	Steps count `key:"steps,required" range:"[2,10000]"`
}

type threshold struct {
	keyRange
	Quantity text     `key:"quantity,required" one:"@quantities"`
	Target   quantity `key:"target,required" dim:"@quantity"`
}

type ensemble struct {
	block
	Samples     count         `key:"samples,required" range:"[1,100000000]"`
	Seed        count         `key:"seed" range:"[0,9007199254740992]"`
	Design      text          `key:"design" one:"halton|latin-hypercube|random"`
	Vary        []variation   `key:"vary,required"`
	Correlate   []correlation `key:"correlate"`
	Quantities  []text        `key:"quantities,required" one:"@results"`
	Sensitivity *sensitivity  `key:"sensitivity"`
	Use         text          `key:"use-observations" one:"no|weight|accept"`
}

type variation struct {
	_ struct{} `exactly:"normal lognormal uniform log-uniform triangular"`
	block
	Key        text        `key:"key,required" as:"key"`
	Normal     *normal     `key:"normal"`
	Lognormal  *lognormal  `key:"lognormal"`
	Uniform    *uniform    `key:"uniform"`
	LogUniform *logUniform `key:"log-uniform"`
	Triangular *triangular `key:"triangular"`
}

type normal struct {
	block
	Mean quantity `key:"mean,required" dim:"@key"`
	SD   quantity `key:"sd,required" dim:"@key-" doc:"standard deviation"`
}

func (d *normal) check(w *walker) { w.positive(d.SD, d.path+".sd") }

type lognormal struct {
	block
	Median quantity `key:"median,required" dim:"@key"`
	Factor quantity `key:"factor,required" dim:"number" range:"(1,1e6]" eg:"2" doc:"exp of the standard deviation of the logarithm"`
}

func (d *lognormal) check(w *walker) { w.positive(d.Median, d.path+".median") }

type uniform struct {
	block
	From quantity `key:"from,required" dim:"@key"`
	To   quantity `key:"to,required" dim:"@key"`
}

func (d *uniform) check(w *walker) { w.increasing(d.From, d.To, d.path) }

type logUniform struct{ uniform }

func (d *logUniform) check(w *walker) {
	d.uniform.check(w)
	w.positive(d.From, d.path+".from")
}

type triangular struct {
	block
	From quantity `key:"from,required" dim:"@key"`
	Mode quantity `key:"mode,required" dim:"@key"`
	To   quantity `key:"to,required" dim:"@key"`
}

func (d *triangular) check(w *walker) {
	w.increasing(d.From, d.To, d.path)
	if d.From.given() && d.Mode.given() && d.To.given() && (d.Mode.SI < d.From.SI || d.Mode.SI > d.To.SI) {
		w.addf(d.Mode.n, d.path+".mode", "%s lies outside from and to", d.Mode.n.show())
	}
}

func (w *walker) positive(q quantity, path string) {
	if q.given() && q.SI <= 0 {
		w.addf(q.n, path, "%s is out of range; needs a value above 0", q.n.show())
	}
}

type correlation struct {
	block
	Keys []text   `key:"keys,required" as:"key"`
	Rank quantity `key:"rank,required" dim:"number" range:"[-1,1]" eg:"0.4" doc:"rank correlation"`
}

type sensitivity struct {
	block
	Of      text  `key:"of,required" one:"@quantities"`
	Samples count `key:"samples,required" range:"[1,100000000]"`
}
