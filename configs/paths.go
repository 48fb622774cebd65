package configs

import (
	"fmt"
	"strconv"
	"strings"
)

// target is what a key path such as layers.lower.thickness leads to.
type target struct {
	spec  *spec
	steps []step
	node  *node // nil where the key is absent
}

// step is one part of a path in the tree: a key of a map or an entry of a list.
type step struct {
	key   string
	index int // where the parent is a list
}

// resolve follows a path through schema and tree. List entries are named, or counted
// from 0. A key that is absent is found as long as the schema knows it.
func resolve(root *node, schema *spec, path string) (target, error) {
	t := target{spec: schema, node: root}
	parts := strings.Split(path, ".")
	for i, part := range parts {
		here := strings.Join(parts[:i], ".")
		s, err := within(t, part, here)
		if err != nil {
			return target{}, err
		}
		if s.kind == listSpec {
			if t.node == nil || t.node.kind != listNode {
				return target{}, fmt.Errorf("%s: %s is not in the experiment", path, here)
			}
			of, err := leftOut(t.node, part, parts[i+1:])
			if err == nil && of == nil {
				var j int
				j, err = entry(t.node, part)
				of = []int{j}
			}
			if err != nil {
				return target{}, fmt.Errorf("%s: %w", path, err)
			}
			j := of[0]
			t = target{s.item, append(t.steps, step{index: j}), t.node.items[j]}
			continue
		}
		next := target{steps: append(t.steps, step{key: part}), node: t.node.get(part)}
		if s.kind == sharesSpec {
			next.spec = &spec{kind: quantitySpec, dim: dimensions["number"]}
			if next.node == nil {
				return target{}, fmt.Errorf("%s: %s has no %s", path, here, shorten(part))
			}
		} else {
			next.spec = s.key(part).spec
		}
		t = next
	}
	return t, nil
}

// within returns the record, list or shares that holds part, choosing the form of a
// union by what the experiment has there.
func within(t target, part, here string) (*spec, error) {
	s := t.spec
	if s.kind == unionSpec {
		if t.node != nil {
			f := s.pick(t.node)
			if f == nil || f.spec.kind == quantitySpec || f.spec.kind == textSpec {
				return nil, fmt.Errorf("%s is %s and has no %s", here, t.node.show(), shorten(part))
			}
			s = f.spec
		} else {
			for _, f := range s.forms {
				if f.spec.kind == recordSpec && f.spec.key(part) != nil {
					s = f.spec
					break
				}
			}
		}
	}
	switch s.kind {
	case listSpec, sharesSpec:
		return s, nil
	case recordSpec:
		if s.key(part) == nil {
			return nil, fmt.Errorf("%s is not a key of %s; %s", shorten(part), orTop(here), didYouMean(part, s.keyNames()))
		}
		return s, nil
	}
	return nil, fmt.Errorf("%s has no keys of its own, so no %s", orTop(here), shorten(part))
}

func orTop(path string) string {
	if path == "" {
		return "an experiment"
	}
	return path
}

// entry finds a list's entry by its name or, counted from 0, by its index.
func entry(list *node, part string) (int, error) {
	if i, err := strconv.Atoi(part); err == nil {
		if i < 0 || i >= len(list.items) {
			return 0, fmt.Errorf("there is no entry %d; entries are counted from 0 and there are %d", i, len(list.items))
		}
		return i, nil
	}
	var names []string
	for i, item := range list.items {
		if name := item.get("name"); name != nil {
			if name.text == part {
				return i, nil
			}
			names = append(names, name.text)
		}
	}
	if len(names) == 0 {
		return 0, fmt.Errorf("%s is not an entry; these entries have no names and are counted from 0", shorten(part))
	}
	if c := nearest(part, names); c != "" {
		return 0, fmt.Errorf("%s is not an entry; did you mean %s?", shorten(part), c)
	}
	if len(names) > 10 {
		names = append(names[:10], "…")
	}
	return 0, fmt.Errorf("%s is not an entry; entries are %s", shorten(part), strings.Join(names, ", "))
}

// keyDimension is the dimension of the number a sweep's key names.
func (w *walker) keyDimension(path string) (*dimension, error) {
	t, err := resolve(w.root, w.schema, path)
	if err != nil {
		return nil, fmt.Errorf("%s is not a key that can be varied: %w", shorten(path), err)
	}
	s := t.spec
	if s.kind == unionSpec {
		if t.node != nil && t.node.kind != scalarNode {
			return nil, fmt.Errorf("%s is %s; name one number in it", shorten(path), t.node.kind)
		}
		for _, f := range s.forms {
			if f.spec.kind == quantitySpec {
				s = f.spec
			}
		}
	}
	if s.kind != quantitySpec || s.dim == nil || s.dim.kind == anyDim {
		return nil, fmt.Errorf("%s is not a number that can be varied", shorten(path))
	}
	return s.dim, nil
}

// dynamic finds the dimension that a key or a quantity named nearby decides; nil
// where that name is missing or wrong, which is reported where it stands.
func (w *walker) dynamic(by string) (*dimension, error) {
	name, difference := strings.CutSuffix(strings.TrimPrefix(by, "@"), "-")
	var d *dimension
	for i := len(w.above) - 1; i >= 0 && d == nil; i-- {
		n := w.above[i].get(name)
		if n == nil || n.kind != scalarNode {
			continue
		}
		if name == "quantity" {
			d = dimensions[quantityDims[n.text]]
		} else {
			d, _ = w.keyDimension(strings.TrimSpace(n.text))
		}
		if d == nil {
			return nil, nil
		}
	}
	if d == nil || !difference {
		return d, nil
	}
	switch d.kind {
	case tempDim:
		return dimensions["temperature-difference"], nil
	case timeDim, ageDim:
		return dimensions["duration"], nil
	}
	return d, nil
}
