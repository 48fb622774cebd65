package configs

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"unicode/utf8"
)

// formats lists what a file may be, for messages.
const formats = "an experiment in YAML (.yaml, .yml), JSON (.json) or TOML (.toml)"

// lineError is a mistake that keeps the tree from being built.
type lineError struct {
	line int
	path string
	what string
}

func (e *lineError) Error() string { return e.what }

func atLine(line int, format string, args ...any) error {
	return &lineError{line: line, what: fmt.Sprintf(format, args...)}
}

// parse turns a file's bytes into a tree. name decides the format by its extension;
// without a known one the content does.
func parse(name string, b []byte) (*node, error) {
	b, err := asText(b, formats)
	if err != nil {
		return nil, err
	}
	var root *node
	switch strings.ToLower(filepath.Ext(name)) {
	case ".yaml", ".yml":
		root, err = parseYAML(b)
	case ".json":
		root, err = parseJSON(b)
	case ".toml":
		root, err = parseTOML(b)
	default:
		root, err = parseUnknown(b)
	}
	if err != nil {
		return nil, err
	}
	if root.kind != mapNode {
		return nil, atLine(root.line, "is %s at the top; needs keys such as title, layers and base", root.kind)
	}
	return root, nil
}

var tomlLine = regexp.MustCompile(`(?m)\A(?:\s*(?:#.*)?\n)*\s*(?:\[\[?[A-Za-z]|[A-Za-z0-9_.-]+\s*=)`)

// parseUnknown guesses the format from the content: a brace means JSON (or YAML in
// flow style), an equals sign or a table header TOML, anything else YAML.
func parseUnknown(b []byte) (*node, error) {
	if bytes.HasPrefix(bytes.TrimSpace(b), []byte("{")) {
		if root, err := parseJSON(b); err == nil {
			return root, nil
		}
	} else if tomlLine.Match(b) {
		return parseTOML(b)
	}
	root, err := parseYAML(b)
	if err != nil {
		return nil, err
	}
	if root.kind != mapNode {
		return nil, atLine(root.line, "is not recognised; needs %s", formats)
	}
	return root, nil
}

// asText checks that b is UTF-8 text and not empty, and drops a byte-order mark. needs
// says what b should be.
func asText(b []byte, needs string) ([]byte, error) {
	if len(b) > maxBytes {
		return nil, atLine(0, "is larger than %d MB; needs %s", maxBytes>>20, needs)
	}
	if bytes.HasPrefix(b, []byte{0xFF, 0xFE}) || bytes.HasPrefix(b, []byte{0xFE, 0xFF}) {
		return nil, atLine(1, "is UTF-16 text; save it as UTF-8")
	}
	b = bytes.TrimPrefix(b, []byte("\uFEFF"))
	if len(bytes.TrimSpace(b)) == 0 {
		return nil, atLine(0, "is empty; needs %s", needs)
	}
	if breaks := bytes.Count(b, []byte{','}) + bytes.Count(b, []byte{'\n'}); breaks > maxBreaks {
		return nil, atLine(0, "has %d commas and line ends, more than an experiment can need (%d)", breaks, maxBreaks)
	}
	line := 1
	for i := 0; i < len(b); {
		r, size := utf8.DecodeRune(b[i:])
		switch {
		case r == '\n':
			line++
		case r < ' ' && r != '\t' && r != '\r', r == 0x7F:
			return nil, atLine(line, "is binary data (byte 0x%02X); needs %s", b[i], needs)
		case r == utf8.RuneError && size == 1:
			return nil, atLine(line, "holds the byte 0x%02X, which is not UTF-8 (perhaps Latin-1); save the file as UTF-8", b[i])
		}
		i += size
	}
	return b, nil
}

// readAll reads at most maxBytes and one more, so that a larger file shows.
func readAll(r io.Reader) ([]byte, error) {
	return io.ReadAll(io.LimitReader(r, maxBytes+1))
}

// readFile reads a regular file of bearable size; a directory, a device or a missing
// file is an error in plain words that still wraps the cause.
func readFile(path, needs string) ([]byte, error) {
	info, err := os.Stat(path)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", path, plainCause(err))
	}
	if info.IsDir() {
		return nil, fmt.Errorf("%s: is a folder; needs %s", path, needs)
	}
	if !info.Mode().IsRegular() {
		return nil, fmt.Errorf("%s: is not a regular file; needs %s", path, needs)
	}
	if info.Size() > maxBytes {
		return nil, fmt.Errorf("%s: is larger than %d MB; needs %s", path, maxBytes>>20, needs)
	}
	b, err := os.ReadFile(path)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", path, plainCause(err))
	}
	return b, nil
}

// plainCause drops the system call's name and the repeated path.
func plainCause(err error) error {
	var p *os.PathError
	if errors.As(err, &p) {
		return p.Err
	}
	return err
}

var numberText = regexp.MustCompile(`^[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?$`)

// plainScalar classifies an unquoted scalar.
func plainScalar(line int, s string) (*node, error) {
	n := &node{line: line, text: s}
	switch strings.ToLower(strings.TrimLeft(s, "+-")) {
	case "", "~", "null":
		return nil, atLine(line, "has no value (null); give one or leave the key out")
	case ".nan", ".inf", "nan", "inf", "infinity":
		return nil, atLine(line, "%s is not a number that can be computed with; needs a finite one", s)
	}
	switch {
	case numberText.MatchString(s):
		n.scalar = numberScalar
	case s == "true", s == "false":
		n.scalar = boolScalar
	}
	return n, nil
}

func tooDeep(line int) error {
	return atLine(line, "is nested deeper than %d levels; an experiment needs fewer than ten", maxDepth)
}

// full reports a map or list that would hold more than it may.
func (n *node) full() error {
	switch {
	case n.kind == listNode && len(n.items) >= maxLayers:
		return atLine(n.line, "has more than %d entries", maxLayers)
	case n.kind == mapNode && len(n.items) >= maxKeys:
		return atLine(n.line, "has more than %d keys", maxKeys)
	}
	return nil
}

func duplicate(line int, key string, first int) error {
	return atLine(line, "%s stands here and in line %d; a key may stand once", shorten(key), first)
}
