package plots

import (
	"cmp"
	"image/color"
	"math"
	"slices"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

// overlaps reports whether two boxes share more than an edge.
func overlaps(a, b vg.Rectangle) bool {
	return a.Min.X < b.Max.X && b.Min.X < a.Max.X && a.Min.Y < b.Max.Y && b.Min.Y < a.Max.Y
}

// inside reports whether a lies in b.
func inside(a, b vg.Rectangle) bool {
	return a.Min.X >= b.Min.X && a.Max.X <= b.Max.X && a.Min.Y >= b.Min.Y && a.Max.Y <= b.Max.Y
}

// grown returns r with a margin of d all round.
func grown(r vg.Rectangle, d vg.Length) vg.Rectangle {
	return vg.Rectangle{Min: vg.Point{X: r.Min.X - d, Y: r.Min.Y - d}, Max: vg.Point{X: r.Max.X + d, Y: r.Max.Y + d}}
}

// crosses reports whether the segment from a to b touches r.
func crosses(a, b vg.Point, r vg.Rectangle) bool {
	t0, t1 := 0.0, 1.0
	d := b.Sub(a)
	for _, e := range [][2]vg.Length{{-d.X, a.X - r.Min.X}, {d.X, r.Max.X - a.X}, {-d.Y, a.Y - r.Min.Y}, {d.Y, r.Max.Y - a.Y}} {
		if e[0] == 0 {
			if e[1] < 0 {
				return false
			}
			continue
		}
		if t := float64(e[1] / e[0]); e[0] < 0 {
			t0 = max(t0, t)
		} else {
			t1 = min(t1, t)
		}
	}
	return t0 <= t1
}

// spot is one place where a label may go.
type spot struct {
	at vg.Point
	x  text.XAlignment
	y  text.YAlignment
}

// around lists the places about a point at distance d, the preferred first.
func around(at vg.Point, d vg.Length) []spot {
	var out []spot
	for _, far := range []vg.Length{d, 2.5 * d, 5 * d, 8 * d} {
		diag := 0.7 * far
		out = append(out,
			spot{vg.Point{X: at.X + diag, Y: at.Y + diag}, text.XLeft, text.YBottom},
			spot{vg.Point{X: at.X - diag, Y: at.Y + diag}, text.XRight, text.YBottom},
			spot{vg.Point{X: at.X, Y: at.Y + far}, text.XCenter, text.YBottom},
			spot{vg.Point{X: at.X + far, Y: at.Y}, text.XLeft, text.YCenter},
			spot{vg.Point{X: at.X - far, Y: at.Y}, text.XRight, text.YCenter},
			spot{vg.Point{X: at.X + diag, Y: at.Y - diag}, text.XLeft, text.YTop},
			spot{vg.Point{X: at.X - diag, Y: at.Y - diag}, text.XRight, text.YTop},
			spot{vg.Point{X: at.X, Y: at.Y - far}, text.XCenter, text.YTop},
		)
	}
	return out
}

// nearby lists places of area no further than reach from at, the closest first.
func nearby(at vg.Point, area vg.Rectangle, reach vg.Length) []spot {
	const n = 24
	out := around(at, 4)
	grid := len(out)
	size := area.Size()
	for i := range n + 1 {
		for j := range n + 1 {
			out = append(out, spot{vg.Point{X: area.Min.X + size.X*vg.Length(i)/n, Y: area.Min.Y + size.Y*vg.Length(j)/n}, text.XCenter, text.YCenter})
		}
	}
	far := func(s spot) float64 { return math.Hypot(float64(s.at.X-at.X), float64(s.at.Y-at.Y)) }
	out = slices.DeleteFunc(out, func(s spot) bool { return far(s) > float64(reach) })
	grid = min(grid, len(out))
	slices.SortStableFunc(out[grid:], func(a, b spot) int { return cmp.Compare(far(a), far(b)) })
	return out
}

// along lists places beside a line on the page, from its middle outwards, and close to
// it before far from it.
func along(line []vg.Point, d vg.Length) []spot {
	var out []spot
	if len(line) < 2 {
		return nil
	}
	for _, far := range []vg.Length{d, 2 * d} {
		for i := range 13 {
			k := 8 + (i+1)/2*(1-2*(i%2)) // 8, 7, 9, 6, 10 …
			f := float64(k) / 16 * float64(len(line)-1)
			j := int(f)
			a, b := line[j], line[min(j+1, len(line)-1)]
			at := a.Add(b.Sub(a).Scale(vg.Length(f - float64(j))))
			out = append(out, around(at, far)[:8]...)
		}
	}
	return out
}

// place writes one of the given wordings at the first of spots that lies in area,
// clear of every text so far and of every line; failing that, the first wording where
// it crosses fewest lines, on a pale ground. Where other texts leave no room it
// writes nothing and reports false.
func (s *sheet) place(c color.Color, area vg.Rectangle, spots []spot, wordings ...string) bool {
	for _, most := range []int{0, math.MaxInt} {
		for _, txt := range wordings {
			sp, n := s.best(txt, area, spots)
			if n < 0 || n > most {
				continue
			}
			st := textStyle{color: c, x: sp.x, y: sp.y}
			if n > 0 {
				s.rect(grown(textBox(sp.at, txt, st), 0.6), color.NRGBA{R: 255, G: 255, B: 255, A: 190})
			}
			s.text(sp.at, txt, st)
			return true
		}
	}
	return false
}

// best returns the first spot in area, clear of texts, where txt crosses fewest lines,
// and how many; -1 where there is none.
func (s *sheet) best(txt string, area vg.Rectangle, spots []spot) (best spot, fewest int) {
	fewest = -1
	for _, sp := range spots {
		box := grown(textBox(sp.at, txt, textStyle{x: sp.x, y: sp.y}), 1.4)
		if !inside(box, area) || s.taken(box) {
			continue
		}
		if n := s.crossed(box); fewest < 0 || n < fewest {
			best, fewest = sp, n
		}
		if fewest == 0 {
			break
		}
	}
	return best, fewest
}

// taken reports whether a text already stands in box.
func (s *sheet) taken(box vg.Rectangle) bool {
	for _, t := range s.texts {
		if overlaps(box, t.box) {
			return true
		}
	}
	return false
}

// crossed counts the lines that run through box.
func (s *sheet) crossed(box vg.Rectangle) int {
	n := 0
	for _, l := range s.lines {
		for i := 1; i < len(l); i++ {
			if crosses(l[i-1], l[i], box) {
				n++
				break
			}
		}
	}
	return n
}

// spread moves boxes of the given heights, wished at centres that increase, apart
// until none overlap within [lo, hi], moving them as little as a pass each way can.
// The heights must add up to no more than hi − lo.
func spread(centres, heights []vg.Length, lo, hi vg.Length) []vg.Length {
	out := make([]vg.Length, len(centres))
	edge := lo
	for i, c := range centres {
		out[i] = max(c, edge+heights[i]/2)
		edge = out[i] + heights[i]/2
	}
	edge = hi
	for i := len(out) - 1; i >= 0; i-- {
		out[i] = min(out[i], edge-heights[i]/2)
		edge = out[i] - heights[i]/2
	}
	return out
}
