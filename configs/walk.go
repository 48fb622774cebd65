package configs

import (
	"errors"
	"fmt"
	"math"
	"reflect"
	"slices"
	"strconv"
	"strings"
)

// walker decodes a tree by the schema and collects every mistake on its way.
type walker struct {
	file     string
	root     *node
	schema   *spec
	timeZero float64 // s; NaN where not given
	mistakes Mistakes
	blocks   []Remark
	above    []*node // maps around the value being walked
	refused  bool    // inside something that is not in this version
	refusals int     // how many of the mistakes say so
	hidden   Mistakes
}

// Remark is what the user wrote as source and notes of a block.
type Remark struct{ Path, Source, Notes string }

// checker is a record with rules of its own; it is called once its keys are decoded.
type checker interface{ check(w *walker) }

// decode walks the tree into out, a pointer to the struct that schema describes.
func decode(file string, root *node, schema *spec, out any) *walker {
	w := &walker{file: file, root: root, schema: schema, timeZero: math.NaN()}
	if n := root.get("time-zero"); n != nil && n.kind == scalarNode {
		if x, err := parseQuantity(n, dimensions["age"], math.NaN()); err == nil {
			w.timeZero = x
		}
	}
	w.value(root, schema, "", "", reflect.ValueOf(out).Elem())
	return w
}

func (w *walker) add(n *node, path, what string) {
	if len(w.mistakes) > maxMistakes {
		return
	}
	m := Mistake{File: w.file, Path: path, What: what, Line: n.line}
	if n.from != "" && n.from != fromDefault {
		m.Set = n.from
	}
	if n.from == fromDefault { // a copy of what stands, and is reported, elsewhere
		w.hidden = append(w.hidden, m)
		return
	}
	if len(w.mistakes) == maxMistakes {
		m = Mistake{File: w.file, Line: math.MaxInt, What: fmt.Sprintf("more than %d mistakes; the rest is not listed", maxMistakes)}
	}
	w.mistakes = append(w.mistakes, m)
}

func (w *walker) addf(n *node, path, format string, args ...any) {
	w.add(n, path, fmt.Sprintf(format, args...))
}

// value decodes n. path is for people, with names; generic has * for indices.
func (w *walker) value(n *node, s *spec, path, generic string, out reflect.Value) {
	if len(w.mistakes) > maxMistakes {
		return
	}
	if out.Kind() == reflect.Pointer {
		out.Set(reflect.New(out.Type().Elem()))
		out = out.Elem()
	}
	switch s.kind {
	case unionSpec:
		w.union(n, s, path, generic, out)
		return
	case listSpec:
		if n.kind != listNode {
			w.addf(n, path, "is %s; %s", w.is(n), s.expects())
			return
		}
		w.list(n, s, path, generic, out)
		return
	case recordSpec:
		if n.kind != mapNode {
			w.addf(n, path, "is %s; %s", w.is(n), s.expects())
			return
		}
		w.record(n, s, path, generic, out)
		return
	case sharesSpec:
		if n.kind != mapNode {
			w.addf(n, path, "is %s; %s", w.is(n), s.expects())
			return
		}
		out.Set(reflect.ValueOf(w.shares(n, path)))
		return
	}
	if n.kind != scalarNode {
		w.addf(n, path, "is %s; %s", n.kind, s.expects())
		return
	}
	var v any
	var err error
	switch s.kind {
	case quantitySpec:
		v, err = w.quantity(n, s)
	case countSpec:
		v, err = countOf(n, s)
	case flagSpec:
		v = flag{n.text == "true", n}
		if n.scalar != boolScalar {
			err = fmt.Errorf("%s is neither true nor false; needs true or false", n.show())
		}
	case textSpec:
		v, err = w.text(n, s)
	}
	if err != nil {
		w.add(n, path, err.Error())
		return
	}
	out.Set(reflect.ValueOf(v))
}

// is says what was found where a map or a list was due.
func (w *walker) is(n *node) string {
	if n.kind == scalarNode {
		return n.show()
	}
	return n.kind.String()
}

func (w *walker) union(n *node, s *spec, path, generic string, out reflect.Value) {
	f := s.pick(n)
	if f == nil {
		w.addf(n, path, "is %s; %s", n.kind, s.expects())
		return
	}
	w.value(n, f.spec, path, generic, out.FieldByIndex(f.index))
}

func (w *walker) list(n *node, s *spec, path, generic string, out reflect.Value) {
	if len(n.items) == 0 {
		w.addf(n, path, "is an empty list; needs at least one entry")
		return
	}
	out.Set(reflect.MakeSlice(out.Type(), len(n.items), len(n.items)))
	seen := map[string]*node{}
	for i, item := range n.items {
		name := item.get("name")
		w.value(item, s.item, entryPath(path, i, item), generic+".*", out.Index(i))
		if name == nil || name.kind != scalarNode {
			continue
		}
		if first, ok := seen[name.text]; ok {
			where := ""
			if first.line > 0 {
				where = fmt.Sprintf(" (line %d)", first.line)
			}
			w.addf(name, entryPath(path, i, item)+".name", "%s is the name of an earlier entry too%s; names are unique in their list", name.show(), where)
		} else {
			seen[name.text] = name
		}
	}
}

// entryPath is a list entry's path: layers[2] (root).
func entryPath(path string, i int, item *node) string {
	p := fmt.Sprintf("%s[%d]", path, i)
	if name := item.get("name"); name != nil && name.kind == scalarNode {
		p += " (" + shorten(name.text) + ")"
	}
	return p
}

func join(path, key string) string {
	if path == "" {
		return key
	}
	return path + "." + key
}

func (w *walker) record(n *node, s *spec, path, generic string, out reflect.Value) {
	before := len(w.mistakes) - w.refusals
	w.above = append(w.above, n)
	for i, key := range n.keys {
		k := s.key(key)
		if k == nil {
			w.addf(n.items[i], join(path, shorten(key)), "unknown key; %s", didYouMean(key, s.keyNames()))
			continue
		}
		w.key(n.items[i], k, join(path, key), join(generic, key), out)
	}
	w.above = w.above[:len(w.above)-1]
	w.rules(n, s, path)
	b, _ := out.Addr().Interface().(interface{ stand(*node, string) *block })
	if b == nil {
		return
	}
	if note := b.stand(n, path); note.Source.given() || note.Notes.given() {
		w.blocks = append(w.blocks, Remark{path, note.Source.Value, note.Notes.Value})
	}
	if c, ok := out.Addr().Interface().(checker); ok && len(w.mistakes)-w.refusals == before {
		c.check(w)
	}
}

// key decodes one key of a record, or refuses it where its solver is not here yet.
func (w *walker) key(n *node, k *keySpec, path, generic string, out reflect.Value) {
	only, later := notYet[generic]
	if later && !w.refused && n.from != fromDefault && (only == "" || !isOnly(n, only)) {
		switch {
		case only == "":
			w.add(n, path, notInThisVersion)
		case n.kind == scalarNode:
			w.addf(n, path, "%s is %s; only %s is", n.show(), notInThisVersion, only)
		}
		w.refused = true
		w.refusals++
		defer func() { w.refused = false }()
	}
	w.value(n, k.spec, path, generic, out.FieldByIndex(k.index))
}

// rules checks what must and may not stand together.
func (w *walker) rules(n *node, s *spec, path string) {
	for _, r := range s.required {
		if n.get(r) == nil {
			w.addf(n, join(path, r), "is missing; %s", s.key(r).spec.expects())
		}
	}
	both := func(g []string) int {
		var have []string
		for _, k := range g {
			if n.get(k) != nil {
				have = append(have, k)
			}
		}
		if len(have) > 1 {
			at := n.get(have[1])
			w.addf(at, path, "has %s; only one of them may be given", strings.Join(have, " and "))
		}
		return len(have)
	}
	for _, g := range s.most {
		both(g)
	}
	for _, g := range s.exactly {
		if both(g) == 0 {
			w.addf(n, path, "has none of %s; needs one of them", strings.Join(g, ", "))
		}
	}
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
	switch s.as {
	case "name":
		if _, err := strconv.Atoi(v); err == nil || strings.ContainsAny(v, ".=\n") {
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
