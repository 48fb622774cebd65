package report

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"keelfall/solver/checks"
)

// VerifyPage is the text of `keelfall verify`.
func VerifyPage(all []checks.Outcome) string {
	var b strings.Builder
	passed := 0
	for _, o := range all {
		word := "FAILS"
		if o.Pass {
			word = "ok"
			passed++
		}
		fmt.Fprintf(&b, "%-6s %s\n", word, o.Name)
		if o.Err != nil {
			fmt.Fprintf(&b, "       could not be computed: %v\n", o.Err)
			continue
		}
		fmt.Fprintf(&b, "       %.10g %s; known %.10g; apart by %.1e of %.0e allowed. %s (%s)\n", o.Value, o.Unit, o.Want, o.Difference, o.Tolerance, o.Source, o.Status)
	}
	fmt.Fprintf(&b, "%d of %d checks pass.\n", passed, len(all))
	return b.String()
}

// VerifyJSON is one check of `keelfall verify --format json`.
type VerifyJSON struct {
	Name       string `json:"name"`
	Value      number `json:"value"`
	Published  number `json:"published"`
	Difference number `json:"relative_difference"`
	Tolerance  number `json:"tolerance"`
	Unit       string `json:"unit"`
	Source     string `json:"source"`
	Status     string `json:"status"`
	Pass       bool   `json:"pass"`
}

// Verify returns the outcomes of the checks.
func Verify(all []checks.Outcome) []VerifyJSON {
	out := []VerifyJSON{}
	for _, o := range all {
		v, d := number(o.Value), number(o.Difference)
		if o.Err != nil {
			v, d = none, none
		}
		out = append(out, VerifyJSON{o.Name, v, number(o.Want), d, number(o.Tolerance), o.Unit, o.Source, string(o.Status), o.Pass})
	}
	return out
}

// VerifyTable is the same as a table.
func VerifyTable(all []checks.Outcome) Table {
	t := Table{Name: "verify", Header: []string{"name", "value", "published", "unit", "relative_difference", "tolerance", "source", "status", "pass"}}
	for _, o := range all {
		v, d := o.Value, o.Difference
		if o.Err != nil {
			v, d = math.NaN(), math.NaN()
		}
		t.Rows = append(t.Rows, []string{o.Name, cell(v), cell(o.Want), o.Unit, cell(d), cell(o.Tolerance), o.Source, string(o.Status), strconv.FormatBool(o.Pass)})
	}
	return t
}
