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
// from a zero of the scale at the offset.
func interval(at func(*Law) *Interval, times, offset float64) func(*Law, string) error {
	return func(l *Law, s string) error {
		if s == "" {
			return nil
		}
		var err error
		read := func(s string) float64 {
			x, e := strconv.ParseFloat(strings.TrimSpace(s), 64)
			if x = x*times + offset; e != nil || !inRange(x) {
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
		} else {
			*i = Interval{read(s), read(s)}
		}
		if err == nil && i.Low > i.High {
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
