package configs

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
)

func (t text) given() bool { return t.n != nil }

// text, count and flag are decoded scalars; n is nil where the key is absent.
type text struct {
	Value string
	n     *node
}

type count struct {
	N int
	n *node
}

type flag struct {
	On bool
	n  *node
}

// shares maps names to bare numbers, such as mineral modes.
type shares struct {
	Names  []string
	Values []float64
	n      *node
}

func (w *walker) quantity(n *node, s *spec) (quantity, error) {
	d := s.dim
	if s.dynamic != "" {
		var err error
		if d, err = w.dynamic(s.dynamic); err != nil {
			return quantity{}, err
		}
		if d == nil { // the key it depends on is reported itself
			return quantity{}, nil
		}
	}
	x, err := parseQuantity(n, d, w.timeZero)
	if none := (*noTimeZeroError)(nil); errors.As(err, &none) && w.root.get("time-zero") != nil {
		return quantity{}, nil // time-zero is wrong and is reported itself
	}
	if err != nil {
		return quantity{}, example(err, s)
	}
	if s.rng != nil {
		if err := s.rng.check(x); err != nil {
			return quantity{}, fmt.Errorf("%s %w", n.show(), err)
		}
	}
	return quantity{x, n}, nil
}

// example puts the key's own example in place of the dimension's.
func example(err error, s *spec) error {
	if s.eg == "" || s.dim == nil || s.dim.kind == bareDim {
		return err
	}
	return errors.New(strings.Replace(err.Error(), needs(s.dim), s.expects(), 1))
}

func countOf(n *node, s *spec) (count, error) {
	x, err := parseQuantity(n, dimensions["number"], math.NaN())
	if err != nil {
		return count{}, err
	}
	if x != math.Trunc(x) || math.Abs(x) > 1<<53 {
		return count{}, fmt.Errorf("%s is not a whole number; needs one, for example 41", n.show())
	}
	if s.rng != nil {
		if err := s.rng.check(x); err != nil {
			return count{}, fmt.Errorf("%s %w", n.show(), err)
		}
	}
	return count{int(x), n}, nil
}

func (w *walker) text(n *node, s *spec) (text, error) {
	if s.words != nil {
		if !slices.Contains(s.words, n.text) {
			what := fmt.Sprintf("%s is not known; %s", n.show(), s.expects())
			if h := hint(n.text, s.words); h != "" {
				what += "; " + h
			}
			return text{}, errors.New(what)
		}
		return text{n.text, n}, nil
	}
	if n.scalar != stringScalar {
		return text{}, fmt.Errorf("%s is not a text; put it in quotes if it is meant as one", n.show())
	}
	v := strings.TrimSpace(n.text)
	if v == "" {
		return text{}, fmt.Errorf("is an empty text; %s", s.expects())
	}
	if err := readable(strings.Trim(n.text, " \r\n"), s.as); err != nil {
		return text{}, err
	}
	switch s.as {
	case "name":
		if _, err := strconv.Atoi(v); err == nil || strings.ContainsAny(v, ".=") {
			return text{}, fmt.Errorf("%s cannot be a name; a name is no whole number and has no dot and no equals sign, so that keys can name it", n.show())
		}
	case "key":
		if _, err := w.keyDimension(v); err != nil {
			return text{}, err
		}
	}
	return text{v, n}, nil
}

func (w *walker) shares(n *node, path string) shares {
	out := shares{n: n}
	for i, item := range n.items {
		at := join(path, shorten(n.keys[i]))
		if err := readable(n.keys[i], "name"); err != nil {
			w.add(item, at, err.Error())
			continue
		}
		if item.kind != scalarNode {
			w.addf(item, at, "is %s; needs a bare number, for example 0.3", item.kind)
			continue
		}
		x, err := parseQuantity(item, dimensions["number"], math.NaN())
		switch {
		case err != nil:
			w.add(item, at, err.Error())
		case x < 0 || x > 1:
			w.addf(item, at, "%s is out of range; needs a share of at least 0 and at most 1", item.show())
		default:
			out.Names, out.Values = append(out.Names, n.keys[i]), append(out.Values, x)
		}
	}
	return out
}
