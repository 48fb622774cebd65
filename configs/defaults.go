package configs

import (
	"fmt"
	"slices"
	"strings"

	"keelfall/solver/race"
)

// filler adds what an experiment leaves out to its tree, and keeps the list of it.
type filler struct {
	root  *node
	taken []race.Default
}

// fill completes the tree in the contract's order of defaults. It touches nothing
// that is there, and nothing whose shape is wrong: the walker reports that.
func fill(root *node) []race.Default {
	f := &filler{root: root}
	layers := rocks(root)
	f.scalar("9.81 m/s2", false, "gravity")
	f.scalar("free", false, "surface", "boundary")
	f.scalar("0 degC", false, "surface", "temperature")
	f.scalar("half-space", false, "base", "boundary")
	f.base(layers)
	warm := hasTemperature(root)
	if warm && root.get("geotherm") == nil {
		f.scalar("steady", false, "geotherm")
	}
	for i, l := range layers {
		if l.get("section") == nil {
			f.rock(l, entryKey(i, l), warm)
		}
	}
	for _, r := range newRocks(root) {
		f.rock(r.rock, r.path, warm)
		layers = append(layers, r.rock)
	}
	f.scalar("0 1/s", false, "strain", "extension-rate")
	f.scalar("stretch", false, "strain", "wavevector")
	still := root.get("strain").get("extension-rate").isZero()
	f.scalar("1e-15 1/s", still && slices.ContainsFunc(append(layers, root.get("base")), flows), "strain", "reference-rate")
	f.scalar(thermalBuoyancy(root, layers, warm), false, "buoyancy", "thermal")
	table := f.roughness()
	if !table {
		f.scalar("500 m", true, "drip", "amplitude")
	}
	f.scalar("1.0", true, "drip", "criterion")
	f.scalar("30 Myr", false, "drip", "window")
	f.scalar("0.3", true, "drip", "removes")
	if !table {
		f.scalar("white", false, "drip", "spectrum")
	}
	f.scalar(f.softening(layers), false, "drip", "softening")
	f.scalar("0.5", false, "race", "removed")
	f.scalar("1e16 Pa s", false, "viscosity-limits", "lowest")
	f.scalar("1e25 Pa s", false, "viscosity-limits", "highest")
	f.zones()
	f.reference()
	return f.taken
}

// softening is self, but none where a layer's composition grades or reacts: the closure takes
// it, but through time such a column costs a minute and more. A run says so.
func (f *filler) softening(layers []*node) string {
	for _, l := range append(slices.Clone(layers), f.root.get("base")) {
		if d := l.get("density"); d.get("top") != nil || d.get("protolith") != nil {
			return "none"
		}
	}
	return "self"
}

// rocks returns the layers' maps.
func rocks(root *node) []*node {
	list := root.get("layers")
	if list == nil || list.kind != listNode {
		return nil
	}
	return slices.DeleteFunc(slices.Clone(list.items), func(n *node) bool { return n.kind != mapNode })
}

// newRock is the map of a rock that an event brings, and its path.
type newRock struct {
	rock *node
	path string
}

func newRocks(root *node) []newRock {
	list := root.get("events")
	if list == nil || list.kind != listNode {
		return nil
	}
	var out []newRock
	for i, e := range list.items {
		for _, verb := range []string{"intrude", "bury"} {
			if r := e.get(verb); r != nil && r.kind == mapNode {
				out = append(out, newRock{r, fmt.Sprintf("events.%d.%s", i, verb)})
			}
		}
	}
	return out
}

// flows says whether a rock's viscosity depends on the strain rate.
func flows(rock *node) bool {
	if n := rock.get("stress-exponent"); n != nil && !isOnly(n, "1") {
		return true
	}
	return rock.get("creep") != nil
}

// isZero says whether n is the number 0, in whatever unit.
func (n *node) isZero() bool { return n != nil && isOnly(n, "0") }

// thermalBuoyancy is the default of buoyancy.thermal: diffusive where the density of a
// layer, or of a base that is not a wall, depends on a temperature the column has.
func thermalBuoyancy(root *node, layers []*node, warm bool) string {
	var warms func(d *node) bool
	warms = func(d *node) bool {
		e := d.get("expansivity")
		return d.get("modes") != nil || d.get("table") != nil || e != nil && !e.isZero() ||
			d.get("protolith") != nil && (warms(d.get("protolith")) || warms(d.get("product")))
	}
	expands := func(rock *node) bool {
		m := rock.get("melt")
		return m.get("solidus") != nil && m.get("density") != nil || warms(rock.get("density"))
	}
	base := root.get("base")
	b := base.get("boundary")
	open := b != nil && (b.text == "half-space" || b.text == "inviscid")
	if warm && (slices.ContainsFunc(layers, expands) || open && expands(base)) {
		return "diffusive"
	}
	return "none"
}

// hasTemperature says whether the experiment gives the column a temperature.
func hasTemperature(root *node) bool {
	b := root.get("base")
	g := root.get("geotherm")
	return b.get("temperature") != nil || b.get("heat-flow") != nil || g != nil && (g.kind != scalarNode || strings.TrimSpace(g.text) != "steady")
}

func entryKey(i int, l *node) string {
	if name := l.get("name"); name != nil && name.kind == scalarNode && name.text != "" {
		return "layers." + name.text
	}
	return fmt.Sprintf("layers.%d", i)
}

// scalar adds one value below the root.
func (f *filler) scalar(value string, starred bool, path ...string) {
	n := f.root
	for _, part := range path[:len(path)-1] {
		if n.get(part) == nil {
			n.put(part, &node{kind: mapNode, from: fromDefault})
		}
		if n = n.get(part); n.kind != mapNode {
			return
		}
	}
	f.put(n, path[len(path)-1], strings.Join(path, "."), value, starred)
}

// put adds one scalar to a map that lacks it.
func (f *filler) put(n *node, key, path, value string, starred bool) {
	if n.get(key) != nil {
		return
	}
	v := &node{text: value, from: fromDefault}
	if numberText.MatchString(value) {
		v.scalar = numberScalar
	}
	n.put(key, v)
	f.taken = append(f.taken, race.Default{Key: path, Value: value, Starred: starred})
}

// rock adds what a layer leaves out; what conducts heat only where there is any.
func (f *filler) rock(l *node, path string, warm bool) {
	if l.get("viscosity") != nil {
		f.put(l, "stress-exponent", path+".stress-exponent", "1", false)
	}
	f.density(l.get("density"), path+".density")
	f.friction(l, path)
	if !warm {
		return
	}
	f.put(l, "conductivity", path+".conductivity", "2.5 W/m/K", false)
	if c := l.get("conductivity"); c.get("reference") != nil {
		f.put(c, "temperature-coefficient", path+".conductivity.temperature-coefficient", "0 1/K", false)
		f.put(c, "pressure-coefficient", path+".conductivity.pressure-coefficient", "0 1/Pa", false)
		f.put(c, "at", path+".conductivity.at", "0 degC", false)
	}
	if l != f.root.get("base") { // a half-space makes no heat here: the flow at its top is given
		f.put(l, "heat-production", path+".heat-production", "0 W/m3", false)
	}
	f.put(l, "heat-capacity", path+".heat-capacity", "1000 J/kg/K", false)
}

// friction adds what the friction of a rock or a zone leaves out.
func (f *filler) friction(rock *node, path string) {
	if fr := rock.get("friction"); fr != nil && fr.kind == mapNode {
		f.put(fr, "cohesion", path+".friction.cohesion", "0 Pa", false)
		f.put(fr, "angle", path+".friction.angle", "0 deg", false)
		f.put(fr, "pore-fluid-factor", path+".friction.pore-fluid-factor", "0", false)
	}
}

// density adds what a density leaves out, and its parts.
func (f *filler) density(d *node, path string) {
	switch {
	case d.get("modes") != nil:
		f.put(d, "by", path+".by", "volume", false)
	case d.get("table") != nil:
		f.put(d, "interpolation", path+".interpolation", "bilinear", false)
	case d.get("reference") != nil:
		f.put(d, "expansivity", path+".expansivity", "0 1/K", false)
		f.put(d, "compressibility", path+".compressibility", "0 1/Pa", false)
		f.put(d, "at", path+".at", "20 degC", false)
	case d.get("protolith") != nil:
		f.density(d.get("protolith"), path+".protolith")
		f.density(d.get("product"), path+".product")
		f.put(d, "extent", path+".extent", "0", false)
		f.put(d, "cap", path+".cap", "1", false)
		if s := d.get("stable"); s != nil && s.kind == mapNode {
			f.put(s, "slope", path+".stable.slope", "0 Pa/K", false)
		}
	}
}

// base takes the rock keys that are left out from the last layer, at its bottom. The
// rock is completed under every boundary, and listed where it has a meaning.
func (f *filler) base(layers []*node) {
	base := f.root.get("base")
	if base == nil || base.kind != mapNode || len(layers) == 0 {
		return
	}
	last := layers[len(layers)-1]
	if last.get("section") != nil {
		return
	}
	keys := []string{"density", "water", "grain-size", "conductivity", "heat-capacity"}
	if base.get("viscosity") == nil && base.get("creep") == nil {
		keys = append(keys, "viscosity", "creep", "stress-exponent", "viscosity-factor", "friction")
		if base.get("density") == nil {
			keys = append(keys, "melt")
		}
	}
	var boundary string
	if b := base.get("boundary"); b != nil {
		boundary = b.text
	}
	for _, key := range keys {
		n := last.get(key)
		if n == nil || base.get(key) != nil {
			continue
		}
		n = bottomOf(n).origin(fromDefault)
		base.put(key, n)
		if boundary == "half-space" || boundary == "inviscid" && (key == "density" || key == "melt") {
			value := "as " + entryKey(len(layers)-1, last) + " at its bottom"
			if n.kind == scalarNode {
				value = n.text + " (" + value + ")"
			}
			f.taken = append(f.taken, race.Default{Key: "base." + key, Value: value})
		}
	}
	listed := len(f.taken)
	f.rock(base, "base", hasTemperature(f.root))
	if boundary != "half-space" && boundary != "inviscid" {
		f.taken = f.taken[:listed]
	}
}

// bottomOf copies a layer's value as it is at the layer's bottom: of what grades, there
// or in a part, the bottom.
func bottomOf(n *node) *node {
	if bottom := n.get("bottom"); bottom != nil {
		return bottom.clone()
	}
	n = n.clone()
	for _, part := range []string{"protolith", "product"} {
		if p := n.get(part); p != nil {
			n.put(part, bottomOf(p))
		}
	}
	return n
}

// zones adds the interval a shear zone moves in.
func (f *filler) zones() {
	list := f.root.get("excision").get("zones")
	if list == nil || list.kind != listNode {
		return
	}
	window := f.root.get("drip").get("window")
	for i, z := range list.items {
		if z.kind != mapNode {
			continue
		}
		path := fmt.Sprintf("excision.zones.%d", i)
		if name := z.get("name"); name != nil && name.kind == scalarNode {
			path = "excision.zones." + name.text
		}
		f.put(z, "layering-dip", path+".layering-dip", "0 deg", false)
		f.put(z, "from", path+".from", "0 Myr", false)
		if window != nil && window.kind == scalarNode {
			f.put(z, "to", path+".to", window.text, false)
		}
		if z.get("force") != nil {
			f.friction(z, path)
			f.put(z, "strength-factor", path+".strength-factor", "1", false)
		}
	}
}
