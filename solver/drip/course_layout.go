package drip

import (
	"slices"
	"strings"

	"keelfall/solver/growth"
)

// footRock says whether a layer is rock of the base that came in.
func footRock(name string) bool { return strings.HasPrefix(name, "asthenosphere") }

// layout says what the states of a follower are: interfaces from the surface down and,
// in layers with parts, displacements at Gauss points.
type layout struct {
	names         []string // of the layers
	surface, base bool     // these can move
	rootBase      int      // interface below the lowest root layer; −1 without a root
	// of each layer that grades, else nil: the marks of the ends of its parts, and of the
	// rock that they are in, with the seam where rock came to its base
	parts, cover [][]float64
	// where temperature is perturbed: the marks of the ends of the elements of T' in each
	// layer and shares of their depth below the column, how thick these are in m, and what
	// numbers their states, which come last
	heat  [][]float64
	sizes []float64
	warm  *growth.Template
}

// perPart is the number of states of a part: Gauss points of an element.
const perPart = 8

// places returns the state of each interface, −1 where it cannot move, the first state
// inside each layer, and how many states there are.
func (l *layout) places() (contact, inside []int, n int) {
	contact, inside = make([]int, len(l.names)+1), make([]int, len(l.names))
	for i := range contact {
		contact[i] = -1
		if i == 0 && l.surface || i > 0 && i < len(l.names) || i == len(l.names) && l.base {
			contact[i] = n
			n++
		}
		if i < len(l.names) {
			inside[i] = n
			n += perPart * max(0, len(l.parts[i])-1)
		}
	}
	n += l.heatStates()
	return contact, inside, n
}

// displaced returns the state of each displacement that a closure takes, −1 of an
// interface that cannot move, and which of them are those of interfaces.
func (l *layout) displaced() (states, contact []int) {
	at, inside, _ := l.places()
	for i, c := range at {
		contact, states = append(contact, len(states)), append(states, c)
		if i < len(l.names) {
			for q := range perPart * max(0, len(l.parts[i])-1) {
				states = append(states, inside[i]+q)
			}
		}
	}
	return states, contact
}

func (l *layout) same(m *layout) bool {
	return l.surface == m.surface && l.base == m.base && l.rootBase == m.rootBase && slices.Equal(l.names, m.names)
}

// carry returns the states y of layout l as those of m. An interface is known by the
// layer above it: one born by intrusion is flat; where layers below it have vanished,
// it takes the amplitude of the lowest of theirs, but for rock of the base, which had
// none of its own. What is inside a layer stays with the rock. Where new rock belongs to the root, the root's base keeps its
// amplitude and what is now inside the root is flat.
func (l *layout) carry(m *layout, y []float64) []float64 {
	from, inside, _ := l.places()
	to, into, n := m.places()
	out := make([]float64, n)
	set := func(i int, v float64) {
		if to[i] >= 0 {
			out[to[i]] = v
		}
	}
	get := func(i int) float64 {
		if i < 0 || from[i] < 0 {
			return 0
		}
		return y[from[i]]
	}
	set(0, get(0))
	for j, name := range m.names {
		i := slices.Index(l.names, name)
		if i < 0 {
			continue
		}
		at := i + 1
		for q := i + 1; q < len(l.names) && !slices.Contains(m.names, l.names[q]); q++ {
			if !footRock(l.names[q]) {
				at = q + 1
			}
		}
		set(j+1, get(at))
		if l.parts[i] != nil && m.parts[j] != nil {
			l.follow(m, i, j, y[inside[i]:], out[into[j]:], get(i), get(at))
		}
	}
	if b := m.rootBase; b > 0 && !slices.Contains(l.names, m.names[b-1]) && l.rootBase > 0 {
		set(b, get(l.rootBase))
		if j := slices.Index(m.names, l.names[l.rootBase-1]); j >= 0 {
			set(j+1, 0)
		}
	}
	l.carryHeat(m, y, out)
	return out
}
