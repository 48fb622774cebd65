package plots

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/plot/vg"

	"keelfall/solver/drip"
	"keelfall/solver/growth"
	"keelfall/solver/race"
)

// Setting is what growth and drip times are held against.
type Setting struct {
	ArcWidth  float64 // m; 0 where not given: longer undulations do not fit across the arc
	ArcLength float64 // m; 0 where not given: used in place of the width where Strike is set
	Strike    bool    // the undulation varies along strike
	Window    float64 // s; 0 where not given
}

// SettingOf is what an experiment holds growth and drip times against.
func SettingOf(p *race.Problem) Setting {
	return Setting{ArcWidth: p.ArcWidth, ArcLength: p.ArcLength, Strike: p.Strain.Wavevector == race.AlongStrike, Window: p.Drip.Window}
}

// Spectrum draws growth rate and e-folding time against wavelength and, below, drip
// time against wavelength. Either part may be missing: sp nil or without rates, dr nil
// or without a curve; an error where both are. width is ColumnWidth where 0.
func Spectrum(sp *growth.Spectrum, dr *drip.Result, against Setting, width vg.Length) (Figure, error) {
	width, err := pageWidth(width)
	if err != nil {
		return Figure{}, err
	}
	f := spectrumFigure{arcLimit: against.limit(), window: against.Window / myr}
	if err := finite("arc and window", f.arc, f.window); err != nil {
		return Figure{}, err
	}
	if sp != nil {
		if err := f.takeRates(sp); err != nil {
			return Figure{}, err
		}
	}
	if dr != nil {
		if err := f.takeDrip(dr); err != nil {
			return Figure{}, err
		}
	}
	height := 62 * vg.Millimeter
	switch {
	case len(f.wavelength) == 0 && len(f.dripWavelength) == 0:
		return Figure{}, fmt.Errorf("plots: there is no growth rate or drip time to draw")
	case len(f.wavelength) > 0 && len(f.dripWavelength) > 0:
		height = 110 * vg.Millimeter
	}
	lo, hi, _ := bounds(f.wavelength, f.dripWavelength)
	f.x = logarithmic(lo, hi)
	if max(len(f.wavelength), len(f.dripWavelength)) <= fewPoints {
		f.x = logarithmic(f.x.lo/1.1, f.x.hi*1.1) // whole dots at the ends
	}
	return Figure{Name: "spectrum", Caption: f.caption(), Width: width, Height: height, draw: f.draw}, nil
}

// spectrumFigure is in km, Myr and 1/Myr, by increasing wavelength.
type spectrumFigure struct {
	arcLimit
	x                        scale
	window                   float64
	wavelength, rate         []float64
	peaks                    []growth.Peak
	dripWavelength, dripTime []float64
	low, high                []float64 // drip time for an undulation × 3 and ÷ 3; may be nil
	drip                     *drip.Result
}

func (f *spectrumFigure) takeRates(sp *growth.Spectrum) error {
	rates := slices.Clone(sp.Rates)
	slices.SortStableFunc(rates, func(a, b growth.Rate) int { return cmp.Compare(a.Wavelength, b.Wavelength) })
	for _, r := range rates {
		f.wavelength = append(f.wavelength, r.Wavelength/km)
		f.rate = append(f.rate, r.Growth*myr)
	}
	if err := wavelengths(f.wavelength); err != nil {
		return err
	}
	f.peaks = slices.Clone(sp.Peaks)
	if top := sp.Fastest; len(rates) > 1 && top.Wavelength > 0 && !slices.ContainsFunc(f.peaks, func(p growth.Peak) bool { return p.Wavelength == top.Wavelength }) {
		f.peaks = append([]growth.Peak{top}, f.peaks...)
	}
	for _, p := range f.peaks {
		if err := finite("fastest growth", p.Wavelength, p.Growth); err != nil {
			return err
		}
	}
	return finite("growth rate", f.rate...)
}

func (f *spectrumFigure) takeDrip(dr *drip.Result) error {
	c := dr.Curve
	if err := sameLength("drip times and wavelengths", len(c.Time), len(c.Wavelength)); err != nil {
		return err
	}
	order := sortedBy(c.Wavelength)
	banded := len(c.Low) > 0 && len(c.High) > 0
	if banded {
		for _, err := range []error{sameLength("drip times for other undulations", len(c.Low), len(c.Time)), sameLength("drip times for other undulations", len(c.High), len(c.Time))} {
			if err != nil {
				return err
			}
		}
	}
	drips := false
	for _, i := range order {
		if t := c.Time[i]; math.IsNaN(t) || t < 0 {
			return fmt.Errorf("plots: drip time: %g s at %g m cannot be drawn", t, c.Wavelength[i])
		} else if t > 0 && !math.IsInf(t, 1) {
			drips = true
		}
		f.dripWavelength = append(f.dripWavelength, c.Wavelength[i]/km)
		f.dripTime = append(f.dripTime, c.Time[i]/myr)
		if banded {
			if math.IsNaN(c.Low[i]) || math.IsNaN(c.High[i]) {
				return fmt.Errorf("plots: drip time for another undulation: not a number at %g m", c.Wavelength[i])
			}
			f.low, f.high = append(f.low, c.Low[i]/myr), append(f.high, c.High[i]/myr)
		}
	}
	if !drips { // nothing to show against wavelength; the caption says so
		f.dripWavelength, f.dripTime = nil, nil
	}
	f.drip = dr
	return wavelengths(f.dripWavelength)
}

func wavelengths(l []float64) error {
	for _, v := range l {
		if !(v > 0) {
			return fmt.Errorf("plots: wavelength: %g km cannot be drawn on a log axis", v)
		}
	}
	return finite("wavelength", l...)
}

func (f spectrumFigure) caption() string {
	s := ""
	switch {
	case len(f.dripWavelength) == 0:
		s = "Growth rate of the fastest mode against wavelength"
	case len(f.wavelength) == 0:
		s = "Drip time against wavelength"
	default:
		s = "Growth rate of the fastest mode (a) and drip time (b) against wavelength"
	}
	s += f.arcWords() + "."
	if f.drip == nil {
		return s
	}
	if len(f.dripWavelength) == 0 {
		if _, hi, _ := bounds(f.rate); hi > 0 {
			return s + " No wavelength drips in the time looked ahead: growth is too slow."
		}
		return s + " Nothing drips at any wavelength."
	}
	if f.low != nil {
		s += " Blue: drip times for an undulation three times as high (lower edge) and a third as high (upper edge)."
	} else if f.hasBar() {
		s += fmt.Sprintf(" Bar: drip time for an undulation three times as high (%s) and a third as high (%s).",
			plain(span(f.drip.TimeLow)), plain(span(f.drip.TimeHigh)))
	}
	if f.drip.SpacingTo > f.drip.SpacingFrom && f.drip.SpacingFrom > 0 {
		s += fmt.Sprintf(" Thick grey: spacings that drip within 10 %% of the least time (%s to %s km).",
			plain(number(f.drip.SpacingFrom/km, 3)), plain(number(f.drip.SpacingTo/km, 3)))
	}
	return s
}

// draw stacks the panels on one wavelength axis.
func (f spectrumFigure) draw(s *sheet) {
	var parts []part
	if len(f.wavelength) > 0 {
		parts = append(parts, f.growth())
	}
	if len(f.dripWavelength) > 0 {
		parts = append(parts, f.dripTimes())
	}
	for i := range parts {
		parts[i].back, parts[i].front = f.arcBand, f.arcLine
	}
	labels := parts[0].labels
	parts[0].labels = func(p *panel) {
		labels(p)
		f.arcLabel(p)
	}
	s.stack(parts, f.x, s.Min.Y+xAxisHeight(1)+2, s.Max.Y-6, "Wavelength (km)", func(p *panel) []tick { return logTicks(p.x, true, p.xFits) })
}
