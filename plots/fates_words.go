package plots

import (
	"fmt"
	"math"
	"strings"

	"keelfall/solver/drip"
	"keelfall/solver/race"
)

// silence says why a drip that was looked for has no history.
func silence(d *drip.Result) string {
	switch {
	case d == nil || len(d.History.Time) > 0:
		return ""
	case d.Outcome == "buoyant":
		return "the root does not drip"
	case !math.IsInf(d.Unrestricted.Time, 1) && d.Unrestricted.Time > 0:
		return "no drip: only undulations too long for the arc would"
	}
	return "no drip: growth is too slow"
}

// drips reports whether the drip comes within the window and the time shown.
func (f *fatesFigure) drips() bool {
	return f.drip != nil && f.drip.Outcome == "drips" && f.drip.Time/myr <= f.x.hi
}

// headline is the verdict in a few words.
func headline(v *race.Verdict, window float64) string {
	at := ""
	if !math.IsInf(v.Time, 0) && !math.IsNaN(v.Time) && v.Time > 0 {
		at = ", at " + span(v.Time)
	}
	switch v.Outcome {
	case "dripped":
		return "The root drips first" + at
	case "excised":
		return "The root is cut out first" + at
	case "both":
		return "Drip and shear zones both take the root" + at
	case "preserved":
		return "The root is still there after " + number(window, 3) + " Myr"
	}
	return ""
}

func (f fatesFigure) caption(sentence string) string {
	var s string
	switch {
	case f.drip == nil:
		s = "The root's thickness against time where shear zones cut it out."
	case f.excision == nil:
		s = "Amplitude of the undulation on the root's base against time."
	default:
		s = "The root's thickness where shear zones cut it out (a) and the amplitude of the undulation on its base (b) against time."
	}
	if f.arc != nil && f.excision != nil {
		s += " Solid: the column that the zones cross; dashed: mean over the arc."
	}
	if f.hasBand() {
		s += fmt.Sprintf(" Grey band: drip times for an undulation three times as high (%s) and a third as high (%s).",
			plain(span(f.drip.TimeLow)), plain(span(f.drip.TimeHigh)))
	}
	if f.silence != "" {
		s += " " + strings.ToUpper(f.silence[:1]) + f.silence[1:] + "."
	}
	if sentence != "" {
		s += " " + sentence
	}
	return s
}
