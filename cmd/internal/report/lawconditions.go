package report

import (
	"fmt"
	"math"
	"strings"

	"keelfall/plots"
	"keelfall/rheology"
)

// condition is one of LawConditions: in words, and as a column of a table.
type condition struct {
	words, column string
	value         float64
}

// needed returns the conditions that the laws need, temperature apart.
func (c LawConditions) needed(laws []rheology.Law) []condition {
	out := []condition{
		{fmt.Sprintf("a strain rate of %.3g 1/s", c.Rate), "strain_rate_1_s", c.Rate},
		{"a pressure of " + short(c.Pressure/1e9) + " GPa", "pressure_GPa", c.Pressure / 1e9},
	}
	grain, fugacity, content := kinds(laws)
	if grain {
		out = append(out, condition{"a grain size of " + short(c.GrainSize*1e3) + " mm", "grain_size_mm", c.GrainSize * 1e3})
	}
	if fugacity {
		out = append(out, condition{"a water fugacity of " + short(c.Fugacity/1e6) + " MPa", "water_fugacity_MPa", c.Fugacity / 1e6})
	}
	if content {
		out = append(out, condition{"a water content of " + short(c.Content) + " H/10^6 Si", "water_content_H_1e6Si", c.Content})
	}
	return out
}

// kinds says whether some law depends on grain size, on fugacity and on content of water.
func kinds(laws []rheology.Law) (grain, fugacity, content bool) {
	for i := range laws {
		grain = grain || laws[i].M != 0
		fugacity = fugacity || laws[i].Water == rheology.WaterFugacity
		content = content || laws[i].Water == rheology.WaterContent
	}
	return grain, fugacity, content
}

// words says the conditions for a caption: of grain size and water what the laws need.
func (c LawConditions) words(laws []rheology.Law) string {
	var s []string
	for _, q := range c.needed(laws) {
		s = append(s, q.words)
	}
	return join(s)
}

// LawFigureJSON is the figure of creep laws: what it is drawn at, and the laws. Grain size
// and water are null where no law depends on them.
type LawFigureJSON struct {
	Conditions lawConditionsJSON `json:"conditions"`
	Laws       []LawJSON         `json:"laws"`
	Warnings   []string          `json:"warnings"`
}

type lawConditionsJSON struct {
	Rate      number    `json:"strain_rate_per_s"`
	Pressure  number    `json:"pressure_Pa"`
	GrainSize number    `json:"grain_size_m"`
	Fugacity  number    `json:"water_fugacity_Pa"`
	Content   number    `json:"water_content_H_per_1e6_Si"`
	T         [2]number `json:"temperature_K"`
}

// LawFigure returns the figure's laws and conditions for JSON.
func LawFigure(laws []rheology.Law, c LawConditions, curves []plots.LawCurve) LawFigureJSON {
	at := lawConditionsJSON{number(c.Rate), number(c.Pressure), none, none, none, [2]number{number(c.From), number(c.To)}}
	grain, fugacity, content := kinds(laws)
	if grain {
		at.GrainSize = number(c.GrainSize)
	}
	if fugacity {
		at.Fugacity = number(c.Fugacity)
	}
	if content {
		at.Content = number(c.Content)
	}
	return LawFigureJSON{at, Laws(laws), list(LawWarnings(curves))}
}

// LawWarnings says which published errors are not drawn, and why.
func LawWarnings(curves []plots.LawCurve) []string {
	var out []string
	for _, c := range curves {
		if c.Error == nil && c.ErrorNote != "" {
			out = append(out, strings.TrimSuffix(c.ErrorNote, "."))
		}
	}
	return out
}

// LawCurvesTable holds the curves and what they are drawn at, three columns a law: log₁₀ of
// the viscosity, its published error, and whether the experiments reached these conditions.
func LawCurvesTable(curves []plots.LawCurve, laws []rheology.Law, at LawConditions) Table {
	t := Table{Name: "laws", Header: []string{"temperature_degC"}}
	var constant []string
	for _, q := range at.needed(laws) {
		t.Header, constant = append(t.Header, q.column), append(constant, cell(q.value))
	}
	for _, c := range curves {
		n := strings.ReplaceAll(c.Name, " ", "_")
		t.Header = append(t.Header, n+"_log10_viscosity_Pa_s", n+"_log10_error", n+"_calibrated")
	}
	if len(curves) == 0 {
		return t
	}
	words := map[plots.Cover]string{plots.CoverInside: "inside", plots.CoverOutside: "outside", plots.CoverUnknown: "unknown"}
	for j, T := range curves[0].T {
		row := append([]string{cell(T - zero)}, constant...)
		for _, c := range curves {
			e := math.NaN()
			if c.Error != nil {
				e = c.Error[j]
			}
			row = append(row, cell(c.Log[j]), cell(e), words[c.Cover[j]])
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}
