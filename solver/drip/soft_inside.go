package drip

import "slices"

// softDrift is the share of the rock under the parts of a layer that grades that may come
// or go before they are laid out anew.
const softDrift = 0.05

// fit lays out the parts of layers that grade: in the rock of the node before, where there
// is one, or anew.
func (c *softCourse) fit(n, before *softNode, anew bool) {
	c.grade(n.node)
	var was *node
	if before != nil {
		was = before.node
	}
	c.lay(n.node, was, anew)
	for i, cover := range n.lay.cover {
		if cover != nil {
			n.lay.parts[i] = cut(cover, 1, 1)
		}
	}
}

// relay begins another stretch at the last node, with its parts laid out anew.
func (c *softCourse) relay(from *softNode) {
	again := *from.node
	model := *again.model
	model.Layers, again.marks = slices.Clone(model.Layers), slices.Clone(again.marks)
	again.model = &model
	n := &softNode{node: &again, back: from.back, probed: from.probed, exponent: from.exponent}
	c.fit(n, from, true)
	c.close(from.t)
	c.stretches = append(c.stretches, &softStretch{nodes: []*softNode{n}})
}

// fresh says whether the parts of all layers known to grade were laid out at a node.
func (c *softCourse) fresh(n *softNode) bool {
	for i, name := range n.lay.names {
		if c.graded[name] && n.lay.cover[i] == nil {
			return false
		}
	}
	s := c.stretches[len(c.stretches)-1]
	return n == s.nodes[0]
}
