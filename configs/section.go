package configs

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"path/filepath"
	"slices"
	"strings"
)

// A measured section is an entry of layers that names a CSV file. Before anything else
// is read, its rows become ordinary layers in the tree, so that defaults, --set, sweeps
// and messages treat them as written ones:
//
//   - Rows go from the top down. Rows of the same name follow one another and are one
//     layer.
//   - A file gives the thickness of each row, or its top and bottom as depths below the
//     section's own top, or the pressures at its top and bottom. Where the section lies
//     in the column, the layers above it decide.
//   - A pressure difference is a thickness by ΔP = ρ g h, with the row's own density and
//     the experiment's gravity: a density that is a number is in situ and is taken as it
//     is; mineral modes are evaluated at the row's temperature and mean pressure.
//   - A layer's numbers are means of its rows, weighted by thickness (sectionWords says
//     of which kind). What the rows leave out the entry gives; where both give a key,
//     the rows win. A row's viscosity takes the place of the entry's creep.
//   - A quantity stands in every row of a layer or in none.

// measured marks a layer that the rows of a section made.
type measured struct {
	file     string    // as the experiment names it
	lines    []int     // of the rows
	own      []string  // keys that the rows decide
	head     float64   // m²/s²: Σ ΔP/ρ where pressures are given, else 0; over g it is the thickness
	scatter  []Scatter // keys below the layer's own
	warmth   any       // K, thickness-weighted mean of the rows that give it; nil where none does
	pressure any       // Pa, likewise
}

const sectionNeeds = "a CSV file with the columns name, thickness_km and what was measured, for example density_kg_m3"

// sections puts the layers of every measured section in the place of its entry. An
// entry whose file has mistakes stays; e.unread holds them.
func (e *Experiment) sections() {
	e.unread = nil
	list := e.tree.get("layers")
	if list == nil || list.kind != listNode {
		return
	}
	w := &walker{file: e.Name}
	var items []*node
	for _, entry := range list.items {
		layers := []*node{entry}
		if name, ok := sectionFile(entry); ok {
			path := fmt.Sprintf("layers[%d]", len(items))
			e.strays(entry, name, path)
			if rows := e.section(w, entry, name, path); rows != nil {
				layers = rows
			}
		}
		items = append(items, layers...)
	}
	if len(items) > maxLayers {
		w.addf(list, "layers", "has more than %d entries, those of measured sections counted", maxLayers)
		items = list.items
	}
	list.items = items
	e.unread = append(w.mistakes, e.stray...)
}

// strays takes from a section's entry the keys that only its rows may have; they are
// mistakes, whether the entry becomes layers now or stays.
func (e *Experiment) strays(entry *node, name, path string) {
	w := &walker{file: e.Name}
	for _, key := range []string{"name", "thickness"} {
		if i := slices.Index(entry.keys, key); i >= 0 {
			w.addf(entry.items[i], path+"."+key, "has no place beside section; the rows of %s have their own", shorten(name))
			entry.remove(i)
		}
	}
	e.stray = append(e.stray, w.mistakes...)
}

// sectionFile is the file that an entry of layers names; what is no proper name the
// schema reports.
func sectionFile(entry *node) (string, bool) {
	n := entry.get("section")
	if n == nil || n.kind != scalarNode || n.scalar != stringScalar {
		return "", false
	}
	name := strings.TrimSpace(n.text)
	return name, name != "" && readable(name, "file") == nil
}

// section returns an entry's layers; nil where there are mistakes, which are added to w.
func (e *Experiment) section(w *walker, entry *node, name, path string) []*node {
	before := len(w.mistakes)
	b, err := e.file(name, sectionNeeds)
	at := &node{file: e.beside(name)}
	var wrong *lineError
	switch {
	case errors.As(err, &wrong): // it could be read and is no text
		at.line = wrong.line
		w.add(at, "", wrong.what)
	case err != nil:
		w.add(entry.get("section"), path+".section", err.Error())
	default:
		r := sectionReader{w: w, file: at.file}
		r.read(b)
		if len(w.mistakes) == before {
			r.join()
		}
		if len(w.mistakes) == before {
			return r.layers(entry, name)
		}
	}
	return nil
}

// beside is the path of a file that the experiment names.
func (e *Experiment) beside(name string) string {
	if filepath.IsAbs(name) {
		return name
	}
	return filepath.Join(filepath.Dir(e.Name), name)
}

// weigh turns the pressure differences of measured sections into thicknesses, with the
// experiment's own gravity. A thickness that was edited stays.
func weigh(root *node) {
	n := root.get("gravity")
	if n == nil || n.kind != scalarNode {
		return
	}
	g, err := parseQuantity(n, dimensions["acceleration"], 0)
	if err != nil || !(g > 0) {
		return
	}
	for _, l := range rocks(root) {
		if l.rows == nil || l.rows.head == 0 {
			continue
		}
		if t := l.get("thickness"); t != nil && t.file != "" {
			t.text = siText(l.rows.head/g, dimensions["length"])
		}
	}
}

// Scatter is how the rows of a measured section spread about their layer's number.
type Scatter struct {
	Key  string  // for example layers.gabbro.density; of mineral modes each share, which cannot be drawn alone
	Mean float64 // SI; the layer's number
	SD   float64 // SI; thickness-weighted, √(Σ h (x − m)²/Σ h), m the arithmetic mean; 0 for one row
	N    int     // rows
	// RowError is one standard deviation of a row's own measurement, SI: √(Σ h σ²/Σ h) over
	// the rows that give one; 0 where none does. It is part of SD already, as rows differ by
	// their errors too.
	RowError float64
	Log      bool // Mean is the geometric mean, SD that of the natural logarithm
}

// Scatter lists how the rows of measured sections spread, in the order of the layers. A
// number that was edited has none any more.
func (e *Experiment) Scatter() []Scatter {
	var out []Scatter
	for i, l := range rocks(e.tree) {
		if l.rows == nil {
			continue
		}
		for _, s := range l.rows.scatter {
			n := l
			for _, key := range strings.Split(s.Key, ".") {
				n = n.get(key)
			}
			if n == nil || n.file == "" {
				continue
			}
			s.Key = entryKey(i, l) + "." + s.Key
			out = append(out, s)
		}
	}
	return out
}

// sectionSources lists the files of measured sections with their SHA-256 and what layers
// came of them, and the scatter of their rows.
func (e *Experiment) sectionSources() (sections, scatter []any) {
	sections, scatter = []any{}, []any{}
	var names []string
	layers := map[string][]any{}
	for _, l := range rocks(e.tree) {
		m := l.rows
		if m == nil {
			continue
		}
		if !slices.Contains(names, m.file) {
			names = append(names, m.file)
		}
		var name any
		if n := l.get("name"); n != nil {
			name = n.text
		}
		layers[m.file] = append(layers[m.file], map[string]any{"name": name, "lines": slices.Clone(m.lines),
			"measured_temperature_K": m.warmth, "measured_pressure_Pa": m.pressure})
	}
	for _, name := range names {
		sum := sha256.Sum256(e.files[name])
		sections = append(sections, map[string]any{"name": name, "sha256": hex.EncodeToString(sum[:]), "layers": layers[name]})
	}
	for _, s := range e.Scatter() {
		var rowError any
		if s.RowError != 0 {
			rowError = s.RowError
		}
		scatter = append(scatter, map[string]any{"key": s.Key, "mean_SI": s.Mean, "sd_SI": s.SD, "rows": s.N, "row_error_SI": rowError, "of_logarithm": s.Log})
	}
	return sections, scatter
}
