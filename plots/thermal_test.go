package plots

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"gonum.org/v1/plot/vg"

	"keelfall/column"
	"keelfall/solver/heat"
)

// madeUpThermal fabricates a history of 30 Myr from steady geotherms of a column that
// changes. No transient was computed: it is good only for drawing.
func madeUpThermal(t testing.TB) *Thermal {
	t.Helper()
	h := &heat.History{}
	paths := []heat.Path{{Name: "K7", Layer: "mid-crust"}, {Name: "root-base", Layer: "root"}}
	for i := range 61 {
		s := 0.5 * float64(i)
		c := madeUpColumn(s)
		p, err := heat.Solve(c)
		if err != nil {
			t.Fatal(err)
		}
		h.Snapshots = append(h.Snapshots, heat.Snapshot{Time: s * myr, Column: c, Profile: p})
		h.Time, h.SurfaceFlow = append(h.Time, s*myr), append(h.SurfaceFlow, p.SurfaceFlow)
		z, _ := rootBase(c)
		T, _, _ := at(p, z)
		h.RootBase = append(h.RootBase, T+zeroCelsius)
		for j, d := range []float64{36e3 - 400*s, z} {
			T, z, P := at(p, d)
			q := &paths[j]
			q.Time, q.Depth, q.T, q.P = append(q.Time, s*myr), append(q.Depth, z*km), append(q.T, T+zeroCelsius), append(q.P, P*gpa)
		}
	}
	h.Paths = paths
	heights, forces := madeUpHeights(h.Time)
	return &Thermal{History: h, Elevation: heights, Force: forces, Shown: []float64{0, 2.5 * myr, 6 * myr, 16 * myr, 30 * myr}, HasTimeZero: true, TimeZero: 95 * myr, Events: []heat.Event{
		{Verb: "stretch", From: 6 * myr, To: 16 * myr, Rate: 1.5e-15},
		{Verb: "accumulate", Layer: "root", To: 3 * myr, Rate: 5e-4 / (myr / 1e6), Temperature: 1423},
		{Verb: "intrude", Name: "sheet", Layer: "mid-crust", From: 1 * myr, To: 1 * myr, Thickness: 1500, Temperature: 1463.15, Times: 4, Every: 0.5 * myr},
		{Verb: "erode", From: 6 * myr, To: 16 * myr, Rate: 2e-4 / (myr / 1e6)},
		{Verb: "bury", Name: "volcanics", From: 2 * myr, To: 4 * myr, Rate: 1e-4 / (myr / 1e6)},
		{Verb: "change-base", From: 8 * myr, To: 8 * myr, Temperature: 1523.15},
		{Verb: "remove", From: 24 * myr, To: 24 * myr, Layer: "mantle", Share: 0.5},
	}}
}

// madeUpHeights are an elevation that sinks below the sea and a force that changes sign.
func madeUpHeights(times []float64) (heights, forces []float64) {
	for _, t := range times {
		u := t / (30 * myr)
		heights, forces = append(heights, 1800-2600*u*u), append(forces, 1.4e12*math.Cos(3*u))
	}
	return heights, forces
}

// madeUpColumn is the invented column after s Myr.
func madeUpColumn(s float64) *column.Column {
	c := &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: 283.15},
		Base: column.Base{Boundary: column.Rigid, HasTemperature: true, Temperature: 1453.15 + 100*(1-math.Exp(-s/8))}}
	add := func(name string, thickness, heat float64, melt *column.Melt) {
		if thickness > 0 {
			c.Layers = append(c.Layers, column.Layer{Name: name, Thickness: thickness, Root: name == "root", Rock: column.Rock{
				Density: column.Uniform(3000), Conductivity: column.Conductivity{Reference: 2.6}, HeatProduction: column.HeatProduction{Top: heat}, Melt: melt}})
		}
	}
	thin := 1 - 0.02*math.Max(0, math.Min(s, 16)-6)
	add("volcanics", 100*math.Max(0, math.Min(s, 4)-2), 0, nil)
	add("batholith", 22e3*thin-200*math.Max(0, math.Min(s, 16)-6), 1.2e-6, nil)
	add("mid-crust", 14e3*thin, 0.5e-6, nil)
	for i := range 4 {
		if s >= 1+0.5*float64(i) {
			add(fmt.Sprintf("sheet %d", i+1), 1500*thin, 0.1e-6, nil)
		}
	}
	solidus, liquidus := &column.Curve{Surface: 1173.15, Slope: 100e-9}, &column.Curve{Surface: 1533.15, Slope: 80e-9}
	add("root", 14e3*thin+500*math.Min(s, 3), 0, &column.Melt{Solidus: solidus, Liquidus: liquidus})
	mantle := 18e3 * thin
	if s >= 24 {
		mantle /= 2
	}
	add("mantle", mantle, 0, nil)
	return c
}

// madeUpFit is a fit of three samples to the geotherm at the start.
func madeUpFit(t *Thermal) *heat.Fit {
	p := t.History.Snapshots[0].Profile
	f := &heat.Fit{Profile: p}
	for i, d := range []float64{24e3, 35e3, 52e3} {
		T, _, P := at(p, d)
		r := heat.Residual{Sample: heat.Sample{Name: fmt.Sprintf("S%d", i+1), Temperature: T + zeroCelsius + []float64{30, -20, 15}[i], TemperatureError: 40},
			Depth: d, Pressure: P * gpa, Model: T + zeroCelsius}
		if i == 1 {
			r.DepthError = 3e3
		} else {
			r.HasPressure, r.Sample.Pressure, r.PressureError = true, P*gpa, 0.1e9
		}
		f.Residuals = append(f.Residuals, r)
	}
	return f
}

func thermalFigures(t *testing.T, th *Thermal, width vg.Length) []Figure {
	t.Helper()
	f, err := History(th, width)
	if err != nil {
		t.Fatal(err)
	}
	out := []Figure{f}
	if th.HasPaths() {
		p, err := Paths(th, width)
		if err != nil {
			t.Fatal(err)
		}
		out = append(out, p)
	}
	return out
}

// TestHistoryData asserts that curves are the history's own numbers in the axes' units.
func TestHistoryData(t *testing.T) {
	th := madeUpThermal(t)
	f := thermalFigures(t, th, 0)[0]
	s := checkFigure(t, f)
	want := []string{"Temperature (°C)", "Depth (km)", "Depth (km)", "", "Age (Ma)", "Temperature (°C)", "Heat flow (mW/m²)", "", "Elevation (km)", "Force (10¹² N/m)", "Time (Myr)"}
	if !slices.Equal(s.axes, want) {
		t.Errorf("axes %q, want %q", s.axes, want)
	}
	base, flow := s.named(t, "temperature of the root's base"), s.named(t, "surface heat flow")
	for i, sec := range th.History.Time {
		if !near(base.x[i], sec/myr) || !near(base.y[i], th.History.RootBase[i]-273.15) || !near(flow.y[i], th.History.SurfaceFlow[i]*1e3) {
			t.Fatalf("after %g Myr: %g °C, %g mW/m²", base.x[i], base.y[i], flow.y[i])
		}
	}
	height, force := s.named(t, "elevation"), s.named(t, "force")
	for i, sec := range th.History.Time {
		if !near(height.x[i], sec/myr) || !near(height.y[i], th.Elevation[i]/1e3) || !near(force.y[i], th.Force[i]/1e12) {
			t.Fatalf("after %g Myr: %g km, %g TN/m", height.x[i], height.y[i], force.y[i])
		}
	}
	mantle := s.named(t, "base of mantle")
	for i, sn := range th.History.Snapshots {
		if !near(mantle.y[i], sn.Column.Depth()/1e3) {
			t.Fatalf("snapshot %d: base of mantle at %g km", i, mantle.y[i])
		}
	}
	if n := s.named(t, "base of sheet 2"); n.x[0] != 1.5 {
		t.Errorf("the second sheet is there from %g Myr on", n.x[0])
	}
	g := s.named(t, "geotherm at 89 Ma") // 95 − 6
	T, z, _ := geotherm(th.History.Snapshots[12].Profile)
	if !slices.Equal(g.x, T) || !slices.Equal(g.y, z) {
		t.Error("the geotherm at 89 Ma is not the snapshot at 6 Myr")
	}
	for _, l := range []string{"(a)", "(b)", "(c)", "95 Ma", "65 Ma", "root", "root's base", "surface heat flow", "4 × sheet, 1.5 km at 1190 °C",
		"erosion 0.2 mm/yr", "burial by volcanics 0.1 mm/yr", "base at 1250 °C", "50 % of mantle goes", "root grows 0.5 mm/yr", "stretching 1.5×10^{-15} 1/s"} {
		if !s.has(l) {
			t.Errorf("no %q", l)
		}
	}
}

// TestPathsData asserts paths, samples with their errors, the solidus and the times.
func TestPathsData(t *testing.T) {
	th := madeUpThermal(t)
	th.Fit = madeUpFit(th)
	s := checkFigure(t, thermalFigures(t, th, 0)[1])
	for _, p := range th.History.Paths {
		c := s.named(t, p.Name)
		for i := range p.Time {
			if !near(c.x[i], p.T[i]-273.15) || !near(c.y[i], p.P[i]/1e9) {
				t.Fatalf("%s: %g °C, %g GPa", p.Name, c.x[i], c.y[i])
			}
		}
	}
	if c := s.named(t, "sample S1"); !near(c.x[2]-c.x[1], 40) || !near(c.y[2]-c.y[1], 0.1) {
		t.Errorf("errors of S1: %v, %v", c.x, c.y)
	}
	if c := s.named(t, "sample S2"); !near(c.y[2]-c.y[1], 3000*9.81*3e3/1e9) { // ρ g × 3 km
		t.Errorf("3 km are %g GPa", c.y[2]-c.y[1])
	}
	if c := s.named(t, "solidus of root"); !near(c.x[0], 900+100*c.y[0]) {
		t.Errorf("solidus %g °C at %g GPa", c.x[0], c.y[0])
	}
	for _, l := range []string{"K7", "root-base", "S1", "S2", "S3", "solidus, root", "95 Ma", "65 Ma", "Pressure (GPa)", "Temperature (°C)"} {
		if !s.says(l) {
			t.Errorf("no %q", l)
		}
	}
}

// TestTabulatedSolidus: a table is drawn through its rows and no further, and not at all
// where it says nothing of the figure's pressures.
func TestTabulatedSolidus(t *testing.T) {
	for most, want := range map[float64]bool{2e9: true, 0.02e9: false} {
		tab, err := column.NewCurveTable("wet.csv", []column.CurvePoint{{P: 0, T: 1100}, {P: most / 2, T: 1050}, {P: most, T: 1200}})
		if err != nil {
			t.Fatal(err)
		}
		th := madeUpThermal(t)
		for i := range th.History.Snapshots {
			for j := range th.History.Snapshots[i].Column.Layers {
				if l := &th.History.Snapshots[i].Column.Layers[j]; l.Melt != nil {
					l.Melt = &column.Melt{Solidus: &column.Curve{Table: tab}, Liquidus: l.Melt.Liquidus}
				}
			}
		}
		f := pathsFigure{Thermal: th}
		for i := range th.History.Paths {
			f.paths = append(f.paths, &th.History.Paths[i])
		}
		f.scales()
		if (len(f.solidi) > 0) != want {
			t.Fatalf("to %g Pa: %d solidi, the figure spans %g to %g GPa", most, len(f.solidi), f.y.lo, f.y.hi)
		}
		for _, s := range f.solidi {
			if !slices.Contains(s.p, 1) || s.p[0] < f.y.lo || s.p[len(s.p)-1] > math.Min(f.y.hi, 2) || !slices.IsSorted(s.p) {
				t.Errorf("drawn at %v GPa", s.p)
			}
		}
		checkFigure(t, thermalFigures(t, th, 0)[1])
	}
}

// thermalOdd are histories that lack something or have too much of it.
var thermalOdd = []struct {
	name    string
	change  func(*Thermal)
	figures int
}{
	{"as it should be", func(*Thermal) {}, 2},
	{"samples", func(t *Thermal) { t.Fit = madeUpFit(t) }, 2},
	{"samples alone", func(t *Thermal) { t.Fit, t.History.Paths, t.Events = madeUpFit(t), nil, nil }, 2},
	{"no markers", func(t *Thermal) { t.History.Paths = nil }, 1},
	{"no time zero", func(t *Thermal) { t.HasTimeZero = false }, 2},
	{"no events", func(t *Thermal) { t.Events = nil }, 2},
	{"one snapshot", func(t *Thermal) { t.Shown = t.Shown[:1] }, 2},
	{"steady", func(t *Thermal) {
		for i := range t.History.Snapshots {
			t.History.Snapshots[i].Column, t.History.Snapshots[i].Profile = t.History.Snapshots[0].Column, t.History.Snapshots[0].Profile
			t.History.RootBase[i], t.History.SurfaceFlow[i] = t.History.RootBase[0], t.History.SurfaceFlow[0]
			for j := range t.History.Paths {
				p := &t.History.Paths[j]
				p.T[i], p.P[i] = p.T[0], p.P[0]
			}
		}
		t.Events = nil
	}, 2},
	{"no root", func(t *Thermal) {
		for i := range t.History.Snapshots {
			for j := range t.History.Snapshots[i].Column.Layers {
				t.History.Snapshots[i].Column.Layers[j].Root = false
			}
			t.History.RootBase[i] = 0
		}
	}, 2},
	{"a path that ends", func(t *Thermal) {
		p := &t.History.Paths[0]
		p.Time, p.T, p.P, p.Ended, p.Reason = p.Time[:9], p.T[:9], p.P[:9], true, "eroded"
	}, 2},
	{"a path of one point", func(t *Thermal) {
		p := &t.History.Paths[0]
		p.Time, p.T, p.P, p.Ended, p.Reason = p.Time[:1], p.T[:1], p.P[:1], true, "removed with the lower crust"
	}, 2},
	{"many events and markers", func(t *Thermal) {
		for i := range 20 {
			t.Events = append(t.Events, heat.Event{Verb: "intrude", Name: "a sheet with a name that is much too long for any figure", From: float64(i) * myr, To: float64(i) * myr, Thickness: 50, Temperature: 1400})
		}
		p := t.History.Paths[0]
		for i := range 8 {
			q := p
			q.Name = fmt.Sprintf("marker %d_{x} ^", i+3)
			q.T, q.P = slices.Clone(p.T), slices.Clone(p.P)
			for j := range q.T {
				q.T[j] += 30 * float64(i)
				q.P[j] += 2e7 * float64(i)
			}
			t.History.Paths = append(t.History.Paths, q)
		}
	}, 2},
	{"deep mantle", func(t *Thermal) {
		for i := range t.History.Snapshots {
			c := t.History.Snapshots[i].Column
			c.Layers[len(c.Layers)-1].Thickness = 200e3
			t.History.Snapshots[i].Profile, _ = heat.Solve(c)
		}
	}, 2},
}

// TestThermalOdd draws every odd case at three widths; where KEELFALL_LOOK names a
// folder, the pictures are written there.
func TestThermalOdd(t *testing.T) {
	for _, c := range thermalOdd {
		th := madeUpThermal(t)
		c.change(th)
		for _, w := range []vg.Length{80 * vg.Millimeter, ColumnWidth, PageWidth} {
			figures := thermalFigures(t, th, w)
			if len(figures) != c.figures {
				t.Errorf("%s: %d figures, want %d", c.name, len(figures), c.figures)
			}
			for _, f := range figures {
				checkFigure(t, f)
				look(t, f, "thermal, "+c.name)
			}
		}
	}
}

// TestThermalRefuses asserts errors where there is nothing to draw or no number.
func TestThermalRefuses(t *testing.T) {
	for name, change := range map[string]func(*Thermal){
		"no history":   func(t *Thermal) { t.History = nil },
		"no snapshots": func(t *Thermal) { t.History.Snapshots = nil },
		"NaN":          func(t *Thermal) { t.History.SurfaceFlow[3] = math.NaN() },
		"a path's NaN": func(t *Thermal) { t.History.Paths[0].T[3] = math.NaN() },
		"too short":    func(t *Thermal) { t.History.RootBase = t.History.RootBase[1:] },
	} {
		th := madeUpThermal(t)
		change(th)
		if _, err := History(th, 0); err == nil {
			t.Errorf("%s: drawn", name)
		}
	}
	th := madeUpThermal(t)
	th.History.Paths = nil
	if _, err := Paths(th, 0); err == nil {
		t.Error("paths without a marker or a sample are drawn")
	}
}
