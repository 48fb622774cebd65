package main

import (
	"bytes"
	"fmt"
	"path/filepath"
	"strings"

	"keelfall/cmd/internal/report"
	"keelfall/plots"
)

// output is what a folder is filled with.
type output struct {
	files   map[string][]byte
	order   []string
	figures []plots.Figure
}

func (w *output) add(name string, b []byte) {
	if w.files == nil {
		w.files = map[string][]byte{}
	}
	w.files[name] = b
	w.order = append(w.order, name)
}

func (w *output) json(name string, v any) error {
	b, err := report.Encode(v)
	if err != nil {
		return err
	}
	w.add(name, b)
	return nil
}

// write fills the folder and moves it to its place, and says what is in it.
func (o *options) write(place string, f *report.Folder, w *output) error {
	if b := o.captions(w.figures); b != nil {
		w.add("captions.md", b)
	}
	for _, name := range w.order {
		if err := f.Write(name, w.files[name]); err != nil {
			return err
		}
	}
	for _, fig := range w.figures {
		for _, format := range o.Settings.Figures {
			var b bytes.Buffer
			if err := plots.Encode(&b, fig, format); err != nil {
				return err
			}
			if err := f.Write(fig.Name+"."+format, b.Bytes()); err != nil {
				return err
			}
		}
	}
	if err := f.Finish(); err != nil {
		return err
	}
	fmt.Fprintf(o.Err, "%s: %s\n", place, o.contents(w))
	return nil
}

// captions returns the figures' captions, nil where no figure is written.
func (o *options) captions(figures []plots.Figure) []byte {
	if len(figures) == 0 || len(o.Settings.Figures) == 0 {
		return nil
	}
	var b bytes.Buffer
	b.WriteString("# Captions\n")
	for _, f := range figures {
		fmt.Fprintf(&b, "\n## %s\n\n%s\n", f.Name, f.Caption)
	}
	return b.Bytes()
}

// contents says what a folder holds.
func (o *options) contents(w *output) string {
	tables := 0
	var others []string
	for _, n := range w.order {
		if filepath.Ext(n) == ".csv" {
			tables++
		} else {
			others = append(others, n)
		}
	}
	figures := "no figures"
	if len(w.figures) > 0 && len(o.Settings.Figures) > 0 {
		figures = fmt.Sprintf("%s (%s)", report.Count(len(w.figures), "figure"), strings.Join(o.Settings.Figures, ", "))
	}
	return strings.Join(append([]string{figures, report.Count(tables, "table")}, others...), ", ")
}
