package configs

import (
	"fmt"
	"strings"
)

// expects describes what a value should be, for messages.
func (s *spec) expects() string {
	switch s.kind {
	case quantitySpec:
		if s.dim == nil {
			return "needs a number with its unit"
		}
		if s.eg != "" {
			return fmt.Sprintf("needs %s, for example %s", s.dim.words, s.eg)
		}
		return needs(s.dim)
	case countSpec:
		return "needs a whole number, for example 41"
	case flagSpec:
		return "needs true or false"
	case textSpec:
		switch {
		case len(s.words) == 1:
			return "needs " + s.words[0]
		case s.words != nil:
			return "needs one of " + strings.Join(s.words, ", ")
		case s.eg != "":
			return "needs a text, for example " + s.eg
		case s.as == "file":
			return "needs the name of a CSV file"
		}
		return "needs a text"
	case listSpec:
		return "needs a list"
	case sharesSpec:
		return "needs a map of names and shares, for example {pyrope: 0.4, diopside: 0.6}"
	case recordSpec:
		return "needs a map with " + strings.Join(s.listed(), ", ")
	}
	var parts []string
	for _, f := range s.forms {
		parts = append(parts, strings.TrimPrefix(f.spec.expects(), "needs "))
	}
	return "needs " + strings.Join(parts, "; or ")
}

// listed names a record's own keys, without those every block has.
func (s *spec) listed() []string {
	var names []string
	for _, n := range s.keyNames() {
		if n != "source" && n != "notes" {
			names = append(names, n)
		}
	}
	return names
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
