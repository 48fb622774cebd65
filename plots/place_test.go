package plots

import (
	"fmt"
	"testing"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/recorder"
	"pgregory.net/rapid"
)

// TestPlace asserts that labels placed one after another keep clear of one another, of
// the frame, and of lines where there is room.
func TestPlace(t *testing.T) {
	area := vg.Rectangle{Max: vg.Point{X: 200, Y: 120}}
	rapid.Check(t, func(t *rapid.T) {
		s := &sheet{Canvas: draw.NewCanvas(new(recorder.Canvas), 200, 120)}
		n := rapid.IntRange(1, 12).Draw(t, "labels")
		done := 0
		for i := range n {
			at := vg.Point{X: vg.Length(rapid.Float64Range(0, 200).Draw(t, "x")), Y: vg.Length(rapid.Float64Range(0, 120).Draw(t, "y"))}
			if s.place(black, area, around(at, 4), fmt.Sprintf("label %d", i)) {
				done++
			}
		}
		if len(s.texts) != done || done == 0 {
			t.Errorf("%d texts, %d placed", len(s.texts), done)
		}
		for i, a := range s.texts {
			if !inside(a.box, area) {
				t.Errorf("%q leaves the frame", a.text)
			}
			for _, b := range s.texts[:i] {
				if overlaps(a.box, b.box) {
					t.Errorf("%q and %q overlap", a.text, b.text)
				}
			}
		}
	})
}

// TestPlaceOffLines asserts that a label goes where it crosses no line.
func TestPlaceOffLines(t *testing.T) {
	s := &sheet{Canvas: draw.NewCanvas(new(recorder.Canvas), 200, 120)}
	s.lines = [][]vg.Point{{{X: 0, Y: 60}, {X: 200, Y: 60}}, {{X: 100, Y: 0}, {X: 100, Y: 120}}}
	if !s.place(black, s.Rectangle, around(vg.Point{X: 100, Y: 60}, 4), "here") {
		t.Fatal("not placed")
	}
	if n := s.crossed(s.texts[0].box); n != 0 {
		t.Errorf("crosses %d lines at %v", n, s.texts[0].box)
	}
}

// TestSpread asserts that boxes come apart, in order and within the limits.
func TestSpread(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(0, 30).Draw(t, "boxes")
		centres, heights := make([]vg.Length, n), make([]vg.Length, n)
		var at, sum vg.Length
		for i := range n {
			at += vg.Length(rapid.Float64Range(0, 10).Draw(t, "gap"))
			centres[i] = at
			heights[i] = vg.Length(rapid.Float64Range(1, 20).Draw(t, "height"))
			sum += heights[i]
		}
		hi := sum + vg.Length(rapid.Float64Range(0, 100).Draw(t, "room"))
		edge := vg.Length(0)
		for i, c := range spread(centres, heights, 0, hi) {
			if c-heights[i]/2 < edge-1e-6 || c+heights[i]/2 > hi+1e-6 {
				t.Errorf("box %d from %v to %v; the one before ends at %v, the room at %v", i, c-heights[i]/2, c+heights[i]/2, edge, hi)
			}
			edge = c + heights[i]/2
		}
	})
	got := spread([]vg.Length{10, 50}, []vg.Length{8, 8}, 0, 100)
	if got[0] != 10 || got[1] != 50 {
		t.Errorf("boxes with room were moved to %v", got)
	}
}
