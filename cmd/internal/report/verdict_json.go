package report

import (
	"math"

	"keelfall/solver/race"
)

// VerdictJSON is the verdict of `keelfall run`.
type VerdictJSON struct {
	Outcome  *string     `json:"outcome"`
	Decided  *bool       `json:"decided"` // null: no ranges were given
	Time     number      `json:"time_s"`
	Margin   number      `json:"margin_s"`
	MarginTo *string     `json:"margin_to"` // "drip" or "excision"; null where neither comes
	MarginW  number      `json:"margin_to_window_s"`
	MarginV  number      `json:"margin_log10_viscosity"`
	MarginVO *string     `json:"margin_log10_viscosity_outcome"`
	Shares   sharesJSON  `json:"shares"`
	ArcMean  sharesJSON  `json:"arc_mean"`
	Share    number      `json:"clock_share"`
	Reasons  []string    `json:"reasons"`
	Sentence string      `json:"sentence"`
	Reversal []flipJSON  `json:"reversal"`
	Rate     rateJSON    `json:"reference_rate_band"`
	Peeling  peelingJSON `json:"peeling_screen"`
	Warnings []string    `json:"warnings"`
}

type sharesJSON struct {
	Drip     number `json:"drip"`
	Excision number `json:"excision"`
}

type flipJSON struct {
	Key          string       `json:"key"`
	Keys         []changeJSON `json:"keys"` // all to be set together
	Label        string       `json:"label"`
	Unit         string       `json:"unit"`
	From         number       `json:"from"`
	To           number       `json:"to"`
	Found        bool         `json:"found"`
	Outcome      *string      `json:"outcome"` // the verdict's at "to"
	Searched     string       `json:"searched"`
	Distance     number       `json:"distance"`
	Default      bool         `json:"is_default"`
	ContrastFrom number       `json:"contrast_from_kg_m3"`
	ContrastTo   number       `json:"contrast_to_kg_m3"`
}

type changeJSON struct {
	Key  string `json:"key"`
	Unit string `json:"unit"`
	From number `json:"from"`
	To   number `json:"to"`
}

func flip(f *race.Flip) flipJSON {
	j := flipJSON{Key: f.Key, Keys: []changeJSON{}, Label: f.Label, Unit: f.Unit, From: number(f.From), To: none, Found: f.Found,
		Searched: f.Searched, Distance: none, Default: f.Default, ContrastFrom: none, ContrastTo: none}
	if f.HasContrast {
		j.ContrastFrom = number(f.ContrastFrom)
	}
	if f.Found {
		j.To, j.Distance, j.Outcome = number(f.To), number(f.Distance), &f.Outcome
		if f.HasContrast {
			j.ContrastTo = number(f.ContrastTo)
		}
	}
	for _, c := range f.Keys {
		to := none
		if f.Found {
			to = number(c.To)
		}
		j.Keys = append(j.Keys, changeJSON{c.Key, c.Unit, number(c.From), to})
	}
	return j
}

type rateJSON struct {
	Used    bool   `json:"used"`
	Thrice  number `json:"drip_time_at_thrice_s"`
	OneThrd number `json:"drip_time_at_a_third_s"`
}

type peelingJSON struct {
	Layer     string `json:"weakest_layer_above_root"`
	Viscosity number `json:"viscosity_Pa_s"`
	Criterion number `json:"criterion_Pa_s"`
	Possible  bool   `json:"possible"`
}

// Verdict returns the verdict of r.
func Verdict(r *race.Result) VerdictJSON {
	v := &r.Verdict
	j := VerdictJSON{Time: none, Margin: none, MarginW: none, MarginV: none, Shares: sharesJSON{none, none}, ArcMean: sharesJSON{none, none},
		Share: none, Reasons: list(v.Reasons), Sentence: v.Sentence, Reversal: []flipJSON{},
		Rate: rateJSON{false, none, none}, Peeling: peelingJSON{"", none, race.BirdViscosity, false}, Warnings: list(r.Warnings)}
	if v.Outcome == "" {
		return j
	}
	j.Outcome = &v.Outcome
	j.Time, j.Margin, j.MarginV = number(v.Time), number(v.Margin), number(v.MarginLog10Viscosity)
	j.MarginW, j.Share = number(v.WindowMargin), number(v.Share)
	if !math.IsInf(v.Margin, 0) {
		j.MarginTo = &v.MarginTo
	}
	if v.MarginViscosityOutcome != "" {
		j.MarginVO = &v.MarginViscosityOutcome
	}
	j.Shares = sharesJSON{number(v.Shares.Drip), number(v.Shares.Excision)}
	j.ArcMean = sharesJSON{number(v.ArcMean.Drip), number(v.ArcMean.Excision)}
	if r.Problem.ArcWidth == 0 && len(r.Problem.Zones) > 0 {
		j.ArcMean.Excision = none
	}
	for i := range v.Flips {
		j.Reversal = append(j.Reversal, flip(&v.Flips[i]))
	}
	j.Rate = rateJSON{r.Rate.Used, number(r.Rate.AtThrice), number(r.Rate.AtOneThird)}
	if r.Peeling.Viscosity > 0 {
		j.Peeling = peelingJSON{r.Peeling.Layer, number(r.Peeling.Viscosity), race.BirdViscosity, r.Peeling.Possible}
	}
	return j
}
