package configs

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"keelfall/rheology"
)

// creep is one law, several in parallel, or a mixture.
type creep struct {
	_      struct{}    `kind:"union"`
	Name   text        `form:"scalar" as:"law" eg:"wet quartzite Gleason 1995"`
	List   []creepItem `form:"list"`
	Inline *inlineLaw  `form:"map"`
	Mix    *mixture    `form:"map"`
}

type creepItem struct {
	_      struct{}   `kind:"union"`
	Name   text       `form:"scalar" as:"law" eg:"wet quartzite Gleason 1995"`
	Inline *inlineLaw `form:"map"`
	Mix    *mixture   `form:"map"`
}

type mixture struct {
	block
	Mix text       `key:"mix,required" one:"geometric|iso-stress|iso-strain-rate" doc:"how the parts share stress and strain rate"`
	Of  []mixShare `key:"of,required" doc:"the parts, two or more; their fractions sum to 1"`
}

func (m *mixture) check(w *walker) {
	if len(m.Of) < 2 {
		w.addf(m.at.get("of"), m.path+".of", "has %d part; a mixture needs two or more", len(m.Of))
		return
	}
	var sum float64
	for i := range m.Of {
		sum += m.Of[i].Fraction.SI
	}
	if math.Abs(sum-1) > rheology.FractionSlack*(1+1e-9) {
		w.addf(m.at.get("of"), m.path+".of", "has fractions that sum to %.4g; need 1 (within %g)", sum, rheology.FractionSlack)
	}
}

type mixShare struct {
	block
	Fraction quantity `key:"fraction,required" dim:"number" range:"[0,1]" doc:"volume share"`
	Creep    *creep   `key:"creep,required" doc:"of this part"`
}

// inlineLaw is a creep law written out: rate = A stress^n d^-m f^r exp(-(E+PV)/RT).
type inlineLaw struct {
	block
	Mechanism        text     `key:"mechanism" doc:"dislocation, diffusion, …"`
	Prefactor        quantity `key:"prefactor,required" dim:"prefactor" doc:"A as published; its unit must fit the exponents"`
	StressExponent   quantity `key:"stress-exponent,required" dim:"number" range:"(0,20]" eg:"3.5" doc:"n"`
	GrainExponent    quantity `key:"grain-exponent" dim:"number" range:"[0,10]" eg:"3" doc:"m; 0 if left out"`
	WaterExponent    quantity `key:"water-exponent" dim:"number" range:"[0,10]" eg:"1.2" doc:"r; 0 if left out"`
	Water            text     `key:"water" one:"fugacity|content" doc:"how the law counts water, where it has a water-exponent"`
	ActivationEnergy quantity `key:"activation-energy,required" dim:"molar-energy" range:"[0 J/mol,2e6 J/mol]" eg:"356 kJ/mol" doc:"E"`
	ActivationVolume quantity `key:"activation-volume" dim:"molar-volume" range:"[-1e-4 m3/mol,1e-3 m3/mol]" doc:"V; 0 cm3/mol if left out"`
	Test             text     `key:"test,required" one:"axial|plane-strain|shear" doc:"geometry of the experiments: rate and stress the prefactor relates"`
}

func (l *inlineLaw) check(w *walker) {
	switch r := l.WaterExponent; {
	case r.SI != 0 && !l.Water.given():
		w.addf(r.n, l.path+".water", "is missing; a law with a water-exponent says whether it counts fugacity or content")
		return
	case l.Water.given() && r.SI == 0:
		w.addf(l.Water.n, l.path+".water", "has no meaning without a water-exponent")
		return
	}
	if !l.Prefactor.given() || !l.StressExponent.given() {
		return
	}
	number := leadingNumber.FindString(plainer.Replace(l.Prefactor.n.text))
	u, err := parseUnit(plainer.Replace(l.Prefactor.n.text)[len(number):])
	want := l.prefactorVec()
	if err == nil && !u.vec.equal(want) {
		w.addf(l.Prefactor.n, l.path+".prefactor", "%s does not fit the exponents; needs the unit %s, for example %s %s", l.Prefactor.n.show(), l.prefactorUnit(), number, l.prefactorUnit())
	}
	if l.Prefactor.SI <= 0 {
		w.addf(l.Prefactor.n, l.path+".prefactor", "%s is out of range; needs a value above 0", l.Prefactor.n.show())
	}
}

// stressPower is the exponent of pressure in the prefactor's unit.
func (l *inlineLaw) stressPower() float64 {
	p := -l.StressExponent.SI
	if l.Water.Value == "fugacity" {
		p -= l.WaterExponent.SI
	}
	return p
}

func (l *inlineLaw) prefactorVec() vec {
	return vec{}.times(vec{-1, 1, -2}, l.stressPower()).times(vec{1}, l.GrainExponent.SI).times(vec{0, 0, 1}, -1)
}

func (l *inlineLaw) prefactorUnit() string {
	parts := []string{"MPa^" + short(l.stressPower())}
	if m := l.GrainExponent.SI; m != 0 {
		parts = append(parts, "um^"+short(m))
	}
	return strings.Join(append(parts, "s^-1"), " ")
}

// short prints a number without the noise of binary fractions.
func short(x float64) string { return strconv.FormatFloat(math.Round(x*1e9)/1e9, 'g', -1, 64) }

// laws returns the laws and mixtures acting in parallel; extra are the user's own
// catalogues.
func (c *creep) laws(w *walker, path string, extra []rheology.Law) (out []rheology.Law, mixed []rheology.Mixture) {
	one := func(name text, in *inlineLaw, mix *mixture, path string) {
		switch {
		case name.given():
			law, err := findLaw(name.Value, extra)
			if err != nil {
				w.addf(name.n, path, "%s", plainError(err))
				return
			}
			out = append(out, law)
		case in != nil:
			out = append(out, in.law(path))
		case mix != nil:
			mixed = append(mixed, mix.phases(w, path, extra))
		}
	}
	one(c.Name, c.Inline, c.Mix, path)
	for i := range c.List {
		one(c.List[i].Name, c.List[i].Inline, c.List[i].Mix, fmt.Sprintf("%s[%d]", path, i))
	}
	return out, mixed
}

// phases returns the mixture as rheology takes it.
func (m *mixture) phases(w *walker, path string, extra []rheology.Law) rheology.Mixture {
	rule, _ := rheology.ParseMixing(m.Mix.Value) // the schema has checked the word
	out := rheology.Mixture{Rule: rule}
	for i := range m.Of {
		p := rheology.Phase{Fraction: m.Of[i].Fraction.SI}
		p.Laws, p.Mixtures = m.Of[i].Creep.laws(w, fmt.Sprintf("%s.of[%d].creep", path, i), extra)
		out.Phases = append(out.Phases, p)
	}
	return out
}

// findLaw looks in the built-in catalogue, then in the user's, which has other names.
func findLaw(name string, extra []rheology.Law) (rheology.Law, error) {
	law, err := rheology.Find(name)
	if err == nil || len(extra) == 0 {
		return law, err
	}
	return rheology.FindIn(append(rheology.Laws(), extra...), name)
}

func plainError(err error) string { return strings.TrimPrefix(err.Error(), "rheology: ") }

// law turns the published form into the invariant one.
func (l *inlineLaw) law(path string) rheology.Law {
	test := map[string]rheology.Test{"axial": rheology.AxialCompression, "plane-strain": rheology.PlaneStrain, "shear": rheology.SimpleShear}[l.Test.Value]
	law := rheology.Law{
		Name: path, Mechanism: l.Mechanism.Value, Material: "written in the experiment",
		A: l.Prefactor.SI * test.Factor(l.StressExponent.SI),
		N: l.StressExponent.SI, M: l.GrainExponent.SI, R: l.WaterExponent.SI,
		E: l.ActivationEnergy.SI, V: l.ActivationVolume.SI, VolumeDetermined: l.ActivationVolume.given(),
		Test: test, Source: l.Source.Value, Notes: l.Notes.Value,
		Status: rheology.Status{A: "given", N: "given", M: "given", R: "given", E: "given", V: "given"},
	}
	switch l.Water.Value {
	case "fugacity":
		law.Water = rheology.WaterFugacity
	case "content":
		law.Water = rheology.WaterContent
	}
	// As published: MPa, and µm for the grain size (Law.LaboratoryA).
	law.LaboratoryA = l.Prefactor.SI * math.Pow(1e6, -l.stressPower()) * math.Pow(1e6, law.M)
	return law
}
