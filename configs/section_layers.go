package configs

import (
	"fmt"
	"maps"
	"slices"
	"strconv"
	"strings"
)

func sortedKeys[V any](m map[string]V) []string { return slices.Sorted(maps.Keys(m)) }

// siText writes a number of dimension d as a file would.
func siText(x float64, d *dimension) string {
	return strings.TrimSpace(strconv.FormatFloat(x, 'g', -1, 64) + " " + d.si)
}

// layers makes one layer of each run of rows with the same name, completed by the
// section's entry; nil where there are mistakes.
func (r *sectionReader) layers(entry *node, file string) []*node {
	before := len(r.w.mistakes)
	var out []*node
	for from := 0; from < len(r.rows); {
		to := from + 1
		for to < len(r.rows) && r.rows[to].name == r.rows[from].name {
			to++
		}
		l := &sectionLayer{r: r, rows: r.rows[from:to], node: &node{kind: mapNode, line: r.rows[from].line, file: r.file}}
		l.node.rows = &measured{file: file}
		l.fill()
		complete(l.node, entry)
		out = append(out, l.node)
		from = to
	}
	if len(r.w.mistakes) > before {
		return nil
	}
	return out
}

// complete takes from the section's entry what the rows leave out.
func complete(layer, entry *node) {
	m := layer.rows
	m.own = append(slices.Clone(layer.keys), "section")
	if layer.get("viscosity") != nil {
		m.own = append(m.own, "creep", "friction")
	}
	if layer.get("creep") != nil {
		m.own = append(m.own, "viscosity", "stress-exponent")
	}
	for i, key := range entry.keys {
		if slices.Contains(m.own, key) {
			continue
		}
		layer.put(key, entry.items[i].clone().copy())
	}
}

// copy marks a whole tree as copied from a section's entry.
func (n *node) copy() *node {
	n.copied = true
	for _, v := range n.items {
		v.copy()
	}
	return n
}

// told says whether a mistake of a section's entry was reported for another of its layers.
func (m Mistakes) told(again Mistake) bool {
	key := func(path string) string { _, rest, _ := strings.Cut(path, ")."); return rest }
	return slices.ContainsFunc(m, func(one Mistake) bool {
		return one.File == again.File && one.Line == again.Line && one.Set == again.Set && one.What == again.What && key(one.Path) == key(again.Path)
	})
}

// sectionLayer is a layer in the making.
type sectionLayer struct {
	r    *sectionReader
	rows []sectionRow
	node *node
}

// put sets a scalar of the layer.
func (l *sectionLayer) put(n *node, key, text string, kind scalarKind) {
	n.put(key, &node{line: l.node.line, file: l.node.file, text: text, scalar: kind})
}

func (l *sectionLayer) fill() {
	m := l.node.rows
	l.put(l.node, "name", l.rows[0].name, stringScalar)
	l.thickness(m)
	if is := l.same("root", "are all root or none is"); is != "" {
		l.put(l.node, "root", is, boolScalar)
	}
	l.creep()
	for _, w := range sectionWords {
		if w.key != "" && w.key != "thickness" {
			l.number(m, w)
		}
	}
	l.modes(m)
	for _, key := range []string{"source", "notes"} {
		var said []string
		for i := range l.rows {
			if s := l.rows[i].texts[key]; s != "" && !slices.Contains(said, s) {
				said = append(said, s)
			}
		}
		if said != nil {
			l.put(l.node, key, strings.Join(said, "; "), stringScalar)
		}
	}
	for i := range l.rows {
		m.lines = append(m.lines, l.rows[i].line)
	}
	for _, row := range l.rows { // given by pressures, a row has one
		if _, ok := row.values["pressure"]; !ok && l.r.top == "top_pressure" {
			row.values["pressure"] = (row.values["top_pressure"] + row.values["bottom_pressure"]) / 2
		}
	}
	m.warmth, m.pressure = l.conditions("temperature"), l.conditions("pressure")
}

// thickness is the sum of the rows'. One that follows from pressures is set by weigh,
// once gravity is known; until then it is that under the default gravity.
func (l *sectionLayer) thickness(m *measured) {
	var sum float64
	for i := range l.rows {
		sum += l.rows[i].weight
	}
	text := siText(sum, dimensions["length"])
	switch {
	case l.r.top == "top_pressure":
		m.head = sum
		text = siText(sum/9.81, dimensions["length"])
	case l.r.top == "thickness" && len(l.rows) == 1:
		text = l.rows[0].cells["thickness"]
	}
	l.put(l.node, "thickness", text, stringScalar)
}

// same is what the rows say in a column of words; they may leave it out, but not differ.
func (l *sectionLayer) same(word, rule string) string {
	first := -1
	for i := range l.rows {
		is := l.rows[i].texts[word]
		switch {
		case is == "":
		case first < 0:
			first = i
		case is != l.rows[first].texts[word]:
			l.r.add(l.rows[i].line, word, fmt.Sprintf("is %s and was %s in line %d; the rows of one layer %s", is, l.rows[first].texts[word], l.rows[first].line, rule))
		}
	}
	if first < 0 {
		return ""
	}
	return l.rows[first].texts[word]
}

// creep names a law, or several acting together with semicolons between them.
func (l *sectionLayer) creep() {
	is := l.same("creep", "creep alike")
	if is == "" {
		return
	}
	laws := strings.Split(is, ";")
	if len(laws) == 1 {
		l.put(l.node, "creep", is, stringScalar)
		return
	}
	list := &node{kind: listNode, line: l.node.line, file: l.node.file}
	for _, law := range laws {
		list.items = append(list.items, &node{line: l.node.line, file: l.node.file, text: strings.TrimSpace(law), scalar: stringScalar})
	}
	l.node.put("creep", list)
}

// inAll says whether every row of the layer gives something; that only some do is a mistake.
func (l *sectionLayer) inAll(what string, given func(*sectionRow) bool) bool {
	with, without := -1, -1
	for i := range l.rows {
		if given(&l.rows[i]) {
			with = max(with, i)
		} else {
			without = max(without, i)
		}
	}
	if with >= 0 && without >= 0 {
		l.r.add(l.rows[without].line, what, fmt.Sprintf("is missing, and line %d of the same layer has one; needs one in every row of a layer or in none", l.rows[with].line))
		return false
	}
	return with >= 0
}

// number sets one number of the layer, the mean of its rows.
func (l *sectionLayer) number(m *measured, w *sectionWord) {
	if !l.inAll(w.word, func(row *sectionRow) bool { _, ok := row.values[w.word]; return ok }) {
		return
	}
	x := make([]float64, len(l.rows))
	for i := range x {
		x[i] = l.rows[i].values[w.word]
	}
	s := l.spread(w.key, x, w.mean)
	if w.key == "density" {
		s.RowError = l.rowError()
	}
	text := siText(s.Mean, w.dim)
	if len(l.rows) == 1 {
		text = l.rows[0].cells[w.word]
	}
	l.put(l.node, w.key, text, stringScalar)
	m.scatter = append(m.scatter, s)
}

// modes sets the layer's mineral modes: a mineral that a row with modes leaves empty is
// not in it.
func (l *sectionLayer) modes(m *measured) {
	if !l.inAll("mode", func(row *sectionRow) bool { return len(row.modes) > 0 }) {
		return
	}
	if l.node.get("density") != nil {
		return // some row has both, and is reported
	}
	modes := &node{kind: mapNode, line: l.node.line, file: l.node.file}
	for _, c := range l.r.cols {
		if c.mineral == "" {
			continue
		}
		x := make([]float64, len(l.rows))
		for i := range x {
			x[i] = l.rows[i].modes[c.mineral]
		}
		s := l.spread("density.modes."+c.mineral, x, arithmetic)
		if s.Mean == 0 {
			continue
		}
		l.put(modes, c.mineral, siText(s.Mean, dimensions["number"]), numberScalar)
		m.scatter = append(m.scatter, s)
	}
	l.node.put("density", &node{kind: mapNode, line: l.node.line, file: l.node.file, keys: []string{"modes"}, items: []*node{modes}})
}
