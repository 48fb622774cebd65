package drip

import "context"

// tape drives a motion and remembers how, so that it can be wound back: a motion only
// goes forwards, and is begun again and driven the same way.
type tape struct {
	begin  func() (Motion, error)
	motion Motion
	strain float64 // ∫ e dt since the beginning, e the extension rate
	done   []act
}

// act is an advance to a time or, with a layer, a removal.
type act struct {
	to    float64
	layer string
	share float64
}

func newTape(begin func() (Motion, error)) (*tape, error) {
	m, err := begin()
	return &tape{begin: begin, motion: m}, err
}

// mark is where the tape is now, for back.
func (t *tape) mark() int { return len(t.done) }

// back winds the tape back to a mark.
func (t *tape) back(ctx context.Context, mark int) error {
	if mark == len(t.done) {
		return nil
	}
	again := t.done[:mark]
	m, err := t.begin()
	if err != nil {
		return err
	}
	t.motion, t.strain, t.done = m, 0, nil
	for _, a := range again {
		if err := t.do(ctx, a); err != nil {
			return err
		}
	}
	return nil
}

func (t *tape) do(ctx context.Context, a act) error {
	t.done = append(t.done, a)
	if a.layer != "" {
		return t.motion.Remove(a.layer, a.share)
	}
	for { // the rate is constant between events
		now, e := t.motion.Time(), t.motion.ExtensionRate()
		to := min(a.to, t.motion.Next())
		if to <= now {
			to = a.to
		}
		if err := t.motion.Advance(ctx, to); err != nil {
			return err
		}
		t.strain += e * (to - now)
		if to == a.to {
			return nil
		}
	}
}

func (t *tape) advance(ctx context.Context, to float64) error { return t.do(ctx, act{to: to}) }

func (t *tape) remove(ctx context.Context, layer string, share float64) error {
	return t.do(ctx, act{layer: layer, share: share})
}
