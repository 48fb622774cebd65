package report

import (
	"fmt"
	"strings"

	"keelfall/solver/race"
)

// Methods returns methods.md: the equations, laws and constants that were used, ready
// for a methods section, and every default taken.
func Methods(r *race.Result, p ProvenanceJSON) string {
	var b strings.Builder
	w := func(format string, a ...any) { fmt.Fprintf(&b, format+"\n", a...) }
	pb := r.Problem
	w("# Methods: %s\n", pb.Title)
	w("Computed with %s %s from an experiment whose SHA-256 is `%s`. Sources are in `sources.bib`; a key in brackets names its entry.\n", p.Program, p.Version, p.Input)

	w("## Column\n")
	if r.State.HasTemperature {
		how := "steady conduction, κ dT/dz = q(z), with the heat production of each layer integrated exactly [carslaw1959]"
		if len(pb.Column.Geotherm) > 0 {
			how = "a given geotherm, linear between its points"
		}
		w("Temperature: %s. Pressure is lithostatic, integrated with the in-situ density.", how)
		if len(pb.Column.Geotherm) == 0 {
			w("Largest relative residual of the heat balance: %.1e.", r.State.HeatResidual)
		}
	} else {
		w("The column has no temperature: no density or viscosity depends on it.")
	}
	w("The density jump at a contact is taken at the contact's own pressure and temperature.\n")
	densities(w, pb)
	measuredMethods(w, pb)
	creepMethods(w, pb)
	isostasyMethods(w, pb)
	w("## Growth\n")
	w("Linear stability of incompressible layered Stokes flow, w = W(z) cos kx, u = U(z) sin kx:\n")
	w("    W' = −kU,  U' = kW + S/η,  Σ' = −kS − g δρ,  S' = kΣ + 4ηk²U\n")
	w("with [Σ] = ξ[ρ]g at a contact displaced by ξ cos kx, and dξ/dt = W, hence dξ/dt = A(k) ξ. A layer whose composition grades carries its own displacement.")
	w("Solved by Gauss–Legendre collocation of order 16, each element condensed, the layers joined by impedances [keelfall-collocation]. Growth rates are eigenvalues of A. A layer's dissipation share is the exact logarithmic derivative of the rate with respect to its viscosity; derivatives with respect to density and thickness hold at fixed viscosity, temperature, pressure and density jumps. The geometry of the checks is that of [chandrasekhar1961], [ramberg1968] and [houseman1997].\n")
	if r.Drip != nil {
		w("## Drip\n")
		dripMethods(w, r)
		w("## Excision\n")
		excisionMethods(w, pb)
		w("## Verdict\n")
		w("One clock for both fates: it stops when %g of the root's initial mass is gone. The mechanism with the larger part is named; both, where the smaller is at least half the larger; preserved, where the window of %s ends first. It is for the column the zones cross; the mean over the arc stands beside it. What would change it is looked for one number at a time; distances are |Δ ln p|, for a density |Δρ|/100 kg/m³, a temperature |ΔT|/100 K, a slip rate from 0 in mm/yr.\n", r.Verdict.Share, myr(pb.Drip.Window))
	}
	w("## Defaults taken\n")
	if len(pb.Defaults) == 0 {
		w("None.\n")
	} else {
		w("A star marks one that bears on the verdict and that nobody has measured.\n")
		for _, d := range pb.Defaults {
			s := ""
			if d.Starred {
				s = " \\*"
			}
			w("* `%s`: %s%s", d.Key, d.Value, s)
		}
		w("")
	}
	w("## What this leaves out\n")
	for _, l := range p.Limits {
		w("* %s", l)
	}
	w("\n## Sources\n")
	for _, s := range p.Sources {
		w("* [%s] %s (%s)", s.ID, s.Text, s.Status)
	}
	return b.String()
}
