package configs

import (
	"bytes"
	"errors"
	"io"
	"strings"

	"go.yaml.in/yaml/v4"
	"go.yaml.in/yaml/v4/plugin/loaderlimits"
)

// parseYAML builds the tree from a single YAML document without anchors, aliases,
// merge keys or tags: an experiment is read as it stands.
func parseYAML(b []byte) (*node, error) {
	depth := loaderlimits.New(loaderlimits.DepthFunc(func(d int, _ *loaderlimits.DepthContext) error {
		if d > maxDepth {
			return errDepth
		}
		return nil
	}))
	loader, err := yaml.NewLoader(bytes.NewReader(b), yaml.WithPlugin(depth))
	if err != nil {
		return nil, err
	}
	var doc yaml.Node
	if err := loader.Load(&doc); err != nil {
		return nil, yamlError(err)
	}
	root := &doc
	if root.Kind == yaml.DocumentNode {
		if len(root.Content) != 1 {
			return nil, atLine(0, "is empty; needs %s", formats)
		}
		root = root.Content[0]
	}
	tree, err := fromYAML(root, root.Line, 0)
	if err != nil {
		return nil, err
	}
	var second yaml.Node
	switch err := loader.Load(&second); {
	case errors.Is(err, io.EOF):
	case err != nil:
		return nil, yamlError(err)
	default:
		return nil, atLine(second.Line, "begins a second document; a file holds one experiment")
	}
	return tree, nil
}

var errDepth = errors.New("nested too deep")

// yamlError turns the parser's message into ours, with the line it names: where an
// unfinished list, map or quotation begins, else where the parser stopped.
func yamlError(err error) error {
	if errors.Is(err, io.EOF) {
		return atLine(0, "is empty; needs %s", formats)
	}
	var e *yaml.LoadError
	if !errors.As(err, &e) {
		return atLine(0, "is not valid YAML: %s", shorten(err.Error()))
	}
	if strings.Contains(e.Message, errDepth.Error()) {
		return tooDeep(e.Mark.Line)
	}
	line, what := e.Mark.Line, e.Message
	if e.ContextMsg != "" {
		line, what = e.ContextMark.Line, e.ContextMsg+", "+what
	}
	return atLine(line, "is not valid YAML: %s (indent with spaces, close every bracket and quotation, put a text that holds a colon in quotes)", what)
}

func fromYAML(y *yaml.Node, line, depth int) (*node, error) {
	if depth > maxDepth {
		return nil, tooDeep(line)
	}
	switch {
	case y.Kind == yaml.AliasNode:
		return nil, atLine(y.Line, "*%s is an alias; write the values out, so that each is read where it stands", shorten(y.Value))
	case y.Anchor != "":
		return nil, atLine(y.Line, "&%s is an anchor; write the values out, so that each is read where it stands", shorten(y.Anchor))
	case y.Style&yaml.TaggedStyle != 0:
		return nil, atLine(y.Line, "%s is a YAML tag; leave it out, the key decides what its value is", shorten(y.Tag))
	}
	switch y.Kind {
	case yaml.ScalarNode:
		if y.Style&(yaml.SingleQuotedStyle|yaml.DoubleQuotedStyle|yaml.LiteralStyle|yaml.FoldedStyle) != 0 {
			return &node{line: line, text: y.Value}, nil
		}
		return plainScalar(line, y.Value)
	case yaml.SequenceNode:
		n := &node{kind: listNode, line: line}
		for _, c := range y.Content {
			v, err := fromYAML(c, c.Line, depth+1)
			if err != nil {
				return nil, err
			}
			if err := n.full(); err != nil {
				return nil, err
			}
			n.items = append(n.items, v)
		}
		return n, nil
	case yaml.MappingNode:
		n := &node{kind: mapNode, line: line}
		seen := map[string]int{}
		for i := 0; i+1 < len(y.Content); i += 2 {
			k := y.Content[i]
			if k.Kind != yaml.ScalarNode {
				return nil, atLine(k.Line, "has %s as a key; a key is a single word", yamlKind(k))
			}
			if k.Tag == "!!merge" {
				return nil, atLine(k.Line, "<< is a merge key; write the values out, so that each is read where it stands")
			}
			if k.Anchor != "" {
				return nil, atLine(k.Line, "&%s is an anchor; write the values out", shorten(k.Anchor))
			}
			if first, ok := seen[k.Value]; ok {
				return nil, duplicate(k.Line, k.Value, first)
			}
			seen[k.Value] = k.Line
			v, err := fromYAML(y.Content[i+1], k.Line, depth+1)
			if err != nil {
				return nil, under(k.Value, err)
			}
			if err := n.full(); err != nil {
				return nil, err
			}
			n.keys, n.items = append(n.keys, k.Value), append(n.items, v)
		}
		return n, nil
	}
	return nil, atLine(y.Line, "is not a value")
}

// under puts the key in front of a mistake's path.
func under(key string, err error) error {
	var e *lineError
	if errors.As(err, &e) {
		c := *e
		switch {
		case c.path == "":
			c.path = shorten(key)
		case len(c.path) < 200:
			c.path = shorten(key) + "." + c.path
		}
		return &c
	}
	return err
}

func yamlKind(y *yaml.Node) string {
	switch y.Kind {
	case yaml.MappingNode:
		return "a map"
	case yaml.SequenceNode:
		return "a list"
	}
	return "an alias"
}
