package excision_test

import (
	"math"
	"testing"

	"keelfall/solver/excision"
)

func solve(t *testing.T, set excision.Setting, zones ...excision.Zone) *excision.Result {
	t.Helper()
	r, err := excision.Solve(zones, set)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func last(x []float64) float64 { return x[len(x)-1] }

// The arc mean of the root changes only by zones that cut the root, and grows where a
// zone repeats it (physics: omission is s sin(θ − δ); derived).
func TestArcMeanIsOfTheRoot(t *testing.T) {
	crust := solve(t, setting(50), zone("crust"))
	if m := last(crust.History.ArcMean); m != 20e3 {
		t.Errorf("a zone in the crust thins the root's arc mean to %g m", m)
	}
	if !math.IsInf(crust.ArcMeanTime, 1) {
		t.Errorf("a zone in the crust has the arc mean at %g s", crust.ArcMeanTime)
	}
	steep := zone("pyroxenite")
	steep.LayeringDip = math.Pi / 3
	r := solve(t, setting(50), steep)
	heave := 48e6 * 1e-3 * math.Cos(math.Pi/6) // m, 48 Myr at 1 mm/yr
	if got, want := last(r.History.ArcMean), 8e3+12e3*(1+heave/(150e3+heave)); math.Abs(got/want-1) > 1e-12 {
		t.Errorf("repetition: arc mean %g m, want %g", got, want)
	}
	if !math.IsInf(r.ArcMeanTime, 1) {
		t.Errorf("repetition reaches the share at %g s", r.ArcMeanTime)
	}
	upright := zone("pyroxenite")
	upright.Dip = math.Pi / 2
	if r := solve(t, setting(50), upright); last(r.History.Heave) != 0 || !math.IsInf(r.ArcMeanTime, 1) || last(r.History.ArcMean) != 20e3 {
		t.Errorf("a vertical zone heaves %g m, arc mean %g m at %g s", last(r.History.Heave), last(r.History.ArcMean), r.ArcMeanTime)
	}
	// a zone that cuts one of two root layers thins the mean of that one alone
	one := solve(t, setting(50), zone("pyroxenite"))
	if got, want := last(one.History.ArcMean), 8e3+12e3*(1-heave/(150e3+heave)); math.Abs(got/want-1) > 1e-12 {
		t.Errorf("one layer: arc mean %g m, want %g", got, want)
	}
}

// A zone slips on to its end after it has cut the column through (clearing an arc of
// width B needs heave B + h/tan θ), and the arc-mean time is where the history says.
func TestSlipsOnAfterCuttingThrough(t *testing.T) {
	z := zone("granulite", "pyroxenite")
	z.SlipRate *= 8 // 4 km/Myr: the column's 20 km are gone after 5 Myr
	z.To = 30 * myr
	r := solve(t, setting(50), z)
	if want := 7 * myr; math.Abs(r.CutThroughTime/want-1) > 1e-9 {
		t.Fatalf("cut through at %g Myr, want 7", r.CutThroughTime/myr)
	}
	slip := 28e6 * 8e-3
	h := &r.History
	if got := last(h.Slip); math.Abs(got/slip-1) > 1e-9 {
		t.Errorf("slip %g m at the end, want %g", got, slip)
	}
	if got, want := last(h.Heave), slip*math.Cos(math.Pi/6); math.Abs(got/want-1) > 1e-9 {
		t.Errorf("heave %g m, want %g", got, want)
	}
	if got, want := last(h.Throw), slip/2; math.Abs(got/want-1) > 1e-9 {
		t.Errorf("throw %g m, want %g", got, want)
	}
	if got := last(h.RootThickness); got > 1e-6 {
		t.Errorf("%g m of root left in the column", got)
	}
	if r.ArcMeanTime <= r.CutThroughTime || r.ArcMeanTime >= 30*myr {
		t.Fatalf("arc mean at %g Myr, want between 7 and 30", r.ArcMeanTime/myr)
	}
	for i := range h.Time {
		if (h.ArcMeanShare[i] >= 0.3) != (h.Time[i] >= r.ArcMeanTime) {
			t.Errorf("arc-mean share %g at %g Myr, but the time of 0.3 is %g", h.ArcMeanShare[i], h.Time[i]/myr, r.ArcMeanTime/myr)
		}
	}
}

// The lowest layer goes first: rock is lost from directly above the zone. Users name
// layers from above downwards.
func TestLowestFirst(t *testing.T) {
	r := solve(t, setting(60), zone("crust", "granulite", "pyroxenite"))
	// pyroxenite 12 km by 26 Myr, granulite 8 km by 42 Myr at 0.5 km/Myr from 2 Myr on
	if want := 42.0; math.Abs(r.CutThroughTime/myr/want-1) > 1e-9 {
		t.Errorf("root cut through at %g Myr, want %g", r.CutThroughTime/myr, want)
	}
	i := 0
	for r.History.Time[i] < 26*myr*(1-1e-9) {
		i++
	}
	want := 12e3 * 3450 / (8e3*3100.0 + 12e3*3450) * (r.History.Time[i] - 2*myr) / (24 * myr)
	if got := r.History.RootMassShare[i]; math.Abs(got/want-1) > 0.01 { // within one sample of the change of layer
		t.Errorf("share %g when the lower layer is gone, want %g", got, want)
	}
}

// A zone without an end goes on after the window; one with an end of its own, at the
// window's or later, stops there.
func TestEnds(t *testing.T) {
	open := zone("pyroxenite")
	open.To = math.Inf(1)
	if r := solve(t, setting(20), open); !math.IsInf(r.CutThroughTime, 1) || math.IsInf(r.LocalBeyond, 1) {
		// pyroxenite alone never cuts the whole root through
		t.Errorf("open end: cut through at %g Myr, share at %g", r.CutThroughTime/myr, r.LocalBeyond/myr)
	}
	whole := zone("granulite", "pyroxenite")
	whole.To = 20 * myr
	if r := solve(t, setting(20), whole); !math.IsInf(r.CutThroughTime, 1) {
		t.Errorf("end at the window's: cut through at %g Myr, want never", r.CutThroughTime/myr)
	}
	whole.To = math.Inf(1)
	if r := solve(t, setting(20), whole); math.Abs(r.CutThroughTime/myr/42-1) > 1e-9 {
		t.Errorf("open end: cut through at %g Myr, want 42", r.CutThroughTime/myr)
	}
	whole.To = 30 * myr
	if r := solve(t, setting(20), whole); !math.IsInf(r.CutThroughTime, 1) {
		t.Errorf("end at 30 Myr: cut through at %g Myr, want never", r.CutThroughTime/myr)
	}
	// 0.5 km/Myr for 28 Myr is 14 km: the share of 0.3 is reached after the window
	short := setting(10)
	if r := solve(t, short, whole); r.Outcome != "window" || math.IsInf(r.LocalBeyond, 1) || r.LocalBeyond <= short.Window || r.LocalBeyond > whole.To {
		t.Errorf("%s, share at %g Myr", r.Outcome, r.LocalBeyond/myr)
	}
}
