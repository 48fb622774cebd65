package heat_test

import (
	"context"
	"testing"

	"keelfall/solver/heat"

	"pgregory.net/rapid"
)

// TestCopy: driven alike, a copy and what it was made of come to the same bits, the copy
// first or last; and the two share no storage that is written to.
func TestCopy(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p, until := anyPlan(t)
		ev, err := heat.Begin(p)
		if err != nil {
			t.Skip(err)
		}
		if err := ev.Heat(heat.Source{Depth: 5e3, Power: 0.01}); err != nil {
			t.Fatal(err)
		}
		if ev.Advance(context.Background(), rapid.Float64Range(0, 0.9).Draw(t, "at")*until) != nil {
			return
		}
		c := ev.Copy()
		for _, name := range heat.Shared(ev, c) {
			t.Errorf("%s is shared", name)
		}
		if rapid.Bool().Draw(t, "the copy first") {
			ev, c = c, ev
		}
		errs := [2]error{ev.Advance(context.Background(), until), c.Advance(context.Background(), until)}
		if (errs[0] == nil) != (errs[1] == nil) {
			t.Fatalf("one came to %v, the other to %v", errs[0], errs[1])
		}
		if a, b := heat.Written(ev), heat.Written(c); a != b {
			t.Fatalf("one came to\n%s\nthe other to\n%s", a, b)
		}
	})
}
