package configs

import (
	"bytes"
	"encoding/json"
	"errors"
	"io"
	"sort"
)

// lineIndex gives the line of a byte offset.
type lineIndex []int // offsets of the newlines

func newLineIndex(b []byte) lineIndex {
	var x lineIndex
	for i, c := range b {
		if c == '\n' {
			x = append(x, i)
		}
	}
	return x
}

func (x lineIndex) line(offset int) int { return sort.SearchInts(x, offset) + 1 }

// parseJSON builds the tree token by token: no recursion, so nesting costs nothing.
func parseJSON(b []byte) (*node, error) {
	dec := json.NewDecoder(bytes.NewReader(b))
	dec.UseNumber()
	lines := newLineIndex(b)
	type frame struct {
		n    *node
		key  string
		line int // of key
		open bool
		seen map[string]int
	}
	var stack []*frame
	var root *node
	for {
		tok, err := dec.Token()
		line := lines.line(max(int(dec.InputOffset())-1, 0))
		if errors.Is(err, io.EOF) && root != nil && len(stack) == 0 {
			return root, nil
		}
		if err != nil {
			if errors.Is(err, io.EOF) || errors.Is(err, io.ErrUnexpectedEOF) {
				return nil, atLine(len(lines)+1, "is not valid JSON: it ends before every bracket is closed")
			}
			return nil, atLine(jsonLine(err, lines, line), "is not valid JSON: %s", shorten(err.Error()))
		}
		if root != nil && len(stack) == 0 {
			return nil, atLine(line, "begins a second document; a file holds one experiment")
		}
		var top *frame
		if len(stack) > 0 {
			top = stack[len(stack)-1]
		}
		if d, ok := tok.(json.Delim); ok && (d == '}' || d == ']') {
			stack = stack[:len(stack)-1]
			continue
		}
		if top != nil && top.n.kind == mapNode && !top.open { // a key; the decoder lets only strings through
			key, _ := tok.(string)
			if first, ok := top.seen[key]; ok {
				return nil, duplicate(line, key, first)
			}
			top.key, top.line, top.open, top.seen[key] = key, line, true, line
			continue
		}
		at := line
		if top != nil && top.n.kind == mapNode {
			at = top.line
		}
		v := &node{line: at}
		switch t := tok.(type) {
		case json.Delim:
			v.kind = listNode
			if t == '{' {
				v.kind = mapNode
			}
		case string:
			v.text = t
		case json.Number:
			v.text, v.scalar = t.String(), numberScalar
		case bool:
			v.text, v.scalar = "false", boolScalar
			if t {
				v.text = "true"
			}
		default:
			err := atLine(at, "has no value (null); give one or leave the key out")
			if top != nil && top.open {
				err = under(top.key, err)
			}
			return nil, err
		}
		if top != nil {
			if err := top.n.full(); err != nil {
				for i := len(stack) - 2; i >= 0; i-- {
					if stack[i].n.kind == mapNode {
						err = under(stack[i].key, err)
					}
				}
				return nil, err
			}
		}
		switch {
		case top == nil:
			root = v
		case top.n.kind == mapNode:
			top.n.keys, top.n.items, top.open = append(top.n.keys, top.key), append(top.n.items, v), false
		default:
			top.n.items = append(top.n.items, v)
		}
		if v.kind != scalarNode {
			if len(stack) >= maxDepth {
				return nil, tooDeep(line)
			}
			stack = append(stack, &frame{n: v, seen: map[string]int{}})
		}
	}
}

func jsonLine(err error, lines lineIndex, fallback int) int {
	var s *json.SyntaxError
	if errors.As(err, &s) && s.Offset > 0 {
		return lines.line(int(s.Offset) - 1)
	}
	return fallback
}
