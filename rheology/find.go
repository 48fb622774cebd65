package rheology

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
)

// NameKey returns the form in which two names of laws are the same name: lower case,
// single spaces.
func NameKey(name string) string { return fold(name) }

func fold(s string) string { return strings.ToLower(strings.Join(strings.Fields(s), " ")) }

// UnknownLawError says that no law has the name, and which come nearest.
type UnknownLawError struct {
	Name    string
	Nearest []string // best first; at most four
}

func (e *UnknownLawError) Error() string {
	if len(e.Nearest) == 0 {
		return fmt.Sprintf("rheology: no creep law %q", e.Name)
	}
	return fmt.Sprintf("rheology: no creep law %q; the nearest: %s", e.Name, strings.Join(e.Nearest, ", "))
}

// Find returns the catalogue's law of that name; case and repeated spaces do not
// count. An unknown name is an *UnknownLawError.
func Find(name string) (Law, error) { return FindIn(catalogue(), name) }

// FindIn is Find in another list of laws, such as a user's catalogue.
func FindIn(laws []Law, name string) (Law, error) {
	key := fold(name)
	for i := range laws {
		if fold(laws[i].Name) == key {
			return laws[i], nil
		}
	}
	return Law{}, &UnknownLawError{name, nearest(laws, key)}
}

// nearest returns up to four names that share words with key, or are a few letters
// away, the closest first.
func nearest(laws []Law, key string) []string {
	type candidate struct {
		name   string
		shared float64
		edits  int
	}
	words := strings.Fields(key)
	var cs []candidate
	for i := range laws {
		other := fold(laws[i].Name)
		c := candidate{name: laws[i].Name, edits: edits(key, other)}
		for _, w := range words {
			best := 0.0
			for _, o := range strings.Fields(other) {
				long := max(len([]rune(w)), len([]rune(o)))
				if d := edits(w, o); 3*d <= long { // a third of the letters may be wrong
					best = max(best, 1-float64(d)/float64(long))
				}
			}
			c.shared += best
		}
		if c.shared > 0 || 3*c.edits <= len([]rune(key)) {
			cs = append(cs, c)
		}
	}
	slices.SortStableFunc(cs, func(a, b candidate) int {
		return cmp.Or(cmp.Compare(b.shared, a.shared), cmp.Compare(a.edits, b.edits))
	})
	names := make([]string, 0, 4)
	for _, c := range cs[:min(len(cs), 4)] {
		names = append(names, c.name)
	}
	return names
}

// edits is the least number of letters to insert, drop or change (Levenshtein 1966).
func edits(a, b string) int {
	s, t := []rune(a), []rune(b)
	row := make([]int, len(t)+1)
	for j := range row {
		row[j] = j
	}
	for i := range s {
		diagonal := row[0]
		row[0] = i + 1
		for j := range t {
			cost := diagonal
			if s[i] != t[j] {
				cost++
			}
			diagonal = row[j+1]
			row[j+1] = min(cost, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(t)]
}
