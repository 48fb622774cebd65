package configs

import (
	"fmt"
	"path/filepath"
	"slices"
	"strings"
)

// A section as a whole goes by its file's name without the ending: an edit of
// layers.keldra-section.creep is one of that key of every layer whose rows leave it out.
// A layer of that name comes first.

// stem is what a section is called in key paths.
func (m *measured) stem() string {
	name := filepath.Base(m.file)
	return strings.TrimSuffix(name, filepath.Ext(name))
}

// sectionLayers returns the indices of the layers of the section called part, or nil
// where an entry has that name, or no section has.
func sectionLayers(list *node, part string) []int {
	var of []int
	for i, l := range list.items {
		if name := l.get("name"); name != nil && name.text == part {
			return nil
		}
		if l.rows != nil && l.rows.stem() == part {
			of = append(of, i)
		}
	}
	return of
}

// leftOut returns those layers of a section whose rows leave a key out: the ones that an
// edit of the section's own key concerns.
func leftOut(list *node, part string, rest []string) ([]int, error) {
	all := sectionLayers(list, part)
	if all == nil {
		return nil, nil
	}
	m := list.items[all[0]].rows
	if len(rest) == 0 {
		return nil, fmt.Errorf("%s is a measured section of %d layers; name a key of it, or one of its layers", shorten(part), len(all))
	}
	if rest[0] == "section" {
		return nil, fmt.Errorf("%s has become layers; name another file in the experiment itself", shorten(m.file))
	}
	of := slices.DeleteFunc(slices.Clone(all), func(i int) bool { return slices.Contains(list.items[i].rows.own, rest[0]) })
	if len(of) == 0 {
		name := "NAME"
		if n := list.items[all[0]].get("name"); n != nil {
			name = n.text
		}
		return nil, fmt.Errorf("the rows of %s give %s themselves; name a layer, for example layers.%s.%s", shorten(m.file), shorten(rest[0]), name, strings.Join(rest, "."))
	}
	return of, nil
}
