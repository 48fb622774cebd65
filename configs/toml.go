package configs

import (
	"errors"
	"strings"

	"github.com/pelletier/go-toml/v2"
	"github.com/pelletier/go-toml/v2/unstable"
)

// parseTOML builds the tree from the parser's expressions, which know where they
// stand; what TOML itself forbids (a table defined twice, …) an ordinary decoding
// finds first.
func parseTOML(b []byte) (*node, error) {
	var p unstable.Parser
	lines := newLineIndex(b)
	t := &tomlTree{root: &node{kind: mapNode, line: 1}, p: &p, lines: lines}
	t.table = t.root
	p.Reset(b)
	for p.NextExpression() {
		if err := t.expression(p.Expression()); err != nil {
			return nil, err
		}
	}
	var pe *unstable.ParserError
	if errors.As(p.Error(), &pe) {
		line := len(lines) + 1
		if len(pe.Highlight) > 0 {
			line = lines.line(int(p.Range(pe.Highlight).Offset))
		}
		if strings.Contains(pe.Message, "nest") {
			return nil, tooDeep(line)
		}
		return nil, atLine(line, "is not valid TOML: %s", shorten(pe.Message))
	}
	var tables map[string]any
	if err := toml.Unmarshal(b, &tables); err != nil {
		var de *toml.DecodeError
		line := 0
		if errors.As(err, &de) {
			line, _ = de.Position()
		}
		return nil, atLine(line, "is not valid TOML: %s", shorten(strings.TrimPrefix(err.Error(), "toml: ")))
	}
	return t.root, nil
}

type tomlTree struct {
	root, table *node
	depth       int // of table
	p           *unstable.Parser
	lines       lineIndex
}

func (t *tomlTree) expression(e *unstable.Node) error {
	switch e.Kind {
	case unstable.Table, unstable.ArrayTable:
		at, key, line, depth, err := t.descend(t.root, 0, e.Key())
		if err != nil {
			return err
		}
		v := at.get(key)
		if e.Kind == unstable.Table {
			if v == nil {
				if err := at.full(); err != nil {
					return err
				}
				v = &node{kind: mapNode, line: line}
				at.put(key, v)
			}
			if v.kind == listNode && len(v.items) > 0 { // [a] after [[a]]: the decoding below reports it
				v = v.items[len(v.items)-1]
			}
		} else {
			if v == nil {
				if err := at.full(); err != nil {
					return err
				}
				v = &node{kind: listNode, line: line}
				at.put(key, v)
			}
			if err := v.full(); err != nil {
				return under(key, err)
			}
			entry := &node{kind: mapNode, line: line}
			if v.kind == listNode {
				v.items = append(v.items, entry)
			}
			v, depth = entry, depth+1
		}
		if v.kind != mapNode {
			return atLine(line, "is not valid TOML: %s is a value already and cannot be a table", shorten(key))
		}
		t.table, t.depth = v, depth+1
		return nil
	case unstable.KeyValue:
		return t.keyValue(t.table, t.depth, e)
	}
	return nil
}

// descend follows all but the last part of a dotted key, making tables on its way.
func (t *tomlTree) descend(n *node, depth int, it unstable.Iterator) (at *node, key string, line, d int, err error) {
	for it.Next() {
		k := it.Node()
		if at != nil {
			v := n.get(key)
			if v == nil {
				if err := n.full(); err != nil {
					return nil, "", 0, 0, err
				}
				v = &node{kind: mapNode, line: line}
				n.put(key, v)
			}
			if v.kind == listNode && len(v.items) > 0 {
				v, depth = v.items[len(v.items)-1], depth+1
			}
			if v.kind != mapNode {
				return nil, "", 0, 0, atLine(line, "is not valid TOML: %s is a value already and cannot be a table", shorten(key))
			}
			n = v
			if depth++; depth > maxDepth {
				return nil, "", 0, 0, tooDeep(line)
			}
		}
		at, key, line = n, string(k.Data), t.lines.line(int(k.Raw.Offset))
	}
	return at, key, line, depth, nil
}

func (t *tomlTree) keyValue(n *node, depth int, e *unstable.Node) error {
	at, key, line, depth, err := t.descend(n, depth, e.Key())
	if err != nil {
		return err
	}
	if old := at.get(key); old != nil {
		return duplicate(line, key, old.line)
	}
	if err := at.full(); err != nil {
		return err
	}
	v, err := t.value(e.Value(), line, depth+1)
	if err != nil {
		return under(key, err)
	}
	at.put(key, v)
	return nil
}

func (t *tomlTree) value(e *unstable.Node, line, depth int) (*node, error) {
	if depth > maxDepth {
		return nil, tooDeep(line)
	}
	switch e.Kind {
	case unstable.String:
		return &node{line: line, text: string(e.Data)}, nil
	case unstable.Bool, unstable.Integer, unstable.Float:
		s := strings.ReplaceAll(string(e.Data), "_", "")
		n, err := plainScalar(line, s)
		if err == nil && n.scalar == stringScalar {
			err = atLine(line, "%s is not a decimal number; write it as one", shorten(s))
		}
		return n, err
	case unstable.Array:
		n := &node{kind: listNode, line: line}
		at := line
		for it := e.Children(); it.Next(); {
			c := it.Node()
			if c.Raw.Offset > 0 {
				at = t.lines.line(int(c.Raw.Offset))
			}
			v, err := t.value(c, at, depth+1)
			if err != nil {
				return nil, err
			}
			if err := n.full(); err != nil {
				return nil, err
			}
			n.items = append(n.items, v)
		}
		return n, nil
	case unstable.InlineTable:
		n := &node{kind: mapNode, line: line}
		for it := e.Children(); it.Next(); {
			if err := t.keyValue(n, depth, it.Node()); err != nil {
				return nil, err
			}
		}
		return n, nil
	}
	return nil, atLine(line, "is a date; no key of an experiment takes one")
}
