package configs

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"
)

// quantity is a decoded number: SI, with the node it came from. Where the key is
// absent n is nil.
type quantity struct {
	SI float64
	n  *node
}

func (q quantity) given() bool { return q.n != nil }

var leadingNumber = regexp.MustCompile(`^[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?`)

// parseQuantity reads a scalar as a value of dimension d, in SI. timeZero (s, an age)
// turns ages into model times; NaN where the experiment has none.
func parseQuantity(n *node, d *dimension, timeZero float64) (float64, error) {
	text := strings.TrimSpace(plainer.Replace(n.text))
	number := leadingNumber.FindString(text)
	if d.kind == bareDim {
		return bare(n, number, text)
	}
	if number == "" || n.scalar == boolScalar {
		return 0, fmt.Errorf("%s is not a number with a unit; %s", n.show(), needs(d))
	}
	x, err := strconv.ParseFloat(number, 64)
	if err != nil || math.IsInf(x, 0) {
		return 0, fmt.Errorf("%s is beyond the range of numbers; %s", n.show(), needs(d))
	}
	unitText := strings.TrimSpace(text[len(number):])
	if unitText == "" {
		return 0, fmt.Errorf("%s has no unit; %s", n.show(), needs(d))
	}
	u, err := parseUnit(unitText)
	if err != nil {
		return 0, fmt.Errorf("%s: %w; %s", n.show(), err, needs(d))
	}
	if d.kind != anyDim && !u.vec.equal(d.vec) {
		if is := named(u.vec); is != "" {
			return 0, fmt.Errorf("%s is %s; %s", n.show(), is, needs(d))
		}
		return 0, fmt.Errorf("%s has the wrong unit; %s", n.show(), needs(d))
	}
	si := x * u.size
	switch {
	case u.celsius && d.kind == tempDiffDim:
		return 0, fmt.Errorf("%s: a difference or error of temperature is in K, degC has an offset; write %s K", n.show(), number)
	case u.celsius && d.kind == tempDim:
		si = x + celsiusZero
	case u.age && d.kind == durationDim:
		return 0, fmt.Errorf("%s is an age; %s", n.show(), needs(d))
	case !u.age && d.kind == ageDim:
		return 0, fmt.Errorf("%s is a length of time; %s", n.show(), needs(d))
	case u.age && d.kind == timeDim:
		if math.IsNaN(timeZero) {
			return 0, &noTimeZeroError{n.show()}
		}
		si = timeZero - si
	}
	if math.IsInf(si, 0) || math.IsNaN(si) || si == 0 && x != 0 && !u.age {
		return 0, fmt.Errorf("%s is beyond the range of numbers in SI; %s", n.show(), needs(d))
	}
	return si, nil
}

// noTimeZeroError is an age in an experiment that does not say the age of time 0.
type noTimeZeroError struct{ age string }

func (e *noTimeZeroError) Error() string {
	return e.age + " is an age and the experiment has no time-zero; add time-zero, for example 95 Ma, or write Myr since the start"
}

func bare(n *node, number, text string) (float64, error) {
	if n.scalar != numberScalar {
		switch {
		case number != "" && number == text:
			return 0, fmt.Errorf("%s is text in quotes; needs a bare number, without them", n.show())
		case number != "" && strings.TrimSpace(text[len(number):]) == "%":
			return 0, fmt.Errorf("%s: shares are bare numbers; needs a bare number, for example 0.5", n.show())
		case number != "" && strings.ContainsAny(text, "0123456789"):
			return 0, fmt.Errorf("%s has a unit; needs a bare number, for example %s", n.show(), number)
		}
		return 0, fmt.Errorf("%s is not a number; needs a bare number, for example 0.5", n.show())
	}
	x, err := strconv.ParseFloat(text, 64)
	if err != nil || math.IsInf(x, 0) {
		return 0, fmt.Errorf("%s is beyond the range of numbers; needs a bare number, for example 0.5", n.show())
	}
	return x, nil
}

func needs(d *dimension) string { return fmt.Sprintf("needs %s, for example %s", d.words, d.eg) }

// interval is a key's range; bounds in SI, as text in the trade's units.
type interval struct {
	lo, hi         float64
	loOpen, hiOpen bool
	loText, hiText string
}

// parseInterval reads a tag such as (0 deg,90 deg]; an empty bound is none.
func parseInterval(s string, d *dimension) interval {
	iv := interval{lo: math.Inf(-1), hi: math.Inf(1), loOpen: s[0] == '(', hiOpen: s[len(s)-1] == ')'}
	lo, hi, ok := strings.Cut(s[1:len(s)-1], ",")
	if !ok {
		panic("configs: range " + s + " has no comma")
	}
	bound := func(t string, to *float64) {
		if t == "" {
			return
		}
		n := &node{text: t}
		if d.kind == bareDim {
			n.scalar = numberScalar
		}
		x, err := parseQuantity(n, d, math.NaN())
		if err != nil {
			panic("configs: range " + s + ": " + err.Error())
		}
		*to = x
	}
	bound(lo, &iv.lo)
	bound(hi, &iv.hi)
	iv.loText, iv.hiText = lo, hi
	return iv
}

func (iv *interval) check(x float64) error {
	if (x > iv.lo || x == iv.lo && !iv.loOpen) && (x < iv.hi || x == iv.hi && !iv.hiOpen) {
		return nil
	}
	return fmt.Errorf("is out of range; needs a value %s", iv.words())
}

func (iv *interval) words() string {
	var parts []string
	if iv.loText != "" {
		w := "of at least "
		if iv.loOpen {
			w = "above "
		}
		parts = append(parts, w+iv.loText)
	}
	if iv.hiText != "" {
		w := "at most "
		if iv.hiOpen {
			w = "below "
		}
		parts = append(parts, w+iv.hiText)
	}
	return strings.Join(parts, " and ")
}
