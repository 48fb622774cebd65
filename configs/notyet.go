package configs

import (
	"strconv"
)

const notInThisVersion = "not in this version of keelfall"

// notYet lists the keys whose solver does not exist yet; * stands for any entry of a
// list. Where a value stands beside it, that value is accepted and no other. The
// schema checks them all the same. Work on a solver ends with its line leaving here.
var notYet = map[string]string{
	"race.reversal": "",
	"budget":        "",
	"observations":  "",
	"maps":          "",
	"thresholds":    "",
	"ensemble":      "",
}

// isOnly says whether n is the one value that is accepted; a number may have any unit.
func isOnly(n *node, only string) bool {
	if n.kind != scalarNode {
		return false
	}
	if n.text == only {
		return true
	}
	want, err := strconv.ParseFloat(only, 64)
	if err != nil {
		return false
	}
	x, err := strconv.ParseFloat(leadingNumber.FindString(n.text), 64)
	return err == nil && x == want
}
