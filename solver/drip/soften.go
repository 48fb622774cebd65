package drip

import (
	"errors"
	"fmt"
	"math"
	"slices"
)

// Descent is how an undulation of the root's base grows under self-softening.
type Descent struct {
	Wavelength float64 // m
	// Time is that of the closure, s, when |ξ| of the base reached what was asked; +Inf
	// where not before the horizon. Slow; Shortfall says by how much.
	Time float64
	// Best is the best estimate, s: every stretch of Time multiplied by the closure's
	// shortfall at the tip (Correction.Centre) for its n, at this kh. With a background
	// it is Time: the closure is exact at its start, and how short it falls later is
	// known only at its worst (Shortfall).
	Best     float64
	Exponent float64   // n weighted with dissipation, averaged over Time
	At, Base []float64 // s, |ξ| of the root's base in m, at the steps taken
	// Strain and Stress are the second invariants of the undulation's own strain rate,
	// 1/s, and stress, Pa, at the root's base, each the largest along it, at the same steps.
	Strain, Stress []float64
	Steps          int
	over           float64 // the undulation's strain rate over the background's, at the end
	// Ended says why there is no Time though time went on: another interface has overturned
	// first. Empty otherwise.
	Ended string
	// Dropped says that it was given up because it takes longer than allowed, see Descents.
	Dropped bool
}

// Time is found by a commutator-free method of order 4 for dξ/dτ = A(ξ, t) ξ. With A exact in
// each exponential, a surface that relaxes 1e7 times faster than the root grows costs no
// steps. Source: Celledoni, Marthinsen & Owren 2003, Future Gener. Comput. Syst. 19,
// 341 (from memory; against finer steps and closed forms it is tested).
const (
	softError = 3e-3 // of a step, of its second-order companion
	firstStep = 0.3  // over the largest rate
	gone      = 1e-9 // of the amplitude at the start: it has died away
	mostSoft  = 4000 // steps
	mostTries = 12   // steps that may be taken again because flow and viscosities did not settle
	fastSpan  = 1e11 // a step over the shortest time in A, at most: squarings lose no more than 1e-5
)

// Time follows an undulation of amplitude (m) on the base of the lowest root layer, all
// else flat, at wavenumber k (rad/m) in this column as it is, until |ξ| of the base is
// stop (m), the horizon (s) has passed or all displacements have died away, to 1e-9.
// The column does not change, so with a background it is for tests and short times.
// ln |ξ| at a time, and the time, are good to 1e-4 where the root's own wavelengths are
// concerned; at the longest, where a free surface and the base almost balance, to 1 %.
func (f *Soft) Time(k, amplitude, stop, horizon float64) (Descent, error) {
	_, last, ok := f.state.Column.RootSpan()
	if !ok {
		return Descent{}, ErrNoRoot
	}
	if !(amplitude > 0) || !(stop > amplitude) || math.IsInf(stop, 0) || !(horizon > 0) {
		return Descent{}, fmt.Errorf("drip: from an amplitude of %g m to %g m in %g s", amplitude, stop, horizon)
	}
	b, err := f.band(k)
	if err != nil {
		return Descent{}, err
	}
	b.forget()
	base := f.contact[last+1]
	if b.flow.Interface[base] < 0 {
		return Descent{}, errWall
	}
	m := &still{soft: f, k: k, kh: k * f.state.Column.RootThickness(), tip: stop}
	r := newSoftRun(m, base, f.stepError, horizon)
	r.y = make([]float64, f.States())
	r.y[r.base] = amplitude
	r.d.Wavelength = 2 * math.Pi / k
	why, err := r.follow()
	if why == overturned {
		r.d.Ended = f.overturn(r.y)
	}
	return r.d, err
}

var errWall = errors.New("drip: the root's base cannot move: it lies on a wall")

// still is a column that does not change.
type still struct {
	soft       *Soft
	k, kh, tip float64
}

func (m *still) flow(_ float64, y []float64) (flowing, error) { return m.soft.flowing(m.k, y) }
func (m *still) unsettled(float64)                            { m.soft.again(m.k) }
func (m *still) stop(float64) float64                         { return m.tip }
func (m *still) depth(float64) float64                        { return m.soft.state.Column.Depth() }
func (m *still) end(float64) (float64, error)                 { return math.Inf(1), nil }

// share is what every stretch of the closure's time is multiplied with for the best
// estimate.
func (m *still) share(n float64) float64 {
	if m.soft.background.second != 0 {
		return 1
	}
	return Corrections(n, m.kh, 0).Centre
}

// overturn says in words what has moved by more than the column is deep, where linear
// theory has long ended.
func (f *Soft) overturn(y []float64) string {
	var z float64
	for i, v := range y {
		if math.Abs(v) > f.state.Column.Depth() {
			what := "rock"
			if slices.Contains(f.contact, i) {
				what = "the interface"
			}
			return fmt.Sprintf("%s at %.3g km has moved by more than the column's depth before the root's base has dripped", what, z/1e3)
		}
		if i < len(f.model.Layers) {
			z += f.model.Layers[i].Thickness
		}
	}
	return ""
}
