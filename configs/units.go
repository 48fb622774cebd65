package configs

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"
)

// vec holds the exponents of m, kg, s, K, mol and rad. Exponents need not be whole:
// a creep law's prefactor is in MPa^-3.5 s^-1.
type vec [6]float64

func (v vec) times(w vec, p float64) vec {
	for i := range v {
		v[i] += p * w[i]
	}
	return v
}

// equal allows for the rounding of exponents such as 1.2 + 2.3.
func (v vec) equal(w vec) bool {
	for i := range v {
		if math.Abs(v[i]-w[i]) > 1e-9 {
			return false
		}
	}
	return true
}

// symbol is one unit: its size in SI and its exponents.
type symbol struct {
	size    float64
	vec     vec
	prefix  bool // takes µ, k, M, …
	celsius bool // a temperature with an offset
	age     bool // counted back from today
}

// secondsPerYear is the year of 365.25 days, the unit of every Myr here.
const secondsPerYear = 365.25 * 86400

// celsiusZero is 0 degC in K; exact.
const celsiusZero = 273.15

var symbols = map[string]symbol{
	"m":    {1, vec{1}, true, false, false},
	"g":    {1e-3, vec{0, 1}, true, false, false},
	"s":    {1, vec{0, 0, 1}, true, false, false},
	"K":    {1, vec{0, 0, 0, 1}, false, false, false},
	"degC": {1, vec{0, 0, 0, 1}, false, true, false},
	"mol":  {1, vec{0, 0, 0, 0, 1}, true, false, false},
	"rad":  {1, vec{0, 0, 0, 0, 0, 1}, false, false, false},
	"deg":  {math.Pi / 180, vec{0, 0, 0, 0, 0, 1}, false, false, false},
	"N":    {1, vec{1, 1, -2}, true, false, false},
	"Pa":   {1, vec{-1, 1, -2}, true, false, false},
	"bar":  {1e5, vec{-1, 1, -2}, true, false, false},
	"J":    {1, vec{2, 1, -2}, true, false, false},
	"W":    {1, vec{2, 1, -3}, true, false, false},
	"d":    {86400, vec{0, 0, 1}, false, false, false},
	"yr":   {secondsPerYear, vec{0, 0, 1}, false, false, false},
	"kyr":  {1e3 * secondsPerYear, vec{0, 0, 1}, false, false, false},
	"Myr":  {1e6 * secondsPerYear, vec{0, 0, 1}, false, false, false},
	"Ma":   {1e6 * secondsPerYear, vec{0, 0, 1}, false, false, true},
}

var prefixes = map[string]float64{"G": 1e9, "M": 1e6, "k": 1e3, "c": 1e-2, "m": 1e-3, "u": 1e-6, "n": 1e-9, "p": 1e-12}

// unit is a parsed unit.
type unit struct {
	symbol
	compound bool // more than one factor, or an exponent other than 1
}

// plainer writes the accepted spellings (°C, µ, ³, ·, …) in plain letters.
var plainer = strings.NewReplacer(
	"°C", "degC", "℃", "degC", "°", "deg", "µ", "u", "μ", "u", "·", " ", "⋅", " ", "−", "-",
	"⁰", "0", "¹", "1", "²", "2", "³", "3", "⁴", "4", "⁵", "5", "⁶", "6", "⁷", "7", "⁸", "8", "⁹", "9", "⁻", "-")

var factorText = regexp.MustCompile(`^([A-Za-z]+)(?:\^?([+-]?[0-9]+(?:\.[0-9]+)?))?`)

// parseUnit reads a unit: factors multiplied by a space or ·, divided by /, with
// exponents as trailing digits or after ^. "1/s" is allowed; each / divides by the
// one factor after it, so W/m/K is W m^-1 K^-1. An unknown symbol is an error that
// names the nearest known one.
func parseUnit(s string) (unit, error) {
	rest := strings.TrimSpace(plainer.Replace(s))
	u := unit{symbol: symbol{size: 1}}
	factors := 0
	sign := 1.0
	if r, ok := strings.CutPrefix(rest, "1/"); ok {
		rest, sign = strings.TrimSpace(r), -1
	}
	for {
		m := factorText.FindStringSubmatch(rest)
		if m == nil {
			return unit{}, unitSyntax(s, rest)
		}
		sy, err := findSymbol(m[1])
		if err != nil {
			return unit{}, err
		}
		p := 1.0
		if m[2] != "" {
			p, _ = strconv.ParseFloat(m[2], 64)
		}
		if math.Abs(p) > 20 {
			return unit{}, fmt.Errorf("%s has an exponent beyond ±20", shorten(m[0]))
		}
		p *= sign
		u.size *= math.Pow(sy.size, p)
		u.vec = u.vec.times(sy.vec, p)
		u.celsius, u.age = u.celsius || sy.celsius, u.age || sy.age
		u.compound = u.compound || p != 1
		factors++
		rest = strings.TrimSpace(rest[len(m[0]):])
		if rest == "" {
			break
		}
		sign = 1
		if r, ok := strings.CutPrefix(rest, "/"); ok {
			rest, sign = strings.TrimSpace(r), -1
		}
		if factors >= 10 {
			return unit{}, fmt.Errorf("%s is too long for a unit", shorten(s))
		}
	}
	u.compound = u.compound || factors > 1
	switch {
	case u.celsius && u.compound:
		return unit{}, fmt.Errorf("degC stands alone, its zero is not that of K; in %s write K", shorten(s))
	case u.age && u.compound:
		return unit{}, fmt.Errorf("an age (Ma) is no factor; in %s write Myr", shorten(s))
	}
	return u, nil
}

func unitSyntax(whole, at string) error {
	switch {
	case at == "":
		return fmt.Errorf("%s ends where a unit is due", shorten(whole))
	case strings.ContainsAny(at, "()"):
		return fmt.Errorf("%s has brackets; write W/m/K for W/(m K)", shorten(whole))
	case at[0] == '*' || at[0] == '.':
		return fmt.Errorf("%s multiplies with %c; write a space, as in Pa s", shorten(whole), at[0])
	case at[0] == '%':
		return fmt.Errorf("%% is no unit here; shares are bare numbers, for example 0.3")
	}
	return fmt.Errorf("%s is not a unit", shorten(whole))
}

func findSymbol(s string) (symbol, error) {
	if sy, ok := symbols[s]; ok {
		return sy, nil
	}
	if sy, ok := symbols[s[1:]]; ok && sy.prefix {
		if p, ok := prefixes[s[:1]]; ok {
			sy.size *= p
			return sy, nil
		}
	}
	if near := nearUnit(s); near != "" {
		return symbol{}, fmt.Errorf("%s is not a unit known here; did you mean %s?", shorten(s), near)
	}
	return symbol{}, fmt.Errorf("%s is not a unit known here", shorten(s))
}

// foreign maps what people write to what is understood.
var foreign = map[string]string{
	"c": "degC", "celsius": "degC", "f": "degC", "kelvin": "K", "k": "K", "degk": "K",
	"a": "yr", "y": "yr", "yrs": "yr", "year": "yr", "years": "yr", "ka": "kyr", "ky": "kyr", "my": "Myr", "ga": "Ma",
	"mya": "Ma", "mio": "Myr", "min": "s", "sec": "s", "h": "s", "hr": "s", "day": "d", "days": "d",
	"pas": "Pa s", "poise": "Pa s", "kbars": "kbar", "psi": "MPa", "atm": "bar", "mpas": "MPa s",
	"metre": "m", "meter": "m", "metres": "m", "meters": "m", "kms": "km", "kilometre": "km", "micron": "um", "microns": "um", "ft": "m", "mi": "km",
	"cal": "J", "kcal": "kJ", "ev": "kJ/mol", "degree": "deg", "degrees": "deg", "t": "kg", "hfu": "mW/m2", "hgu": "uW/m3",
}

// nearUnit names the unit somebody probably meant; "" where there is none.
func nearUnit(s string) string {
	if u, ok := foreign[strings.ToLower(s)]; ok {
		return u
	}
	return nearest(s, []string{"m", "km", "cm", "mm", "um", "kg", "g", "s", "yr", "kyr", "Myr", "Ma", "d", "K", "degC", "deg", "rad",
		"mol", "N", "Pa", "kPa", "MPa", "GPa", "kbar", "bar", "J", "kJ", "W", "mW", "uW"})
}
