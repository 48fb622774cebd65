package report

import (
	"fmt"
	"strings"
	"unicode"
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
	for _, w := range tokens(text) {
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

// units are what stays on one line with the number before it.
var units = map[string]bool{"%": true, "km": true, "m": true, "mm": true, "Myr": true, "Ma": true, "mm/yr": true, "kg/m3": true,
	"kg/m³": true, "degC": true, "K": true, "deg": true, "1/s": true, "1/Myr": true, "GPa": true, "MPa": true, "Pa": true, "mW/m2": true}

// tokens splits text at spaces, but not between a number and its unit.
func tokens(text string) []string {
	var out []string
	for _, w := range strings.Fields(text) {
		if n := len(out); n > 0 && (units[strings.TrimRight(w, ".,;:)*")] || strings.HasPrefix(w, "%")) && numeric(out[n-1]) {
			out[n-1] += " " + w
			continue
		}
		if n := len(out); n > 0 && strings.TrimRight(w, ".,;:)*") == "s" && strings.HasSuffix(out[n-1], " Pa") {
			out[n-1] += " " + w
			continue
		}
		out = append(out, w)
	}
	return out
}

// numeric says whether a word ends as a number does: "30", "(12", "10^20.7", "1e-15".
func numeric(w string) bool {
	return w != "" && w[len(w)-1] >= '0' && w[len(w)-1] <= '9'
}

// Count writes a number of things: "1 layer", "3 layers".
func Count(n int, thing string) string {
	if n == 1 {
		return "1 " + thing
	}
	return fmt.Sprintf("%d %ss", n, thing)
}

// upper makes the first letter a capital.
func upper(s string) string {
	r := []rune(s)
	if len(r) > 0 {
		r[0] = unicode.ToUpper(r[0])
	}
	return string(r)
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
