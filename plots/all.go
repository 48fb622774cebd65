package plots

import (
	"fmt"

	"gonum.org/v1/plot/vg"

	"keelfall/solver/race"
)

// All returns every figure that a result has the data for, in order: column (and, where
// width is a column's, strength), spectrum, mode, fates, those of the shear zones and those of the drip. width is ColumnWidth where 0. It fails where a part is there and cannot
// be drawn.
func All(res *race.Result, width vg.Length) ([]Figure, error) {
	if res == nil || res.Problem == nil {
		return nil, fmt.Errorf("plots: there is no result to draw")
	}
	var out []Figure
	add := func(f Figure, err error) error {
		if err == nil {
			out = append(out, f)
		}
		return err
	}
	if res.State != nil {
		figures, err := Columns(res.State, width)
		if err != nil {
			return nil, err
		}
		out = append(out, figures...)
	}
	sp, dr := res.Spectrum, res.Drip
	if (sp != nil && len(sp.Rates) > 0) || (dr != nil && anyFinite(dr.Curve.Time)) {
		if err := add(Spectrum(sp, dr, SettingOf(res.Problem), width)); err != nil {
			return nil, err
		}
	}
	if sp != nil && sp.Mode != nil {
		col := &res.Problem.Column
		if res.State != nil && res.State.Column != nil {
			col = res.State.Column
		}
		if err := add(Mode(col, sp.Mode, width)); err != nil {
			return nil, err
		}
	}
	hasDrip := dr != nil && dr.Outcome != "buoyant" && len(dr.History.Time) > 0
	hasZones := res.Excision != nil && res.Excision.Outcome != "no zones" && len(res.Excision.History.Time) > 0
	if hasDrip || hasZones {
		if err := add(Fates(res, width)); err != nil {
			return nil, err
		}
	}
	if hasZones {
		figures, err := Excisions(res, width)
		if err != nil {
			return nil, err
		}
		out = append(out, figures...)
	}
	if dr != nil {
		figures, err := dripFigures(res, width)
		if err != nil {
			return nil, err
		}
		out = append(out, figures...)
	}
	return out, nil
}

func anyFinite(v []float64) bool {
	_, _, ok := bounds(v)
	return ok
}
