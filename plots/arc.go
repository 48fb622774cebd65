package plots

import (
	"fmt"
	"math"
	"strings"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

// arcLimit is the longest wavelength in force.
type arcLimit struct {
	arc             float64 // km; 0 where there is none
	beyond, limitIs string  // words for wavelengths above arc, and for arc itself
}

// limit is the longest wavelength in force.
func (s Setting) limit() arcLimit {
	if s.Strike {
		return arcLimit{s.ArcLength / km, "longer than the arc", "arc length"}
	}
	return arcLimit{s.ArcWidth / km, "wider than the arc", "arc width"}
}

// arcWords are the caption's words for the grey ground.
func (l arcLimit) arcWords() string {
	if l.arc > 0 {
		return fmt.Sprintf("; grey: %s (%s km)", l.beyond, plain(number(l.arc, 3)))
	}
	return ""
}

// arcBand greys the wavelengths above the limit; arcLine draws the limit.
func (l arcLimit) arcBand(p *panel) {
	if l.arc > 0 && l.arc < p.x.hi {
		p.bandX(math.Max(l.arc, p.x.lo), p.x.hi, paleGrey)
	}
}

func (l arcLimit) arcLine(p *panel) { p.vline(l.arc, stroke(darkGrey, thin, dashed)) }

// arcLabel names the limit that the arc sets: the grey ground beyond it, at its top or
// foot, or, where that has no room, the line itself from the other side.
func (l arcLimit) arcLabel(p *panel) {
	if !(l.arc > p.x.lo && l.arc < p.x.hi) {
		return
	}
	x, top, foot := p.atX(l.arc), p.box.Max.Y-3, p.box.Min.Y+3
	inside := []spot{{vg.Point{X: x + 3, Y: top}, text.XLeft, text.YTop}, {vg.Point{X: x + 3, Y: foot}, text.XLeft, text.YBottom}}
	before := []spot{{vg.Point{X: x - 3, Y: top}, text.XRight, text.YTop}, {vg.Point{X: x - 3, Y: foot}, text.XRight, text.YBottom}}
	for _, words := range []string{l.beyond, strings.Replace(l.beyond, " the", "\nthe", 1)} {
		if _, crossed := p.best(words, p.box, inside); crossed == 0 {
			p.place(darkGrey, p.box, inside, words)
			return
		}
	}
	p.place(darkGrey, p.box, before, l.limitIs)
}
