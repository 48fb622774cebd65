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
		z, i, share := s.Depth, 0, 1.0 // share of cell i; the rest goes to the next one
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
			if s.Height > 0 {
				z = ev.bottom(i)
			}
		} else {
			i, share = ev.between(z)
		}
		if s.Height > 0 && ev.spreadOut(z, s.Height, s.Power) {
			continue
		}
		w.given[i] += s.Power * share
		if i+1 < n {
			w.given[i+1] += s.Power * (1 - share)
		}
	}
}

// spreadOut gives a source around the depth z to the cells its height overlaps, or what
// is left of the height in the column.
func (ev *Evolution) spreadOut(z, height, power float64) bool {
	all, _ := ev.depths()
	a, b := max(z-height/2, 0), min(z+height/2, all)
	if !(b > a) {
		return false
	}
	var top float64
	for i := range ev.cells {
		d := ev.thickness(&ev.cells[i])
		ev.w.given[i] += power * max(min(b, top+d)-max(a, top), 0) / (b - a)
		top += d
	}
	return true
}

// bottom is the depth of a cell's bottom, m.
func (ev *Evolution) bottom(i int) float64 {
	var z float64
	for k := range i + 1 {
		z += ev.thickness(&ev.cells[k])
	}
	return z
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
