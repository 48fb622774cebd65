package report

import (
	"math"

	"keelfall/solver/excision"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

// ExcisionJSON is what `keelfall excise` prints.
type ExcisionJSON struct {
	Outcome     *string     `json:"outcome"`
	Time        number      `json:"time_s"`
	Share       number      `json:"removed_share"`
	Slip        number      `json:"slip_m"`
	Heave       number      `json:"heave_m"`
	Throw       number      `json:"throw_m"`
	Extension   number      `json:"extension_demanded"`
	PressureGap number      `json:"pressure_gap_Pa"`
	CutTime     number      `json:"cut_through_time_s"`
	CutSlip     number      `json:"cut_through_slip_m"`
	CutHeave    number      `json:"cut_through_heave_m"`
	ArcMeanTime number      `json:"arc_mean_time_s"`
	History     historyJSON `json:"history"`
	Warnings    []string    `json:"warnings"`
}

type historyJSON struct {
	Time      []number `json:"time_s"`
	Root      []number `json:"root_thickness_m"`
	ArcMean   []number `json:"arc_mean_root_thickness_m"`
	Slip      []number `json:"slip_m"`
	Heave     []number `json:"heave_m"`
	Throw     []number `json:"throw_m"`
	MassShare []number `json:"root_mass_share_removed"`
}

// Excision returns an excision result; x may be nil where the column has no root.
func Excision(p *race.Problem, s *state.State, x *excision.Result) ExcisionJSON {
	if x == nil {
		empty := []number{}
		return ExcisionJSON{Time: none, Share: none, Slip: none, Heave: none, Throw: none, Extension: none, PressureGap: none,
			CutTime: none, CutSlip: none, CutHeave: none, ArcMeanTime: none,
			History: historyJSON{empty, empty, empty, empty, empty, empty, empty}, Warnings: append(list(race.Warnings(p, s)), noRoot)}
	}
	j := ExcisionJSON{Outcome: &x.Outcome, Time: number(x.LocalBeyond), Share: number(x.Share), Slip: number(x.Slip), Heave: number(x.Heave),
		Throw: number(x.Throw), Extension: none, PressureGap: number(x.PressureGap),
		CutTime: number(x.CutThroughTime), CutSlip: none, CutHeave: none, ArcMeanTime: number(x.ArcMeanTime),
		History: historyJSON{numbers(x.History.Time), numbers(x.History.RootThickness), numbers(x.History.ArcMean),
			numbers(x.History.Slip), numbers(x.History.Heave), numbers(x.History.Throw), numbers(x.History.RootMassShare)},
		Warnings: list(ExcisionWarnings(p, s, x))}
	if x.Outcome == "excised" {
		j.Time = number(x.Time)
	}
	if p.ArcWidth > 0 {
		j.Extension = number(x.ExtensionDemanded)
	}
	if !math.IsInf(x.CutThroughTime, 1) {
		j.CutSlip, j.CutHeave = number(x.CutThroughSlip), number(x.CutThroughHeave)
	}
	return j
}
