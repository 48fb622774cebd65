// Package checks holds cases whose answer is published or known in closed form, each
// with its source. `keelfall verify` runs them; the solvers' tests and benchmarks use
// the same columns.
package checks

import (
	"context"
	"math"
)

// Status says how a published value is known.
type Status string

// Published values were printed in the source named; Derived ones were worked out
// for this project in closed form or arbitrary precision.
const (
	Published  Status = "published"
	Derived    Status = "derived"
	FromMemory Status = "from memory"
	Common     Status = "common practice"
)

// Check is one comparison of the program with a known answer.
type Check struct {
	Name      string
	Unit      string
	Want      float64
	Tolerance float64 // relative
	Source    string
	Status    Status
	Compute   func(context.Context) (float64, error)
}

// Outcome is a check that was run.
type Outcome struct {
	Check
	Value      float64
	Difference float64 // relative
	Pass       bool
	Err        error
}

// Run computes one check. A computation that fails does not pass.
func (c Check) Run(ctx context.Context) Outcome {
	o := Outcome{Check: c}
	o.Value, o.Err = c.Compute(ctx)
	if o.Err != nil {
		return o
	}
	if c.Want == 0 {
		o.Difference = math.Abs(o.Value)
	} else {
		o.Difference = math.Abs(o.Value/c.Want - 1)
	}
	o.Pass = o.Difference <= c.Tolerance // false for NaN
	return o
}

// All returns every check, grouped by subject, in a fixed order.
func All() []Check {
	var all []Check
	for _, f := range groups {
		all = append(all, f()...)
	}
	return all
}

var groups = []func() []Check{growthChecks, thermalChecks, fateChecks, heatChecks, conductionChecks, rockChecks, creepChecks, clockChecks, softeningChecks, courseChecks, isostasyChecks, zoneChecks}
