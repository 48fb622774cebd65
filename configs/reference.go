package configs

import (
	"slices"

	"keelfall/solver/race"
)

type reference struct {
	block
	Elevation     quantity         `key:"elevation" dim:"length" range:"[-20 km,20 km]" eg:"0 m" doc:"of its surface above sea level, under water where negative; 0 m if left out"`
	Layers        []referenceLayer `key:"layers,required" doc:"from its surface down; the asthenosphere goes on below"`
	Asthenosphere quantity         `key:"asthenosphere" dim:"density" range:"(1030 kg/m3,20000 kg/m3]" eg:"3300 kg/m3" doc:"density of what both columns float on; that of the base's rock on its adiabat if left out"`
}

type referenceLayer struct {
	block
	Thickness quantity `key:"thickness,required" dim:"length" range:"(0 m,3000 km]"`
	Density   quantity `key:"density,required" dim:"density" range:"(0 kg/m3,20000 kg/m3]"`
}

// problem is the reference column as package race takes it.
func (r *reference) problem() *race.Reference {
	if r == nil {
		return nil
	}
	out := &race.Reference{Elevation: r.Elevation.SI, Asthenosphere: r.Asthenosphere.SI}
	for _, l := range r.Layers {
		out.Layers = append(out.Layers, race.ReferenceLayer{Thickness: l.Thickness.SI, Density: l.Density.SI})
	}
	return out
}

// reference adds the column that elevation is measured against: a mid-ocean ridge, where
// no mantle lithosphere lies on the asthenosphere and both numbers are known (2.5 to 2.6 km
// of water over 6 to 7 km of crust; from memory). It bears on the verdict where a shear
// zone slips by a balance of forces.
func (f *filler) reference() {
	n := f.root.get("reference")
	if n != nil {
		if n.kind == mapNode && n.get("layers") != nil {
			f.put(n, "elevation", "reference.elevation", "0 m", f.forced())
		}
		return
	}
	value := func(text string) *node { return &node{text: text, from: fromDefault} }
	crust := &node{kind: mapNode, from: fromDefault}
	crust.put("thickness", value("7 km"))
	crust.put("density", value("2900 kg/m3"))
	n = &node{kind: mapNode, from: fromDefault}
	n.put("elevation", value("-2.6 km"))
	n.put("layers", &node{kind: listNode, from: fromDefault, items: []*node{crust}})
	f.root.put("reference", n)
	f.taken = append(f.taken, race.Default{Key: "reference", Value: "a mid-ocean ridge: elevation -2.6 km, 7 km of 2900 kg/m3, asthenosphere below", Starred: f.forced()})
}

// forced says whether a shear zone slips by a balance of forces.
func (f *filler) forced() bool {
	zones := f.root.get("excision").get("zones")
	return zones != nil && zones.kind == listNode && slices.ContainsFunc(zones.items, func(z *node) bool { return z.get("force") != nil })
}
