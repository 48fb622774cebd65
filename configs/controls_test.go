package configs

import (
	"strings"
	"testing"
)

// TestControlCharacters: what cannot be seen is refused, wherever a user writes text.
func TestControlCharacters(t *testing.T) {
	const name = "s.yaml:6: layers[0] "
	for _, c := range []struct{ name, in, want string }{
		{"escape", swap("name: crust", `name: "cr\x1b[31must"`),
			name + "(crU+001B[31must).name: crU+001B[31must has the control character U+001B, which is not allowed in a name; leave it out"},
		{"null", swap("name: crust", `name: "cru\0st"`),
			name + "(cruU+0000st).name: cruU+0000st has the control character U+0000, which is not allowed in a name; leave it out"},
		{"tab", swap("name: crust", `name: "cru\tst"`),
			name + "(cru st).name: cru st has a tab, which is not allowed in a name; write a space"},
		{"tab at the end", swap("name: crust", `name: "crust\t"`),
			name + "(crust).name: crust has a tab, which is not allowed in a name; write a space"},
		{"newline", swap("name: crust", `name: "cru\nst"`),
			name + "(cru st).name: cru st has a newline, which is not allowed in a name; write it in one line"},
		{"right to left", swap("name: crust", `name: "cru\u202Est"`),
			name + "(cruU+202Est).name: cruU+202Est has the control character U+202E, which is not allowed in a name; leave it out"},
		{"isolate", swap("name: crust", `name: "cru\u2066st"`),
			name + "(cruU+2066st).name: cruU+2066st has the control character U+2066, which is not allowed in a name; leave it out"},
		{"C1", swap("name: crust", `name: "cru\u009bst"`),
			name + "(cruU+009Bst).name: cruU+009Bst has the control character U+009B, which is not allowed in a name; leave it out"},
		{"title", swap("title: Small", `title: "Sm\x7fall"`),
			"s.yaml:1: title: SmU+007Fall has the control character U+007F, which is not allowed in a title; leave it out"},
		{"title of two lines", swap("title: Small", `title: "Small\nand large"`),
			"s.yaml:1: title: Small and large has a newline, which is not allowed in a title; write it in one line"},
		{"notes", small + "notes: \"first\\nsecond\\u202E\"\n",
			"s.yaml:9: notes: first secondU+202E has the control character U+202E, which is not allowed in a note; leave it out"},
		{"source", small + `drip: {source: "a\ab"}` + "\n",
			"s.yaml:9: drip.source: aU+0007b has the control character U+0007, which is not allowed in a note; leave it out"},
		{"mode of a mineral", swap("density: 2800 kg/m3", `density: {modes: {"pyr\x1bope": 1}}`),
			"s.yaml:6: layers[0] (crust).density.modes.pyrU+001Bope: pyrU+001Bope has the control character U+001B, which is not allowed in a name; leave it out"},
		{"unknown key", small + `"gra\x1bvity": 9.81 m/s2` + "\n", "s.yaml:9: graU+001Bvity: unknown key; did you mean gravity?"},
	} {
		_, err := Read("s.yaml", strings.NewReader(c.in))
		if err == nil || err.Error() != c.want {
			t.Errorf("%s:\n got %v\nwant %s", c.name, err, c.want)
		}
	}
	e := mustRead(t, "s.yaml", small+"notes: |\n  first line\n  second line\n")
	if got := mustProblem(t, e).Notes; got != "first line\nsecond line" {
		t.Errorf("notes of two lines: %q", got)
	}
	if p := mustProblem(t, mustRead(t, "s.yaml", swap("name: crust", "name: Крошка μ 上"))); p.Column.Layers[0].Name != "Крошка μ 上" {
		t.Errorf("a name in other letters: %q", p.Column.Layers[0].Name)
	}
}
