package configs

import (
	"errors"
	"fmt"
	"strings"
)

// edit applies one --set text, path=value, to the tree. Entries of lists go by name
// or by index from 0; an empty value removes the key. Values are YAML in flow style.
func edit(root *node, set string) error {
	path, value, ok := strings.Cut(set, "=")
	path = strings.TrimSpace(path)
	if !ok || path == "" {
		return fmt.Errorf("needs a path, an equals sign and a value, for example drip.amplitude=1km")
	}
	parts := strings.Split(path, ".")
	if len(parts) > maxDepth {
		return fmt.Errorf("has more than %d parts", maxDepth)
	}
	if strings.TrimSpace(value) == "" {
		return removeAt(root, parts)
	}
	text, err := asText([]byte(value), "a value")
	if err != nil {
		return err
	}
	v, err := parseYAML(text)
	if err != nil {
		var e *lineError
		if errors.As(err, &e) && e.path != "" {
			return fmt.Errorf("%s: %w", e.path, err)
		}
		return err
	}
	return putAt(root, parts, v.origin(set), nil)
}

// putAt sets the value at a path, adding maps on the way, or copies of what filled
// has there.
func putAt(n *node, parts []string, v, filled *node) error {
	for i, part := range parts {
		last := i == len(parts)-1
		here := orTop(strings.Join(parts[:i], "."))
		switch n.kind {
		case listNode:
			of, err := leftOut(n, part, parts[i+1:])
			if err != nil {
				return fmt.Errorf("%s: %w", here, err)
			}
			for _, j := range of {
				var complete *node
				if filled != nil && filled.kind == listNode && j < len(filled.items) {
					complete = filled.items[j]
				}
				if err := putAt(n.items[j], parts[i+1:], v.clone(), complete); err != nil {
					return fmt.Errorf("%s: %w", entryKey(j, n.items[j]), err)
				}
			}
			if of != nil {
				return nil
			}
			j, err := entry(n, part)
			if err != nil {
				return fmt.Errorf("%s: %w", here, err)
			}
			if last {
				n.items[j] = v
				return nil
			}
			if filled != nil && filled.kind == listNode && j < len(filled.items) {
				filled = filled.items[j]
			} else {
				filled = nil
			}
			n = n.items[j]
		case mapNode:
			filled = filled.get(part)
			if last {
				n.put(part, v)
				return nil
			}
			if n.get(part) == nil {
				next := &node{kind: mapNode, from: v.from}
				if filled != nil {
					next = filled.clone()
				}
				n.put(part, next)
			}
			n = n.get(part)
		default:
			return fmt.Errorf("%s is %s and has no %s; set the whole of it", here, n.show(), shorten(part))
		}
	}
	return nil
}

func removeAt(n *node, parts []string) error {
	for i, part := range parts {
		at := -1
		switch n.kind {
		case listNode:
			of, err := leftOut(n, part, parts[i+1:])
			for _, j := range of {
				if err = removeAt(n.items[j], parts[i+1:]); err != nil {
					break
				}
			}
			if of != nil && err == nil {
				return nil
			}
			j := 0
			if err == nil {
				j, err = entry(n, part)
			}
			if err != nil {
				return fmt.Errorf("%s: %w", orTop(strings.Join(parts[:i], ".")), err)
			}
			at = j
		case mapNode:
			for j, k := range n.keys {
				if k == part {
					at = j
				}
			}
		}
		if at < 0 {
			if c := nearest(part, n.keys); c != "" {
				return fmt.Errorf("%s is not in the experiment, so it cannot be removed; did you mean %s?", strings.Join(parts, "."), c)
			}
			return fmt.Errorf("%s is not in the experiment, so it cannot be removed", strings.Join(parts, "."))
		}
		if i == len(parts)-1 {
			n.remove(at)
			return nil
		}
		n = n.items[at]
	}
	return nil
}
