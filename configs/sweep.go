package configs

import (
	"fmt"
	"strconv"
	"strings"

	"keelfall/solver/race"
)

// Compile turns keys such as layers.root.viscosity-factor or base.temperature into a
// function that returns the problem with x[i], in SI, in the place of keys[i]; times
// are seconds since the start, time-zero seconds before today. What a value breaks
// (a range, the order of two times) is an error of the function. An unknown key, or
// one that holds no number, is an error of Compile. The function may be called from
// several goroutines. It panics where len(x) is not len(keys).
func (e *Experiment) Compile(keys []string) (func(x []float64) (race.Problem, error), error) {
	dims := make([]*dimension, len(keys))
	for i, key := range keys {
		d, err := e.walk.keyDimension(key)
		if err != nil {
			return nil, fmt.Errorf("configs: %w", err)
		}
		dims[i] = d
	}
	return func(x []float64) (race.Problem, error) {
		if len(x) != len(keys) {
			panic(fmt.Sprintf("configs: %d values for %d keys", len(x), len(keys)))
		}
		c := *e
		c.tree = e.tree.clone()
		for i, key := range keys {
			if !finite(x[i]) {
				return race.Problem{}, fmt.Errorf("configs: %s = %g is not a number to compute with", key, x[i])
			}
			v := inSI(x[i], dims[i])
			v.from = key + "=" + v.text
			if err := putAt(c.tree, strings.Split(key, "."), v, e.filled); err != nil {
				return race.Problem{}, fmt.Errorf("configs: %s: %w", key, err)
			}
		}
		p, m := c.resolve()
		if len(m) > 0 {
			return race.Problem{}, m
		}
		return p, nil
	}, nil
}

// inSI writes a number as the tree holds it.
func inSI(x float64, d *dimension) *node {
	if d.kind == ageDim {
		x /= 1e6 * secondsPerYear
	}
	n := &node{text: strconv.FormatFloat(x, 'g', -1, 64)}
	if d.kind == bareDim {
		n.scalar = numberScalar
	} else {
		n.text += " " + d.si
	}
	return n
}
