package plots

import (
	"slices"
	"strings"
	"unicode"

	"golang.org/x/image/font/sfnt"
	"gonum.org/v1/plot/vg"
)

// missingGlyphs returns the runes of txt that the typeface cannot draw.
func missingGlyphs(txt string) []rune {
	var missing []rune
	for _, line := range (markup{}).Lines(txt) {
		for _, r := range runs(line) {
			for _, c := range r.text {
				if !hasGlyph(c) {
					missing = append(missing, c)
				}
			}
		}
	}
	return missing
}

func hasGlyph(r rune) bool {
	var buf sfnt.Buffer
	face := sans().Lookup(sansFont(typeSize), typeSize)
	i, err := face.Face.GlyphIndex(&buf, r)
	return err == nil && i != 0
}

// literal makes text written by a user safe to draw: control characters become
// spaces, what the typeface lacks a question mark, and nothing is read as markup.
func literal(s string) string {
	var b strings.Builder
	for _, r := range s {
		switch {
		case r == '^' || r == '_':
			b.WriteRune(r)
			b.WriteRune(unbreakable)
		case unicode.IsControl(r) || unicode.IsSpace(r):
			b.WriteByte(' ')
		case unicode.Is(unicode.Cf, r) || unicode.Is(unicode.Mn, r):
		case superscript(r) != 0: // some have a glyph and some not: all are drawn one way
			b.WriteString("^{" + string(superscript(r)) + "}")
		case hasGlyph(r):
			b.WriteRune(r)
		default:
			b.WriteByte('?')
		}
	}
	return strings.TrimSpace(b.String())
}

// superscript returns the ordinary character of a raised one, or 0.
func superscript(r rune) rune {
	switch {
	case r >= '⁴' && r <= '⁹', r == '⁰':
		return '0' + r - '⁰'
	case r == '¹':
		return '1'
	case r == '²':
		return '2'
	case r == '³':
		return '3'
	case r == '⁻':
		return '-'
	case r == '⁺':
		return '+'
	}
	return 0
}

// words splits txt at spaces, but not between a number and its unit.
func words(txt string) []string {
	var out []string
	for _, w := range strings.Fields(txt) {
		n := len(out)
		if n > 0 && slices.Contains([]string{"degC", "°C", "K", "MPa", "GPa", "km", "%"}, strings.TrimRight(w, ".,;:)")) && strings.ContainsAny(out[n-1][len(out[n-1])-1:], "0123456789") {
			out[n-1] += " " + w
			continue
		}
		out = append(out, w)
	}
	return out
}

// wrap breaks txt into at most most lines no wider than width, ending in … where it
// does not fit.
func wrap(txt string, size, width vg.Length, most int) string {
	var lines []string
	line := ""
	for _, word := range words(txt) {
		longer := strings.TrimSpace(line + " " + word)
		if w, _, _ := extent(longer, size); w > width && line != "" {
			lines, longer = append(lines, line), word
		}
		line = longer
	}
	lines = append(lines, line)
	if most = max(most, 1); len(lines) > most {
		lines[most-1] += "…"
		lines = lines[:most]
	}
	for i := range lines {
		lines[i] = shorten(lines[i], size, width)
	}
	return strings.Join(lines, "\n")
}

// shorten cuts txt until it fits width, ending it in ….
func shorten(txt string, size, width vg.Length) string {
	if w, _, _ := extent(txt, size); w <= width {
		return txt
	}
	rs := []rune(strings.TrimSuffix(txt, "…"))
	for n := len(rs) - 1; n > 0; n-- {
		cut := strings.TrimRight(string(rs[:n]), " ,") + "…"
		if w, _, _ := extent(cut, size); w <= width {
			return cut
		}
	}
	return "…"
}
