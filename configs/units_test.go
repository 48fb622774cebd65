package configs

import (
	"math"
	"strconv"
	"strings"
	"testing"

	"gonum.org/v1/gonum/floats/scalar"
	"pgregory.net/rapid"
)

func scalarOf(s string) *node {
	n := &node{text: s}
	if numberText.MatchString(s) {
		n.scalar = numberScalar
	}
	return n
}

func TestQuantities(t *testing.T) {
	const myr = 1e6 * 365.25 * 86400 // s, the definition
	const timeZero = 95 * myr
	for _, c := range []struct {
		text, dim string
		want      float64
	}{
		{"12 km", "length", 12000},
		{"12km", "length", 12000},
		{" +1.2e1   km ", "length", 12000},
		{"80 um", "length", 80e-6},
		{"80 µm", "length", 80e-6}, // U+00B5
		{"80 μm", "length", 80e-6}, // U+03BC
		{"850 degC", "temperature", 1123.15},
		{"850 °C", "temperature", 1123.15},
		{"-10 degC", "temperature", 263.15},
		{"1123.15 K", "temperature", 1123.15},
		{"40 K", "temperature-difference", 40},
		{"3300 kg/m3", "density", 3300},
		{"3300 kg/m³", "density", 3300},
		{"3300 kg m^-3", "density", 3300},
		{"3300 kg·m⁻³", "density", 3300},
		{"3.3 g/cm3", "density", 3300},
		{"1e21 Pa s", "viscosity", 1e21},
		{"1e21 Pa·s", "viscosity", 1e21},
		{"9.81 m/s2", "acceleration", 9.81},
		{"9.81 m/s^2", "acceleration", 9.81},
		{"1e-15 1/s", "strain-rate", 1e-15},
		{"1e-15 s^-1", "strain-rate", 1e-15},
		{"1e-15 s-1", "strain-rate", 1e-15},
		{"2 1/Myr", "strain-rate", 2 / myr},
		{"1.2 mm/yr", "velocity", 1.2e-3 / (myr / 1e6)},
		{"30 mW/m2", "heat-flow", 0.03},
		{"1.5 uW/m3", "heat-production", 1.5e-6},
		{"1.5 µW/m³", "heat-production", 1.5e-6},
		{"2.5 W/m/K", "conductivity", 2.5},
		{"2.5 W m-1 K-1", "conductivity", 2.5},
		{"1050 J/kg/K", "heat-capacity", 1050},
		{"450 kJ/kg", "latent-heat", 450e3},
		{"210 kJ/mol", "molar-energy", 210e3},
		{"14 cm3/mol", "molar-volume", 14e-6},
		{"1.2 MPa/K", "pressure-per-kelvin", 1.2e6},
		{"100 K/GPa", "kelvin-per-pressure", 100e-9},
		{"20 K/km", "kelvin-per-length", 0.02},
		{"0.04 1/GPa", "per-pressure", 0.04e-9},
		{"8e-12 1/Pa", "per-pressure", 8e-12},
		{"3e-5 1/K", "per-kelvin", 3e-5},
		{"10 kbar", "pressure", 1e9},
		{"1.5e12 N/m", "force", 1.5e12},
		{"2.4e-6 m2/s", "diffusivity", 2.4e-6},
		{"180 deg", "angle", math.Pi},
		{"180°", "angle", math.Pi},
		{"1 rad", "angle", 1},
		{"398.1 MPa^-3 s^-1", "prefactor", 398.1e-18},
		{"1 MPa^-3.5 s^-1", "prefactor", 1e-21},
		{"6 Myr", "time", 6 * myr},
		{"6000 kyr", "time", 6 * myr},
		{"1 yr", "time", 31557600},
		{"89 Ma", "time", 6 * myr},
		{"101 Ma", "time", -6 * myr},
		{"30 Myr", "duration", 30 * myr},
		{"95 Ma", "age", 95 * myr},
		{"0.5", "number", 0.5},
		{"-.5e1", "number", -5},
	} {
		got, err := parseQuantity(scalarOf(c.text), dimensions[c.dim], timeZero)
		// 1e-14: a few roundings of the unit's size
		if err != nil || !scalar.EqualWithinRel(got, c.want, 1e-14) {
			t.Errorf("%q as %s: %v, %v; want %v", c.text, c.dim, got, err, c.want)
		}
	}
}

func TestQuantityMistakes(t *testing.T) {
	for _, c := range []struct{ text, dim, want string }{
		{"12", "length", "12 has no unit; needs a length, for example 12 km"},
		{"twelve km", "length", "twelve km is not a number with a unit; needs a length, for example 12 km"},
		{"12 kn", "length", "12 kn: kn is not a unit known here; did you mean km?; needs a length, for example 12 km"},
		{"12 kg", "length", "12 kg has the wrong unit; needs a length, for example 12 km"},
		{"12 Pa s", "length", "12 Pa s is a viscosity; needs a length, for example 12 km"},
		{"850 C", "temperature", "850 C: C is not a unit known here; did you mean degC?; needs a temperature, for example 850 degC"},
		{"40 degC", "temperature-difference", "40 degC: a difference or error of temperature is in K, degC has an offset; write 40 K"},
		{"20 degC/km", "kelvin-per-length", "20 degC/km: degC stands alone, its zero is not that of K; in degC/km write K; needs a temperature gradient, for example 20 K/km"},
		{"1e21 Pas", "viscosity", "1e21 Pas: Pas is not a unit known here; did you mean Pa s?; needs a viscosity, for example 1e21 Pa s"},
		{"1e21 Pa.s", "viscosity", "1e21 Pa.s: Pa.s multiplies with .; write a space, as in Pa s; needs a viscosity, for example 1e21 Pa s"},
		{"2.5 W/(m K)", "conductivity", "2.5 W/(m K): W/(m K) has brackets; write W/m/K for W/(m K); needs a thermal conductivity, for example 2.5 W/m/K"},
		{"1 mm/a", "velocity", "1 mm/a: a is not a unit known here; did you mean yr?; needs a velocity, for example 1.2 mm/yr"},
		{"5 ka", "time", "5 ka: ka is not a unit known here; did you mean kyr?; needs a time since the start or an age, for example 6 Myr or 89 Ma"},
		{"89 Ma", "time", "89 Ma is an age and the experiment has no time-zero; add time-zero, for example 95 Ma, or write Myr since the start"},
		{"30 Ma", "duration", "30 Ma is an age; needs a length of time, for example 30 Myr"},
		{"30 Myr", "age", "30 Myr is a length of time; needs an age in Ma, for example 95 Ma"},
		{"1 mm/Ma", "velocity", "1 mm/Ma: an age (Ma) is no factor; in mm/Ma write Myr; needs a velocity, for example 1.2 mm/yr"},
		{"0.5 km", "number", "0.5 km has a unit; needs a bare number, for example 0.5"},
		{"30 %", "number", "30 %: shares are bare numbers; needs a bare number, for example 0.5"},
		{"half", "number", "half is not a number; needs a bare number, for example 0.5"},
		{"1e999 km", "length", "1e999 km is beyond the range of numbers; needs a length, for example 12 km"},
		{"1e300 Gm20", "prefactor", "1e300 Gm20 is beyond the range of numbers in SI; needs a prefactor with the unit its exponents ask for, for example 1.1e5 MPa^-3.5 s^-1"},
		{"1 m99", "length", "1 m99: m99 has an exponent beyond ±20; needs a length, for example 12 km"},
		{"1 m/", "length", "1 m/: m/ ends where a unit is due; needs a length, for example 12 km"},
		{"12 κm", "length", "12 κm: κm is not a unit; needs a length, for example 12 km"},
	} {
		x, err := parseQuantity(scalarOf(c.text), dimensions[c.dim], math.NaN())
		if err == nil || err.Error() != c.want {
			t.Errorf("%q as %s: %v, %v\nwant %s", c.text, c.dim, x, err, c.want)
		}
	}
}

// TestQuantityRoundTrip: a number written in the SI unit comes back bit for bit.
func TestQuantityRoundTrip(t *testing.T) {
	var plain []*dimension
	for _, d := range dimensions {
		if d.kind != ageDim && d.kind != anyDim {
			plain = append(plain, d)
		}
	}
	if len(plain) < 20 {
		t.Fatal("dimensions are missing")
	}
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.Float64Range(-1e30, 1e30).Draw(t, "x")
		d := plain[rapid.IntRange(0, len(plain)-1).Draw(t, "dimension")]
		got, err := parseQuantity(inSI(x, d), d, 1e15)
		if err != nil || got != x {
			t.Fatalf("%v as %s: %v, %v", x, d.name, got, err)
		}
	})
}

// TestUnitsNeverPanic: any text is a unit or an error, and never a NaN.
func TestUnitsNeverPanic(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := rapid.OneOf(rapid.String(), rapid.StringMatching(`[0-9.eE+-]{0,6} ?[A-Za-z/^0-9 .·-]{0,12}`)).Draw(t, "text")
		for _, d := range []string{"length", "temperature", "time", "number", "prefactor"} {
			if x, err := parseQuantity(scalarOf(s), dimensions[d], math.NaN()); err == nil && !finite(x) {
				t.Fatalf("%q as %s gives %v", s, d, x)
			}
		}
	})
}

func TestNearest(t *testing.T) {
	known := []string{"thickness", "density", "viscosity", "creep"}
	for s, want := range map[string]string{"thicknes": "thickness", "Thickness": "thickness", "thikcness": "thickness", "creeep": "creep", "colour": "", strings.Repeat("x", 1000): ""} {
		if got := nearest(s, known); got != want {
			t.Errorf("nearest to %s: %q, want %q", shorten(s), got, want)
		}
	}
	for _, c := range []struct {
		a, b string
		want int
	}{{"", "", 0}, {"a", "", 1}, {"kitten", "sitting", 3}, {"ab", "ba", 1}} {
		if got := distance(c.a, c.b); got != c.want {
			t.Errorf("distance %s, %s: %s, want %d", c.a, c.b, strconv.Itoa(got), c.want)
		}
	}
}
