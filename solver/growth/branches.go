package growth

import (
	"context"
	"math"
	"runtime"
	"sync"
)

// Branch is one mode followed across wavelengths.
type Branch struct {
	Modes []*Mode // by increasing wavelength; where it is among the modes returned
}

// Branches follows every growing mode across wavelengths (m, increasing): at each, the
// modes are matched to those of the wavelength before by the overlap of their velocity
// profiles, largest overlap first, so that branches cross without swapping. A mode
// that matches none with an overlap above one half starts a branch. Branches come in
// the order in which they begin, the faster first.
func Branches(ctx context.Context, c *Column, wavelengths []float64, o Options) ([]Branch, error) {
	modes := make([][]*Mode, len(wavelengths))
	workers := o.Workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	workers = max(1, min(workers, len(wavelengths)))
	errs := make([]error, workers)
	var wg sync.WaitGroup
	for w := range workers {
		wg.Go(func() {
			s, err := NewSolver(c, o.Tolerance)
			for i := w; i < len(wavelengths) && err == nil; i += workers {
				if err = ctx.Err(); err == nil {
					modes[i], err = s.Modes(wavelengths[i]) // worker w owns its slots
				}
			}
			errs[w] = err
		})
	}
	wg.Wait()
	for _, err := range errs {
		if err != nil {
			return nil, err
		}
	}
	depth := c.Depths()
	total := depth[len(depth)-1]
	var all []Branch
	var ends []int // the branches that reach the wavelength before
	for _, now := range modes {
		profiles := make([]profile, len(now))
		for j, m := range now {
			profiles[j] = m.profile(total)
		}
		taken := make([]bool, len(now))
		var reach []int
		for {
			best, bi, bj := 0.5, -1, -1
			for e, b := range ends {
				if b < 0 {
					continue
				}
				last := all[b].Modes[len(all[b].Modes)-1].profile(total)
				for j := range now {
					if o := last.overlap(profiles[j]); !taken[j] && o > best {
						best, bi, bj = o, e, j
					}
				}
			}
			if bi < 0 {
				break
			}
			b := ends[bi]
			all[b].Modes = append(all[b].Modes, now[bj])
			ends[bi], taken[bj] = -1, true
			reach = append(reach, b)
		}
		for j, m := range now {
			if !taken[j] {
				all = append(all, Branch{[]*Mode{m}})
				reach = append(reach, len(all)-1)
			}
		}
		ends = reach
	}
	return all, nil
}

// profile is W and U at equal depths, scaled to unit length.
type profile [2 * profilePoints]float64

const profilePoints = 96

// profile samples a mode's velocities down to a depth.
func (m *Mode) profile(depth float64) (p profile) {
	at := 0
	var norm float64
	for i := range profilePoints {
		z := depth * float64(i) / (profilePoints - 1)
		for at+2 < len(m.Depth) && m.Depth[at+1] < z {
			at++
		}
		f := 0.0
		if d := m.Depth[at+1] - m.Depth[at]; d > 0 {
			f = math.Min(1, math.Max(0, (z-m.Depth[at])/d))
		}
		p[2*i] = m.W[at] + f*(m.W[at+1]-m.W[at])
		p[2*i+1] = m.U[at] + f*(m.U[at+1]-m.U[at])
		norm += p[2*i]*p[2*i] + p[2*i+1]*p[2*i+1]
	}
	if norm > 0 {
		for i := range p {
			p[i] /= math.Sqrt(norm)
		}
	}
	return p
}

// overlap is 1 for the same shape, whatever its sign.
func (p *profile) overlap(q profile) float64 {
	var s float64
	for i := range p {
		s += p[i] * q[i]
	}
	return math.Abs(s)
}
