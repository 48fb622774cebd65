package growth

import (
	"fmt"
	"math"
)

// Rate returns the leading growth rate at a wavelength in m, with an estimate of its
// relative error: the change between two meshes at the ends of the band of
// wavenumbers that share one, or what rounding leaves of a slow rate beside a fast
// one, whichever is larger. Meshes are refined until the first is below the tolerance.
func (s *Solver) Rate(wavelength float64) (Rate, error) {
	if !positive(wavelength) {
		return Rate{}, fmt.Errorf("%w: %g m", ErrWavelength, wavelength)
	}
	k := 2 * math.Pi / wavelength
	if !(k >= s.mesh.low && k <= s.mesh.high) {
		if err := s.band(k); err != nil {
			return Rate{}, err
		}
	}
	re, im, fastest, ok := s.follow(k)
	if !ok {
		var err error
		if re, im, fastest, err = s.leading(&s.mesh, k); err != nil {
			return Rate{}, err
		}
	}
	size := math.Hypot(re, im)
	rounding := sweepRounding
	if size > 0 {
		rounding += 4 * 0x1p-52 * fastest / size
	}
	return Rate{wavelength, re, im, math.Max(safety*s.bandError, rounding)}, nil
}

const (
	// heatTolerance is what the mesh is refined to, at most twice, where heat diffuses.
	heatTolerance = 1e-6
	// safety multiplies the change between two meshes: the change is taken at the ends
	// of a band, and 1 in 70 random columns has up to three times as much inside it.
	safety = 5
	// sweepRounding is what rounding leaves in the sweeps: the largest seen in random
	// columns of up to eight layers is 3e-12.
	sweepRounding = 4e-12
)

// bandOf returns the band of wavenumbers that k belongs to: fixed bands, an octave and a
// half wide (an octave where heat diffuses, whose matrices grow with the mesh), so that
// a rate does not depend on which wavelengths were asked before.
func (s *Solver) bandOf(k float64) (low, high float64) {
	width := 1.5
	if s.c.Diffusion != nil {
		width = 1
	}
	i := math.Floor(math.Log2(k) / width)
	return math.Exp2(width * i), math.Exp2(width * (i + 1))
}

// band meshes the band of k and estimates its error at both ends.
func (s *Solver) band(k float64) error {
	low, high := s.bandOf(k)
	r, parts, enough := s.rule, 1, s.tol
	if s.c.Diffusion != nil {
		enough = math.Max(s.tol, heatTolerance)
	}
	for try := 0; ; try++ {
		s.mesh.parts, s.fine.parts = parts, 2*parts
		s.divide(&s.mesh, low, high, r)
		s.divide(&s.fine, low, high, r.finer())
		s.bandRule = r
		s.bandError = 0
		for i, kk := range [2]float64{low, high} {
			re, im, fast, err := s.leading(&s.mesh, kk)
			if err != nil {
				return err
			}
			s.ends[i] = rateAt{kk, complex(re, im), re - s.second, fast}
			fre, fim, ok := s.settle(&s.fine, kk, complex(re, im))
			if !ok {
				if fre, fim, _, err = s.leading(&s.fine, kk); err != nil {
					return err
				}
			}
			size := math.Hypot(fre, fim)
			change := math.Hypot(re-fre, im-fim)
			if change > 4*0x1p-52*fast { // below, rounding: counted for each k on its own
				s.bandError = math.Max(s.bandError, change/size)
			}
		}
		if s.bandError <= enough || try == 3 {
			return nil
		}
		if s.c.Diffusion != nil { // halve the elements of heat, and the flow's with them
			if try == 2 {
				return nil
			}
			r, parts = rule{r.span / 2, r.depth}, 2*parts
			continue
		}
		f := math.Pow(s.tol/s.bandError, 1.0/(2*stages)) * 0.9
		r = rule{r.span * math.Max(f, 0.25), r.depth + 1}
	}
}
