package configs

import (
	"embed"
	"fmt"
	"strings"
)

//go:embed examples/*.yaml
var exampleFiles embed.FS

// exampleNames are the built-in experiments, the one that run takes by itself first.
var exampleNames = []string{"tarnvik", "osmund", "equal-layers"}

// ExampleNames returns the names of the built-in experiments: tarnvik (its root drips
// first), osmund (its root is cut out first) and equal-layers (the smallest). All
// are invented, and say so. The first is what run takes when no file is given.
func ExampleNames() []string { return append([]string(nil), exampleNames...) }

// Example returns a built-in experiment as the YAML text a user may start from; Read
// takes it as it is. The name "" means the first; case and a trailing " arc" do not
// matter. An unknown name is an error that lists the known ones.
func Example(name string) (string, error) {
	key := strings.ToLower(strings.TrimSpace(name))
	key = strings.TrimSuffix(strings.TrimSuffix(key, ".yaml"), " arc")
	if key == "" {
		key = exampleNames[0]
	}
	for _, n := range exampleNames {
		if n == key {
			b, err := exampleFiles.ReadFile("examples/" + n + ".yaml")
			return string(b), err
		}
	}
	return "", fmt.Errorf("configs: no built-in experiment is called %s; %s", shorten(name), didYouMean(key, exampleNames))
}
