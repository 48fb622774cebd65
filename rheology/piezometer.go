package rheology

import (
	"fmt"
	"math"
	"strings"
)

// Piezometer gives the grain size that recrystallisation keeps at a stress,
//
//	d = B (σ_d/MPa)^−p,  σ_d = √3 τ_II
//
// σ_d is the differential stress of axial compression, in which piezometers are
// calibrated. Valid for dislocation creep in steady state; it is used here for every
// law of a rock that depends on grain size, at the creep laws' own stress (in a mixture
// at each phase's own), whatever a viscosity limit or friction adds or takes.
type Piezometer struct {
	Mineral string
	B       float64 // m, the grain size at 1 MPa, > 0
	P       float64 // p, >= 0
	Source  string
	Status  string // seen or memory, as Status
}

// Piezometers returns those that are built in.
func Piezometers() []Piezometer {
	return []Piezometer{{"olivine", 0.015, 1.33, "van der Wal et al. 1993, Geophys. Res. Lett. 20, 1479", "memory"}}
}

// FindPiezometer returns the built-in piezometer of a mineral.
func FindPiezometer(mineral string) (*Piezometer, error) {
	var known []string
	for _, p := range Piezometers() {
		if fold(mineral) == p.Mineral {
			return &p, nil
		}
		known = append(known, p.Mineral)
	}
	return nil, fmt.Errorf("rheology: no piezometer %q; known are %s", mineral, strings.Join(known, ", "))
}

// GrainSize returns d in m at the creep stress τ_II in Pa.
func (p *Piezometer) GrainSize(tau float64) float64 {
	a, b := p.line()
	return math.Exp(a - b*math.Log(tau))
}

// line returns ln d = a − b ln τ_II.
func (p *Piezometer) line() (a, b float64) {
	return math.Log(p.B) - p.P*math.Log(math.Sqrt(3)/1e6), p.P
}

// Validate returns an error, with the numbers, for a piezometer that gives no size.
func (p *Piezometer) Validate() error {
	if !inRange(p.B) || !(p.P >= 0) || math.IsInf(p.P, 1) {
		return fmt.Errorf("rheology: piezometer %s: B = %g m, p = %g", p.Mineral, p.B, p.P)
	}
	return nil
}

// caution says that a piezometer was recalled; empty where it was read.
func (p *Piezometer) caution() string {
	if p.Status != "memory" {
		return ""
	}
	return fmt.Sprintf("grain size follows the stress, %s piezometer d = %g mm (σ_d/MPa)^-%g: numbers recalled from memory, to be checked against %s", p.Mineral, p.B*1e3, p.P, p.Source)
}
