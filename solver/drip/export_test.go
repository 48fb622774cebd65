package drip

import "context"

// Path is what undulations did, for tests in package drip_test.
type Path struct {
	Legs   int
	States []int
	Times  [][3]float64
	Log    []float64 // ln |base| at the end
}

// FollowAll follows first wavelengths to the window's end; finer is by how much more
// parts, ends where the pairs end, where given.
func FollowAll(ctx context.Context, p Plan, set Settings, list []float64, finer int, ends []float64) (*Path, []float64, error) {
	d, err := newThrough(ctx, p, set, Options{})
	if err != nil {
		return nil, nil, err
	}
	d.course.finer, d.course.ends = finer, ends
	if d.grid, err = newGroup(d.course, set, list, 0); err != nil {
		return nil, nil, err
	}
	if err := d.to(ctx, set.Window); err != nil {
		return nil, nil, err
	}
	out := &Path{Legs: len(d.course.legs)}
	for _, f := range d.grid.list {
		out.States = append(out.States, len(f.y))
		out.Times = append(out.Times, f.times)
		out.Log = append(out.Log, f.log+logSize(f.y[f.base()]))
	}
	var halves []float64
	for _, l := range d.course.legs {
		if l.mid != nil {
			halves = append(halves, l.mid.t, l.end.t)
		}
	}
	return out, halves, nil
}

// Finer are the times with twice the parts on the very nodes of a course.
func Finer(ctx context.Context, p Plan, set Settings, list []float64) (own, finer [][3]float64, err error) {
	d, err := newThrough(ctx, p, set, Options{})
	if err != nil {
		return nil, nil, err
	}
	if d.grid, err = newGroup(d.course, set, list, 0); err != nil {
		return nil, nil, err
	}
	if err = d.to(ctx, set.Window); err != nil {
		return nil, nil, err
	}
	d.course.finer = 2
	g, err := newGroup(d.course, set, list, 0)
	if err != nil {
		return nil, nil, err
	}
	if err = g.again(ctx, d.course); err != nil {
		return nil, nil, err
	}
	for i, f := range d.grid.list {
		own, finer = append(own, f.times), append(finer, g.list[i].times)
	}
	return own, finer, nil
}
