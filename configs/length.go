package configs

// ParseLength reads a length with its unit, such as 50 km, and returns it in m: for
// command lines. The error says what is wrong and what was expected.
func ParseLength(s string) (float64, error) {
	return parseQuantity(&node{kind: scalarNode, text: s, scalar: stringScalar}, dimensions["length"], 0)
}
