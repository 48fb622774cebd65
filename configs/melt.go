package configs

import (
	"cmp"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"strings"

	"keelfall/column"
)

func (m *melt) check(w *walker) {
	switch {
	case m.Fraction.given() && (m.Solidus != nil || m.Liquidus != nil):
		w.addf(m.at, m.path, "has a fraction and a solidus or liquidus; needs the one or the others")
	case !m.Fraction.given() && (m.Solidus == nil || m.Liquidus == nil):
		w.addf(m.at, m.path, "needs a fraction, or a solidus and a liquidus")
	case m.Fraction.given() && m.LatentHeat.given():
		w.addf(m.LatentHeat.n, m.path+".latent-heat", "belongs to a solidus and a liquidus; a given fraction does not change")
	case !m.Fraction.given() && m.Solidus.Table == nil && m.Liquidus.Table == nil:
		m.ordered(w, &column.Melt{Solidus: m.Solidus.line(), Liquidus: m.Liquidus.line()}, nil, nil)
	}
}

// leastMelting is the least melting interval in K: below it densities jump within what
// temperatures are good to.
const leastMelting = 0.1

// melt is the melt as column takes it; mistakes in its curves are added to w.
func (e *Experiment) melt(w *walker, m *melt) *column.Melt {
	out := &column.Melt{Fraction: m.Fraction.SI, LatentHeat: m.LatentHeat.SI, Density: m.Density.SI, Weakening: m.Weakening.SI}
	if m.Solidus == nil {
		return out
	}
	solidus, rows := e.curve(w, m.Solidus)
	liquidus, otherRows := e.curve(w, m.Liquidus)
	if solidus == nil || liquidus == nil {
		return out
	}
	out.Solidus, out.Liquidus = solidus, liquidus
	if m.Solidus.Table != nil || m.Liquidus.Table != nil { // of two lines check has told it
		m.ordered(w, out, rows, otherRows)
	}
	return out
}

// ordered reports where the solidus is not below the liquidus: at the first pressure, in
// the row that has it. rows are those of the tables by their pressure.
func (m *melt) ordered(w *walker, c *column.Melt, rows, otherRows map[float64]*node) {
	all, err := c.Common()
	if err != nil {
		w.add(m.at.get("solidus"), m.path+".solidus", strings.TrimPrefix(err.Error(), "melt: "))
		return
	}
	for _, P := range all {
		s, l := c.Solidus.At(P), c.Liquidus.At(P)
		var subject, what string
		switch {
		case s >= l:
			subject, what = "a solidus of ", fmt.Sprintf("%.6g degC %s is not below the liquidus, %.6g degC", s-celsiusZero, pressed(P), l-celsiusZero)
		case l-s < leastMelting:
			subject, what = "the solidus ", fmt.Sprintf("is within %g K of the liquidus %s; needs to lie further below it", leastMelting, pressed(P))
		default:
			continue
		}
		at, path := m.at.get("solidus"), m.path+".solidus"
		if n := cmp.Or(rows[P], otherRows[P]); n != nil {
			at, path, what = n, "temperature", subject+what
		}
		w.add(at, path, what)
		return
	}
}

func pressed(P float64) string {
	if P == 0 {
		return "at no pressure"
	}
	return fmt.Sprintf("at %.6g GPa", P/1e9)
}

// line is a curve that is no table.
func (c *meltCurve) line() *column.Curve {
	if c.Line != nil {
		return &column.Curve{Surface: c.Line.Surface.SI, Slope: c.Line.Slope.SI}
	}
	return &column.Curve{Surface: c.Value.SI}
}

// curve is a solidus or liquidus as column takes it, and the rows of a table by their
// pressure in Pa; nil where it has mistakes.
func (e *Experiment) curve(w *walker, c *meltCurve) (*column.Curve, map[float64]*node) {
	if c.Table == nil {
		return c.line(), nil
	}
	t, rows := e.curveFile(w, c.Table)
	if t == nil {
		return nil, nil
	}
	return &column.Curve{Table: t}, rows
}

const curveNeeds = "a CSV file with the columns pressure_GPa and temperature_degC, and if you like source and notes"

var curveColumns = []csvColumn{{"pressure", "pressure"}, {"temperature", "temperature"}, {"source", ""}, {"notes", ""}}

// What rows of a solidus or liquidus may hold: the schema's own ranges of the line.
const (
	mostPressure    = 100e9 // Pa
	mostTemperature = 5000  // K
)

// curveFile reads a CSV file with the columns pressure_GPa and temperature_degC, or other
// units.
func (e *Experiment) curveFile(w *walker, f *meltTable) (*column.CurveTable, map[float64]*node) {
	name := f.Table.Value
	r := csvReader{w: w, file: e.beside(name), needs: curveNeeds, rows: "rows", known: curveColumns}
	b, ok := r.open(e, name, f.Table.n, f.path+".table")
	if !ok {
		return nil, nil
	}
	before := len(w.mistakes)
	var rows []column.CurvePoint
	var lines []int
	r.read(b, func(has func(string) bool) bool { return has("pressure") && has("temperature") },
		func(record []string, line int) bool {
			rows, lines = append(rows, r.curvePoint(record, line)), append(lines, line)
			return true
		})
	if len(w.mistakes) > before {
		return nil, nil
	}
	t, err := column.NewCurveTable(name, rows)
	var wrong *column.TableError
	if errors.As(err, &wrong) {
		line := lines[len(lines)-1]
		if wrong.Row >= 0 {
			line = lines[wrong.Row]
		}
		r.add(line, "", "%s", wrong.What)
		return nil, nil
	}
	at := make(map[float64]*node, len(rows))
	for i, row := range rows {
		at[row.P] = &node{line: lines[i], file: r.file}
	}
	return t, at
}

// curvePoint reads one row.
func (r *csvReader) curvePoint(record []string, line int) (p column.CurvePoint) {
	for i, text := range record {
		dim := r.dimension(i)
		if dim == nil {
			if err := readable(text, "prose"); err != nil {
				r.add(line, r.words[i], "%s", err)
			}
			continue
		}
		x, err := cell(text, r.units[i], dim)
		switch {
		case err != nil:
		case r.words[i] == "pressure":
			if p.P = x; !(x >= 0 && x <= mostPressure) {
				err = fmt.Errorf("%s is out of range; needs a pressure of at least 0 and at most %g GPa", shorten(record[i]), mostPressure/1e9)
			}
		default:
			if p.T = x; !(x > 0 && x <= mostTemperature) {
				err = fmt.Errorf("%s is out of range; needs a temperature above absolute zero and at most %g K", shorten(record[i]), float64(mostTemperature))
			}
		}
		if err != nil {
			r.add(line, r.heads[i], "%s", err)
		}
	}
	return p
}

// meltSources lists the tables of solidi and liquidi with their SHA-256, each once, in the
// order of the layers.
func (e *Experiment) meltSources() []any {
	out := []any{}
	seen := map[string]bool{}
	for _, r := range e.rocks() {
		if r.Melt == nil {
			continue
		}
		for _, c := range []*meltCurve{r.Melt.Solidus, r.Melt.Liquidus} {
			if c == nil || c.Table == nil || seen[c.Table.Table.Value] {
				continue
			}
			name := c.Table.Table.Value
			seen[name] = true
			sum := sha256.Sum256(e.files[name])
			out = append(out, map[string]any{"name": name, "sha256": hex.EncodeToString(sum[:])})
		}
	}
	return out
}
