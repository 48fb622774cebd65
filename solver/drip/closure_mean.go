package drip

import "math"

// quarterPoints is the number of points in a quarter of a wavelength at which the
// closure takes its means: twenty in a whole one.
const quarterPoints = 5

// The points x over half a wavelength and their weights, θ = kx. Near walls and where
// shear vanishes η rises like a power of |sin θ| or |cos θ|, so points crowd there:
// θ = (π/2)(u − crowd sin(2πu)/2π), midpoints in u, which keeps the means of 1, cos θ and
// cos² θ exact. A hanging layer's rate is within 3e-5 of that with 256 points for n up to 5
// (measured).
const crowd = 0.65

var cosX, sinX, partX [2 * quarterPoints]float64

func init() {
	for i := range quarterPoints {
		u := (float64(i) + 0.5) / quarterPoints
		s, c := math.Sincos(2 * math.Pi * u)
		w := (1 - crowd*c) / quarterPoints
		y, x := math.Sincos(math.Pi / 2 * (u - crowd*s/(2*math.Pi)))
		j := 2*quarterPoints - 1 - i
		cosX[i], sinX[i], partX[i] = x, y, w
		cosX[j], sinX[j], partX[j] = -x, y, w
	}
}

// mean is the closure at one depth.
type mean struct {
	lnS, lnN float64 // ln η_S, ln η_N
	exponent float64 // n at the mean ln ε_II
	// gainS and gainN are how ln η_S and ln η_N rise with ln of the undulation's strain
	// rates, both at once.
	gainS, gainN float64
}

// closure averages the rock's law over a wavelength, with
//
//	ε_II² = (d − W' cos kx)² + s̃² sin² kx + ε₀² − d²
//	η_S = ⟨2 η sin² kx⟩     η_N = ⟨2 η cos² kx⟩ − 2 d ⟨η cos kx⟩/W'
//
// where shear is 2 s̃ = U' − kW and normal W'. least bounds ε_II² from below. Source:
// least dissipation in a single harmonic, derived.
func (l *nodeLaw) closure(shear, normal float64, b rates, least float64) (mean, error) {
	s2 := shear * shear / 4
	rest := b.second*b.second - b.d*b.d
	points := quarterPoints // the other quarters are the same where nothing strains
	if b.d != 0 {
		points *= 2
	}
	var etaS, etaN, cross, riseS, riseN, riseCross, tangents, largest float64
	for q := range points {
		c, s := cosX[q], sinX[q]
		n := b.d - normal*c
		e2 := math.Max(n*n+s2*s*s+rest, least)
		eta, rise, tangent, err := l.eta(e2)
		if err != nil {
			return mean{}, err
		}
		p := partX[q]
		eta *= p
		etaS += eta * s * s
		etaN += eta * c * c
		cross += eta * c
		rise *= 2 * p * (s2*s*s - n*normal*c) // dη/d ln of the undulation
		riseS += rise * s * s
		riseN += rise * c * c
		riseCross += rise * c
		tangents += p * tangent
		largest = math.Max(largest, e2)
	}
	if b.d != 0 { // both halves of the half
		etaS, etaN, cross, tangents = etaS/2, etaN/2, cross/2, tangents/2
		riseS, riseN, riseCross = riseS/2, riseN/2, riseCross/2
	}
	etaS, etaN, riseS, riseN = 2*etaS, 2*etaN, 2*riseS, 2*riseN
	if b.d != 0 {
		plain := etaN
		if math.Abs(normal) < 1e-6*math.Sqrt(largest) {
			e2 := math.Max(b.second*b.second+s2/2, least) // the limit: cos² and dη/d(ε_II²)
			_, rise, _, err := l.plain(e2)
			if err != nil {
				return mean{}, err
			}
			etaN += 2 * b.d * b.d * rise
			riseN = 0
		} else {
			etaN -= 2 * b.d * cross / normal
			riseN -= 2 * b.d * (riseCross - cross) / normal
		}
		etaN = math.Max(etaN, 1e-6*plain) // positive for every law that hardens with rate; rounding
	}
	return mean{math.Log(etaS), math.Log(etaN), 1 / (1 + tangents), riseS / etaS, riseN / etaN}, nil
}

// rates describe the background: d, e_z and the second invariant ε₀, 1/s.
type rates struct{ d, vertical, second float64 }

// least is the ε_II² below which rock is not asked: 1e-12 of the column's largest rate,
// which no flow feels, so that the viscosities of rock at rest stay finite.
func (f *Soft) least(b *softBand) float64 {
	most := f.background.second * f.background.second
	for i, s := range b.flow.Shear {
		n := b.flow.Normal[i]
		most = math.Max(most, s*s/4+n*n)
	}
	return math.Max(1e-24*most, math.Exp(2*lowestLnRate))
}
