package configs

import (
	"fmt"
	"reflect"
	"strings"
)

// The schema is written as Go structs. A field's tags say what its key may hold:
//
//	key    name in the file, with ",required" where it may not be left out
//	dim    dimension of a quantity; @key or @quantity: that of the sweep key or the
//	       scalar quantity named beside it, with a - behind for its difference
//	range  interval of a quantity or count, bounds with units: (0 m,1000 km]
//	one    the words allowed, separated by |; @quantities, @results: scalar quantities
//	as     name, file, key, law, line or prose: what a text stands for; prose alone
//	       may have several lines
//	doc    meaning, for the JSON Schema; eg: an example in place of the dimension's
//	form   scalar, list or map, in a union: which shape of value the field takes
//
// A record embeds block; a union has a blank field with kind:"union". Another blank field's tags hold the rules
// between keys: required:"a b", exactly:"a b" (one of them), most:"a b" (at most one).

type specKind int

const (
	quantitySpec specKind = iota
	countSpec
	flagSpec
	textSpec
	listSpec
	recordSpec
	unionSpec
	sharesSpec // a map from the user's names to bare numbers
)

// spec is what one value may be, compiled from a type and its tags.
type spec struct {
	kind     specKind
	typ      reflect.Type
	dim      *dimension
	dynamic  string // "@key", "@quantity-", …
	rng      *interval
	words    []string // allowed
	as       string
	eg       string
	item     *spec
	keys     []keySpec // of a record
	forms    []form    // of a union
	required []string
	exactly  [][]string
	most     [][]string
}

type keySpec struct {
	name  string
	doc   string
	index []int // of the field
	spec  *spec
}

type form struct {
	shape nodeKind
	index []int
	spec  *spec
}

// block is embedded by every record: where it stands, and what its user notes about it.
type block struct {
	Source text `key:"source" as:"prose" doc:"where the block's numbers come from; carried into the results"`
	Notes  text `key:"notes" as:"prose" doc:"remarks; carried into the results"`

	at   *node
	path string
}

// stand records where the block was found.
func (b *block) stand(n *node, path string) *block {
	b.at, b.path = n, path
	return b
}

var (
	quantityType = reflect.TypeFor[quantity]()
	textType     = reflect.TypeFor[text]()
	countType    = reflect.TypeFor[count]()
	flagType     = reflect.TypeFor[flag]()
	sharesType   = reflect.TypeFor[shares]()
)

// compiler keeps the records already seen, because creep contains creep.
type compiler map[reflect.Type]*spec

func compile(t reflect.Type) *spec { return compiler{}.value(t, "") }

func (c compiler) value(t reflect.Type, tag reflect.StructTag) *spec {
	if t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	s := &spec{typ: t, eg: tag.Get("eg"), as: tag.Get("as")}
	if w := tag.Get("one"); w != "" {
		switch w {
		case "@quantities":
			s.words = scalarQuantities[:len(scalarQuantities)-1]
		case "@results":
			s.words = scalarQuantities
		default:
			s.words = strings.Split(w, "|")
		}
	}
	switch {
	case t == quantityType:
		s.kind = quantitySpec
		if name := tag.Get("dim"); strings.HasPrefix(name, "@") {
			s.dynamic = name
		} else if s.dim = dimensions[name]; s.dim == nil {
			panic("configs: unknown dimension " + name)
		}
	case t == countType:
		s.kind, s.dim = countSpec, dimensions["number"]
	case t == flagType:
		s.kind = flagSpec
	case t == textType:
		s.kind = textSpec
	case t == sharesType:
		s.kind = sharesSpec
	case t.Kind() == reflect.Slice:
		s.kind, s.item = listSpec, c.value(t.Elem(), itemTag(tag))
	case t.Kind() == reflect.Struct:
		return c.structure(t)
	default:
		panic(fmt.Sprintf("configs: no schema for %v", t))
	}
	if r := tag.Get("range"); r != "" && s.dim != nil {
		iv := parseInterval(r, s.dim)
		s.rng = &iv
	}
	return s
}

// itemTag hands what concerns the entries of a list on to them.
func itemTag(tag reflect.StructTag) reflect.StructTag {
	var parts []string
	for _, k := range []string{"dim", "range", "one", "as", "eg"} {
		if v := tag.Get(k); v != "" {
			parts = append(parts, fmt.Sprintf("%s:%q", k, v))
		}
	}
	return reflect.StructTag(strings.Join(parts, " "))
}

func (c compiler) structure(t reflect.Type) *spec {
	shared, ok := c[t]
	if !ok {
		shared = &spec{typ: t, kind: recordSpec}
		c[t] = shared
		c.fields(t, nil, shared)
	}
	return shared
}

func (c compiler) fields(t reflect.Type, at []int, s *spec) {
	for i := range t.NumField() {
		f := t.Field(i)
		index := append(append([]int(nil), at...), i)
		switch {
		case f.Name == "_":
			if f.Tag.Get("kind") == "union" {
				s.kind = unionSpec
			}
			s.required = append(s.required, strings.Fields(f.Tag.Get("required"))...)
			if g := strings.Fields(f.Tag.Get("exactly")); len(g) > 0 {
				s.exactly = append(s.exactly, g)
			}
			if g := strings.Fields(f.Tag.Get("most")); len(g) > 0 {
				s.most = append(s.most, g)
			}
		case f.Anonymous:
			c.fields(f.Type, index, s)
		case f.Tag.Get("form") != "":
			shape := map[string]nodeKind{"scalar": scalarNode, "list": listNode, "map": mapNode}[f.Tag.Get("form")]
			s.forms = append(s.forms, form{shape, index, c.value(f.Type, f.Tag)})
		case f.Tag.Get("key") != "":
			name, required := strings.CutSuffix(f.Tag.Get("key"), ",required")
			if required {
				s.required = append(s.required, name)
			}
			s.keys = append(s.keys, keySpec{name, f.Tag.Get("doc"), index, c.value(f.Type, f.Tag)})
		}
	}
}

// key finds a record's key.
func (s *spec) key(name string) *keySpec {
	for i := range s.keys {
		if s.keys[i].name == name {
			return &s.keys[i]
		}
	}
	return nil
}

func (s *spec) keyNames() []string {
	names := make([]string, len(s.keys))
	for i := range s.keys {
		names[i] = s.keys[i].name
	}
	return names
}

// pick chooses the form of a union that a value has: by shape, and among maps the
// one that knows most of the keys, a mistyped one by half (the first, where several do).
func (s *spec) pick(n *node) *form {
	var best *form
	bestKnown := -1
	for i := range s.forms {
		f := &s.forms[i]
		if f.shape != n.kind {
			continue
		}
		known := 0
		for _, k := range n.keys {
			switch {
			case k == "source" || k == "notes":
			case f.spec.key(k) != nil:
				known += 2
			case f.shape == mapNode && f.spec.kind == recordSpec && nearest(k, f.spec.keyNames()) != "": // mistyped
				known++
			}
		}
		if known > bestKnown {
			best, bestKnown = f, known
		}
	}
	return best
}
