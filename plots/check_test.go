package plots

import (
	"testing"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/recorder"
)

// tester is what testing.T and rapid.T share.
type tester interface {
	Helper()
	Errorf(format string, args ...any)
}

// drawn draws a figure and returns what was put where.
func drawn(f Figure) *sheet {
	return f.sheet(draw.NewCanvas(new(recorder.Canvas), f.Width, f.Height))
}

// checkFigure draws a figure and asserts what holds for all: every text can be drawn
// rune by rune, lies on the page and keeps clear of every other text.
func checkFigure(t tester, f Figure) *sheet {
	t.Helper()
	s := drawn(f)
	page := vg.Rectangle{Max: vg.Point{X: f.Width, Y: f.Height}}
	for i, a := range s.texts {
		if m := missingGlyphs(a.text); len(m) > 0 {
			t.Errorf("%s: %q has no glyph for %q", f.Name, a.text, string(m))
		}
		if !inside(a.box, grown(page, 0.1)) {
			t.Errorf("%s at %v pt: %q is off the page: %v", f.Name, f.Width, a.text, a.box)
		}
		for _, b := range s.texts[:i] {
			if overlaps(grown(a.box, -0.2), b.box) {
				t.Errorf("%s at %v pt: %q and %q overlap", f.Name, f.Width, a.text, b.text)
			}
		}
	}
	if len(s.texts) == 0 {
		t.Errorf("%s has no text at all", f.Name)
	}
	if m := missingGlyphs(f.Caption); len(m) > 0 || f.Caption == "" {
		t.Errorf("%s: caption %q", f.Name, f.Caption)
	}
	return s
}

// has reports whether txt is one of the texts.
func (s *sheet) has(txt string) bool {
	for _, p := range s.texts {
		if p.text == txt {
			return true
		}
	}
	return false
}

// curve returns a named curve.
func (s *sheet) named(t *testing.T, name string) curve {
	t.Helper()
	for _, c := range s.curves {
		if c.name == name {
			return c
		}
	}
	t.Fatalf("no curve %q", name)
	return curve{}
}
