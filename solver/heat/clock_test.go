package heat_test

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"keelfall/rheology"
	"keelfall/solver/heat"
)

const myr = 1e6 * 365.25 * 86400

// argon in hornblende, Harrison 1981, from memory.
func hornblende() heat.Clock {
	return heat.Clock{Name: "hornblende", Marker: "m", ActivationEnergy: 268e3, Diffusivity: 2.4e-6, Radius: 80e-6, Geometry: "cylinder"}
}

// path samples temperatures in °C, linear between times in Myr, a hundred points each.
func path(points ...float64) (t, T []float64) {
	for i := 2; i < len(points); i += 2 {
		for j := range 100 {
			f := float64(j) / 100
			t = append(t, (points[i-2]+f*(points[i]-points[i-2]))*myr)
			T = append(T, points[i-1]+f*(points[i+1]-points[i-1])+273.15)
		}
	}
	n := len(points)
	return append(t, points[n-2]*myr), append(T, points[n-1]+273.15)
}

// TestClosureTemperature: Dodson's equation holds, whatever the numbers; published form,
// A as printed.
func TestClosureTemperature(t *testing.T) {
	A := map[string]float64{"sphere": 55, "cylinder": 27, "sheet": 8.7}
	rapid.Check(t, func(t *rapid.T) {
		c := heat.Clock{
			ActivationEnergy: rapid.Float64Range(5e4, 1e6).Draw(t, "E"),
			Diffusivity:      math.Exp(rapid.Float64Range(-30, 2).Draw(t, "ln D0")),
			Radius:           math.Exp(rapid.Float64Range(-14, -4).Draw(t, "ln a")),
			Geometry:         rapid.SampledFrom([]string{"sphere", "cylinder", "sheet"}).Draw(t, "geometry"),
		}
		rate := math.Exp(rapid.Float64Range(-40, -20).Draw(t, "ln rate"))
		T := c.ClosureTemperature(rate)
		tau := rheology.GasConstant * T * T / (c.ActivationEnergy * rate)
		left, right := c.ActivationEnergy/(rheology.GasConstant*T), math.Log(A[c.Geometry]*tau*c.Diffusivity/(c.Radius*c.Radius))
		if math.Abs(left-right) > 1e-12*math.Max(1, math.Abs(left)) {
			t.Fatalf("T = %g K: E/RT = %.15g, ln = %.15g", T, left, right)
		}
		if faster := c.ClosureTemperature(2 * rate); faster <= T {
			t.Fatalf("faster cooling closes at %g K, not above %g", faster, T)
		}
	})
}

// TestClose: steady cooling closes at T_c of its rate, at the time it gets there
// (derived: the path is a straight line).
func TestClose(t *testing.T) {
	c := hornblende()
	for _, rate := range []float64{1, 10, 100} {
		end := 800 / rate
		r, err := c.Close(path(0, 850, end, 50))
		Tc := c.ClosureTemperature(rate / myr)
		if err != nil || !r.Found || math.Abs(r.Temperature/Tc-1) > 1e-10 || math.Abs(r.Time/((850+273.15-Tc)/rate*myr)-1) > 1e-9 || math.Abs(r.CoolingRate*myr/rate-1) > 1e-9 || r.Caution != "" {
			t.Errorf("%g K/Myr: %+v, %v; want %g K", rate, r, err, Tc)
		}
	}
}

func TestCloseInWords(t *testing.T) {
	c := hornblende()
	for _, k := range []struct {
		name    string
		points  []float64
		closes  float64 // Myr; 0: not
		reason  string
		caution string
	}{
		{"cooling, then a hold when cold", []float64{0, 800, 10, 300, 30, 300}, 5.1, "", ""},
		{"a bump when cold does not count", []float64{0, 800, 10, 300, 20, 300, 21, 330, 30, 300}, 5.1, "", ""},
		{"warming opens it again", []float64{0, 800, 10, 300, 12, 750, 20, 350}, 16.2, "", ""},
		{"a long hold just below", []float64{0, 800, 10, 500, 40, 500, 40.1, 300}, 8.9, "", "8.3 times as much diffuses as on cooling with 1/T linear in time, which Dodson's solution is for; the age is rough (it is as much from 36"},
		{"hot to the end", []float64{0, 700, 10, 650}, 0, "still open at the end of its path, at 650 °C; at the 5 K/Myr there it closes at 501 °C", ""},
		{"hot and not cooling", []float64{0, 700, 10, 700}, 0, "still open at the end of its path, at 700 °C and not cooling", ""},
		{"cold", []float64{0, 200, 10, 200, 20, 250, 30, 250}, 0, "never hot enough to be open: at most 250 °C, and on the whole path almost nothing diffuses of what does after a closure; it", ""},
		{"cold from the start", []float64{0, 400, 10, 200}, 0, "closed before the path begins: there it is at 400 °C, and at the 20 K/Myr there it closes at 527 °C", ""},
	} {
		r, err := c.Close(path(k.points...))
		if err != nil || r.Found != (k.closes > 0) || !strings.HasPrefix(r.Reason, k.reason) || r.Found && math.Abs(r.Time/myr-k.closes) > 0.15 || !strings.Contains(r.Caution, k.caution) || k.caution == "" && r.Caution != "" {
			t.Errorf("%s: %+v at %.3g Myr, %v", k.name, r, r.Time/myr, err)
		}
		if !r.Found && (r.Time != 0 || r.Temperature != 0 || r.Reason == "") {
			t.Errorf("%s: not found and yet %+v", k.name, r)
		}
	}
}

func TestCloseErrors(t *testing.T) {
	good := func() ([]float64, []float64) { return []float64{0, 1, 2}, []float64{900, 800, 300} }
	for _, k := range []struct {
		name   string
		change func(c *heat.Clock, t, T []float64) ([]float64, []float64)
		want   string
	}{
		{"one point", func(_ *heat.Clock, t, T []float64) ([]float64, []float64) { return t[:1], T[:1] }, "two points"},
		{"lengths", func(_ *heat.Clock, t, T []float64) ([]float64, []float64) { return t, T[:2] }, "3 times and 2 temperatures"},
		{"NaN", func(_ *heat.Clock, t, T []float64) ([]float64, []float64) { T[1] = math.NaN(); return t, T }, "point 2"},
		{"time stands", func(_ *heat.Clock, t, T []float64) ([]float64, []float64) { t[2] = 1; return t, T }, "point 3"},
		{"geometry", func(c *heat.Clock, t, T []float64) ([]float64, []float64) { c.Geometry = "cube"; return t, T }, "known are sphere"},
		{"radius", func(c *heat.Clock, t, T []float64) ([]float64, []float64) { c.Radius = 0; return t, T }, "must be > 0"},
	} {
		c := hornblende()
		at, T := good()
		at, T = k.change(&c, at, T)
		if _, err := c.Close(at, T); err == nil || !strings.Contains(err.Error(), k.want) || !strings.Contains(err.Error(), "hornblende") {
			t.Errorf("%s: %v", k.name, err)
		}
	}
}
