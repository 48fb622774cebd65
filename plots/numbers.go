package plots

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// Units of the axes in SI.
const (
	km  = 1e3
	mpa = 1e6
	gpa = 1e9
	myr = 1e6 * 365.25 * 86400 // a million Julian years, in s
)

// zeroCelsius is 0 °C in K, exact by definition.
const zeroCelsius = 273.15

// number writes v with n significant digits, without trailing zeros, with a true
// minus sign, and as a power of ten where plain digits would be long.
func number(v float64, n int) string {
	switch {
	case math.IsNaN(v):
		return "?"
	case math.IsInf(v, 0):
		return sign(v) + "∞"
	case v == 0:
		return "0"
	}
	r, _ := strconv.ParseFloat(strconv.FormatFloat(math.Abs(v), 'e', n-1, 64), 64)
	if r >= 1e-3 && r < 1e5 {
		return sign(v) + strconv.FormatFloat(r, 'f', -1, 64)
	}
	mantissa, exponent, _ := strings.Cut(strconv.FormatFloat(r, 'e', -1, 64), "e")
	e, _ := strconv.Atoi(exponent)
	if mantissa == "1" {
		return sign(v) + power(e)
	}
	return sign(v) + mantissa + "×" + power(e)
}

// power writes 10 to the e.
func power(e int) string { return fmt.Sprintf("10^{%d}", e) }

func sign(v float64) string {
	if v < 0 {
		return minus
	}
	return ""
}

// span writes a time in s as Myr.
func span(t float64) string {
	if math.IsInf(t, 1) {
		return "never"
	}
	return number(t/myr, 3) + " Myr"
}

// plain takes the markup out of a label, for captions.
func plain(s string) string { return strings.NewReplacer("^{", "^", "_{", "_", "}", "").Replace(s) }

// finite returns an error naming what where a value is NaN or infinite.
func finite(what string, values ...float64) error {
	for i, v := range values {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return fmt.Errorf("plots: %s: value %d of %d is %g, which cannot be drawn", what, i+1, len(values), v)
		}
	}
	return nil
}

// sameLength returns an error where two columns of data differ in length.
func sameLength(what string, a, b int) error {
	if a != b {
		return fmt.Errorf("plots: %s: %d values against %d", what, a, b)
	}
	return nil
}

// divided returns the values divided by unit.
func divided(values []float64, unit float64) []float64 {
	out := make([]float64, len(values))
	for i, v := range values {
		out[i] = v / unit
	}
	return out
}

// downward returns an error where depth does not run from the top down.
func downward(depth []float64) error {
	for i := 1; i < len(depth); i++ {
		if depth[i] < depth[i-1] {
			return fmt.Errorf("plots: depth of a mode: %g m stands after %g m; needs an order from the top down", depth[i], depth[i-1])
		}
	}
	return nil
}
