package report

import (
	"fmt"
	"strings"
)

// escape writes the characters that TeX takes for its own.
var escape = strings.NewReplacer(`\`, `\textbackslash{}`, "&", `\&`, "%", `\%`, "#", `\#`, "_", `\_`, "$", `\$`, "{", `\{`, "}", `\}`, "^", `\^{}`, "~", `\~{}`)

// Bibliography returns sources.bib: one entry a source, the text as it is known here.
// What is derived or common practice has an entry too, with a note that says so.
func Bibliography(sources []SourceJSON) string {
	var b strings.Builder
	b.WriteString("% Sources of this result. Titles are not given where they were not looked up.\n")
	for _, s := range sources {
		name := s.Text
		if strings.HasPrefix(s.ID, "creep-") {
			_, name, _ = strings.Cut(s.Text, ": ")
		}
		fmt.Fprintf(&b, "\n@misc{%s,\n", s.ID)
		switch author, year := authors(name); {
		case s.Status == "derived" || s.Status == "common practice" || s.Status == "choice":
			fmt.Fprintf(&b, "  title = {%s},\n  note = {%s}\n}\n", escape.Replace(name), s.Status)
			continue
		case author != "":
			fmt.Fprintf(&b, "  author = {%s},\n  year = {%s},\n", escape.Replace(author), year)
		}
		fmt.Fprintf(&b, "  howpublished = {%s},\n  note = {numbers: %s}\n}\n", escape.Replace(name), escape.Replace(s.Status))
	}
	return b.String()
}

// authors reads the authors before the first year of a source, in the form a
// bibliography takes; "" where the text does not begin with them.
func authors(text string) (author, year string) {
	year = yearIn.FindString(text)
	if year == "" {
		return "", ""
	}
	author = strings.Trim(text[:strings.Index(text, year)], " ,;:(")
	if author == "" || strings.ContainsAny(author, "=0123456789") {
		return "", ""
	}
	author = strings.ReplaceAll(author, " et al.", " and others")
	return strings.ReplaceAll(author, " & ", " and "), year
}
