package drip

import "math"

// tracePoints is the number of times at which a trace of a frozen column is taken.
const tracePoints = 120

// traces are the undulations of the curve until they drip or the window ends; where the
// first drip comes later, until a little after that, up to twice the window.
func (p *problem) traces(first float64) []Trace {
	end := math.Max(p.set.Window, math.Min(1.1*first, 2*p.set.Window))
	if math.IsInf(first, 1) {
		end = p.set.Window
	}
	out := make([]Trace, len(p.points))
	for i, f := range p.points {
		a := p.set.Start(f.Wavelength, p.stop)
		if a == 0 {
			continue
		}
		last := math.Min(end, p.time(f, 1))
		for j := 0; j <= tracePoints; j++ {
			t := last * float64(j) / tracePoints
			out[i].add(t, f.Wavelength, a*math.Abs(f.Base(t)))
		}
	}
	return out
}

// firstTrace is the trace of the first drip, an undulation of amplitude a in m, with its
// strain rates and stresses: those of the flow that all displacements drive at that time.
func (p *problem) firstTrace(w answered, a float64, r *Result) (Trace, error) {
	var out Trace
	f, end := w.undulation, r.Time
	for j := 0; j <= tracePoints; j++ {
		t := end * float64(j) / tracePoints
		x := f.States(t)
		for i := range x {
			x[i] *= a
		}
		c, err := w.solver.Contact(r.Wavelength, x, p.base)
		if err != nil {
			return out, err
		}
		rate, stress := c.Invariants()
		out.add(t, r.Wavelength, a*math.Abs(f.Base(t)))
		out.StrainRate, out.Stress, out.Background = append(out.StrainRate, rate), append(out.Stress, stress), append(out.Background, 0)
	}
	return out, nil
}

func (t *Trace) add(time, wavelength, base float64) {
	t.Time, t.Wavelength, t.Base = append(t.Time, time), append(t.Wavelength, wavelength), append(t.Base, base)
}

// displaced is a column at one time and its displacements.
type displaced struct {
	t          float64 // s
	node, next *node   // the column then lies between these, the share x towards next; nil: at node
	x          float64
	wavelength float64 // m, then
	lay        layout
	states     []float64 // m
}

// store keeps the displacements at a node, where that is asked for.
func (f *follower) store(g *group, n *node, y []float64, log float64) {
	if !f.keep {
		return
	}
	f.kept = append(f.kept, displaced{t: n.t, node: n, wavelength: g.wavelength(f, n), lay: f.lay, states: f.metres(y, log)})
}

// metres are states y e^log of a unit undulation in m.
func (f *follower) metres(y []float64, log float64) []float64 {
	out := make([]float64, len(y))
	for i, v := range y {
		out[i] = f.size * v * math.Exp(log)
	}
	return out
}

// traceSpan is the share of a course that two points of a trace are apart at most.
const traceSpan = 1.0 / 60

// inside adds points between the nodes of a step to the trace, where they lie far apart,
// in the way that drips looks between them.
func (f *follower) inside(s *stepper, g *group, d stride, base int) {
	h := d.to.t - d.from.t
	n := int(math.Ceil(h / f.every))
	if f.trace == nil || n < 2 || len(d.y) > few {
		return
	}
	var at []float64
	out := make([]float64, len(d.y))
	value := func(x float64) float64 {
		at = d.mean(at, x)
		s.set(at, len(out), x*h, f.most)
		l := s.apply(out, d.y)
		return d.log + l + logSize(out[base])
	}
	shift := d.end - value(1) - d.fix
	if math.IsNaN(shift) || math.IsInf(shift, 0) {
		return
	}
	for i := 1; i < n; i++ {
		x := float64(i) / float64(n)
		t, wavelength := d.from.t+x*h, f.first*math.Exp(d.from.strain+x*(d.to.strain-d.from.strain)-g.strain0)
		log := value(x) + d.fix + x*shift
		f.trace.add(t, wavelength, f.size*math.Exp(log))
		if f.keep {
			f.kept = append(f.kept, displaced{t, d.from, d.to, x, wavelength, f.lay, f.metres(out, log-logSize(out[base]))})
		}
	}
}

// traceOf is a follower's trace up to its drip.
func (d *through) traceOf(f *follower) Trace {
	var out Trace
	if f.trace == nil {
		return out
	}
	for i, t := range f.trace.Time {
		if t >= f.times[1] {
			break
		}
		out.add(t, f.trace.Wavelength[i], f.trace.Base[i])
	}
	if t := f.times[1]; !math.IsInf(t, 1) {
		out.add(t, f.first*d.stretched(t), d.set.Criterion*d.rootAt(t))
	}
	return out
}

// rootAt is the root's thickness at a time of the course, m.
func (d *through) rootAt(t float64) float64 {
	for _, l := range d.course.legs {
		if t <= l.end.t && l.end.t > l.from.t {
			x := (t - l.from.t) / (l.end.t - l.from.t)
			return l.from.root * math.Pow(l.end.root/l.from.root, x)
		}
	}
	return d.course.last().root
}

// firstTrace is the trace of the first drip with its strain rates and stresses: those of
// the flow that all displacements drive at that time, in the column then.
func (d *through) firstTrace(f *follower) (Trace, error) {
	var at, rate, stress, back []float64 // rate and stress per metre of the base's displacement
	for _, k := range f.kept {
		contact, _, _ := k.lay.places()
		size := math.Max(math.Abs(k.states[contact[k.lay.rootBase]]), 1e-9*f.size)
		var mean [3]float64
		for i, n := range []*node{k.node, k.next} {
			share := [2]float64{1 - k.x, k.x}[i]
			if n == nil {
				continue
			}
			form := n.form.Twin()
			if err := k.lay.place(form, n, k.wavelength); err != nil {
				return Trace{}, err
			}
			c, err := form.Contact(k.wavelength, k.lay.parts, k.states, k.lay.rootBase)
			form.Release()
			if err != nil {
				return Trace{}, err
			}
			r, s := c.Invariants()
			mean[0], mean[1], mean[2] = mean[0]+share*r/size, mean[1]+share*s/size, mean[2]+share*math.Abs(n.model.VerticalStrain)
		}
		at, rate, stress, back = append(at, k.t), append(rate, mean[0]), append(stress, mean[1]), append(back, mean[2])
	}
	out := d.traceOf(f)
	for i, t := range out.Time { // only the drip itself lies between two of them
		out.StrainRate = append(out.StrainRate, out.Base[i]*straight(at, rate, t))
		out.Stress = append(out.Stress, out.Base[i]*straight(at, stress, t))
		out.Background = append(out.Background, straight(at, back, t))
	}
	return out, nil
}

// straight interpolates y(x) linearly at v within x, which does not decrease.
func straight(x, y []float64, v float64) float64 {
	if v <= x[0] {
		return y[0]
	}
	for i := 1; i < len(x); i++ {
		if v <= x[i] && x[i] > x[i-1] {
			return y[i-1] + (y[i]-y[i-1])*(v-x[i-1])/(x[i]-x[i-1])
		}
	}
	return y[len(y)-1]
}

// trace is a descent's, its times those of the best estimate: the closure's times ratio.
// Strain rates and stresses are the closure's own at that amplitude.
func (q *softSearch) trace(d Descent, ratio float64) (out Trace) {
	if b := q.best(d); !math.IsInf(b, 1) && d.Time > 0 {
		ratio = b / d.Time
	}
	for i, t := range d.At {
		out.add(t*ratio, d.Wavelength, d.Base[i])
	}
	if len(d.Strain) == len(d.At) {
		out.StrainRate, out.Stress, out.Background = d.Strain, d.Stress, make([]float64, len(d.At))
	}
	return out
}

// traces are those of all wavelengths; ratio is for what was given up.
func (q *softSearch) traces(ratio float64) (out []Trace) {
	for _, d := range q.list {
		out = append(out, q.trace(d, ratio))
	}
	return out
}
