package configs

import (
	"bytes"
	"math"
	"os"
	"path/filepath"
	"testing"
)

// FuzzRead: any bytes under any name are an error or an experiment whose problem is
// valid and holds no NaN; the same bytes give the same message.
func FuzzRead(f *testing.F) {
	for _, name := range ExampleNames() {
		text, _ := Example(name)
		f.Add("x.yaml", []byte(text))
	}
	reference, err := os.ReadFile(filepath.Join("..", "testdata", "configs", "keldra.yaml"))
	if err != nil {
		f.Fatal(err)
	}
	f.Add("x.yaml", reference)
	f.Add("x.yaml", []byte(small))
	f.Add("x.yaml", []byte(yamlTwo))
	f.Add("x.json", []byte(jsonTwo))
	f.Add("x.toml", []byte(tomlTwo))
	f.Add("x", []byte(tomlTwo))
	f.Fuzz(func(t *testing.T, name string, b []byte) {
		e, err := Read(name, bytes.NewReader(b))
		again, err2 := Read(name, bytes.NewReader(b))
		if (err == nil) != (err2 == nil) || err != nil && err.Error() != err2.Error() {
			t.Fatalf("two readings differ:\n%v\n%v", err, err2)
		}
		if err != nil {
			if err.Error() == "" {
				t.Fatal("an error without a message")
			}
			return
		}
		p, err := again.Problem()
		if err != nil {
			t.Fatalf("Read accepted what Problem refuses: %v", err)
		}
		if err := p.Column.Validate(); err != nil {
			t.Fatalf("Read accepted what the column refuses: %v", err)
		}
		for _, x := range []float64{p.Column.Depth(), p.Column.Gravity, p.Column.Surface.Temperature, p.Drip.Window, p.Drip.Amplitude, p.TimeZero, p.Strain.ReferenceRate, p.Removed} {
			if math.IsNaN(x) || math.IsInf(x, 0) {
				t.Fatalf("%v in %+v", x, p)
			}
		}
		e.Resolved()
	})
}

// FuzzSet: any edit is an error or gives a valid problem.
func FuzzSet(f *testing.F) {
	for _, s := range []string{"layers.root.thickness=14km", "drip.amplitude=", "layers.0={name: a}", "base=", "geotherm=[{depth: 0 km, temperature: 1 K}]", "a.b.c=[[[", "layers.root.density.top=1 kg/m3"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, set string) {
		e, err := Read("s.yaml", bytes.NewReader([]byte(small)), set)
		if err != nil {
			return
		}
		if _, err := e.Problem(); err != nil {
			t.Fatalf("%s: Read accepted what Problem refuses: %v", set, err)
		}
	})
}
