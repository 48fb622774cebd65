package configs

import (
	"fmt"
	"strings"
	"unicode"
)

// readable refuses what nobody can see in a text: control characters (C0, C1, delete),
// breaks of lines, and the characters that turn the direction of writing, with which
// a name can be made to look like another. Prose (notes and sources) may have several
// lines and tabs. A text is as tagged in the schema.
func readable(s, as string) error {
	what := "a text"
	switch as {
	case "name", "line", "prose":
		what = map[string]string{"name": "a name", "line": "a title", "prose": "a note"}[as]
	}
	for _, r := range s {
		switch {
		case as == "prose" && (r == '\n' || r == '\t' || r == '\r'):
		case r == '\n' || r == '\r' || r == '\u0085' || r == '\u2028' || r == '\u2029':
			return fmt.Errorf("%s has a newline, which is not allowed in %s; write it in one line", shorten(s), what)
		case r == '\t':
			return fmt.Errorf("%s has a tab, which is not allowed in %s; write a space", shorten(s), what)
		case hidden(r):
			return fmt.Errorf("%s has the control character U+%04X, which is not allowed in %s; leave it out", shorten(s), r, what)
		}
	}
	return nil
}

// hidden says whether r is a control character, also one of the direction of writing.
func hidden(r rune) bool {
	return unicode.IsControl(r) || unicode.Is(unicode.Bidi_Control, r) || r == '\u2028' || r == '\u2029'
}

// visible writes control characters as U+001B, so that a message that quotes them
// does nothing to a terminal.
func visible(s string) string {
	if strings.IndexFunc(s, hidden) < 0 {
		return s
	}
	var b strings.Builder
	for _, r := range s {
		if hidden(r) {
			fmt.Fprintf(&b, "U+%04X", r)
		} else {
			b.WriteRune(r)
		}
	}
	return b.String()
}
