package heat

// LayerState is one layer now.
type LayerState struct {
	Top, Thickness float64 // m
	Mass           float64 // kg/m²
	BaseT, BaseP   float64 // K and Pa at its base
}

// Layer returns a layer as it is now; ok is false where it is not there.
func (ev *Evolution) Layer(name string) (l LayerState, ok bool) {
	j, ok := ev.find(name)
	if !ok {
		return l, false
	}
	s := &ev.strata[j]
	for i := range s.hi {
		c := &ev.cells[i]
		if i < s.lo {
			l.Top += ev.thickness(c)
		} else {
			l.Thickness += ev.thickness(c)
			l.Mass += c.m
		}
		l.BaseP += ev.gravity * c.m
	}
	_, l.BaseT = ev.facesOf(s.hi - 1)
	return l, true
}

// Flown returns the mass that rock set with Flux has brought to a layer, negative where
// it has been taken, in kg per m² of the column's area at the start, which stretching has
// widened since by exp(Spread).
func (ev *Evolution) Flown(layer string) float64 { return ev.flown[layer] }

// Spread returns the integral of ExtensionRate over time since the start.
func (ev *Evolution) Spread() float64 { return ev.spread }

// BaseMass returns the thickness in m of the lowest part of a layer that has the mass in
// kg/m², and that mass; less of both where the layer holds less.
func (ev *Evolution) BaseMass(name string, mass float64) (thickness, got float64) {
	j, ok := ev.find(name)
	if !ok {
		return 0, 0
	}
	for i := ev.strata[j].hi - 1; i >= ev.strata[j].lo && got < mass; i-- {
		c := &ev.cells[i]
		m := min(c.m, mass-got)
		thickness += m / ev.rho(c)
		got += m
	}
	return thickness, got
}
