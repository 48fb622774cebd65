package configs

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"fmt"

	"keelfall/rheology"
)

// Catalogue is a user's own file of creep laws.
type Catalogue struct {
	Name   string // of the file, as given
	SHA256 string // of the file's bytes, hexadecimal
	Laws   []rheology.Law
}

// ReadCatalogue reads a CSV file of creep laws in the columns of the built-in one. A
// law that has the name of a built-in one is an error that names file and law: a name
// means one thing in every experiment.
func ReadCatalogue(path string) (Catalogue, error) {
	const needs = "a CSV file of creep laws"
	b, err := readFile(path, needs)
	if err != nil {
		return Catalogue{}, err
	}
	sum := sha256.Sum256(b)
	c := Catalogue{Name: path, SHA256: hex.EncodeToString(sum[:])}
	if b, err = asText(b, needs); err != nil {
		return Catalogue{}, unreadable(path, err)
	}
	if c.Laws, err = rheology.ReadLaws(bytes.NewReader(b)); err != nil {
		return Catalogue{}, fmt.Errorf("%s: %w", path, err)
	}
	_, err = Reader{Catalogues: []Catalogue{c}}.laws()
	return c, err
}

// laws returns all laws of the reader, or an error where two have one name.
func (rd Reader) laws() ([]rheology.Law, error) {
	const builtIn = "" // in place of a file
	var all []rheology.Law
	from := map[string]string{} // name to the file that has it
	for _, l := range rheology.Laws() {
		from[rheology.NameKey(l.Name)] = builtIn
	}
	add := func(file string, laws []rheology.Law) error {
		for _, l := range laws {
			if err := readable(l.Name, "name"); err != nil {
				return fmt.Errorf("%s: %w", file, err)
			}
			key := rheology.NameKey(l.Name)
			switch other, taken := from[key]; {
			case taken && other == builtIn:
				return fmt.Errorf("%s: %s is the name of a built-in creep law; give yours another", file, shorten(l.Name))
			case taken:
				return fmt.Errorf("%s: %s is the name of a creep law of %s too; names are unique", file, shorten(l.Name), other)
			}
			all, from[key] = append(all, l), file
		}
		return nil
	}
	for _, c := range rd.Catalogues {
		if err := add(c.Name, c.Laws); err != nil {
			return nil, err
		}
	}
	if err := add("further creep laws", rd.Laws); err != nil {
		return nil, err
	}
	return all, nil
}
