package configs

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"path/filepath"
	"reflect"
	"slices"

	"keelfall/rheology"
	"keelfall/solver/heat"
	"keelfall/solver/race"
)

// Experiment is an experiment file that was read, completed with its defaults, and
// found free of mistakes. It does not change; Set returns another one.
type Experiment struct {
	Name    string   // of the file, as given
	SHA256  string   // of the file's bytes as they were read, hexadecimal
	Edits   []string // --set texts that were applied, in order
	Remarks []Remark // source and notes of every block that has them, in the file's order

	reader Reader
	laws   []rheology.Law    // all that the reader adds to the built-in ones
	tree   *node             // as written, edits applied
	filled *node             // with defaults
	files  map[string][]byte // other files the experiment names, by the name it uses
	walk   *walker
	data   experiment
	taken  []race.Default
	unread Mistakes  // of measured sections
	fit    *heat.Fit // of the geotherm to samples; nil where none is asked
	stray  Mistakes  // keys that stood in the entry of a section and belong to its rows
}

// Reader reads experiments. The zero value knows the built-in creep laws; Catalogues
// are the user's own, and Laws are further laws that come from no file. A law whose
// name another one has, built-in or not, is an error of Open and Read.
type Reader struct {
	Laws       []rheology.Law
	Catalogues []Catalogue
}

// Open reads the experiment file at path and applies edits, each path=value as
// after --set. A file that cannot be read is an error that wraps its cause; one that
// can be read and not accepted gives Mistakes.
func Open(path string, edits ...string) (*Experiment, error) { return Reader{}.Open(path, edits...) }

// Read reads an experiment from r; name says its format, by its extension, stands in
// messages, and is what the files it names are relative to. Errors as for Open.
func Read(name string, r io.Reader, edits ...string) (*Experiment, error) {
	return Reader{}.Read(name, r, edits...)
}

// Open is Open with the reader's catalogues.
func (rd Reader) Open(path string, edits ...string) (*Experiment, error) {
	b, err := readFile(path, formats)
	if err != nil {
		return nil, err
	}
	return rd.read(path, b, edits)
}

// Read is Read with the reader's catalogues.
func (rd Reader) Read(name string, r io.Reader, edits ...string) (*Experiment, error) {
	b, err := readAll(r)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	return rd.read(name, b, edits)
}

func (rd Reader) read(name string, b []byte, edits []string) (*Experiment, error) {
	laws, err := rd.laws()
	if err != nil {
		return nil, err
	}
	tree, err := parse(name, b)
	if err != nil {
		return nil, unreadable(name, err)
	}
	sum := sha256.Sum256(b)
	e := &Experiment{Name: name, SHA256: hex.EncodeToString(sum[:]), reader: rd, laws: laws, tree: tree, files: map[string][]byte{}}
	return e.edited(edits)
}

// unreadable turns the one mistake that kept a tree from being built into Mistakes.
func unreadable(name string, err error) error {
	var e *lineError
	if errors.As(err, &e) {
		return Mistakes{{File: name, Line: e.line, Path: e.path, What: e.what}}
	}
	return Mistakes{{File: name, What: err.Error()}}
}

// Set returns the experiment with further edits applied, each path=value as after
// --set. A mistake names the edit that made it.
func (e *Experiment) Set(edits ...string) (*Experiment, error) {
	c := *e
	c.tree = e.tree.clone()
	return c.edited(edits)
}

func (e *Experiment) edited(edits []string) (*Experiment, error) {
	var wrong Mistakes
	e.sections() // edits name the layers that rows make, or put another entry in the place of a section with mistakes
	for _, s := range edits {
		if err := edit(e.tree, s); err != nil {
			wrong = append(wrong, Mistake{File: e.Name, Set: s, What: err.Error()})
		}
	}
	if wrong != nil {
		return nil, append(e.unread, wrong...) // a layer may be unknown because its section could not be read
	}
	e.Edits = append(slices.Clone(e.Edits), edits...)
	e.sections()
	if _, m := e.resolve(); len(m) > 0 {
		return nil, m
	}
	return e, nil
}

// schema is compiled once; it is only read afterwards.
var schema = compile(reflect.TypeFor[experiment]())

// resolve fills, decodes and checks the tree, and builds the problem where all is well.
func (e *Experiment) resolve() (p race.Problem, wrong Mistakes) {
	e.filled = e.tree.clone()
	e.taken = fill(e.filled)
	weigh(e.filled)
	e.data, e.fit = experiment{}, nil
	e.walk = decode(e.Name, e.filled, schema, &e.data)
	e.Remarks = e.walk.blocks
	e.walk.mistakes = append(e.walk.mistakes, e.unread...)
	if n := e.filled.get("layers"); n != nil {
		e.crossCheck(e.walk)
	}
	if len(e.walk.mistakes) == 0 {
		p = e.build(e.walk)
	} else {
		e.lawNames(e.walk)
	}
	if len(e.walk.mistakes) == 0 {
		return p, e.walk.hidden.sorted()
	}
	return race.Problem{}, e.walk.mistakes.sorted()
}

// file reads a file the experiment names, once.
func (e *Experiment) file(name, needs string) ([]byte, error) {
	if b, ok := e.files[name]; ok {
		return b, nil
	}
	path := name
	if !filepath.IsAbs(path) {
		path = filepath.Join(filepath.Dir(e.Name), path)
	}
	b, err := readFile(path, needs)
	if err == nil {
		b, err = asText(b, needs)
	}
	if err == nil {
		e.files[name] = b
	}
	return b, err
}

// Problem returns the experiment in SI, as the solvers take it. Its slices are the
// caller's to change.
func (e *Experiment) Problem() (race.Problem, error) {
	w := *e.walk
	w.mistakes = nil
	p := e.build(&w)
	if len(w.mistakes) > 0 {
		return race.Problem{}, w.mistakes.sorted()
	}
	return p, nil
}

// lawNames looks up the creep laws of a file that has other mistakes, so that a wrong
// name is reported with them.
func (e *Experiment) lawNames(w *walker) {
	for i := range e.data.Layers {
		if l := e.data.Layers[i].Layer; l != nil && l.Creep != nil {
			l.Creep.laws(w, l.path+".creep", e.laws)
		}
	}
	for i := range e.data.Events {
		if r := e.data.Events[i].rock(); r != nil && r.Creep != nil {
			r.Creep.laws(w, r.path+".creep", e.laws)
		}
	}
	if e.data.Excision == nil {
		return
	}
	for i := range e.data.Excision.Zones {
		if z := &e.data.Excision.Zones[i]; z.Creep != nil {
			z.Creep.laws(w, z.path+".creep", e.laws)
		}
	}
}
