package report

import (
	"fmt"
	"strings"
	"unicode/utf8"
)

const (
	pageWidth = 100
	margin    = 10 // of a section's text, after its heading
)

// page builds text with a heading in the margin of each section.
type page struct {
	b       strings.Builder
	heading string
}

// section starts a section; its heading stands before the first line.
func (p *page) section(heading string) {
	p.b.WriteByte('\n')
	p.heading = heading
}

// line writes one line as it is.
func (p *page) line(format string, a ...any) {
	fmt.Fprintf(&p.b, "%s%s\n", pad(p.heading, margin), strings.TrimRight(fmt.Sprintf(format, a...), " "))
	p.heading = ""
}

// say writes a paragraph, wrapped.
func (p *page) say(format string, a ...any) {
	for _, l := range wrap(fmt.Sprintf(format, a...), pageWidth-margin) {
		p.line("%s", l)
	}
}

// item writes a wrapped list item, its further lines indented.
func (p *page) item(text string) {
	for i, l := range wrap(text, pageWidth-margin-2) {
		lead := "  "
		if i == 0 {
			lead = "- "
		}
		p.line("%s%s", lead, l)
	}
}

// wrap breaks text at spaces so that no line is longer than width characters.
func wrap(text string, width int) []string {
	var lines []string
	var line string
	for _, w := range strings.Fields(text) {
		switch {
		case line == "":
			line = w
		case utf8.RuneCountInString(line)+1+utf8.RuneCountInString(w) > width:
			lines, line = append(lines, line), w
		default:
			line += " " + w
		}
	}
	if line != "" {
		lines = append(lines, line)
	}
	return lines
}

// pad fills s with spaces to n characters.
func pad(s string, n int) string {
	if m := utf8.RuneCountInString(s); m < n {
		return s + strings.Repeat(" ", n-m)
	}
	return s
}

// cut shortens s to n characters.
func cut(s string, n int) string {
	r := []rune(s)
	if len(r) <= n {
		return s
	}
	return strings.TrimRight(string(r[:n-1]), " ,") + "…"
}

// join writes "a, b and c".
func join(parts []string) string {
	switch len(parts) {
	case 0:
		return ""
	case 1:
		return parts[0]
	}
	return strings.Join(parts[:len(parts)-1], ", ") + " and " + parts[len(parts)-1]
}
