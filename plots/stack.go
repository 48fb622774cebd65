package plots

import (
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

// part is one of several panels above one another on a common horizontal axis.
type part struct {
	left, right string                                  // titles; no right axis where empty
	scale       func(p *panel) (left, right []tick)     // sets p.y; the panel's height is known
	curves      func(p *panel)                          // what lies under the frame
	labels      func(p *panel)                          // what is written last
	back, front func(p *panel)                          // before and after the curves; may be nil
	top         func(p *panel) (title string, t []tick) // an axis along the top; may be nil
}

// stack draws parts between heights bottom and top of the page; margins are as wide as
// the axes need. across titles the horizontal axis, whose ticks are given for a panel.
// It returns where the panels begin.
func (s *sheet) stack(parts []part, x scale, bottom, top vg.Length, across string, ticks func(p *panel) []tick) (start vg.Length) {
	const gap, edge = 10, 2
	left, right := vg.Length(0), vg.Length(6)
	if len(parts) > 1 {
		left = letterSize * 1.3
	}
	high := (top - bottom - vg.Length(len(parts)-1)*gap) / vg.Length(len(parts))
	panels := make([]*panel, len(parts))
	lefts, rights := make([][]tick, len(parts)), make([][]tick, len(parts))
	for i, part := range parts {
		p := &panel{sheet: s, x: x}
		p.box.Min.Y = bottom + vg.Length(len(parts)-1-i)*(high+gap)
		p.box.Max.Y = p.box.Min.Y + high
		lefts[i], rights[i] = part.scale(p)
		left = max(left, edge+yAxisWidth(lefts[i]))
		if part.right != "" {
			right = max(right, edge+yAxisWidth(rights[i]))
		}
		panels[i] = p
	}
	if len(parts) > 1 {
		left = max(left, letterSize*1.5+tickLength+tickGap+max(labelWidth(lefts[0]), labelWidth(lefts[1])))
	}
	for i, p := range panels {
		part := parts[i]
		p.box.Min.X, p.box.Max.X, p.overhang = s.Min.X+left, s.Max.X-right, right-1
		for _, f := range []func(*panel){part.back, part.curves, part.front} {
			if f != nil {
				f(p)
			}
		}
		p.frame()
		p.vertical(part.left, lefts[i], false)
		if part.right != "" {
			p.vertical(part.right, rights[i], true)
		}
		if i == len(panels)-1 {
			p.horizontal(across, ticks(p), false)
		} else {
			p.horizontal("", unlabelled(ticks(p)), false)
		}
		if part.top != nil && i == 0 {
			title, t := part.top(p)
			p.horizontal(title, t, true)
		}
		if len(parts) > 1 {
			p.text(vg.Point{X: s.Min.X + 1, Y: p.box.Max.Y}, "("+string(rune('a'+i))+")", textStyle{size: letterSize, y: text.YTop})
		}
		part.labels(p)
	}
	return s.Min.X + left
}

// unlabelled keeps the ticks and drops their labels.
func unlabelled(ticks []tick) []tick {
	out := make([]tick, len(ticks))
	for i, t := range ticks {
		out[i] = tick{at: t.at}
	}
	return out
}
