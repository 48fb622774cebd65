package plots

import (
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

// fewPoints is up to how many wavelengths are marked one by one.
const fewPoints = 15

// growth draws the growth rate.
func (f spectrumFigure) growth() part {
	out := rateAxes(f.rate)
	out.labels = f.peakLabels
	out.curves = func(p *panel) {
		p.hline(0, stroke(midGrey, thin, solid))
		p.line("growth rate", f.wavelength, f.rate, stroke(black, 1.1, solid))
		for i, l := range f.wavelength {
			if len(f.wavelength) <= fewPoints && p.y.has(f.rate[i]) {
				p.dot(p.pt(l, f.rate[i]), 1.5, black)
			}
		}
	}
	return out
}

// rateAxes has a growth-rate axis for rates; one of e-folding time at right where
// anything grows.
func rateAxes(rates ...[]float64) part {
	lo, hi, _ := bounds(rates...)
	if hi > 0 {
		lo = math.Max(math.Min(lo, 0), -0.5*hi) // fast decay is of no interest beside growth
	} else {
		hi = 0
	}
	out := part{left: "Growth rate (1/Myr)"}
	if hi > 0 {
		out.right = "e-folding time (Myr)"
	}
	out.scale = func(p *panel) (left, right []tick) {
		y := linear(lo, hi)
		p.y = scale{lo: y.lo - 0.04*(y.hi-y.lo), hi: y.hi + 0.16*(y.hi-y.lo)}
		if hi > 0 {
			right = foldTicks(p)
		}
		return linearTicks(p.y, p.yFits), right
	}
	return out
}

// foldTicks are round e-folding times at their growth rates, as many as have room.
func foldTicks(p *panel) []tick {
	var out []tick
	first := math.Floor(math.Log10(1 / p.y.hi))
	for e := first; e < first+4; e++ {
		for _, m := range []float64{1, 1.5, 2, 3, 5, 7} {
			t := m * math.Pow(10, e)
			if m == 7 && len(out) > 0 {
				continue
			}
			next := append(out[:len(out):len(out)], tick{1 / t, number(t, 2)})
			if p.y.has(1/t) && p.atY(1/t)-p.atY(0) > typeSize && p.yFits(next) {
				out = next
			}
		}
	}
	return out
}

// peakLabels marks the peaks and writes wavelength and e-folding time.
func (f spectrumFigure) peakLabels(p *panel) {
	for i, peak := range f.peaks[:min(len(f.peaks), 4)] {
		l, q := peak.Wavelength/km, peak.Growth*myr
		if !p.x.has(l) || !p.y.has(q) {
			continue
		}
		at := p.pt(l, q)
		if len(f.wavelength) > fewPoints {
			p.dot(at, 1.7, vermillion)
		}
		at.Y += 1.5
		if q <= 0 {
			p.place(black, p.box, around(at, 3), number(l, 3)+" km, decays")
			continue
		}
		fold := number(1/q, 3) + " Myr"
		wordings := []string{number(l, 3) + " km, " + fold, number(l, 3) + " km,\n" + fold}
		if i == 0 && peak.AtRangeEdge {
			wordings = []string{"fastest at the range's edge:\n" + wordings[0]}
		}
		p.place(black, p.box, append([]spot{{at.Add(vg.Point{Y: 3}), text.XCenter, text.YBottom}}, around(at, 4)...), wordings...)
	}
}
