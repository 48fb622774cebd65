package configs

import (
	"bytes"
	"encoding/csv"
	"errors"
	"io"
	"slices"
	"strings"
)

// csvColumn is a column that a CSV file may have: the word before the unit in its header,
// and the dimension it measures; "" for a text.
type csvColumn struct{ word, dim string }

// csvReader reads the header and the rows of a CSV file, # beginning a comment line;
// mistakes go to w with the file's own lines.
type csvReader struct {
	w     *walker
	file  string      // path, for messages
	needs string      // what the file has to be
	rows  string      // what its rows are
	known []csvColumn // where a word begins with another one, the longer one first
	words []string    // of the file's columns
	units []string
	heads []string
}

func (r *csvReader) add(line int, path, format string, args ...any) {
	r.w.addf(&node{line: line, file: r.file}, path, format, args...)
}

// read calls row for every row but empty ones, until it says false. enough is told whether
// a word has a column, and says whether the file's will do.
func (r *csvReader) read(b []byte, enough func(has func(word string) bool) bool, row func(record []string, line int) bool) {
	c := csv.NewReader(bytes.NewReader(b))
	c.Comment, c.TrimLeadingSpace, c.FieldsPerRecord = '#', true, -1
	line, rows := 0, 0
	for {
		record, err := c.Read()
		switch {
		case errors.Is(err, io.EOF):
			if rows == 0 {
				r.add(line, "", "has no %s; needs %s", r.rows, r.needs)
			}
			return
		case err != nil:
			var p *csv.ParseError
			if errors.As(err, &p) {
				line, err = p.Line, p.Err
			}
			r.add(line, "", "is no CSV: %s", err)
			return
		}
		line, _ = c.FieldPos(0)
		switch {
		case r.words == nil:
			if !r.columns(record, line, enough) {
				return
			}
			continue
		case strings.TrimSpace(strings.Join(record, "")) == "": // as spreadsheets leave them at the end
			continue
		case len(record) != len(r.words):
			r.add(line, "", "has %d cells; the header has %d columns", len(record), len(r.words))
		case rows == maxLayers:
			r.add(line, "", "is one of more than %d rows", maxLayers)
			return
		case !row(record, line):
			return
		}
		rows++
	}
}

// columns reads the header.
func (r *csvReader) columns(head []string, line int, enough func(func(string) bool) bool) bool {
	if len(head) == 1 && strings.ContainsAny(head[0], ";\t") {
		r.add(line, "", "has columns that are not separated by commas; save the file with commas between cells and points in numbers")
		return false
	}
	good := true
	for _, h := range head {
		h = strings.TrimSpace(h)
		word, unit := "", ""
		for _, c := range r.known {
			rest, ok := strings.CutPrefix(h, c.word)
			if word == "" && ok && (rest == "" || c.dim != "" && rest[0] == '_') {
				word, unit = c.word, strings.TrimPrefix(rest, "_")
			}
		}
		switch {
		case word == "":
			r.add(line, shorten(h), "is a column not known here; needs %s", r.needs)
			good = false
		case slices.Contains(r.words, word):
			r.add(line, shorten(h), "stands twice; a column may stand once")
			good = false
		}
		r.words, r.units, r.heads = append(r.words, word), append(r.units, unit), append(r.heads, h)
	}
	if good && !enough(func(word string) bool { return slices.Contains(r.words, word) }) {
		r.add(line, "", "has the columns %s; needs %s", shorten(strings.Join(head, ", ")), r.needs)
		return false
	}
	return good
}

// dimension of the file's column i; nil of a text.
func (r *csvReader) dimension(i int) *dimension {
	for _, c := range r.known {
		if c.word == r.words[i] {
			return dimensions[c.dim]
		}
	}
	return nil
}

// open returns the bytes of a file that the experiment names at the node n; false where it
// cannot be read, which is a mistake there, or is no text.
func (r *csvReader) open(e *Experiment, name string, n *node, path string) ([]byte, bool) {
	b, err := e.file(name, r.needs)
	var wrong *lineError
	switch {
	case errors.As(err, &wrong): // it could be read and is no text
		r.add(wrong.line, "", "%s", wrong.what)
	case err != nil:
		r.w.addf(n, path, "%s; needs %s", err, r.needs)
	}
	return b, err == nil
}
