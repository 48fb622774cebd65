package rheology

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// volumeMatters is the pressure in Pa above which an activation volume that was not
// determined is worth a word: 1 GPa times 10 cm³/mol is 10 kJ/mol.
const volumeMatters = 1e9

// pressureSlack is how far in Pa a law tested at one pressure is used from it without a
// word, temperatureSlack in K how far from a range of temperatures.
const (
	pressureSlack    = volumeMatters / 2
	temperatureSlack = 1
)

// mostMelt is the volume fraction to which exp(αφ) holds; common practice, no source.
const mostMelt = 0.25

// Use is a place where a rock uses its laws: T in K, P in Pa and τ_II in Pa, 0 where it
// is not known.
type Use struct{ T, P, Stress float64 }

// Caution returns, in one line that begins with its name, what should be said when the
// law is used at these places, which may be none: parameters recalled with less than high
// confidence, a test geometry that was assumed, an activation volume that was chosen or
// not determined, used above 1 GPa, and temperatures, pressures and stresses beyond the
// experiments where the source says where they were. Nothing to say is empty.
func (l *Law) Caution(used []Use) string { return l.caution(used, false) }

// caution: a law with others beside it that is kept out of low stresses is not used there.
func (l *Law) caution(used []Use, others bool) string {
	var out []string
	switch l.Confidence {
	case "low":
		out = append(out, fmt.Sprintf("numbers recalled from memory with low confidence; read %s before use", l.Source))
	case "medium":
		out = append(out, fmt.Sprintf("numbers recalled from memory, to be checked against %s", l.Source))
	}
	if l.Status.Test == "assumed" {
		out = append(out, fmt.Sprintf("its test geometry is assumed to be %s", l.Test))
	}
	if len(used) > 0 {
		out = append(out, l.beyond(used, others)...)
	}
	if len(out) == 0 {
		return ""
	}
	return l.Name + ": " + strings.Join(out, "; ")
}

// beyond says where the places are beyond what the source covers.
func (l *Law) beyond(used []Use, others bool) (out []string) {
	T := ends(used, func(u Use) float64 { return u.T })
	P := ends(used, func(u Use) float64 { return u.P })
	stress := ends(used, func(u Use) float64 { return u.Stress * l.Test.Stress() })
	if P.High > volumeMatters {
		switch {
		case !l.VolumeDetermined:
			out = append(out, fmt.Sprintf("used above 1 GPa, where its activation volume (not determined, %g cm3/mol assumed) counts", l.V*1e6))
		case l.Status.V == "choice":
			out = append(out, fmt.Sprintf("used above 1 GPa with an activation volume that is a choice, %g cm3/mol%s", l.V*1e6, l.volumeError()))
		}
	}
	return append(out, l.untested(T, P, stress, others)...)
}

// volumeError is what the source says of V's range or error, " (6-27)" or " (+-11)"; empty
// where it says nothing.
func (l *Law) volumeError() string {
	words := strings.Fields(l.Uncertainty)
	for i, w := range words {
		switch rest, ok := strings.CutPrefix(w, "V"); {
		case ok && strings.HasPrefix(rest, "+-"):
			return " (" + rest + ")"
		case w == "V" && i+1 < len(words):
			return " (" + words[i+1] + ")"
		}
	}
	return ""
}

// untested names, in one sentence, the ranges that leave those of the experiments.
func (l *Law) untested(T, P, stress Interval, others bool) []string {
	t := l.Tested
	slack := 0.0
	if t.P.Low == t.P.High {
		slack = pressureSlack
	}
	if others && l.Peierls.Least > 0 {
		stress.Low = max(stress.Low, t.Stress.Low)
	}
	var at, were []string
	for _, q := range []struct {
		here, test  Interval
		slack       float64
		format      string
		zero, scale float64
	}{
		{T, t.T, temperatureSlack, "%.0f degC", 273.15, 1},
		{P, t.P, slack, "%.2g GPa", 0, 1e9},
		{stress, t.Stress, 0, "%.3g MPa of stress", 0, 1e6},
	} {
		if q.test.Known() && (q.here.Low < q.test.Low-q.slack || q.here.High > q.test.High+q.slack) && q.here.High > 0 {
			at = append(at, q.here.text(q.format, q.zero, q.scale))
			test := q.test.text(q.format, q.zero, q.scale)
			if !strings.HasPrefix(test, "above") && !strings.HasPrefix(test, "below") {
				test = "at " + test
			}
			were = append(were, test)
		}
	}
	if len(at) == 0 {
		return nil
	}
	recalled := ""
	if t.Status == "memory" {
		recalled = " (recalled from memory)"
	}
	return []string{fmt.Sprintf("used at %s; its experiments were %s%s", strings.Join(at, ", "), strings.Join(were, ", "), recalled)}
}

// ends returns the least and the greatest of a quantity.
func ends(used []Use, f func(Use) float64) Interval {
	i := Interval{math.Inf(1), math.Inf(-1)}
	for _, u := range used {
		i.Low, i.High = min(i.Low, f(u)), max(i.High, f(u))
	}
	return i
}

// Cautions returns those of every law used at the places, a line each, and names two
// laws of one list that describe the same mechanism of the same rock, whose rates should
// not be added, a piezometer that was recalled, and more melt than the weakening holds
// for. The stress is the rock's: in a mixture its phases may have others.
func (c *Creep) Cautions(used []Use) []string {
	out := cautions(nil, c.Laws, c.Mixtures, used)
	for _, l := range c.AllLaws() {
		if l.M != 0 && c.Piezometer != nil {
			if s := c.Piezometer.caution(); s != "" {
				out = append(out, s)
			}
			break
		}
	}
	if c.Melt != nil && c.Weakening != 0 {
		most := ends(used, func(u Use) float64 { return c.Melt(u.T, u.P) }).High
		if most > mostMelt {
			out = append(out, fmt.Sprintf("up to %.0f %% of melt by volume: its weakening, exp(%.3g × fraction), holds to about a quarter of melt (common practice, no source)", 100*most, c.Weakening))
		}
	}
	return out
}

func cautions(out []string, laws []Law, mixtures []Mixture, used []Use) []string {
	for i := range laws {
		s := laws[i].caution(used, len(laws)+len(mixtures) > 1)
		if s != "" && !slices.Contains(out, s) { // a law may stand in several phases
			out = append(out, s)
		}
		for j := range i {
			a, b := &laws[j], &laws[i]
			if a.Material != "" && a.Material == b.Material && a.Mechanism == b.Mechanism {
				out = append(out, fmt.Sprintf("%s and %s act in parallel but are the same mechanism of the same rock: counted twice", a.Name, b.Name))
			}
		}
	}
	for i := range mixtures {
		for j := range mixtures[i].Phases {
			p := &mixtures[i].Phases[j]
			out = cautions(out, p.Laws, p.Mixtures, used)
		}
	}
	return out
}
