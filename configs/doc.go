// Package configs reads experiment files and settings.
//
// Every format (YAML, JSON, TOML) becomes one tree that knows the line of every key.
// One schema, written as Go structs with tags, walks the tree, reports every mistake
// at once and decodes it; the same schema serves --set, the keys of sweeps, the JSON
// Schema and the "did you mean". Defaults are entries added to the tree before the
// walk, so that a default and a written value pass through the same checks.
//
// Quantities with units exist only here and where results are printed: what leaves
// the package (race.Problem, Resolved) is in SI.
package configs
