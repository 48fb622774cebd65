package configs

import (
	"embed"
	"fmt"
	"slices"
	"strings"
)

//go:embed examples
var exampleFiles embed.FS

// exampleNames are the built-in experiments, the one that run takes by itself first.
var exampleNames = []string{"tarnvik", "osmund", "veskar", "morvane", "rundal", "brannock", "equal-layers"}

// ExampleNames returns the names of the built-in experiments: tarnvik (its root drips
// first), osmund (its root is cut out first), veskar (mineral modes and a root that
// reacted in part), morvane (a measured section), rundal (a history of sheets, growth,
// stretching and erosion), brannock (a shear zone whose slip follows from a balance of
// forces) and equal-layers (the smallest). All
// are invented, and say so. The first is what run takes when no file is given.
func ExampleNames() []string { return append([]string(nil), exampleNames...) }

// Example returns a built-in experiment as the YAML text a user may start from, or a
// file that one of them reads (morvane-section.csv). The name "" means the first
// experiment; case and a trailing " arc" do not matter. An unknown name is an error that
// lists the known ones.
func Example(name string) (string, error) {
	key := strings.ToLower(strings.TrimSpace(name))
	key = strings.TrimSuffix(strings.TrimSuffix(key, ".yaml"), " arc")
	if key == "" {
		key = exampleNames[0]
	}
	file := key
	switch {
	case slices.Contains(exampleNames, key):
		file += ".yaml"
	case !slices.Contains(companions(""), key):
		return "", fmt.Errorf("configs: no built-in experiment is called %s; %s", shorten(name), didYouMean(key, exampleNames))
	}
	b, err := exampleFiles.ReadFile("examples/" + file)
	return string(b), err
}

// ExampleReads returns the names of the files that a built-in experiment reads, for
// Example; nil where it needs none.
func ExampleReads(name string) []string {
	return companions(strings.TrimSuffix(strings.ToLower(strings.TrimSpace(name)), " arc") + "-")
}

// companions are the files other than experiments whose names begin with prefix.
func companions(prefix string) []string {
	all, err := exampleFiles.ReadDir("examples")
	if err != nil {
		panic("the embedded examples: " + err.Error())
	}
	var names []string
	for _, f := range all {
		if strings.HasPrefix(f.Name(), prefix) && !strings.HasSuffix(f.Name(), ".yaml") {
			names = append(names, f.Name())
		}
	}
	return names
}
