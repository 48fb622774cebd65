package main

import (
	"os/exec"
	"slices"
	"strings"
	"testing"
)

// house says what each package may import of ours, as in DEVELOPERS.md.
var house = map[string][]string{
	"keelfall/rheology":            {},
	"keelfall/column":              {"keelfall/rheology"},
	"keelfall/solver/heat":         {"keelfall/column", "keelfall/rheology"},
	"keelfall/solver/state":        {"keelfall/solver/heat", "keelfall/column", "keelfall/rheology"},
	"keelfall/solver/growth":       {"keelfall/column", "keelfall/rheology"},
	"keelfall/solver/drip":         {"keelfall/solver/growth", "keelfall/solver/state", "keelfall/solver/heat", "keelfall/column", "keelfall/rheology"},
	"keelfall/solver/excision":     {"keelfall/solver/state", "keelfall/solver/heat", "keelfall/column", "keelfall/rheology"},
	"keelfall/solver/race":         {"keelfall/solver/drip", "keelfall/solver/excision", "keelfall/solver/growth", "keelfall/solver/state", "keelfall/solver/heat", "keelfall/column", "keelfall/rheology"},
	"keelfall/solver/checks":       {"keelfall/solver/race", "keelfall/solver/drip", "keelfall/solver/excision", "keelfall/solver/growth", "keelfall/solver/state", "keelfall/solver/heat", "keelfall/column", "keelfall/rheology"},
	"keelfall/plots":               {"keelfall/solver/race", "keelfall/solver/drip", "keelfall/solver/excision", "keelfall/solver/growth", "keelfall/solver/state", "keelfall/solver/heat", "keelfall/column", "keelfall/rheology"},
	"keelfall/configs":             {"keelfall/solver/race", "keelfall/solver/drip", "keelfall/solver/excision", "keelfall/solver/heat", "keelfall/column", "keelfall/rheology"},
	"keelfall/cmd/internal/report": nil, // everything
	"keelfall/cmd/keelfall":        nil,
}

// Imports keep to the house, and physics knows no file, flag or plot.
func TestImports(t *testing.T) {
	out, err := exec.Command("go", "list", "-f", "{{.ImportPath}} {{join .Imports \" \"}}", "keelfall/...").Output()
	if err != nil {
		t.Fatal(err)
	}
	seen := 0
	for _, line := range strings.Split(strings.TrimSpace(string(out)), "\n") {
		f := strings.Fields(line)
		pkg, imports := f[0], f[1:]
		allowed, known := house[pkg]
		if !known {
			t.Errorf("%s has no room in the house", pkg)
			continue
		}
		seen++
		physics := strings.HasPrefix(pkg, "keelfall/solver/") || pkg == "keelfall/column" || pkg == "keelfall/rheology"
		for _, i := range imports {
			switch {
			case strings.HasPrefix(i, "keelfall/"):
				if allowed != nil && !slices.Contains(allowed, i) {
					t.Errorf("%s imports %s", pkg, i)
				}
			case physics && (i == "os" || i == "net" || i == "flag" || i == "log"):
				t.Errorf("%s imports %s", pkg, i)
			case physics && strings.Contains(i, ".") && !strings.HasPrefix(i, "gonum.org/v1/gonum/"):
				t.Errorf("%s imports %s", pkg, i)
			}
		}
	}
	if seen != len(house) {
		t.Errorf("%d packages seen, the house has %d", seen, len(house))
	}
}
