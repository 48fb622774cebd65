package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/state"
)

// together says which mechanisms act together where a rock has several laws, and how the
// phases of a rock mix.
func together(s *state.State) []string {
	var acting, mixing said
	for i := 0; i <= len(s.Column.Layers); i++ {
		c := creepOf(s, i)
		if c == nil || i == len(s.Column.Layers) && s.Column.Base.Boundary != column.HalfSpace {
			continue
		}
		name := "the half-space"
		if i < len(s.Column.Layers) {
			name = called(&s.Column.Layers[i])
		}
		if len(c.Laws)+len(c.Mixtures) > 1 {
			acting.add(join(lawsAndMixtures(c.Laws, c.Mixtures)), name)
		}
		for j := range c.Mixtures {
			mixing.add(mixes(&c.Mixtures[j]), name)
		}
	}
	var out []string
	for _, all := range acting.order {
		out = append(out, fmt.Sprintf("Acting together in %s: %s.", join(acting.where[all]), all))
	}
	for _, all := range mixing.order {
		out = append(out, fmt.Sprintf("In %s %s.", join(mixing.where[all]), all))
	}
	return out
}

// said keeps sentences in order, each with where it holds.
type said struct {
	order []string
	where map[string][]string
}

func (s *said) add(what, where string) {
	if s.where == nil {
		s.where = map[string][]string{}
	}
	if s.where[what] == nil {
		s.order = append(s.order, what)
	}
	if !slices.Contains(s.where[what], where) {
		s.where[what] = append(s.where[what], where)
	}
}

// lawsAndMixtures names what acts at one stress.
func lawsAndMixtures(laws []rheology.Law, mixtures []rheology.Mixture) []string {
	var out []string
	for i := range laws {
		l := brief(&laws[i])
		if m := laws[i].Mechanism; m != "" && !strings.Contains(l, m) {
			l += " " + m
		}
		out = append(out, l)
	}
	for range mixtures {
		out = append(out, "a mixture")
	}
	return out
}

// mixes words a mixture: "eclogite (0.6) and anorthite (0.4) mix geometrically".
func mixes(m *rheology.Mixture) string {
	how := map[rheology.Mixing]string{
		rheology.Geometric:     "mix geometrically",
		rheology.IsoStress:     "share one stress, the weak bound of a mixture",
		rheology.IsoStrainRate: "share one strain rate, the strong bound of a mixture",
	}
	return join(phases(m)) + " " + how[m.Rule]
}

// phases names a mixture's phases with their shares.
func phases(m *rheology.Mixture) []string {
	var out []string
	for i := range m.Phases {
		p := &m.Phases[i]
		parts := lawsAndMixtures(p.Laws, nil)
		if len(p.Laws) == 1 && len(p.Mixtures) == 0 {
			parts = []string{brief(&p.Laws[0])}
		}
		for j := range p.Mixtures {
			parts = append(parts, "a mixture of "+join(phases(&p.Mixtures[j])))
		}
		if len(p.Mixtures) > 0 {
			out = append(out, share(p.Fraction)+" of "+strings.Join(parts, " with "))
			continue
		}
		out = append(out, fmt.Sprintf("%s (%s)", strings.Join(parts, " with "), share(p.Fraction)))
	}
	return out
}

// frictionText says where friction decides, rocks of one friction that touch together.
func frictionText(s *state.State) []string {
	type stretch struct {
		from, to float64
		f        rheology.Friction
	}
	var found []stretch
	has := false
	for i, l := range s.Layers {
		f := s.Column.Layers[i].Friction
		if f == nil {
			continue
		}
		has = true
		for j := 0; j < len(l.Points); j++ {
			if !frictional(l.Points[j]) {
				continue
			}
			k := j
			for k+1 < len(l.Points) && frictional(l.Points[k+1]) {
				k++
			}
			from, to := l.Points[j].Depth, l.Points[k].Depth
			if n := len(found); n > 0 && found[n-1].f == *f && from-found[n-1].to < 1 {
				found[n-1].to = to
			} else {
				found = append(found, stretch{from, to, *f})
			}
			j = k
		}
	}
	if has && len(found) == 0 {
		return []string{"Friction decides nowhere: creep is the weaker everywhere."}
	}
	var places said // of one friction
	for _, r := range found {
		where := fmt.Sprintf("from %s to %s km", short(r.from/km), short(r.to/km))
		switch {
		case r.from < 1:
			where = fmt.Sprintf("down to %s km", short(r.to/km))
		case r.to-r.from < 1:
			where = fmt.Sprintf("at %s km", short(r.from/km))
		}
		places.add(fmt.Sprintf("cohesion %s MPa, angle %s deg, pore fluid %s",
			short(r.f.Cohesion/1e6), short(r.f.Angle*180/math.Pi), short(r.f.PoreFluid)), where)
	}
	var out []string
	for _, f := range places.order {
		out = append(out, fmt.Sprintf("Friction decides %s (%s).", join(places.where[f]), f))
	}
	return out
}

func frictional(p state.Point) bool { return p.Yielding && !p.Floored }

// reacted says how far a rock has reacted and how much melt it holds.
func reacted(s *state.State) []string {
	var out []string
	for i := range s.Column.Layers {
		l := &s.Column.Layers[i]
		if r, ok := reaction(l); ok {
			out = append(out, fmt.Sprintf("%s has reacted to %s of its mass, of %s at most.", upper(called(l)), extent(l), share(r.Cap)))
		}
		if l.Melt == nil {
			continue
		}
		most, at := 0.0, 0.0
		for _, p := range s.Layers[i].Points {
			if phi, _ := l.Melt.At(p.T, p.P); phi > most {
				most, at = phi, p.Depth
			}
		}
		switch {
		case most == 0:
			out = append(out, upper(called(l))+" holds no melt: it is below its solidus.")
		case l.Melt.NeedsTemperature():
			out = append(out, fmt.Sprintf("%s holds up to %s %% of melt, at %s km.", upper(called(l)), sig(100*most, 2), short(at/km)))
		default:
			out = append(out, fmt.Sprintf("%s holds %s %% of melt.", upper(called(l)), sig(100*most, 2)))
		}
	}
	return out
}

// reaction returns a layer's two-state density, melt aside. Where the reacted share
// varies in the layer, its Extent is none of them: see extent.
func reaction(l *column.Layer) (column.Reaction, bool) {
	d := solid(l)
	if v, ok := d.(column.Varying); ok {
		d = v.Of
	}
	r, ok := d.(column.Reaction)
	return r, ok
}

// extent writes the reacted share of a layer with a two-state density, or its range.
func extent(l *column.Layer) string {
	switch d := solid(l).(type) {
	case column.Reaction:
		return share(d.Extent)
	case column.Varying:
		least, most := share(slices.Min(d.Extent)), share(slices.Max(d.Extent))
		if least != most {
			return least + " to " + most
		}
		return most
	}
	return ""
}

// solid is a layer's density, melt aside.
func solid(l *column.Layer) column.Density {
	if m, ok := l.Density.(column.Molten); ok {
		return m.Solid
	}
	return l.Density
}

// called is what a sentence calls a layer: the root, or its name.
func called(l *column.Layer) string {
	if l.Root && strings.EqualFold(l.Name, "root") {
		return "the root"
	}
	return l.Name
}
