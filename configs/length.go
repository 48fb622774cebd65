package configs

import "fmt"

// ParseLength reads a length with its unit, such as 50 km, and returns it in m: for
// command lines. The error says what is wrong and what was expected.
func ParseLength(s string) (float64, error) { return ParseQuantity(s, "length") }

// ParseQuantity is ParseLength for any dimension that an experiment knows by name:
// temperature, pressure, strain-rate, … It returns SI; a name that is not known panics.
func ParseQuantity(s, dimension string) (float64, error) {
	d, ok := dimensions[dimension]
	if !ok {
		panic(fmt.Sprintf("configs: no dimension %q", dimension))
	}
	return parseQuantity(&node{kind: scalarNode, text: s, scalar: stringScalar}, d, 0)
}
