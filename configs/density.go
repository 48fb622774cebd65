package configs

import (
	"bytes"
	"crypto/sha256"
	"encoding/csv"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"

	"keelfall/column"
)

// density is the density as column takes it; nil where there is none, or where it has
// mistakes, which are added to w.
func (e *Experiment) density(w *walker, d *density) column.Density {
	switch {
	case d == nil:
		return nil
	case d.Linear != nil:
		return column.Linear{Top: d.Linear.Top.SI, Bottom: d.Linear.Bottom.SI}
	case d.State != nil:
		s := d.State
		return column.EquationOfState{Reference: s.Reference.SI, Expansivity: s.Expansivity.SI, Compressibility: s.Compressibility.SI, ReferenceTemperature: s.At.SI}
	case d.Modes != nil:
		s := &d.Modes.Modes
		modes := make([]column.Mode, len(s.Names))
		for i := range modes {
			modes[i] = column.Mode{Mineral: s.Names[i], Share: s.Values[i]}
		}
		m, err := column.NewModes(modes, d.Modes.By.Value == "weight")
		if err != nil { // what densityModes.check missed
			w.add(s.n, d.Modes.path+".modes", err.Error())
			return nil
		}
		return m
	case d.Table != nil:
		t, err := e.densityFile(d.Table.Table.Value)
		if err != nil {
			w.add(d.Table.Table.n, d.Table.path+".table", err.Error())
			return nil
		}
		return t
	case d.Reaction != nil:
		return e.reaction(w, d.Reaction)
	}
	return column.Uniform(d.Value.SI)
}

// densityColumns are what a table of densities holds: the word before the unit in the
// column's name.
var densityColumns = []string{"temperature", "pressure", "density"}

// densityFile reads a CSV file with the columns temperature_degC or temperature_K,
// pressure_GPa (or another unit) and density_kg_m3; # begins a comment line.
func (e *Experiment) densityFile(name string) (*column.Table, error) {
	const needs = "a CSV file with the columns temperature_degC, pressure_GPa and density_kg_m3"
	b, err := e.file(name, needs)
	if err != nil {
		if !strings.Contains(err.Error(), name) { // one that could be read and is no text
			err = fmt.Errorf("%s: %w", name, err)
		}
		return nil, err
	}
	r := csv.NewReader(bytes.NewReader(b))
	r.Comment, r.TrimLeadingSpace = '#', true
	head, err := r.Read()
	if err != nil {
		return nil, fmt.Errorf("%s: has no rows; needs %s", name, needs)
	}
	headLine, _ := r.FieldPos(0)
	at, units := [3]int{-1, -1, -1}, [3]string{}
	for i, h := range head {
		key, unit, _ := strings.Cut(strings.TrimSpace(h), "_")
		known := false
		for k, c := range densityColumns {
			if key == c && at[k] < 0 {
				at[k], units[k], known = i, strings.Replace(unit, "kg_m3", "kg/m3", 1), true
			}
		}
		if !known {
			return nil, fmt.Errorf("%s:%d: column %s is unknown or stands twice; needs %s", name, headLine, shorten(h), needs)
		}
	}
	if at[0] < 0 || at[1] < 0 || at[2] < 0 {
		return nil, fmt.Errorf("%s:%d: has the columns %s; needs %s", name, headLine, shorten(strings.Join(head, ", ")), needs)
	}
	var rows []column.TableRow
	var lines []int
	for {
		record, err := r.Read()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			return nil, fmt.Errorf("%s: %w", name, err)
		}
		line, _ := r.FieldPos(0)
		var x [3]float64
		for k, c := range densityColumns {
			if x[k], err = cell(record[at[k]], units[k], dimensions[c]); err != nil {
				return nil, fmt.Errorf("%s:%d: %s: %w", name, line, c, err)
			}
		}
		rows, lines = append(rows, column.TableRow{T: x[0], P: x[1], Density: x[2]}), append(lines, line)
	}
	t, err := column.NewTable(rows)
	var wrong *column.TableError
	switch {
	case errors.As(err, &wrong) && wrong.Row >= 0:
		return nil, fmt.Errorf("%s:%d: %w", name, lines[wrong.Row], err)
	case err != nil:
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	for k, axis := range []func(column.TableRow) float64{func(r column.TableRow) float64 { return r.T }, func(r column.TableRow) float64 { return r.P }} {
		if i := turns(rows, axis); i >= 0 {
			return nil, fmt.Errorf("%s:%d: %s is out of order; needs a grid whose temperatures, and whose pressures, only rise or only fall on their way down the file", name, lines[i], densityColumns[k])
		}
	}
	return t, nil
}

// turns returns the first row whose value of the axis is new and lies on the wrong side
// of those before it; -1 where they rise, or fall, all the way.
func turns(rows []column.TableRow, axis func(column.TableRow) float64) int {
	var met []float64
	for i, r := range rows {
		x, n := axis(r), len(met)
		switch {
		case slices.Contains(met, x):
			continue
		case n >= 2 && (x > met[n-1]) != (met[1] > met[0]):
			return i
		}
		met = append(met, x)
	}
	return -1
}

// densitySources lists the minerals in use with how their numbers are known, each
// once, and the tables of densities with their SHA-256, in the order of the layers.
func (e *Experiment) densitySources() (minerals, tables []any) {
	minerals, tables = []any{}, []any{}
	seen := map[string]bool{}
	var add func(d *density)
	add = func(d *density) {
		switch {
		case d == nil:
		case d.Reaction != nil:
			add(d.Reaction.Protolith)
			add(d.Reaction.Product)
		case d.Modes != nil:
			for _, p := range e.density(&walker{}, d).(*column.Modes).Parts() {
				if m := p.Mineral; !seen[m.Name] {
					seen[m.Name] = true
					minerals = append(minerals, mineral(m))
				}
			}
		case d.Table != nil:
			name := d.Table.Table.Value
			if b, ok := e.files[name]; ok && !seen["table "+name] {
				seen["table "+name] = true
				sum := sha256.Sum256(b)
				tables = append(tables, map[string]any{"name": name, "sha256": hex.EncodeToString(sum[:])})
			}
		}
	}
	for _, r := range e.rocks() {
		add(r.Density)
	}
	return minerals, tables
}

// rocks are those of the layers, the base and the events, in this order.
func (e *Experiment) rocks() (out []*rock) {
	for i := range e.data.Layers {
		if l := e.data.Layers[i].Layer; l != nil {
			out = append(out, &l.rock)
		}
	}
	out = append(out, &e.data.Base.rock)
	for i := range e.data.Events {
		if r := e.data.Events[i].rock(); r != nil {
			out = append(out, r)
		}
	}
	return out
}

func mineral(m column.Mineral) map[string]any {
	var seenVolume any
	if m.SeenVolume > 0 {
		seenVolume = m.SeenVolume
	}
	law := "Murnaghan"
	if m.BirchMurnaghan {
		law = "third-order Birch-Murnaghan"
	}
	return map[string]any{
		"name": m.Name, "symbol": m.Symbol, "formula": m.Formula, "compression": law,
		"molar_mass_kg_mol": m.MolarMass, "molar_mass_status": m.Status.MolarMass,
		"volume_m3_mol": m.V0, "volume_status": m.Status.V0,
		"a0_per_K": m.A0, "a0_status": m.Status.A0,
		"bulk_modulus_Pa": m.K0, "bulk_modulus_status": m.Status.K0,
		"bulk_modulus_derivative": m.BulkModulusDerivative, "bulk_modulus_derivative_status": m.Status.BulkModulusDerivative,
		"bulk_modulus_slope_per_K": m.BulkModulusSlope, "bulk_modulus_slope_status": m.Status.BulkModulusSlope,
		"seen_volume_m3_mol": seenVolume, "seen_volume_source": m.SeenVolumeSource, "seen_bulk_modulus_GPa": m.SeenBulkModulus,
		"source": m.Source, "notes": m.Notes,
	}
}
