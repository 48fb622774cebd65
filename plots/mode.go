package plots

import (
	"fmt"
	"image/color"
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"

	"keelfall/column"
	"keelfall/solver/growth"
)

// Mode draws a mode's shape on the column's depth axis: vertical and horizontal
// velocity, displacement of the interfaces (both with 1 for the largest, downward
// positive), and each layer's share of the dissipation: who resists. width is
// ColumnWidth where 0.
func Mode(col *column.Column, m *growth.Mode, width vg.Length) (Figure, error) {
	width, err := pageWidth(width)
	if err != nil {
		return Figure{}, err
	}
	if m == nil || len(m.Depth) == 0 {
		return Figure{}, fmt.Errorf("plots: there is no mode to draw")
	}
	layers, err := newStrata(col)
	if err != nil {
		return Figure{}, err
	}
	n := len(col.Layers)
	for _, e := range []error{
		sameLength("vertical velocity and depth", len(m.W), len(m.Depth)),
		sameLength("horizontal velocity and depth", len(m.U), len(m.Depth)),
		sameLength("displacements and interfaces", len(m.Displacement), n+1),
		sameLength("dissipation shares, and layers with the half-space", len(m.DissipationShare), n+1),
		finite("depth", m.Depth...), finite("vertical velocity", m.W...), finite("horizontal velocity", m.U...),
		finite("displacement", m.Displacement...), finite("dissipation share", m.DissipationShare...),
		finite("wavelength and growth rate", m.Wavelength, m.Growth),
		downward(m.Depth),
	} {
		if e != nil {
			return Figure{}, e
		}
	}
	f := modeFigure{layers: layers, mode: m, depth: divided(m.Depth, km), share: divided(m.DissipationShare, 0.01)}
	f.w, f.u, f.displacement = f.normalised()
	return Figure{Name: "mode", Caption: f.caption(), Width: width, Height: 100 * vg.Millimeter, draw: f.draw}, nil
}

type modeFigure struct {
	layers       *strata
	mode         *growth.Mode
	depth, w, u  []float64 // km; 1 for the largest
	displacement []float64 // of each interface; 1 for the largest
	share        []float64 // %
}

// normalised scales velocities and displacements to a largest value of 1 and turns
// the mode, whose sign is free, so that the largest displacement is downward.
func (f modeFigure) normalised() (w, u, d []float64) {
	var speed, shift float64
	for i := range f.mode.W {
		speed = math.Max(speed, math.Max(math.Abs(f.mode.W[i]), math.Abs(f.mode.U[i])))
	}
	for _, v := range f.mode.Displacement {
		if math.Abs(v) > math.Abs(shift) {
			shift = v
		}
	}
	if shift == 0 {
		shift = 1
	}
	if speed == 0 {
		speed = 1
	}
	speed = math.Copysign(speed, shift)
	return divided(f.mode.W, speed), divided(f.mode.U, speed), divided(f.mode.Displacement, shift)
}

// pace says how fast the mode grows or decays.
func (f modeFigure) pace() string {
	switch q := f.mode.Growth; {
	case q > 0:
		return "e-folding time " + span(1/q)
	case q < 0:
		return "decays by 1/e in " + span(-1/q)
	}
	return "neither grows nor decays"
}

func (f modeFigure) caption() string {
	s := fmt.Sprintf("The mode at a wavelength of %s km, %s", plain(number(f.mode.Wavelength/km, 3)), plain(f.pace()))
	s += ": velocity (a) and displacement of the interfaces (b), the largest set to 1, downward positive; " +
		"share of the dissipation in each layer (c), which says what resists."
	if last := f.share[len(f.share)-1]; !f.layers.all[len(f.layers.all)-1].below && last >= 0.5 {
		s += fmt.Sprintf(" Below the column: %.0f %%.", last)
	}
	return s + f.layers.remark()
}

// draw lays out depth axis, names and three panels.
func (f modeFigure) draw(s *sheet) {
	const gap = 5
	box := vg.Rectangle{Min: vg.Point{Y: s.Min.Y + xAxisHeight(2) + 2}, Max: vg.Point{Y: s.Max.Y - 27}}
	names := &panel{sheet: s, box: box, x: linear(0, 1), y: f.layers.depth()}
	depths := linearTicks(names.y, names.yFits)
	names.box.Min.X = s.Min.X + yAxisWidth(depths) + 2
	names.box.Max.X = names.box.Min.X + f.layers.stripWidth(s.Max.X-s.Min.X)
	f.layers.strip(names)
	names.frame()
	names.vertical("Depth (km)", depths, false)

	head := "Wavelength " + number(f.mode.Wavelength/km, 3) + " km, " + f.pace()
	s.text(vg.Point{X: names.box.Min.X, Y: s.Max.Y - 4}, head, textStyle{size: letterSize, y: text.YTop})

	x := names.box.Max.X
	room := s.Max.X - 5 - x - 2*gap
	for i, part := range []struct {
		share vg.Length
		draw  func(*panel)
	}{{0.38, f.velocity}, {0.3, f.displacements}, {0.32, f.dissipation}} {
		p := &panel{sheet: s, box: box, y: names.y, overhang: 1}
		p.box.Min.X, p.box.Max.X = x, x+part.share*room
		part.draw(p)
		p.frame()
		p.letter("(" + string(rune('a'+i)) + ")")
		x = p.box.Max.X + gap
	}
}

// velocity draws both components against depth.
func (f modeFigure) velocity(p *panel) {
	lo, hi, _ := bounds(f.w, f.u, []float64{0})
	p.x = padded(lo, hi, 0.14)
	f.layers.shade(p)
	p.horizontal("Velocity\n(largest 1)", linearTicks(p.x, p.xFits), false)
	p.vline(0, stroke(midGrey, hair, solid))
	z, w := smooth(f.depth, f.w)
	_, u := smooth(f.depth, f.u)
	p.line("vertical velocity", w, z, stroke(black, 1.1, solid))
	p.line("horizontal velocity", u, z, stroke(blue, 1.1, dashed))
	f.velocityLabel(p, "vertical", w, z, black)
	f.velocityLabel(p, "horizontal", u, z, blue)
}

// velocityLabel names a curve near its largest value, away from where it fades out.
func (f modeFigure) velocityLabel(p *panel, word string, v, z []float64, c color.Color) {
	largest := -1
	for i := range v {
		if z[i] <= f.layers.bottom && (largest < 0 || math.Abs(v[i]) > math.Abs(v[largest])) {
			largest = i
		}
	}
	if largest < 0 {
		return
	}
	var spots []spot
	for step := range 7 { // at the largest value, then on to both sides of it
		for _, i := range []int{largest - step*len(v)/24, largest + step*len(v)/24} {
			if i >= 0 && i < len(v) {
				spots = append(spots, around(p.pt(v[i], z[i]), 3)[:8]...)
			}
		}
	}
	p.place(c, p.box, spots, word)
}

// displacements draws a bar from 0 at every interface.
func (f modeFigure) displacements(p *panel) {
	lo, hi, _ := bounds(f.displacement, []float64{0})
	p.x = padded(lo, hi, 0.16)
	f.layers.shade(p)
	p.horizontal("Displacement\n(largest 1)", linearTicks(p.x, p.xFits), false)
	p.vline(0, stroke(midGrey, hair, solid))
	p.curves = append(p.curves, curve{"displacement", f.displacement, nil})
	radius := vg.Length(1.7)
	if len(f.displacement) > 20 {
		radius = 0.9
	}
	for i, d := range f.displacement {
		z := f.interfaceDepth(i)
		if z > f.layers.bottom {
			break
		}
		if math.Abs(d) < 5e-3 {
			continue
		}
		a, b := p.pt(0, z), p.pt(d, z)
		p.segment(a, b, stroke(black, thick, solid))
		p.dot(b, radius, black)
	}
}

// interfaceDepth is the depth of the surface (0), a contact, or the base.
func (f modeFigure) interfaceDepth(i int) float64 {
	if i == 0 {
		return 0
	}
	return f.layers.all[i-1].bottom
}

// dissipation draws a bar for every layer, in per cent.
func (f modeFigure) dissipation(p *panel) {
	_, hi, _ := bounds(f.share, []float64{0})
	p.x = scale{lo: 0, hi: math.Max(hi, 1) * 1.1}
	f.layers.shade(p)
	p.horizontal("Dissipation\n(%)", linearTicks(p.x, p.xFits), false)
	p.curves = append(p.curves, curve{"dissipation", f.share, nil})
	var at, high []vg.Length
	var bars []vg.Rectangle
	var words []string
	for i := len(f.layers.all) - 1; i >= 0; i-- { // spread counts upward
		l := f.layers.all[i]
		if l.top >= f.layers.bottom || i >= len(f.share) {
			continue
		}
		clr := darkGrey
		if l.root {
			clr = vermillion
		}
		mid := f.layers.middle(p, l)
		half := min(4, max(0.8, 0.4*(p.atY(l.top)-p.atY(math.Min(l.bottom, f.layers.bottom)))))
		bar := vg.Rectangle{Min: vg.Point{X: p.box.Min.X, Y: mid - half}, Max: vg.Point{X: p.atX(math.Max(f.share[i], 0)), Y: mid + half}}
		p.rect(p.within(bar), clr)
		if f.share[i] >= 0.5 {
			at, high = append(at, mid), append(high, 1.1*typeSize)
			bars, words = append(bars, bar), append(words, fmt.Sprintf("%.0f %%", f.share[i]))
		}
	}
	for i, y := range spread(at, high, p.box.Min.Y+1, p.box.Max.Y-1) {
		if math.Abs(float64(y-at[i])) > 3.5 {
			continue // too far from its bar to be read as its
		}
		end, w := bars[i].Max.X, width(words[i], typeSize)
		if end+3+w < p.box.Max.X-1 {
			p.text(vg.Point{X: end + 3, Y: y}, words[i], textStyle{x: text.XLeft, y: text.YCenter})
		} else if bars[i].Size().Y > typeSize && w+5 < end-p.box.Min.X {
			p.text(vg.Point{X: end - 3, Y: y}, words[i], textStyle{x: text.XRight, y: text.YCenter, color: white})
		}
	}
}
