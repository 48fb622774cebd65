// Package report turns results into what people and scripts read: the page, JSON,
// CSV tables, the methods section and its sources, and the folder that holds them.
package report

import (
	"bytes"
	"encoding/json"
	"math"
	"strconv"
	"strings"
)

// Units of the printing edge.
const (
	Year = 365.25 * 86400 // s
	Myr  = 1e6 * Year
	km   = 1e3
	zero = 273.15 // K, 0 °C
)

// number is a float that becomes null in JSON where it has no value.
type number float64

func (n number) MarshalJSON() ([]byte, error) {
	if f := float64(n); !math.IsNaN(f) && !math.IsInf(f, 0) {
		return json.Marshal(f)
	}
	return []byte("null"), nil
}

// none is a number without a value.
var none = number(math.NaN())

// numbers converts a slice; nil becomes an empty list, not null.
func numbers(x []float64) []number {
	n := make([]number, len(x))
	for i, v := range x {
		n[i] = number(v)
	}
	return n
}

// list makes an empty list of a nil one, so that JSON says [] and not null.
func list(s []string) []string {
	if s == nil {
		return []string{}
	}
	return s
}

// Encode writes v as indented JSON, characters as they are, a newline at the end.
func Encode(v any) ([]byte, error) {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	err := e.Encode(v)
	return b.Bytes(), err
}

// trade converts a value from SI to what a spreadsheet or a page shows, and names it.
func trade(x float64, unit string) (float64, string) {
	switch unit {
	case "x":
		return x, "factor"
	case "m":
		return x / km, "km"
	case "K":
		return x - zero, "degC"
	case "m/s":
		return x * 1e3 * Year, "mm/yr"
	case "W/m2":
		return x * 1e3, "mW/m2"
	}
	return x, unit
}

// sig formats x with n significant digits without an exponent for ordinary sizes, a
// dash where there is no value.
func sig(x float64, n int) string {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return "-"
	}
	if x == 0 {
		return "0"
	}
	a := math.Abs(x)
	if a >= 1e6 || a < 1e-3 {
		return strconv.FormatFloat(x, 'e', n-1, 64)
	}
	d := n - 1 - int(math.Floor(math.Log10(a)))
	if d < 0 {
		p := math.Pow(10, float64(-d))
		return strconv.FormatFloat(math.Round(x/p)*p, 'f', 0, 64)
	}
	return strconv.FormatFloat(x, 'f', d, 64)
}

// myr formats a time in s as Myr.
func myr(t float64) string {
	if math.IsInf(t, 1) {
		return "never"
	}
	if t > 1000*Myr {
		return "more than 1000 Myr"
	}
	return short(t/Myr) + " Myr"
}

// short formats a length, time or factor with three significant digits and no zeros
// that say nothing.
func short(x float64) string {
	s := sig(x, 3)
	if strings.Contains(s, ".") && !strings.Contains(s, "e") {
		s = strings.TrimRight(strings.TrimRight(s, "0"), ".")
	}
	return s
}
