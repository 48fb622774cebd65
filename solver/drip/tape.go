package drip

import "context"

// tape drives a motion and keeps copies of it, so that it can be wound back: a motion
// only goes forwards.
type tape struct {
	motion Motion
	strain float64 // ∫ e dt since the beginning, e the extension rate
	kept   []kept
}

// kept is a motion as it was.
type kept struct {
	motion Motion
	strain float64
}

func newTape(begin func() (Motion, error)) (*tape, error) {
	m, err := begin()
	return &tape{motion: m}, err
}

// mark keeps the motion as it is now, for back.
func (t *tape) mark() int {
	t.kept = append(t.kept, kept{t.motion.Copy(), t.strain})
	return len(t.kept) - 1
}

// back winds the tape back to a mark.
func (t *tape) back(mark int) {
	k := t.kept[mark]
	t.motion, t.strain = k.motion.Copy(), k.strain
	clear(t.kept[mark+1:])
	t.kept = t.kept[:mark+1]
}

// advance drives the motion to a time in s; its rate is constant between events.
func (t *tape) advance(ctx context.Context, end float64) error {
	for {
		now, e := t.motion.Time(), t.motion.ExtensionRate()
		to := min(end, t.motion.Next())
		if to <= now {
			to = end
		}
		if err := t.motion.Advance(ctx, to); err != nil {
			return err
		}
		t.strain += e * (to - now)
		if to == end {
			return nil
		}
	}
}

// remove takes a share of a layer's mass from its base.
func (t *tape) remove(layer string, share float64) error { return t.motion.Remove(layer, share) }
