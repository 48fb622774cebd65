package configs

import (
	"cmp"
	"fmt"
	"math"
	"reflect"
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
	if n.file != "" {
		m.File = n.file
	}
	if n.from != "" && n.from != fromDefault {
		m.Set = n.from
	}
	if n.from == fromDefault { // a copy of what stands, and is reported, elsewhere
		w.hidden = append(w.hidden, m)
		return
	}
	if n.copied && w.mistakes.told(m) {
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
			switch {
			case first.line > 0 && first.file != name.file:
				where = fmt.Sprintf(" (%s:%d)", cmp.Or(first.file, w.file), first.line)
			case first.line > 0:
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
