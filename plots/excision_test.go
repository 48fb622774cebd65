package plots

import (
	"math"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"

	"keelfall/solver/excision"
	"keelfall/solver/race"
)

// zoned gives the made-up result two zones: one that cuts the root at a given rate, and
// one above it whose forces are balanced, or that holds.
func zoned(holds bool) *race.Result {
	r := madeUp(fiveRocks)
	r.Problem.Zones = []excision.Zone{
		{Name: "Ruska zone", Dip: math.Pi / 6, Cuts: []string{"garnet pyroxenite"}, To: 12 * myr, SlipRate: 3e-4 / (myr / 1e6)},
		{Name: "upper detachment", Dip: 40 * math.Pi / 180, Cuts: []string{"diorite, tonalite", "mafic granulite"}, From: 3 * myr, To: math.Inf(1), Drive: excision.ForceBalance},
	}
	x := r.Excision
	x.Outcome = "window"
	x.Zones = []excision.ZoneHistory{{Name: "Ruska zone"}, {Name: "upper detachment"}}
	for _, t := range x.History.Time {
		for i := range x.Zones {
			z, h := &r.Problem.Zones[i], &x.Zones[i]
			rate := 3e-4 / (myr / 1e6)
			if i == 1 {
				rate = 1e-5 / (myr / 1e6) * math.Exp(t/myr/4)
				if holds {
					rate = 0
				}
			}
			moved := rate * math.Min(math.Max(t-z.From, 0), z.To-z.From)
			if t < z.From || t > z.To {
				rate = 0
			}
			h.Slip, h.Heave, h.Rate = append(h.Slip, moved), append(h.Heave, moved*z.Heave()), append(h.Rate, rate)
			if i == 1 {
				h.Force, h.Strength = append(h.Force, 2.4e12), append(h.Strength, 4.2e12-1e11*t/myr)
			}
		}
	}
	return r
}

func excisions(t *testing.T, r *race.Result, width vg.Length) map[string]*sheet {
	t.Helper()
	figures, err := Excisions(r, width)
	if err != nil {
		t.Fatal(err)
	}
	out := map[string]*sheet{}
	for _, f := range figures {
		out[f.Name] = checkFigure(t, f)
		look(t, f, t.Name())
	}
	return out
}

// Curves are the result's own numbers in the axes' units, and nothing where a zone does
// not move.
func TestExcisionData(t *testing.T) {
	r := zoned(false)
	s := excisions(t, r, 0)
	h := s["excision"]
	slip, heave := h.named(t, "slip of upper detachment"), h.named(t, "heave of Ruska zone")
	force, rate := s["excision-force"].named(t, "strength of upper detachment"), s["excision-force"].named(t, "slip rate of upper detachment")
	for i, at := range r.Excision.History.Time {
		if !near(slip.y[i], r.Excision.Zones[1].Slip[i]/1e3) || !near(heave.y[i], r.Excision.Zones[0].Heave[i]/1e3) || !near(slip.x[i], at/myr) {
			t.Errorf("%g Myr: slip %g, heave %g km", slip.x[i], slip.y[i], heave.y[i])
		}
		if moves := at >= 3*myr; moves != !math.IsNaN(force.y[i]) || moves && !near(force.y[i], r.Excision.Zones[1].Strength[i]/1e12) {
			t.Errorf("%g Myr: strength %g", slip.x[i], force.y[i])
		}
		if at >= 3*myr && !near(rate.y[i], r.Excision.Zones[1].Rate[i]*1e3*(myr/1e6)) {
			t.Errorf("%g Myr: %g mm/yr", slip.x[i], rate.y[i])
		}
	}
	for figure, words := range map[string][]string{
		"excision":         {"arc mean", "heave", "Root thickness (km)", "Age (Ma)"},
		"excision-force":   {"driving force", "Force (10^{12} N/m)", "Slip rate (mm/yr)"},
		"excision-section": {"traverse", "(a) before", "(b) after", "Depth (km)", "garnet pyroxenite", "Ruska zone"},
	} {
		for _, w := range words {
			if !s[figure].says(w) {
				t.Errorf("%s: no %q", figure, w)
			}
		}
	}
}

// A zone that holds has a strength and no slip rate; without forces there is no such figure.
func TestZoneThatHolds(t *testing.T) {
	s := excisions(t, zoned(true), 0)
	if !s["excision-force"].says("does not slip") {
		t.Error("nothing says that the zone does not slip")
	}
	r := zoned(true)
	r.Problem.Zones, r.Excision.Zones = r.Problem.Zones[:1], r.Excision.Zones[:1]
	if s := excisions(t, r, PageWidth); s["excision-force"] != nil || s["excision-section"] == nil {
		t.Errorf("%d figures of a zone whose rate is given", len(s))
	}
}

// In the section, what is missing at the traverse is what the zones left out: their slip
// times sin(θ − δ)/cos δ (derived: plane geometry), from the layers they cut; the rock on
// both sides keeps its area and the surface stays at the traverse.
func TestSectionLeavesOut(t *testing.T) {
	for _, delta := range []float64{0, 4, -7} {
		r := zoned(false)
		r.Problem.Zones[0].LayeringDip = delta * math.Pi / 180
		r.Problem.Zones = r.Problem.Zones[:1]
		r.Excision.Zones = r.Excision.Zones[:1]
		cuts, err := sectionCuts(r)
		if err != nil {
			t.Fatal(err)
		}
		st, err := newStrata(&r.Problem.Column)
		if err != nil {
			t.Fatal(err)
		}
		before := newBlocks(st, cuts)
		after := before.clone()
		after.slip(cuts[0])
		up := cuts[0].slip * math.Sin((30-delta)*math.Pi/180) / math.Cos(delta*math.Pi/180)
		for i := 1; i < len(st.all)-1; i++ {
			want := st.all[i].bottom - st.all[i].top
			if st.all[i].root {
				want -= up
			}
			if got := thicknessAt(after, i, 0); math.Abs(got/want-1) > 1e-9 {
				t.Errorf("δ %g°: %s is %g km thick at the traverse, want %g", delta, st.all[i].name, got, want)
			}
			if got := thicknessAt(after, i, -200); math.Abs(got/(st.all[i].bottom-st.all[i].top)-1) > 1e-9 {
				t.Errorf("δ %g°: %s is %g km thick in the footwall", delta, st.all[i].name, got)
			}
		}
		if a, b := area(before), area(after); math.Abs(a/b-1) > 1e-12 {
			t.Errorf("δ %g°: area %g, then %g", delta, a, b)
		}
	}
}

func thicknessAt(b blocks, index int, x float64) float64 {
	var h float64
	for _, q := range b.rock {
		if top, base, ok := q.span(x+1e-9, 1e3); ok && q.index == index {
			h += base - top
		}
	}
	return h
}

func area(b blocks) float64 {
	var sum float64
	for _, q := range b.rock {
		for i, p := range q.corners {
			o := q.corners[(i+1)%len(q.corners)]
			sum += (p.x*o.z - o.x*p.z) / 2
		}
	}
	return sum
}

// The scale of depth and distance is the same, at every width, and a zone that slips on
// for ever leaves out no more than its layers.
func TestSectionTrueScale(t *testing.T) {
	for _, width := range []vg.Length{0, PageWidth} {
		r := zoned(false)
		for i := range r.Excision.Zones {
			for j := range r.Excision.Zones[i].Slip {
				r.Excision.Zones[i].Slip[j] *= 40
			}
		}
		figures, err := Excisions(r, width)
		if err != nil {
			t.Fatal(err)
		}
		i := slices.IndexFunc(figures, func(f Figure) bool { return f.Name == "excision-section" })
		f := figures[i]
		look(t, f, t.Name())
		if !strings.Contains(f.Caption, "is drawn as when its layers were used up") {
			t.Errorf("caption: %s", f.Caption)
		}
		checkFigure(t, f)
	}
}

// What cannot be drawn is an error, and without zones there is nothing to draw.
func TestExcisionsRefused(t *testing.T) {
	for name, change := range map[string]func(*race.Result){
		"slip":     func(r *race.Result) { r.Excision.Zones[0].Slip[3] = math.NaN() },
		"rate":     func(r *race.Result) { r.Excision.Zones[0].Rate = nil },
		"strength": func(r *race.Result) { r.Excision.Zones[1].Strength = r.Excision.Zones[1].Strength[:4] },
		"root":     func(r *race.Result) { r.Excision.History.RootThickness[2] = math.Inf(1) },
		"zones":    func(r *race.Result) { r.Problem.Zones = r.Problem.Zones[:1] },
		"layer":    func(r *race.Result) { r.Problem.Zones[0].Cuts = []string{"nothing"} },
	} {
		r := zoned(false)
		change(r)
		if _, err := Excisions(r, 0); err == nil || !strings.HasPrefix(err.Error(), "plots: ") {
			t.Errorf("%s: %v", name, err)
		}
	}
	if f, err := Excisions(madeUp(fiveRocks), 0); err != nil || f != nil {
		t.Errorf("%d figures without histories, %v", len(f), err)
	}
}
