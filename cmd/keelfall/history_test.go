package main

import (
	"bytes"
	"context"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"keelfall/cmd/internal/report"
	"keelfall/solver/heat"
)

const window = 30 * report.Myr

// inMyr rounds times in s to a thousandth of a Myr.
func inMyr(times []float64) []float64 {
	out := make([]float64, len(times))
	for i, t := range times {
		out[i] = math.Round(1e3*t/report.Myr) / 1e3
	}
	return out
}

// The usual times are the start, the ends of events and of the window: never more than
// six, and not two that cannot be told apart.
func TestUsualTimes(t *testing.T) {
	at := func(from, to float64) heat.Event {
		return heat.Event{Verb: "erode", From: from * report.Myr, To: to * report.Myr}
	}
	for name, c := range map[string]struct {
		events []heat.Event
		want   []float64
	}{
		"none":             {nil, []float64{0, 30}},
		"two":              {[]heat.Event{at(6, 16), at(1, 4)}, []float64{0, 4, 16, 30}},
		"the same end":     {[]heat.Event{at(6, 16), at(1, 16)}, []float64{0, 16, 30}},
		"very close":       {[]heat.Event{at(6, 16), at(1, 16.1)}, []float64{0, 16.1, 30}},
		"with the window":  {[]heat.Event{at(6, 30), at(1, 40)}, []float64{0, 30}},
		"the last repeat":  {[]heat.Event{{Verb: "intrude", From: 1 * report.Myr, To: 1 * report.Myr, Times: 4, Every: 2 * report.Myr}}, []float64{0, 7, 30}},
		"too many":         {[]heat.Event{at(0, 5), at(5, 10), at(10, 11), at(11, 15), at(15, 20), at(20, 25)}, []float64{0, 5, 15, 20, 25, 30}},
		"too many, spread": {[]heat.Event{at(0, 4), at(4, 4.4), at(4, 4.8), at(5, 12), at(12, 20)}, []float64{0, 4, 4.8, 12, 20, 30}},
	} {
		got := usualTimes(c.events, window)
		if len(got) > mostGeotherms || !slices.IsSorted(got) {
			t.Errorf("%s: %v", name, inMyr(got))
		}
		if name != "too many" && name != "very close" && !slices.Equal(inMyr(got), c.want) {
			t.Errorf("%s: %v, want %v", name, inMyr(got), c.want)
		}
		if len(got) != len(c.want) {
			t.Errorf("%s: %d times, want %d", name, len(got), len(c.want))
		}
	}
}

// The table has some ten rows at round times, and one at the window's end.
func TestRowTimes(t *testing.T) {
	for _, end := range []float64{0.003, 0.7, 1, 7.3, 8, 15, 30, 33, 99, 1000} {
		rows := rowTimes(end * report.Myr)
		if len(rows) < 5 || len(rows) > 12 || rows[0] != 0 || rows[len(rows)-1] != end*report.Myr || !slices.IsSorted(rows) {
			t.Errorf("%g Myr: %v", end, inMyr(rows))
		}
	}
	if got := inMyr(rowTimes(8 * report.Myr)); !slices.Equal(got, []float64{0, 1, 2, 3, 4, 5, 6, 7, 8}) {
		t.Errorf("8 Myr: %v", got)
	}
}

// Contacts are looked at just before rock comes in at once, and when it has.
func TestContactTimes(t *testing.T) {
	sheets := []heat.Event{{Verb: "intrude", From: 1.2345 * report.Myr, To: 1.2345 * report.Myr, Times: 2, Every: report.Myr}}
	rounded := 15 * report.Myr * (1 + 4e-16) // 15 Myr is among the sixty
	got := merged(window, []float64{rounded}, contactTimes(sheets, window), []float64{0, window, 2 * window, -1})
	if rounded == 15*report.Myr || slices.Contains(got, 15*report.Myr) || !slices.Contains(got, rounded) {
		t.Error("one time rounded in two ways stands twice, or not as it was first given")
	}
	for _, want := range []float64{0, 1.22, 1.235, 2.22, 2.235, 30} {
		if !slices.ContainsFunc(inMyr(got), func(x float64) bool { return math.Abs(x-want) < 1e-3 }) {
			t.Errorf("nothing at %g Myr: %v", want, inMyr(got))
		}
	}
	if !slices.IsSorted(got) || got[0] != 0 || got[len(got)-1] != window || len(slices.Compact(slices.Clone(got))) != len(got) {
		t.Errorf("%v", inMyr(got))
	}
}

// An event that is not possible, before the run or only on its way, is the file's mistake;
// one that does nothing is counted with the others.
func TestHistoryEventMistakes(t *testing.T) {
	const column = `title: t
surface: {boundary: free, temperature: 0 degC}
base: {boundary: half-space, temperature: 1300 degC}
layers:
  - {name: crust, thickness: 40 km, density: 2800 kg/m3, viscosity: 1e21 Pa s}
  - {name: root, root: true, thickness: 10 km, density: 3400 kg/m3, viscosity: 1e21 Pa s}
events:
  - erode: {from: 0 Myr, to: 5 Myr, rate: 0 mm/yr}
`
	for events, want := range map[string]string{
		"  - stretch: {from: 0 Myr, to: 10 Myr, rate: -1e-13 1/s}\n": "t.yaml:9: events[1].stretch: by 10 Myr the column is deeper than 3000 km",
		"  - erode: {from: 5 Myr, to: 10 Myr, rate: 10 mm/yr}\n" +
			"  - accumulate: {layer: crust, from: 9.5 Myr, to: 11 Myr, rate: 1 mm/yr}\n": "t.yaml:10: events[2].accumulate: at 9.5 Myr: the layer is gone",
	} {
		file := filepath.Join(t.TempDir(), "t.yaml")
		if err := os.WriteFile(file, []byte(column+events), 0o644); err != nil {
			t.Fatal(err)
		}
		var out, errs bytes.Buffer
		if status := Main(context.Background(), []string{"history", file}, Streams{&out, &errs}); status != exitInput || !strings.Contains(errs.String(), want) {
			t.Errorf("status %d: %s, want %s", status, errs.String(), want)
		}
	}
}
