package report

import (
	"fmt"
	"strconv"
	"strings"

	"keelfall/solver/drip"
	"keelfall/solver/growth"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

func titled(p *race.Problem) *page {
	pg := &page{}
	if p.Title != "" {
		for _, l := range wrap(p.Title, pageWidth) {
			pg.b.WriteString(l + "\n")
		}
	}
	return pg
}

// ColumnPage is the text of `keelfall column`; depths are those asked for.
func ColumnPage(p *race.Problem, s *state.State, depths []DepthOf) string {
	pg := titled(p)
	columnText(pg, p, s)
	if drip.RateDependent(s) {
		pg.say("Viscosity at %.1e 1/s%s.", p.Strain.ReferenceRate, star(p, "strain.reference-rate"))
	}
	if s.HasTemperature && len(p.Column.Geotherm) == 0 {
		pg.say("Largest relative residual of the heat balance %.0e.", s.HeatResidual)
	}
	if p.GeothermFit != nil {
		fitText(pg, p.GeothermFit)
	}
	weightText(pg, s)
	pg.section("ELEVATION")
	isostasyText(pg, p, s, true)
	depthsText(pg, s, depths)
	return pg.b.String()
}

// SpectrumPage is the text of `keelfall spectrum`; exact, where not nil, are the
// wavelengths asked for.
func SpectrumPage(p *race.Problem, s *state.State, sp *growth.Spectrum, exact []growth.Rate) string {
	pg := titled(p)
	rates := exact
	if rates == nil { // a readable choice: every eighth, the fastest, the last
		for i, r := range sp.Rates {
			if i%8 == 0 || r.Wavelength == sp.Fastest.Wavelength || i == len(sp.Rates)-1 {
				rates = append(rates, r)
			}
		}
	}
	growthText(pg, s, sp, rates)
	pg.section("RATES")
	pg.line("%14s  %18s  %16s  %14s", "wavelength km", "growth rate 1/Myr", "e-folding Myr", "relative error")
	for _, r := range rates {
		pg.line("%14s  %18s  %16s  %14.0e", sig(r.Wavelength/km, 5), sig(r.Growth*Myr, 6), sig(efold(r.Growth)/Myr, 4), r.RelativeError)
	}
	controls(pg, s, sp.Mode, sp.Shift)
	return pg.b.String()
}

// DripPage is the text of `keelfall drip`.
func DripPage(p *race.Problem, r *race.Result) string {
	pg := titled(p)
	dripText(pg, r, false)
	dripsText(pg, r)
	firstText(pg, r)
	exponentsText(pg, r)
	undulationsText(pg, r)
	return pg.b.String()
}

// CheckPage is the text of `keelfall check`.
func CheckPage(name string, p *race.Problem) string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s: in order. %s, %s km deep, %s.\n", name, Count(len(p.Column.Layers), "layer"), sig(p.Column.Depth()/km, 4), Count(len(p.Zones), "shear zone"))
	if len(p.Defaults) > 0 {
		b.WriteString("Defaults taken (* bears on the verdict, and nobody has measured it):\n")
		for _, d := range p.Defaults {
			s := " "
			if d.Starred {
				s = "*"
			}
			fmt.Fprintf(&b, "  %s %s: %s\n", s, d.Key, d.Value)
		}
	}
	return b.String()
}

// CheckJSON is what `keelfall check --format json` prints.
type CheckJSON struct {
	File     string        `json:"file"`
	Input    string        `json:"input_sha256"`
	Layers   int           `json:"layers"`
	Depth    number        `json:"depth_m"`
	Zones    int           `json:"zones"`
	Defaults []defaultJSON `json:"defaults"`
	Warnings []string      `json:"warnings"`
}

type defaultJSON struct {
	Key     string `json:"key"`
	Value   string `json:"value"`
	Starred bool   `json:"starred"`
}

// Check returns what was read.
func Check(name, sha string, p *race.Problem) CheckJSON {
	j := CheckJSON{name, sha, len(p.Column.Layers), number(p.Column.Depth()), len(p.Zones), []defaultJSON{}, list(nil)}
	for _, d := range p.Defaults {
		j.Defaults = append(j.Defaults, defaultJSON{d.Key, d.Value, d.Starred})
	}
	return j
}

// DefaultsTable lists the defaults taken.
func DefaultsTable(p *race.Problem) Table {
	t := Table{Name: "defaults", Header: []string{"key", "value", "bears_on_verdict"}}
	for _, d := range p.Defaults {
		t.Rows = append(t.Rows, []string{d.Key, d.Value, strconv.FormatBool(d.Starred)})
	}
	return t
}
