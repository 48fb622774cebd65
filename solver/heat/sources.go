package heat

// place finds the cells of the sources of heat.
func (ev *Evolution) place() {
	w, n := &ev.w, len(ev.cells)
	w.sourced = len(ev.sources) > 0 || ev.heater != nil
	if !w.sourced || ev.heater != nil {
		return
	}
	w.size(n)
	for i := range n {
		w.given[i] = 0
	}
	for _, s := range ev.sources {
		var i int
		share := 1.0 // of cell i; the rest goes to the next one
		if s.BaseOf != "" {
			j, ok := ev.find(s.BaseOf)
			if !ok {
				continue
			}
			i = ev.strata[j].hi - 1
			if i+1 < n { // by the conductances, as heat would leave a plane between them
				a, b := &ev.cells[i], &ev.cells[i+1]
				ga := ev.conductance(a)
				share = ga / (ga + ev.conductance(b))
			}
		} else {
			i, share = ev.between(s.Depth)
		}
		w.given[i] += s.Power * share
		if i+1 < n {
			w.given[i+1] += s.Power * (1 - share)
		}
	}
}

func (ev *Evolution) conductance(c *cell) float64 {
	return ev.strata[c.layer].k.Value(c.T, c.P) / ev.thickness(c)
}

// between returns the cell whose middle is the last above a depth, and the share of a
// source there that falls to it: linear between the middles.
func (ev *Evolution) between(z float64) (int, float64) {
	var top, mid float64
	for i := range ev.cells {
		d := ev.thickness(&ev.cells[i])
		next := top + d/2
		if z < next {
			if i == 0 {
				return 0, 1
			}
			return i - 1, (next - z) / (next - mid)
		}
		mid, top = next, top+d
	}
	return len(ev.cells) - 1, 1
}
