package plots

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"
)

// lawCurves makes up n laws of long names that end close together.
func lawCurves(n int) []LawCurve {
	var out []LawCurve
	for i := range n {
		c := LawCurve{Name: fmt.Sprintf("wet olivine grain boundary sliding below %d degC Nobody 2003", 1000+i)}
		for j := range 50 {
			T := 773 + 14*float64(j)
			c.T = append(c.T, T)
			c.Log = append(c.Log, 2e4/T+float64(i%4)*0.3)
			c.Cover = append(c.Cover, Cover((i+j/25)%3))
			c.Error = append(c.Error, 0.2+1e-3*math.Abs(T-1300))
		}
		out = append(out, c)
	}
	return out
}

// TestLaws asserts that every law is named, once, clear of the others, and that the
// curves are the data.
func TestLaws(t *testing.T) {
	for _, n := range []int{1, 3, MostLaws} {
		for _, w := range []vg.Length{80 * vg.Millimeter, ColumnWidth, PageWidth} {
			f, err := Laws(lawCurves(n), "1e-15 1/s", w)
			if err != nil {
				t.Fatal(err)
			}
			s := checkFigure(t, f)
			look(t, f, fmt.Sprintf("%d laws", n))
			for i := range n {
				name := fmt.Sprintf("wet olivine grain boundary sliding below %d degC Nobody 2003", 1000+i)
				if !slices.ContainsFunc(s.texts, func(p placed) bool { return strings.ReplaceAll(p.text, "\n", " ") == name }) {
					t.Errorf("%d laws at %v: %q is not named", n, w, name)
				}
			}
		}
	}
	c := lawCurves(1)
	f, err := Laws(c, "a strain rate of 1e-15 1/s", 0)
	if err != nil {
		t.Fatal(err)
	}
	// A made-up law that is not known up to its middle and calibrated beyond: two lines.
	s := checkFigure(t, f)
	a, b := s.curves[0], s.curves[1]
	if len(s.curves) != 2 || a.x[len(a.x)-1] != b.x[0] || len(a.x)+len(b.x) != len(c[0].T)+1 || !near(a.x[0], c[0].T[0]-273.15) || !near(b.y[3], c[0].Log[28]) {
		t.Errorf("curves %v", s.curves)
	}
	for _, want := range []string{"at a strain rate of 1e-15 1/s.", "Thin: ", "Tints: "} {
		if !strings.Contains(f.Caption, want) {
			t.Errorf("caption %q lacks %q", f.Caption, want)
		}
	}
}

// TestLawsCaption asserts that the caption says what dashes and thin lines mean and how the
// errors were found, and that a name keeps its numbers with their units.
func TestLawsCaption(t *testing.T) {
	c := lawCurves(3)
	c[1].ErrorNote, c[2].ErrorNote = "Errors of the second about 1 MPa.", "Those of the third are not drawn."
	f, err := Laws(c, "1e-15 1/s", 80*vg.Millimeter)
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"Dashed: outside the temperatures, pressures or stresses of its experiments", "Thin: the temperatures of its experiments are not known.",
		"Tints: one published standard error. Errors of the second about 1 MPa. Those of the third are not drawn."} {
		if !strings.Contains(f.Caption, want) {
			t.Errorf("caption %q lacks %q", f.Caption, want)
		}
	}
	for _, p := range drawn(f).texts {
		if strings.Contains(p.text, "\ndegC") {
			t.Errorf("%q breaks before its unit", p.text)
		}
	}
	many := lawCurves(4)
	many[0].ErrorNote = "Errors about 1 MPa."
	if f, err = Laws(many, "1e-15 1/s", 0); err != nil || strings.Contains(f.Caption, "Errors about") {
		t.Errorf("errors that are not drawn: %q, %v", f.Caption, err)
	}
}

// TestLawsCut asserts that what is stiffer than any rock flows is left out, and said.
func TestLawsCut(t *testing.T) {
	c := lawCurves(2)
	c[1].Log[0] = 40
	f, err := Laws(c, "1e-15 1/s", 0)
	if err != nil {
		t.Fatal(err)
	}
	if s := checkFigure(t, f); s.says("40") || !s.says("26") || !strings.Contains(f.Caption, "Above 10^26 Pa s") {
		t.Errorf("caption %q", f.Caption)
	}
}

// TestLawsRefused asserts that what cannot be drawn is an error.
func TestLawsRefused(t *testing.T) {
	for name, change := range map[string]func(*LawCurve){
		"not a number": func(c *LawCurve) { c.Log[3] = math.NaN() },
		"an error":     func(c *LawCurve) { c.Error[3] = math.Inf(1) },
		"lengths":      func(c *LawCurve) { c.Cover = c.Cover[1:] },
		"order":        func(c *LawCurve) { c.T[1] = c.T[0] },
		"one point":    func(c *LawCurve) { *c = LawCurve{T: c.T[:1], Log: c.Log[:1], Cover: c.Cover[:1]} },
	} {
		c := lawCurves(2)
		change(&c[1])
		if _, err := Laws(c, "", 0); err == nil || !strings.HasPrefix(err.Error(), "plots: ") {
			t.Errorf("%s: %v", name, err)
		}
	}
	for _, n := range []int{0, MostLaws + 1} {
		if _, err := Laws(lawCurves(n), "", 0); err == nil {
			t.Errorf("%d laws are drawn", n)
		}
	}
}
