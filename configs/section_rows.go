package configs

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"math"
	"strings"

	"keelfall/column"
)

// sectionReader reads one file of a measured section; mistakes go to w.
type sectionReader struct {
	w           *walker
	file        string // path, for messages
	cols        []*sectionColumn
	top, bottom string // the words that say where rows lie; thickness for both
	rows        []sectionRow
}

// sectionRow is one row: a measured interval of one rock.
type sectionRow struct {
	line   int
	name   string
	texts  map[string]string  // root, source and notes, where given
	values map[string]float64 // SI, by word
	cells  map[string]string  // number and unit as written, by word
	modes  map[string]float64 // volume shares by the mineral's full name
	weight float64            // its thickness in m; or ΔP/ρ in m²/s²
}

func (r *sectionReader) add(line int, path, what string) {
	r.w.add(&node{line: line, file: r.file}, path, what)
}

// read reads header and rows; # begins a comment line.
func (r *sectionReader) read(b []byte) {
	c := csv.NewReader(bytes.NewReader(b))
	c.Comment, c.TrimLeadingSpace, c.FieldsPerRecord = '#', true, -1
	head, err := c.Read()
	switch {
	case errors.Is(err, io.EOF):
		r.add(0, "", "has no rows; needs "+sectionNeeds)
		return
	case err != nil:
		r.broken(err)
		return
	}
	line, _ := c.FieldPos(0)
	before := len(r.w.mistakes)
	if r.columns(head, line); len(r.w.mistakes) > before {
		return // a column not understood would give mistakes in every row
	}
	for {
		record, err := c.Read()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			r.broken(err)
			return
		}
		line, _ := c.FieldPos(0)
		switch {
		case strings.TrimSpace(strings.Join(record, "")) == "": // as spreadsheets leave them at the end
		case len(record) != len(r.cols):
			r.add(line, "", fmt.Sprintf("has %d cells; the header has %d columns", len(record), len(r.cols)))
		case len(r.rows) == maxLayers:
			r.add(line, "", fmt.Sprintf("is one of more than %d rows", maxLayers))
			return
		default:
			r.rows = append(r.rows, r.row(record, line))
		}
	}
	if len(r.rows) == 0 && len(r.w.mistakes) == before {
		r.add(line, "", "has a header and no rows")
	}
}

// broken reports what is no CSV.
func (r *sectionReader) broken(err error) {
	var p *csv.ParseError
	if errors.As(err, &p) {
		r.add(p.Line, "", fmt.Sprintf("is not valid CSV: %v", p.Err))
		return
	}
	r.add(0, "", "is not valid CSV: "+err.Error())
}

// row reads the cells of one row; an empty cell gives nothing.
func (r *sectionReader) row(record []string, line int) sectionRow {
	row := sectionRow{line: line, texts: map[string]string{}, values: map[string]float64{}, cells: map[string]string{}, modes: map[string]float64{}}
	for i, c := range r.cols {
		s := strings.TrimSpace(record[i])
		switch {
		case s == "":
		case c.dim == nil:
			if err := row.text(c.word, s); err != nil {
				r.add(line, c.head, err.Error())
			}
		default:
			x, text, err := c.number(s)
			switch {
			case err != nil:
				r.add(line, c.head, err.Error())
			case c.mineral != "":
				row.modes[c.mineral] = x
			default:
				word := c.word
				if a, ok := sectionAliases[word]; ok {
					word = a
				}
				row.values[word], row.cells[word] = x, text
			}
		}
	}
	if row.name == "" {
		r.add(line, "name", "is missing; every row names the layer it belongs to")
	}
	return row
}

func (row *sectionRow) text(word, s string) error {
	switch word {
	case "name", "layer":
		row.name = s
		return nil
	case "root":
		if s = strings.ToLower(s); s != "true" && s != "false" {
			return fmt.Errorf("%s is neither true nor false; needs true or false", shorten(s))
		}
	}
	row.texts[word] = s
	return readable(s, "prose")
}

// number reads one cell in the column's unit.
func (c *sectionColumn) number(s string) (x float64, text string, err error) {
	if !numberText.MatchString(s) {
		return 0, "", fmt.Errorf("%s is not a number", shorten(s))
	}
	n := &node{text: s}
	if c.unit == "" {
		n.scalar = numberScalar
	} else {
		n.text += " " + c.unit
	}
	if x, err = parseQuantity(n, c.dim, math.NaN()); err == nil {
		err = c.rng.check(x)
	}
	if err != nil {
		return 0, "", fmt.Errorf("%s %w", n.show(), err)
	}
	return x, n.text, nil
}

// join checks how each row hangs together with the one above it, and gives it its weight.
func (r *sectionReader) join() {
	began := map[string]int{} // line where a layer begins
	for i := range r.rows {
		row := &r.rows[i]
		var above *sectionRow
		if i > 0 {
			above = &r.rows[i-1]
		}
		if first, ok := began[row.name]; ok && above.name != row.name {
			r.add(row.line, "name", fmt.Sprintf("%s stands in line %d too, with another layer in between; rows of one layer follow one another, and layers have names of their own", shorten(row.name), first))
		} else if !ok {
			began[row.name] = row.line
		}
		r.modes(row)
		r.weigh(row, above)
	}
}

// modes checks a row's mineral modes and what belongs to its density.
func (r *sectionReader) modes(row *sectionRow) {
	if _, ok := row.values["density_error"]; ok {
		if _, ok := row.values["density"]; !ok {
			r.add(row.line, "density_error", "belongs to a density, and the row has none")
		}
	}
	if len(row.modes) == 0 {
		return
	}
	var sum float64
	for _, c := range r.cols { // in the file's order: the same sum always
		sum += row.modes[c.mineral]
	}
	if _, ok := row.values["density"]; ok {
		r.add(row.line, "", "has a density and mineral modes; only one of them may be given")
	}
	if math.Abs(sum-1) > column.ModesTolerance*(1+1e-9) { // round-off of the sum
		r.add(row.line, "mode", fmt.Sprintf("mineral modes sum to %.4g; need 1 (within %g)", sum, column.ModesTolerance))
	}
}

// weigh sets the row's weight: its thickness, or ΔP/ρ.
func (r *sectionReader) weigh(row, above *sectionRow) {
	for _, word := range []string{r.top, r.bottom} {
		if _, ok := row.values[word]; !ok {
			r.add(row.line, word, "is missing; every row has one")
			return
		}
	}
	if r.top == "thickness" {
		row.weight = row.values["thickness"]
		return
	}
	top, bottom := row.values[r.top], row.values[r.bottom]
	if !(bottom > top) {
		r.add(row.line, r.bottom, fmt.Sprintf("%s is not below the row's top, %s", row.cells[r.bottom], row.cells[r.top]))
		return
	}
	r.touch(row, above)
	if row.weight = bottom - top; r.top == "top" {
		return
	}
	rho, err := row.density()
	if err != nil {
		r.add(row.line, "", err.Error())
		return
	}
	row.weight /= rho
	if !(row.weight > 0) {
		r.add(row.line, r.bottom, fmt.Sprintf("%s below %s is too thin to compute with", row.cells[r.bottom], row.cells[r.top]))
	}
}

// touch checks that a row begins where the one above it ends.
func (r *sectionReader) touch(row, above *sectionRow) {
	top := row.values[r.top]
	if above == nil {
		if r.top == "top" && top != 0 {
			r.add(row.line, r.top, fmt.Sprintf("the first row begins at %s; depths are below the section's own top, so it needs 0", row.cells[r.top]))
		}
		return
	}
	end, ok := above.values[r.bottom]
	if !ok || math.Abs(top-end) <= 1e-9*end { // round-off of units
		return
	}
	what := "leaves a gap below"
	if top < end {
		what = "overlaps with"
	}
	r.add(row.line, r.top, fmt.Sprintf("%s %s the row above, which ends at %s (line %d)", row.cells[r.top], what, above.cells[r.bottom], above.line))
}

// density is that of a row given by pressures, in kg/m³: a number is in situ; modes are
// evaluated at the row's temperature and mean pressure.
func (row *sectionRow) density() (float64, error) {
	const rule = "a difference of pressure becomes a thickness with the row's own density; "
	if x, ok := row.values["density"]; ok {
		return x, nil
	}
	t, warm := row.values["temperature"]
	switch {
	case len(row.modes) == 0:
		return 0, errors.New(rule + "needs a density, or mineral modes and a temperature")
	case !warm:
		return 0, errors.New(rule + "that of mineral modes needs a temperature, for example in a column temperature_degC")
	}
	var modes []column.Mode
	for _, name := range sortedKeys(row.modes) {
		modes = append(modes, column.Mode{Mineral: name, Share: row.modes[name]})
	}
	m, err := column.NewModes(modes, false)
	if err != nil {
		return 0, err
	}
	rho := m.At(t, (row.values["top_pressure"]+row.values["bottom_pressure"])/2, 0)
	if !(rho > 0) || !finite(rho) {
		return 0, fmt.Errorf("its mineral modes have no density at its temperature and pressure (%g kg/m3)", rho)
	}
	return rho, nil
}
