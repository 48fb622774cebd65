package report

import (
	"fmt"
	"regexp"
	"slices"
	"strings"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/excision"
	"keelfall/solver/race"
)

// Version of the program.
const Version = "0.1.0"

// SourceJSON is one source that a result rests on.
type SourceJSON struct {
	ID     string `json:"id"`
	Status string `json:"status"` // published, derived, from memory, common practice, choice; for laws, of the numbers
	Text   string `json:"text"`
}

// ProvenanceJSON says what was run and what it rests on.
type ProvenanceJSON struct {
	Program    string         `json:"program"`
	Version    string         `json:"version"`
	Input      string         `json:"input_sha256"`
	Experiment map[string]any `json:"experiment"`
	Sources    []SourceJSON   `json:"sources"`
	Limits     []string       `json:"limits"`
	Warnings   []string       `json:"warnings"`
}

// Provenance joins the resolved experiment and the sources of p.
func Provenance(sha string, experiment map[string]any, p *race.Problem, limits []string) ProvenanceJSON {
	return ProvenanceJSON{"keelfall", Version, sha, experiment, Sources(p), list(limits), list(nil)}
}

// Sources lists the equations, laws and constants that p uses.
func Sources(p *race.Problem) []SourceJSON {
	s := []SourceJSON{
		{"chandrasekhar1961", "published", "Chandrasekhar 1961, Hydrodynamic and Hydromagnetic Stability: gravitational instability of superposed viscous fluids"},
		{"ramberg1968", "published", "Ramberg 1968, Phys. Earth Planet. Inter. 1: layered viscous fluids between walls"},
		{"keelfall-collocation", "derived", "Gauss–Legendre collocation of the layered Stokes equations, condensed by element; derived for this program, checked by `keelfall verify`"},
		{"houseman1997", "published", "Houseman & Molnar 1997, Geophys. J. Int. 128, 125: convective thinning of a dense layer, geometry of the checks"},
	}
	if p.Column.Base.HasTemperature || p.Column.Base.HasHeatFlow {
		s = append(s, SourceJSON{"carslaw1959", "published", "Carslaw & Jaeger 1959, Conduction of Heat in Solids: steady conduction"})
	}
	for i := range p.Column.Layers {
		if p.Column.Layers[i].HeatProduction.DecayLength > 0 {
			s = append(s, SourceJSON{"lachenbruch1968", "published", "Lachenbruch 1968, J. Geophys. Res. 73: heat production falling exponentially with depth"})
			break
		}
	}
	if _, _, ok := p.Column.RootSpan(); ok {
		s = append(s, SourceJSON{"bird1979", "published", "Bird 1979, J. Geophys. Res. 84, 7561 (abstract): delamination needs rock of 1e19 poise = 1e18 Pa s or less"})
	}
	if len(p.Zones) > 0 {
		s = append(s, SourceJSON{"omission", "common practice", "omission, heave and throw of a zone from its dip and slip: plane geometry; arc mean h × heave/(B + heave): derived"})
	}
	if drives(p, excision.ForceBalance) {
		s = append(s, SourceJSON{"zone-forces", "derived", "force balance of a shear zone: creep at s/(2b), friction of a plane that extension unloads (Anderson 1905, Trans. Edinb. Geol. Soc. 8, from memory), flow below its root, the plate beside it in series; shear heat τ s"})
	}
	s = append(s, mineralSources(p)...)
	s = append(s, flowSources(p)...)
	for _, l := range lawsOf(p) {
		s = append(s, SourceJSON{"creep-" + slug(l.Name), lawStatus(&l), l.Name + ": " + l.Source})
	}
	return append(s, SourceJSON{"gas-constant", "published", "R = 8.31446261815324 J/(mol K), exact since the SI of 2019"})
}

// flowSources lists what stands around the creep laws: friction, piezometers, mixtures.
func flowSources(p *race.Problem) []SourceJSON {
	var s []SourceJSON
	seen := map[string]bool{}
	add := func(id, status, text string) {
		if !seen[id] {
			seen[id] = true
			s = append(s, SourceJSON{id, status, text})
		}
	}
	rock := func(r *column.Rock) {
		if r.Melt != nil {
			add("melt", "common practice", "melt in a rock: fraction linear between solidus and liquidus, densities by volume, creep rates times exp(α φ)")
		}
		if r.Viscosity.Creep == nil {
			return
		}
		for _, l := range r.Viscosity.Creep.AllLaws() {
			if l.Plastic() {
				add("kocks1975", "from memory", "Kocks, Argon & Ashby 1975, Prog. Mater. Sci. 19: form of low-temperature plasticity; its cut-off at low stress: a choice")
			}
		}
		if r.Friction != nil {
			add("friction", "derived", "Mohr–Coulomb yield under the lithostatic pressure, from the Mohr circle; pore-fluid factor of Hubbert & Rubey 1959; smooth cap of exponent 8: a choice")
		}
		if z := r.Piezometer; z != nil {
			status := "published"
			if z.Status == "memory" {
				status = "from memory"
			}
			add("piezometer-"+slug(z.Mineral), status, fmt.Sprintf("%s: d = %g mm (σ_d/MPa)^-%g", z.Source, z.B*1e3, z.P))
		}
		for _, m := range r.Viscosity.Creep.Mixtures {
			add("mixture-"+m.Rule.String(), "common practice", m.Rule.String()+" mixing of phases (Reuss 1929, Voigt 1889 and the geometric mean between)")
		}
	}
	for i := range p.Column.Layers {
		rock(&p.Column.Layers[i].Rock)
	}
	rock(&p.Column.Base.Rock)
	return s
}

// lawsOf returns the creep laws in use, each once, from the surface down.
func lawsOf(p *race.Problem) []rheology.Law {
	var laws []rheology.Law
	seen := map[string]bool{}
	add := func(c *rheology.Creep) {
		if c == nil {
			return
		}
		for _, l := range c.AllLaws() {
			if !seen[l.Name] {
				seen[l.Name] = true
				laws = append(laws, l)
			}
		}
	}
	for i := range p.Column.Layers {
		add(p.Column.Layers[i].Viscosity.Creep)
	}
	add(p.Column.Base.Viscosity.Creep)
	for i := range p.Zones {
		add(p.Zones[i].Creep)
	}
	return laws
}

// lawStatus says the weakest status among a law's numbers.
func lawStatus(l *rheology.Law) string {
	st := l.Status
	all := []string{st.A, st.N, st.M, st.R, st.E, st.V, st.Peierls}
	if !slices.ContainsFunc(all, func(s string) bool { return s != "" }) {
		return "given" // a user's own, of which nothing is said
	}
	for _, s := range all {
		if s == "memory" {
			if l.Confidence != "" {
				return "from memory (" + l.Confidence + " confidence)"
			}
			return "from memory"
		}
	}
	for _, s := range all {
		if s == "given" {
			return "typed by the user"
		}
	}
	for _, s := range all {
		if strings.HasPrefix(s, "not determined") {
			return "published, activation volume not determined"
		}
	}
	return "published"
}

var notWord = regexp.MustCompile(`[^a-z0-9]+`)

func slug(s string) string {
	return strings.Trim(notWord.ReplaceAllString(strings.ToLower(s), "-"), "-")
}

var yearIn = regexp.MustCompile(`\b(1[89]\d\d|20\d\d)\b`)

// fromMemory names the laws in use with numbers that were recalled, not read.
func fromMemory(p *race.Problem) []string {
	var out []string
	for _, l := range lawsOf(p) {
		if st := lawStatus(&l); strings.HasPrefix(st, "from memory") {
			if l.Confidence != "" {
				out = append(out, l.Name+" ("+l.Confidence+" confidence)")
			} else {
				out = append(out, l.Name)
			}
		}
	}
	return out
}
