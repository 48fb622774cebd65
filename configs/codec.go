package configs

import (
	"errors"
	"reflect"

	"github.com/spf13/viper"
)

// ExperimentCodecs returns viper's decoders for YAML, JSON and TOML, each of them this package's
// reader: positions, unknown and repeated keys, units and ranges are checked before
// viper sees a value. Files come out as maps of their keys; a quantity stays the text
// it is, because a unit is part of it. A file with mistakes gives Mistakes.
func ExperimentCodecs() viper.DecoderRegistry { return codecs(schema) }

func codecs(s *spec) viper.DecoderRegistry {
	r := viper.NewCodecRegistry()
	for _, format := range []string{"yaml", "yml", "json", "toml"} {
		_ = r.RegisterCodec(format, codec{format, s}) // never fails
	}
	return r
}

// codec reads one format under one schema. Encoding is not offered: a written file
// would have lost its comments.
type codec struct {
	format string
	schema *spec
}

// Decode fills v with the keys of the file b.
func (c codec) Decode(b []byte, v map[string]any) error {
	name := "settings." + c.format
	if c.schema == schema {
		name = "experiment." + c.format
	}
	root, err := parse(name, b)
	if err != nil {
		return unreadable(name, err)
	}
	if c.schema == schema {
		fill(root)
	}
	w := decode(name, root, c.schema, reflect.New(c.schema.typ).Interface())
	if len(w.mistakes) > 0 {
		return w.mistakes.sorted()
	}
	m, _ := root.plain().(map[string]any)
	for key, value := range m {
		v[key] = value
	}
	return nil
}

// Encode refuses.
func (c codec) Encode(map[string]any) ([]byte, error) {
	return nil, errors.New("configs: experiments are read, not written")
}
