package plots

import (
	"math"
	"testing"
)

// TestSmooth asserts that a parabola is drawn exactly on either side of a contact, and
// the order of error on a sine.
func TestSmooth(t *testing.T) {
	x := []float64{0, 0.5, 2, 3, 3, 4, 6}
	var y []float64
	for i, v := range x {
		if i > 3 {
			v = 5 - v
		}
		y = append(y, v*v)
	}
	fineX, fineY := smooth(x, y)
	contact := 0
	for i, v := range fineX {
		if i > 0 && v == fineX[i-1] {
			contact = i
		}
		if contact > 0 {
			v = 5 - v
		}
		if math.Abs(fineY[i]-v*v) > 1e-12 {
			t.Errorf("at %g: %g, want %g", fineX[i], fineY[i], v*v)
		}
	}
	if contact == 0 {
		t.Error("the contact does not stand twice")
	}
	worst := func(n int) float64 {
		var x, y []float64
		for i := range n + 1 {
			x = append(x, 3*float64(i)/float64(n))
			y = append(y, math.Sin(x[i]))
		}
		var e float64
		fx, fy := smooth(x, y)
		for i := range fx {
			e = math.Max(e, math.Abs(fy[i]-math.Sin(fx[i])))
		}
		return e
	}
	if order := math.Log2(worst(32) / worst(64)); order < 2.8 { // slopes are second order: the curve is third
		t.Errorf("order %.2f", order)
	}
	if x, y := smooth(nil, nil); len(x)+len(y) != 0 {
		t.Error("something from nothing")
	}
}
