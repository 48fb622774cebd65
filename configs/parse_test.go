package configs

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"
)

// manyKeys is 1001 keys and more, each followed by the same text.
func manyKeys(then string) string {
	var b strings.Builder
	for i := range 1002 {
		b.WriteString("k" + strconv.Itoa(i) + then)
	}
	return b.String()
}

// TestUnreadable: whatever is no experiment gives one clear message, and soon.
func TestUnreadable(t *testing.T) {
	deep := strings.Repeat("[", 20000)
	bomb := "a: &a [x,x,x,x,x,x,x,x,x]\n"
	for c := 'b'; c < 'k'; c++ {
		p := string(c - 1)
		bomb += string(c) + ": &" + string(c) + " [*" + p + ",*" + p + ",*" + p + ",*" + p + ",*" + p + ",*" + p + "]\n"
	}
	manyLayers := "layers:\n" + strings.Repeat("  - {name: a, thickness: 1 m, density: 1 kg/m3, viscosity: 1 Pa s}\n", 10001)
	for _, c := range []struct{ name, in, want string }{
		{"x.yaml", "", "x.yaml: is empty; needs " + formats},
		{"x.json", " \n ", "x.json: is empty; needs " + formats},
		{"x.toml", "\uFEFF", "x.toml: is empty; needs " + formats},
		{"x.yaml", "# only a comment\n", "x.yaml: is empty; needs " + formats},
		{"x.yaml", "title: a\x00b", "x.yaml:1: is binary data (byte 0x00); needs " + formats},
		{"x.yaml", "\x89PNG\r\n\x1a\n", "x.yaml:1: holds the byte 0x89, which is not UTF-8 (perhaps Latin-1); save the file as UTF-8"},
		{"x.yaml", "a: 1\ntitle: caf\xe9\n", "x.yaml:2: holds the byte 0xE9, which is not UTF-8 (perhaps Latin-1); save the file as UTF-8"},
		{"x.yaml", "\xff\xfet\x00", "x.yaml:1: is UTF-16 text; save it as UTF-8"},
		{"x.yaml", strings.Repeat("#", 10<<20+1), "x.yaml: is larger than 10 MB; needs " + formats},
		{"x.yaml", "layers: [" + strings.Repeat("1,", 4<<20) + "1]", "x.yaml: has 4194304 commas and line ends, more than an experiment can need (300000)"},
		{"x.yaml", "- a\n- b\n", "x.yaml:1: is a list at the top; needs keys such as title, layers and base"},
		{"x.yaml", "title: a\ntitle: b\n", "x.yaml:2: title stands here and in line 1; a key may stand once"},
		{"x.yaml", "drip:\n  window: 1 Myr\n  window: 2 Myr\n", "x.yaml:3: drip: window stands here and in line 2; a key may stand once"},
		{"x.json", "{\"title\": \"a\",\n \"title\": \"b\"}", "x.json:2: title stands here and in line 1; a key may stand once"},
		{"x.toml", "title = \"a\"\ntitle = \"b\"\n", "x.toml:2: title stands here and in line 1; a key may stand once"},
		{"x.toml", "[drip]\n[drip]\n", "x.toml:2: is not valid TOML: table drip already exists"},
		{"x.yaml", "base: &b {boundary: rigid}\n", "x.yaml:1: base: &b is an anchor; write the values out, so that each is read where it stands"},
		{"x.yaml", "base: {<<: {a: b}}\n", "x.yaml:1: base: << is a merge key; write the values out, so that each is read where it stands"},
		{"x.yaml", bomb, "x.yaml:1: a: &a is an anchor; write the values out, so that each is read where it stands"},
		{"x.yaml", "title: !!str 5\n", "x.yaml:1: title: !!str is a YAML tag; leave it out, the key decides what its value is"},
		{"x.yaml", "drip:\n  window:\n", "x.yaml:2: drip.window: has no value (null); give one or leave the key out"},
		{"x.yaml", "title: ~\n", "x.yaml:1: title: has no value (null); give one or leave the key out"},
		{"x.json", "{\"drip\": {\n\"window\": null}}", "x.json:2: window: has no value (null); give one or leave the key out"},
		{"x.yaml", "drip: {removes: .nan}\n", "x.yaml:1: drip.removes: .nan is not a number that can be computed with; needs a finite one"},
		{"x.yaml", "drip: {removes: -.inf}\n", "x.yaml:1: drip.removes: -.inf is not a number that can be computed with; needs a finite one"},
		{"x.toml", "[drip]\nremoves = nan\n", "x.toml:2: removes: nan is not a number that can be computed with; needs a finite one"},
		{"x.toml", "time-zero = 1979-05-27\n", "x.toml:1: time-zero: is a date; no key of an experiment takes one"},
		{"x.toml", "gravity = 0x10\n", "x.toml:1: gravity: 0x10 is not a decimal number; write it as one"},
		{"x.yaml", "title: a\n---\ntitle: b\n", "x.yaml:2: begins a second document; a file holds one experiment"},
		{"x.json", "{}\n{}", "x.json:2: begins a second document; a file holds one experiment"},
		{"x.yaml", deep, "x.yaml:1: is nested deeper than 50 levels; an experiment needs fewer than ten"},
		{"x.json", deep, "x.json:1: is nested deeper than 50 levels; an experiment needs fewer than ten"},
		{"x.toml", "a = " + deep, "x.toml:1: is nested deeper than 50 levels; an experiment needs fewer than ten"},
		{"x.toml", strings.Repeat("a.", 20000) + "a = 1", "x.toml:1: is nested deeper than 50 levels; an experiment needs fewer than ten"},
		{"x.yaml", strings.Repeat("- ", 20000) + "a", "x.yaml:1: is nested deeper than 50 levels; an experiment needs fewer than ten"},
		{"x.json", "{\"a\": [1,\n 2", "x.json:2: is not valid JSON: it ends before every bracket is closed"},
		{"x.yaml", "? [a]\n: b\n", "x.yaml:1: has a list as a key; a key is a single word"},
		{"x.dat", "just words", "x.dat:1: is not recognised; needs " + formats},
		{"x.yaml", manyLayers, "x.yaml:1: layers: has more than 10000 entries"},
		{"x.json", "{\"drip\": 1,\n\"layers\": [" + strings.Repeat("1,", 10000) + "1]}", "x.json:2: layers: has more than 10000 entries"},
		{"x.toml", "title = \"a\"\n" + strings.Repeat("[[layers]]\n", 10001), "x.toml:2: layers: has more than 10000 entries"},
		{"x.yaml", "drip:\n" + strings.Repeat(" ", 2) + manyKeys(": 1\n  "), "x.yaml:1: drip: has more than 1000 keys"},
		{"x.toml", manyKeys(" = 1\n"), "x.toml:1: has more than 1000 keys"},
		{"x.json", "{\"" + manyKeys("\": 1,\n\"") + "\": 1}", "x.json:1: has more than 1000 keys"},
	} {
		start := time.Now()
		_, err := Read(c.name, strings.NewReader(c.in))
		took := time.Since(start)
		if err == nil || err.Error() != c.want {
			t.Errorf("%s, %s:\n got %v\nwant %s", c.name, shorten(c.in), err, c.want)
		}
		// A second on an idle machine; five leave room for a busy one and still catch anything explosive.
		if took > 5*time.Second {
			t.Errorf("%s, %s: took %v", c.name, shorten(c.in), took)
		}
	}
	for _, c := range []struct{ name, in, want string }{
		{"x.yaml", "title: a\n  b: c: d\n", "x.yaml:2: is not valid YAML"},
		{"x.yaml", "a: [1,\n 2\n", "x.yaml:1: is not valid YAML"},
		{"x.json", "{\n\"a\" 1}", "x.json:2: is not valid JSON"},
		{"x.toml", "title = \"a\"\nb\n", "x.toml:2: is not valid TOML"},
	} {
		_, err := Read(c.name, strings.NewReader(c.in))
		if err == nil || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("%s, %s:\n got %v\nwant %s…", c.name, shorten(c.in), err, c.want)
		}
	}
}

func TestOpenFiles(t *testing.T) {
	dir := t.TempDir()
	if _, err := Open(dir); err == nil || err.Error() != dir+": is a folder; needs "+formats {
		t.Error(err)
	}
	missing := filepath.Join(dir, "none.yaml")
	if _, err := Open(missing); !errors.Is(err, fs.ErrNotExist) || err.Error() != missing+": no such file or directory" {
		t.Error(err)
	}
	text, err := Example("equal-layers")
	if err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(dir, "two.yaml")
	if err := os.WriteFile(path, []byte("\uFEFF"+strings.ReplaceAll(text, "\n", "\r\n")), 0o600); err != nil {
		t.Fatal(err)
	}
	if _, err := Open(path); err != nil {
		t.Error("with a byte-order mark and CRLF: ", err)
	}
}

const yamlTwo = `title: Two
surface: {boundary: rigid}
base: {boundary: rigid}
drip: {removes: 0.25, window: 5 Myr}
layers:
  - {name: upper, thickness: 10 km, density: 3300 kg/m3, viscosity: 1e21 Pa s, root: true}
  - {name: lower, thickness: 10 km, density: {top: 3200 kg/m3, bottom: 3250 kg/m3}, viscosity: 1e21 Pa s}
`

const jsonTwo = `{"title": "Two", "surface": {"boundary": "rigid"}, "base": {"boundary": "rigid"},
"drip": {"removes": 0.25, "window": "5 Myr"},
"layers": [
  {"name": "upper", "thickness": "10 km", "density": "3300 kg/m3", "viscosity": "1e21 Pa s", "root": true},
  {"name": "lower", "thickness": "10 km", "density": {"top": "3200 kg/m3", "bottom": "3250 kg/m3"}, "viscosity": "1e21 Pa s"}]}
`

const tomlTwo = `title = "Two"
surface.boundary = "rigid"
base = {boundary = "rigid"}

[drip]
removes = 0.25
window = "5 Myr"

[[layers]]
name = "upper"
thickness = "10 km"
density = "3300 kg/m3"
viscosity = "1e21 Pa s"
root = true

[[layers]]
name = "lower"
thickness = "10 km"
viscosity = "1e21 Pa s"
[layers.density]
top = "3200 kg/m3"
bottom = "3250 kg/m3"
`
