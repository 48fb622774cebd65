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
	PlateFails  number      `json:"plate_fails_time_s"`
	History     historyJSON `json:"history"`
	Zones       []zoneJSON  `json:"zones"`
	Layers      []cutJSON   `json:"layers"`
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

// zoneJSON is one zone; its lists belong to the times of the history. The last five are
// empty unless its forces are balanced.
type zoneJSON struct {
	Name          string      `json:"name"`
	Dip           number      `json:"dip_rad"`
	LayeringDip   number      `json:"layering_dip_rad"`
	Cuts          []string    `json:"cuts"`
	From          number      `json:"from_s"`
	To            number      `json:"to_s"` // null: without an end
	Drive         string      `json:"drive"`
	Width         number      `json:"width_m"`
	UsedUp        number      `json:"used_up_time_s"`
	Runaway       number      `json:"runaway_time_s"`
	Holds         number      `json:"holds_time_s"`
	Rate          []number    `json:"slip_rate_m_s"`
	Slip          []number    `json:"slip_m"`
	Heave         []number    `json:"heave_m"`
	Throw         []number    `json:"throw_m"`
	Stratigraphic []number    `json:"stratigraphic_omission_m"`
	Vertical      []number    `json:"vertical_omission_m"`
	Gap           []number    `json:"pressure_gap_Pa"`
	Remaining     []number    `json:"remaining_m"`
	Strips        []stripJSON `json:"strips"`
	Force         []number    `json:"driving_force_N_m"`
	Strength      []number    `json:"strength_at_1_mm_yr_N_m"`
	Stress        []number    `json:"shear_stress_Pa"`
	Heating       []number    `json:"shear_heat_W_m2"`
	T             []number    `json:"temperature_K"`
}

// stripJSON is the strip of the arc from which a layer is wholly gone.
type stripJSON struct {
	Layer string   `json:"layer"`
	Width []number `json:"width_m"`
}

// cutJSON is a layer that zones cut.
type cutJSON struct {
	Name      string   `json:"name"`
	Root      bool     `json:"root"`
	Thickness []number `json:"thickness_m"`
	ArcMean   []number `json:"arc_mean_thickness_m"`
}

var driveKeys = map[excision.Drive]string{excision.GivenRate: "slip-rate", excision.ExtensionShare: "share", excision.PressureStep: "pressure-gap", excision.ForceBalance: "force"}

func zonesJSON(p *race.Problem, x *excision.Result) []zoneJSON {
	out := []zoneJSON{}
	for i := range x.Zones {
		z, h := &p.Zones[i], &x.Zones[i]
		j := zoneJSON{Name: h.Name, Dip: number(z.Dip), LayeringDip: number(z.LayeringDip), Cuts: list(z.Cuts), From: number(z.From), To: number(z.To),
			Drive: driveKeys[z.Drive], Width: none, UsedUp: number(h.UsedUp), Runaway: number(h.Runaway), Holds: number(h.Holds),
			Rate: numbers(h.Rate), Slip: numbers(h.Slip), Heave: numbers(h.Heave), Throw: numbers(h.Throw), Stratigraphic: numbers(h.OmissionStratigraphic),
			Vertical: numbers(h.OmissionVertical), Gap: numbers(h.PressureGap), Remaining: numbers(h.Remaining), Strips: []stripJSON{},
			Force: numbers(h.Force), Strength: numbers(h.Strength), Stress: numbers(h.Stress), Heating: numbers(h.Heating), T: numbers(h.T)}
		if z.Width > 0 {
			j.Width = number(z.Width)
		}
		for _, s := range h.Strips {
			j.Strips = append(j.Strips, stripJSON{s.Layer, numbers(s.Width)})
		}
		out = append(out, j)
	}
	return out
}

func layersJSON(x *excision.Result) []cutJSON {
	out := []cutJSON{}
	for i := range x.Layers {
		l := &x.Layers[i]
		out = append(out, cutJSON{l.Name, l.Root, numbers(l.Thickness), numbers(l.ArcMean)})
	}
	return out
}

// Excision returns an excision result; x may be nil where the column has no root.
func Excision(p *race.Problem, s *state.State, x *excision.Result) ExcisionJSON {
	if x == nil {
		empty := []number{}
		return ExcisionJSON{Time: none, Share: none, Slip: none, Heave: none, Throw: none, Extension: none, PressureGap: none,
			CutTime: none, CutSlip: none, CutHeave: none, ArcMeanTime: none, PlateFails: none,
			History: historyJSON{empty, empty, empty, empty, empty, empty, empty}, Zones: []zoneJSON{}, Layers: []cutJSON{}, Warnings: append(list(race.Warnings(p, s)), noRoot)}
	}
	j := ExcisionJSON{Outcome: &x.Outcome, Time: number(x.LocalBeyond), Share: number(x.Share), Slip: number(x.Slip), Heave: number(x.Heave),
		Throw: number(x.Throw), Extension: none, PressureGap: number(x.PressureGap),
		CutTime: number(x.CutThroughTime), CutSlip: none, CutHeave: none, ArcMeanTime: number(x.ArcMeanTime), PlateFails: none,
		History: historyJSON{numbers(x.History.Time), numbers(x.History.RootThickness), numbers(x.History.ArcMean),
			numbers(x.History.Slip), numbers(x.History.Heave), numbers(x.History.Throw), numbers(x.History.RootMassShare)},
		Zones: zonesJSON(p, x), Layers: layersJSON(x), Warnings: list(ExcisionWarnings(p, s, x))}
	if x.Outcome == "excised" {
		j.Time = number(x.Time)
	}
	if drives(p, excision.ForceBalance) {
		j.PlateFails = number(x.PlateFails)
	}
	if p.ArcWidth > 0 {
		j.Extension = number(x.ExtensionDemanded)
	}
	if !math.IsInf(x.CutThroughTime, 1) {
		j.CutSlip, j.CutHeave = number(x.CutThroughSlip), number(x.CutThroughHeave)
	}
	return j
}
