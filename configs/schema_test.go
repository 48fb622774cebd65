package configs

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"
)

func compiledSchema(t *testing.T) *jsonschema.Schema {
	t.Helper()
	b, err := Schema()
	if err != nil {
		t.Fatal(err)
	}
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(b))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	if err := c.AddResource("experiment.json", doc); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile("experiment.json")
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// plainTree is a file as a JSON Schema sees it.
func plainTree(t *testing.T, name, text string) any {
	t.Helper()
	n, err := parse(name, []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return n.plain()
}

// TestSchemaAccepts: the built-in examples and the reference, which has every section.
func TestSchemaAccepts(t *testing.T) {
	s := compiledSchema(t)
	reference, err := os.ReadFile(filepath.Join("..", "testdata", "configs", "keldra.yaml"))
	if err != nil {
		t.Fatal(err)
	}
	texts := map[string]string{"reference": string(reference)}
	for _, name := range ExampleNames() {
		texts[name], _ = Example(name)
	}
	for name, text := range texts {
		if err := s.Validate(plainTree(t, "x.yaml", text)); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func TestSchemaRefuses(t *testing.T) {
	s := compiledSchema(t)
	if err := s.Validate(plainTree(t, "x.yaml", small)); err != nil {
		t.Fatalf("the experiment the cases start from: %v", err)
	}
	for name, text := range map[string]string{
		"no unit":          swap("thickness: 12 km", "thickness: 12"),
		"number and space": swap("thickness: 12 km", "thickness: '12 '"),
		"unknown key":      swap("thickness: 12 km", "thicknes: 12 km"),
		"boundary":         swap("boundary: free", "boundary: solid"),
		"two flows":        swap("creep: dry eclogite Zhang 2007", "creep: dry eclogite Zhang 2007, viscosity: 1e21 Pa s"),
		"no flow":          swap(", viscosity: 1e22 Pa s", ""),
		"share":            small + "drip: {removes: 1.5}\n",
		"no layers":        "title: nothing\n",
		"both at base":     swap("temperature: 1100 degC", "temperature: 1100 degC, heat-flow: 30 mW/m2"),
		"root":             swap("root: true", "root: 'true'"),
	} {
		if err := s.Validate(plainTree(t, "x.yaml", text)); err == nil {
			t.Errorf("%s: accepted", name)
		}
	}
}

func TestSchemaSpeaks(t *testing.T) {
	b, err := Schema()
	if err != nil {
		t.Fatal(err)
	}
	again, _ := Schema()
	if !bytes.Equal(b, again) {
		t.Error("two calls differ")
	}
	for _, part := range []string{"draft/2020-12", "of the layer at the start; a length", "12 km", "wet quartzite Gleason 1995"} {
		if !strings.Contains(string(b), part) {
			t.Errorf("%s is not in the schema", part)
		}
	}
}
