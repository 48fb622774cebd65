package plots

import (
	"bytes"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"
	"pgregory.net/rapid"

	"keelfall/solver/growth"
)

// madeUpBranches are n invented branches of few or many modes and their labels.
func madeUpBranches(n, modes int) ([]growth.Branch, []string) {
	kinds := []string{"root drips", "counterflow", "thermal", "contact at 40 km sinks", "surface sinks", "contact at 22 km rises"}
	var all []growth.Branch
	var labels []string
	for i := range n {
		var b growth.Branch
		peak := 30e3 * math.Pow(1.37, float64((i*5)%7))
		for j := range modes {
			l := 10e3 * math.Pow(50, float64(j)/float64(max(modes-1, 1)))
			x := math.Log(l / peak)
			q := (0.14*math.Pow(0.75, float64(i))*math.Exp(-x*x/0.9) - 0.0002) / myr
			if q < 0 && modes > 1 {
				continue
			}
			m := &growth.Mode{Wavelength: l, Growth: q}
			if i == 1 && l > 90e3 {
				m.Imaginary = 1e-16
			}
			b.Modes = append(b.Modes, m)
		}
		all, labels = append(all, b), append(labels, kinds[i%len(kinds)])
	}
	return all, labels
}

// TestBranchesData asserts curves, axes, labels and the caption.
func TestBranchesData(t *testing.T) {
	all, labels := madeUpBranches(4, 80)
	f, err := Branches(all, labels, Setting{ArcWidth: 160e3}, 0)
	if err != nil {
		t.Fatal(err)
	}
	s := checkFigure(t, f)
	for i, b := range all {
		c := s.named(t, fmt.Sprintf("branch %d", i+1))
		for j, m := range b.Modes {
			if !near(c.x[j], m.Wavelength/1e3) || !near(c.y[j], m.Growth*1e6*365.25*86400) {
				t.Errorf("branch %d: %g 1/Myr at %g km", i+1, c.y[j], c.x[j])
			}
		}
		if !s.says(fmt.Sprintf("%d %s", i+1, labels[i])) {
			t.Errorf("no label %d %s", i+1, labels[i])
		}
	}
	if want := []string{"Growth rate (1/Myr)", "e-folding time (Myr)", "Wavelength (km)"}; !slices.Equal(s.axes, want) {
		t.Errorf("axes %q, want %q", s.axes, want)
	}
	if !s.says("wider than the arc") {
		t.Error("the limit is not named")
	}
	for _, part := range []string{"grey: wider than the arc (160 km).", "Open circles: the mode oscillates.", "Fastest: 1 root drips (29.7 km, 7.15 Myr); 2 counterflow ("} {
		if !strings.Contains(f.Caption, part) {
			t.Errorf("no %q in the caption: %s", part, f.Caption)
		}
	}
	if strings.Contains(f.Caption, "Thin grey") || f.Name != "branches" {
		t.Errorf("%s: %s", f.Name, f.Caption)
	}
	f, err = Branches(all[:1], labels[:1], Setting{ArcLength: 100e3, Strike: true}, 0)
	if err != nil {
		t.Fatal(err)
	}
	if s := checkFigure(t, f); !s.says("longer than the arc") || strings.Contains(f.Caption, "oscillates") {
		t.Errorf("along strike: %s", f.Caption)
	}
}

// TestManyBranches: of a long list the eight fastest are named, in whatever order they
// come, and the caption says so.
func TestManyBranches(t *testing.T) {
	all, labels := madeUpBranches(20, 80)
	slices.Reverse(all)
	f, err := Branches(all, labels, Setting{}, PageWidth)
	if err != nil {
		t.Fatal(err)
	}
	s := checkFigure(t, f)
	for i := range all {
		own := slices.ContainsFunc(s.texts, func(p placed) bool {
			return strings.ReplaceAll(p.text, "\n", " ") == fmt.Sprintf("%d %s", i+1, labels[i])
		})
		if own != (i >= 12) {
			t.Errorf("branch %d: named %v", i+1, own)
		}
		s.named(t, fmt.Sprintf("branch %d", i+1))
	}
	if !strings.HasSuffix(f.Caption, "Thin grey: 12 slower branches.") || strings.Contains(f.Caption, "than the arc") {
		t.Errorf("caption: %s", f.Caption)
	}
}

// TestOddBranches draws what is unusual at three widths.
func TestOddBranches(t *testing.T) {
	long := "a very long name of a contact that nobody would ever want to print, 橄榄石 x_{2}\tdeep down"
	for _, c := range []struct {
		name     string
		n, modes int
		change   func([]growth.Branch, []string)
		says     string // in the figure
		caption  string
	}{
		{"as it should be", 4, 80, nil, "1 root drips", "Fastest: 1 root drips"},
		{"no branch", 0, 0, nil, "No growing mode at any wavelength", "no growing mode was found"},
		{"empty branches", 3, 0, nil, "No growing mode at any wavelength", "no growing mode was found"},
		{"one branch", 1, 80, nil, "1 root drips", "Fastest: 1 root drips"},
		{"one point", 1, 1, nil, "1 root drips", "1 root drips (10 km"},
		{"one point each", 6, 1, func(b []growth.Branch, _ []string) {
			for i := range b {
				b[i].Modes[0].Growth, b[i].Modes[0].Wavelength = float64(i+1)/myr, 2e4*float64(i+1)
			}
		}, "6 contact at 22 km rises", "1 root drips (20 km, 1 Myr)"},
		{"all the same point", 9, 1, func(b []growth.Branch, _ []string) {
			for i := range b {
				b[i].Modes[0].Growth = 1 / myr
			}
		}, "1 root drips", "Thin grey: one slower branch."},
		{"an empty one between", 3, 80, func(b []growth.Branch, _ []string) { b[1].Modes = nil }, "3 thermal", "3 thermal"},
		{"long labels", 8, 80, func(_ []growth.Branch, l []string) {
			for i := range l {
				l[i] = long
			}
		}, "1 a very", "1 a very long name"},
		{"no labels", 3, 80, func(_ []growth.Branch, l []string) { clear(l) }, "1", "Fastest: 1 (29.7 km"},
		{"eight", 8, 80, nil, "1 root drips", "8 counterflow"},
		{"twenty", 20, 80, nil, "1 root drips", "Thin grey: 12 slower branches."},
		{"few points", 3, 8, nil, "1 root drips", "1 root drips"},
		{"everything oscillates", 5, 80, func(b []growth.Branch, _ []string) {
			for i := range b {
				for _, m := range b[i].Modes {
					m.Imaginary = -1e-15
				}
			}
		}, "1 root drips", "Open circles"},
		{"everything decays", 3, 80, func(b []growth.Branch, _ []string) {
			for i := range b {
				for _, m := range b[i].Modes {
					m.Growth -= 1 / myr
				}
			}
		}, "1 root drips", "decays by 1/e in"},
		{"decays off the axis", 2, 80, func(b []growth.Branch, _ []string) {
			for _, m := range b[1].Modes {
				m.Growth = -100 / myr
			}
		}, "1 root drips", "decays by 1/e in 0.01 Myr"},
		{"no change at all", 2, 80, func(b []growth.Branch, _ []string) {
			for i := range b {
				for _, m := range b[i].Modes {
					m.Growth = 0
				}
			}
		}, "1 root drips", "neither grows nor decays"},
		{"the wrong way round", 2, 80, func(b []growth.Branch, _ []string) { slices.Reverse(b[0].Modes) }, "1 root drips", "1 root drips (29.7 km"},
	} {
		t.Run(c.name, func(t *testing.T) {
			for _, w := range []vg.Length{ColumnWidth, 120 * vg.Millimeter, PageWidth} {
				all, labels := madeUpBranches(c.n, c.modes)
				if c.change != nil {
					c.change(all, labels)
				}
				f, err := Branches(all, labels, Setting{ArcWidth: 160e3}, w)
				if err != nil {
					t.Fatal(err)
				}
				s := checkFigure(t, f)
				if !s.says(c.says) {
					t.Errorf("%v: no %q", w, c.says)
				}
				if !strings.Contains(f.Caption, c.caption) {
					t.Errorf("no %q in the caption: %s", c.caption, f.Caption)
				}
				look(t, f, c.name)
			}
		})
	}
}

// TestBranchesKeepNames: each named branch carries its number, up to five their whole
// name, and none lies across a curve.
func TestBranchesKeepNames(t *testing.T) {
	for _, w := range []vg.Length{ColumnWidth, PageWidth} {
		for n := 1; n <= 8; n++ {
			all, labels := madeUpBranches(n, 80)
			f, err := Branches(all, labels, Setting{ArcWidth: 160e3}, w)
			if err != nil {
				t.Fatal(err)
			}
			s := checkFigure(t, f)
			for i := range n {
				whole, number := fmt.Sprintf("%d %s", i+1, labels[i]), fmt.Sprint(i+1)
				k := slices.IndexFunc(s.texts, func(p placed) bool {
					got := strings.ReplaceAll(p.text, "\n", " ")
					return got == whole || got == number && n > 5
				})
				if k < 0 {
					t.Errorf("%v, %d branches: %d has no name", w, n, i+1)
				} else if s.crossed(s.texts[k].box) > 0 {
					t.Errorf("%v, %d branches: %q lies on a line", w, n, s.texts[k].text)
				}
			}
		}
	}
}

// TestAnyBranches draws random branches.
func TestAnyBranches(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var all []growth.Branch
		var labels []string
		for range rapid.IntRange(0, 20).Draw(t, "branches") {
			var b growth.Branch
			for range rapid.IntRange(0, 12).Draw(t, "modes") {
				b.Modes = append(b.Modes, &growth.Mode{
					Wavelength: math.Pow(10, rapid.Float64Range(1, 8).Draw(t, "wavelength")),
					Growth:     rapid.Float64Range(-1e-12, 1e-12).Draw(t, "growth"),
					Imaginary:  float64(rapid.IntRange(0, 1).Draw(t, "imaginary")),
				})
			}
			all, labels = append(all, b), append(labels, rapid.StringN(0, 40, -1).Draw(t, "label"))
		}
		w := vg.Length(rapid.Float64Range(80, 200).Draw(t, "width")) * vg.Millimeter
		f, err := Branches(all, labels, Setting{ArcWidth: rapid.Float64Range(0, 1e6).Draw(t, "arc")}, w)
		if err != nil {
			t.Fatal(err)
		}
		checkFigure(t, f)
	})
}

// TestBranchesSameBytes asserts that drawing anew gives the same bytes.
func TestBranchesSameBytes(t *testing.T) {
	for _, format := range Formats() {
		var twice [2]bytes.Buffer
		for i := range twice {
			all, labels := madeUpBranches(12, 80)
			f, err := Branches(all, labels, Setting{ArcWidth: 160e3}, 0)
			if err != nil {
				t.Fatal(err)
			}
			for range 2 { // a figure can be drawn again
				if err := Encode(&twice[i], f, format); err != nil {
					t.Fatal(err)
				}
			}
		}
		if !bytes.Equal(twice[0].Bytes(), twice[1].Bytes()) {
			t.Errorf("%s differs from one time to the next", format)
		}
	}
}

// TestBranchesRefused asserts that what cannot be drawn is an error.
func TestBranchesRefused(t *testing.T) {
	for name, change := range map[string]func(*growth.Branch, *Setting){
		"growth":     func(b *growth.Branch, _ *Setting) { b.Modes[2].Growth = math.NaN() },
		"infinite":   func(b *growth.Branch, _ *Setting) { b.Modes[2].Growth = math.Inf(1) },
		"imaginary":  func(b *growth.Branch, _ *Setting) { b.Modes[2].Imaginary = math.NaN() },
		"wavelength": func(b *growth.Branch, _ *Setting) { b.Modes[2].Wavelength = 0 },
		"endless":    func(b *growth.Branch, _ *Setting) { b.Modes[2].Wavelength = math.Inf(1) },
		"no number":  func(b *growth.Branch, _ *Setting) { b.Modes[2].Wavelength = math.NaN() },
		"nil":        func(b *growth.Branch, _ *Setting) { b.Modes[2] = nil },
		"arc":        func(_ *growth.Branch, s *Setting) { s.ArcWidth = math.NaN() },
	} {
		all, labels := madeUpBranches(2, 80)
		var s Setting
		change(&all[1], &s)
		if _, err := Branches(all, labels, s, 0); err == nil || !strings.HasPrefix(err.Error(), "plots: ") {
			t.Errorf("%s: %v", name, err)
		}
	}
	all, labels := madeUpBranches(2, 80)
	if _, err := Branches(all, labels[:1], Setting{}, 0); err == nil {
		t.Error("a label too few is accepted")
	}
	if _, err := Branches(all, labels, Setting{}, 20*vg.Millimeter); err == nil {
		t.Error("a width of 20 mm is accepted")
	}
}
