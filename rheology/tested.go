package rheology

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// Tested is where the experiments behind a law were, as far as its source says.
type Tested struct {
	T, P   Interval // K, Pa
	Stress Interval // differential stress, or what the test measures, Pa
	Status string   // seen or memory, as Status
}

// Interval is a range of values; a High of 0 says that none is known, Low = 0 or
// High = +Inf that one end is not.
type Interval struct{ Low, High float64 }

// roomPressure is one standard atmosphere, Pa; exact by definition.
const roomPressure = 101325

// Covers reports whether the experiments reached T in K, P in Pa and the stress, as the
// law's test measures it, in Pa: whether every range that is known holds it. known is
// whether that of the temperatures is among them. A pressure may be half a GPa from
// experiments at a single one; the ends of a range count with round-off.
func (t *Tested) Covers(T, P, stress float64) (inside, known bool) {
	return t.T.holds(T) && t.Pressures(P) && t.Stress.holds(stress), t.T.Known()
}

// Pressures reports whether the experiments reached P in Pa, as Covers has it.
func (t *Tested) Pressures(P float64) bool {
	return t.P.holds(P) || t.P.Low == t.P.High && math.Abs(P-t.P.Low) <= pressureSlack
}

// holds reports whether x lies in the range, or the range is not known.
func (i Interval) holds(x float64) bool {
	return !i.Known() || x >= i.Low*(1-1e-12) && x <= i.High*(1+1e-12)
}

// Known says whether the source gives the range.
func (i Interval) Known() bool { return i.High != 0 }

// text words the interval in the unit of the format.
func (i Interval) text(format string, zero, scale float64) string {
	show := func(x float64) string { return fmt.Sprintf(format, (x-zero)/scale) }
	number, unit, _ := strings.Cut(format, " ")
	switch {
	case math.IsInf(i.High, 1):
		return "above " + show(i.Low)
	case i.Low == 0 && zero != 0: // no end; a pressure begins at 0
		return "below " + show(i.High)
	}
	low := fmt.Sprintf(number, (i.Low-zero)/scale)
	if high := show(i.High); high != low+" "+unit {
		return low + " to " + high
	}
	return show(i.High)
}

// interval reads "1027 to 1427", "300", ">120" or "<560", in a unit of so many SI units,
// from a zero of the scale at the offset. With zero a range may begin at 0, and 0 alone is
// the pressure of the room.
func interval(at func(*Law) *Interval, times, offset float64, zero bool) func(*Law, string) error {
	return func(l *Law, s string) error {
		if s == "" {
			return nil
		}
		var err error
		read := func(s string) float64 {
			x, e := strconv.ParseFloat(strings.TrimSpace(s), 64)
			if x = x*times + offset; e != nil || !inRange(x) && !(zero && x == 0) {
				err = fmt.Errorf("%q is not a range; needs one like 300, 1000 to 1200, >120 or <560", s)
			}
			return x
		}
		i := at(l)
		if above, ok := strings.CutPrefix(s, ">"); ok {
			*i = Interval{read(above), math.Inf(1)}
		} else if below, ok := strings.CutPrefix(s, "<"); ok {
			*i = Interval{0, read(below)}
		} else if low, high, ok := strings.Cut(s, " to "); ok {
			*i = Interval{read(low), read(high)}
		} else if *i = (Interval{read(s), read(s)}); err == nil && i.High == 0 {
			*i = Interval{roomPressure, roomPressure}
		}
		if err == nil && (i.Low > i.High || i.High == 0) {
			err = fmt.Errorf("%q ends below its start", s)
		}
		return err
	}
}

// Pivot is a point in the middle of a law's experiments: T in K, P in Pa, and Stress, as
// the law's test measures it, in Pa.
type Pivot struct{ T, P, Stress float64 }

// Pivot returns the middle of the experiments: of 1/T, of P and of the logarithm of
// stress; of a range open to one side its end. ok is false where the temperatures are
// not known or open. An unknown pressure is 0, an unknown stress 1 MPa.
func (t *Tested) Pivot() (p Pivot, ok bool) {
	if !(t.T.Low > 0) || math.IsInf(t.T.High, 1) {
		return Pivot{}, false
	}
	p = Pivot{T: 2 / (1/t.T.Low + 1/t.T.High), Stress: 1e6}
	switch {
	case math.IsInf(t.P.High, 1):
		p.P = t.P.Low
	case t.P.Low == 0:
		p.P = t.P.High
	default:
		p.P = (t.P.Low + t.P.High) / 2
	}
	switch s := t.Stress; {
	case !s.Known():
	case math.IsInf(s.High, 1):
		p.Stress = s.Low
	case s.Low == 0:
		p.Stress = s.High
	default:
		p.Stress = math.Sqrt(s.Low) * math.Sqrt(s.High)
	}
	return p, true
}
