package configs

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"strconv"
	"strings"

	"keelfall/column"
)

// points returns the given geotherm, or nil where it is computed or fitted.
func (e *Experiment) points(w *walker, depth float64) []column.Point {
	g := e.data.Geotherm
	b := e.data.Base
	if g == nil || g.Fit != nil {
		return nil
	}
	at := e.filled.get("geotherm")
	if g.Word.Value == "steady" {
		if !b.Temperature.given() && !b.HeatFlow.given() {
			w.add(at, "geotherm", "steady needs base.temperature or base.heat-flow, for example base: {temperature: 1200 degC}")
		}
		return nil
	}
	for _, q := range []quantity{b.Temperature, b.HeatFlow} {
		if q.given() {
			w.add(q.n, "base", q.n.show()+" has no use beside a given geotherm in this version; leave one of them out")
		}
	}
	var points []column.Point
	for _, p := range g.Points {
		points = append(points, column.Point{Depth: p.Depth.SI, Temperature: p.Temperature.SI})
	}
	if g.Word.given() {
		var err error
		if points, err = e.geothermFile(g.Word.Value); err != nil {
			w.add(at, "geotherm", err.Error())
			return nil
		}
	}
	const tolerance = 1e-9 // round-off in a sum of thicknesses
	for i := 1; i < len(points); i++ {
		if points[i].Depth <= points[i-1].Depth {
			w.addf(at, fmt.Sprintf("geotherm[%d]", i), "depth %g km is not below the one before it, %g km; depths increase", points[i].Depth/1e3, points[i-1].Depth/1e3)
			return nil
		}
	}
	switch last := points[len(points)-1].Depth; {
	case points[0].Depth > tolerance*depth:
		w.addf(at, "geotherm", "begins at %g km; needs a point at depth 0", points[0].Depth/1e3)
	case last < depth*(1-tolerance):
		w.addf(at, "geotherm", "ends at %g km; needs to cover the column, %g km", last/1e3, depth/1e3)
	}
	return points
}

// geothermFile reads a CSV file with the columns depth_km or depth_m and
// temperature_degC or temperature_K; # begins a comment line.
func (e *Experiment) geothermFile(name string) ([]column.Point, error) {
	const needs = "a CSV file with the columns depth_km and temperature_degC (or depth_m, temperature_K)"
	b, err := e.file(name, needs)
	if err != nil {
		return nil, fmt.Errorf("%w; needs steady, or %s", err, needs)
	}
	r := csv.NewReader(bytes.NewReader(b))
	r.Comment, r.TrimLeadingSpace = '#', true
	head, err := r.Read()
	if err != nil {
		return nil, fmt.Errorf("%s: has no rows; needs %s", name, needs)
	}
	depth, temperature := -1, -1
	var depthUnit, temperatureUnit string
	for i, h := range head {
		key, unit, _ := strings.Cut(strings.TrimSpace(h), "_")
		switch key {
		case "depth":
			depth, depthUnit = i, unit
		case "temperature":
			temperature, temperatureUnit = i, unit
		}
	}
	if depth < 0 || temperature < 0 {
		return nil, fmt.Errorf("%s: has the columns %s; needs %s", name, shorten(strings.Join(head, ", ")), needs)
	}
	var points []column.Point
	for {
		row, err := r.Read()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			return nil, fmt.Errorf("%s: %w", name, err)
		}
		line, _ := r.FieldPos(0)
		z, err := cell(row[depth], depthUnit, dimensions["length"])
		if err != nil {
			return nil, fmt.Errorf("%s:%d: depth: %w", name, line, err)
		}
		t, err := cell(row[temperature], temperatureUnit, dimensions["temperature"])
		if err == nil && t < 0 {
			err = fmt.Errorf("%s %s is below absolute zero", shorten(row[temperature]), temperatureUnit)
		}
		if err != nil {
			return nil, fmt.Errorf("%s:%d: temperature: %w", name, line, err)
		}
		if points = append(points, column.Point{Depth: z, Temperature: t}); len(points) > maxLayers {
			return nil, fmt.Errorf("%s: has more than %d rows", name, maxLayers)
		}
	}
	if len(points) < 2 {
		return nil, fmt.Errorf("%s: has %d rows; needs at least two", name, len(points))
	}
	return points, nil
}

// cell reads one number of a table whose unit stands in the column's name.
func cell(s, unit string, d *dimension) (float64, error) {
	s = strings.TrimSpace(s)
	if x, err := strconv.ParseFloat(s, 64); err != nil || !finite(x) {
		return 0, fmt.Errorf("%s is not a number", shorten(s))
	}
	return parseQuantity(&node{text: s + " " + unit}, d, 0)
}
