package checks_test

import (
	"context"
	"testing"

	"keelfall/solver/checks"
)

// Every check that `keelfall verify` runs passes, and its name and source are there.
func TestAll(t *testing.T) {
	seen := map[string]bool{}
	for _, c := range checks.All() {
		t.Run(c.Name, func(t *testing.T) {
			if c.Source == "" || c.Status == "" || !(c.Tolerance > 0) || seen[c.Name] {
				t.Errorf("source %q, status %q, tolerance %g, name seen before: %v", c.Source, c.Status, c.Tolerance, seen[c.Name])
			}
			seen[c.Name] = true
			if o := c.Run(context.Background()); !o.Pass {
				t.Errorf("%s: got %.12g %s, want %.12g, off by %.2g (tolerance %.2g), error %v; %s",
					c.Name, o.Value, c.Unit, c.Want, o.Difference, c.Tolerance, o.Err, c.Source)
			}
		})
	}
	if len(seen) == 0 {
		t.Fatal("no check ran")
	}
}
