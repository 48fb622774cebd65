package report

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"keelfall/rheology"
)

// LawFilter chooses among creep laws; empty fields let all pass. Case does not count.
type LawFilter struct {
	Material  string // words of the material
	Mechanism string // words of the mechanism
	Water     string // wet, dry or undried
	Search    string // words of anything the catalogue says of a law
	Named     bool   // the laws to choose among were named one by one; for messages
}

// WaterStates are the values of LawFilter.Water.
var WaterStates = []string{"wet", "dry", "undried"}

// asked is one criterion that was given.
type asked struct {
	flag, value string
	in          func(l *rheology.Law) string // where the value's words are looked for
}

func (f LawFilter) asked() []asked {
	all := []asked{
		{"--material", f.Material, func(l *rheology.Law) string { return l.Material + " " + l.Name }},
		{"--mechanism", f.Mechanism, func(l *rheology.Law) string { return l.Mechanism }},
		{"--water", f.Water, waterState},
		{"--search", f.Search, func(l *rheology.Law) string {
			return strings.Join([]string{l.Name, l.Material, l.WaterState, l.Mechanism, l.Source, l.Notes}, " ")
		}},
	}
	return slices.DeleteFunc(all, func(a asked) bool { return strings.TrimSpace(a.value) == "" })
}

// waterState is wet, dry or undried: what the source says, or the name where it is silent.
func waterState(l *rheology.Law) string {
	s := l.WaterState
	if s == "" {
		s = l.Name
	}
	for _, w := range strings.Fields(strings.ToLower(s)) {
		if slices.Contains(WaterStates, w) {
			return w
		}
	}
	return ""
}

// match reports whether every word of the value begins or stands in what is asked.
func (a asked) match(l *rheology.Law) bool {
	text := strings.ToLower(a.in(l))
	if a.flag == "--water" {
		return text == strings.ToLower(strings.TrimSpace(a.value))
	}
	for _, w := range strings.Fields(strings.ToLower(a.value)) {
		if !strings.Contains(text, w) {
			return false
		}
	}
	return true
}

// Choose returns the laws that meet every criterion. Where none does, the error names
// the criterion that no law meets, or says that none meets them together, and the laws
// whose names come nearest.
func (f LawFilter) Choose(laws []rheology.Law) ([]rheology.Law, error) {
	given := f.asked()
	out := slices.Clone(laws)
	for _, a := range given {
		if a.flag == "--water" && !slices.Contains(WaterStates, strings.ToLower(strings.TrimSpace(a.value))) {
			return nil, fmt.Errorf("--water %s is not known; needs %s", a.value, "wet, dry or undried")
		}
		out = slices.DeleteFunc(out, func(l rheology.Law) bool { return !a.match(&l) })
	}
	if len(out) > 0 || len(given) == 0 {
		return out, nil
	}
	var words, values []string
	for _, a := range given {
		if !slices.ContainsFunc(laws, func(l rheology.Law) bool { return a.match(&l) }) {
			if f.Named {
				return nil, fmt.Errorf("none of the laws named has %s %q", a.flag, a.value)
			}
			return nil, fmt.Errorf("no creep law has %s %q%s", a.flag, a.value, nearestLaws(laws, a.value))
		}
		words, values = append(words, fmt.Sprintf("%s %q", a.flag, a.value)), append(values, a.value)
	}
	if f.Named {
		return nil, fmt.Errorf("none of the laws named has %s together", join(words))
	}
	return nil, fmt.Errorf("no creep law has %s together, though each has some%s", join(words), nearestLaws(laws, strings.Join(values, " ")))
}

// nearestLaws names the laws whose names come nearest to words.
func nearestLaws(laws []rheology.Law, words string) string {
	_, err := rheology.FindIn(laws, words)
	var unknown *rheology.UnknownLawError
	if errors.As(err, &unknown) && len(unknown.Nearest) > 0 {
		return "; the nearest by name: " + strings.Join(unknown.Nearest, ", ")
	}
	return "; keelfall laws lists them all"
}
