package plots

import (
	"math"
	"slices"
	"testing"

	"gonum.org/v1/plot/vg"
)

// TestHistoryWithoutElevation: no panel where elevation is not known, and an error where
// it does not fit the times.
func TestHistoryWithoutElevation(t *testing.T) {
	th := madeUpThermal(t)
	th.Force = th.Force[1:]
	if _, err := History(th, 0); err == nil {
		t.Error("60 forces at 61 times are drawn")
	}
	th.Force, th.Elevation[3] = append(th.Force, 0), math.NaN()
	if _, err := History(th, 0); err == nil {
		t.Error("an elevation that is NaN is drawn")
	}
	th.Elevation, th.Force = nil, nil
	for _, width := range []vg.Length{ColumnWidth, PageWidth} {
		f, err := History(th, width)
		if err != nil {
			t.Fatal(err)
		}
		if s := checkFigure(t, f); slices.Contains(s.axes, "Elevation (km)") {
			t.Errorf("axes %q", s.axes)
		}
	}
}
