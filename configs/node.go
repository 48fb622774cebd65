package configs

import (
	"fmt"
	"slices"
	"strconv"
	"strings"
)

// Limits on what is read; a file beyond them is a mistake, not an experiment.
const (
	maxBytes    = 10 << 20 // of a file
	maxDepth    = 50       // of nested maps and lists
	maxLayers   = 10000    // entries of layers, or of any list
	maxKeys     = 1000     // of a map
	maxBreaks   = 300000   // commas and line ends of a file: ten thousand layers of twenty keys and more
	maxMistakes = 200      // reported for one file
)

type nodeKind int

const (
	scalarNode nodeKind = iota
	listNode
	mapNode
)

func (k nodeKind) String() string {
	return [...]string{"a single value", "a list", "a map"}[k]
}

type scalarKind int

const (
	stringScalar scalarKind = iota
	numberScalar
	boolScalar
)

// node is one value of the tree. A map keeps its keys in the order of the file,
// keys[i] belonging to items[i].
type node struct {
	kind   nodeKind
	line   int    // of the key, or of the entry in a list; 0 where from is set
	file   string // of a measured section, where the line is one of that
	from   string // the --set text it came from, or fromDefault
	text   string // of a scalar, as written
	scalar scalarKind
	keys   []string
	items  []*node
	rows   *measured // of a layer that rows of a measured section made
	copied bool      // from a section's entry to one of its layers: a mistake in it is told once
}

const fromDefault = "default"

// get returns the value of a map's key; nil where n is no map or lacks it.
func (n *node) get(key string) *node {
	if n == nil || n.kind != mapNode {
		return nil
	}
	if i := slices.Index(n.keys, key); i >= 0 {
		return n.items[i]
	}
	return nil
}

// put sets a map's key.
func (n *node) put(key string, v *node) {
	if i := slices.Index(n.keys, key); i >= 0 {
		n.items[i] = v
		return
	}
	n.keys = append(n.keys, key)
	n.items = append(n.items, v)
}

// remove drops the i-th entry of a map or list.
func (n *node) remove(i int) {
	if n.kind == mapNode {
		n.keys = slices.Delete(n.keys, i, i+1)
	}
	n.items = slices.Delete(n.items, i, i+1)
}

// clone copies the tree, so that an edit leaves the original alone.
func (n *node) clone() *node {
	if n == nil {
		return nil
	}
	c := *n
	c.keys = slices.Clone(n.keys)
	c.items = make([]*node, len(n.items))
	for i, v := range n.items {
		c.items[i] = v.clone()
	}
	return &c
}

// origin marks the whole tree as coming from a --set or a default.
func (n *node) origin(from string) *node {
	n.from, n.line = from, 0
	for _, v := range n.items {
		v.origin(from)
	}
	return n
}

// show quotes a value for a message, shortened.
func (n *node) show() string {
	if n.kind != scalarNode {
		return n.kind.String()
	}
	return shorten(n.text)
}

// shorten keeps a message readable whatever was written.
func shorten(s string) string {
	s = visible(strings.Join(strings.Fields(s), " "))
	if r := []rune(s); len(r) > 60 {
		s = string(r[:57]) + "…"
	}
	if s == "" {
		return `""`
	}
	return s
}

// Mistake is one thing wrong in an experiment or settings file.
type Mistake struct {
	File string // as given by the caller, or a measured section's
	Line int    // from 1; 0 where no line can be named
	Set  string // the --set text that holds the mistake; empty for the file itself
	Path string // of the key, for example layers[2] (root).thickness; indices count from 0
	What string // what is wrong and what was expected
}

func (m Mistake) String() string {
	var b strings.Builder
	switch {
	case m.Set != "":
		fmt.Fprintf(&b, "--set %s: ", shorten(m.Set))
	case m.Line > 0:
		fmt.Fprintf(&b, "%s:%d: ", m.File, m.Line)
	default:
		fmt.Fprintf(&b, "%s: ", m.File)
	}
	if m.Path != "" {
		fmt.Fprintf(&b, "%s: ", m.Path)
	}
	return b.String() + m.What
}

// Mistakes are all that is wrong with a file and the measured sections it names, sorted
// by file and line. It is the error that Open and Read return for a file they could read
// but not accept.
type Mistakes []Mistake

func (m Mistakes) Error() string {
	lines := make([]string, len(m))
	for i := range m {
		lines[i] = m[i].String()
	}
	return strings.Join(lines, "\n")
}

// sorted orders mistakes by file and line, then --set text, path and message: the same
// bytes always give the same messages.
func (m Mistakes) sorted() Mistakes {
	slices.SortStableFunc(m, func(a, b Mistake) int {
		if a.File != b.File {
			return strings.Compare(a.File, b.File)
		}
		if a.Line != b.Line {
			return a.Line - b.Line
		}
		return strings.Compare(a.Set+"\x00"+a.Path+"\x00"+a.What, b.Set+"\x00"+b.Path+"\x00"+b.What)
	})
	return slices.Compact(m)
}

// plain turns a tree into maps, lists, texts, numbers and truth values.
func (n *node) plain() any {
	switch n.kind {
	case mapNode:
		m := map[string]any{}
		for i, k := range n.keys {
			m[k] = n.items[i].plain()
		}
		return m
	case listNode:
		l := make([]any, len(n.items))
		for i := range n.items {
			l[i] = n.items[i].plain()
		}
		return l
	}
	switch n.scalar {
	case boolScalar:
		return n.text == "true"
	case numberScalar:
		if i, err := strconv.Atoi(n.text); err == nil {
			return i
		}
		x, _ := strconv.ParseFloat(strings.TrimSpace(n.text), 64)
		return x
	}
	return n.text
}
