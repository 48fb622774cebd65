package heat

import (
	"fmt"
	"reflect"
)

// Shared names the slices and maps that two evolutions both write to.
func Shared(a, b *Evolution) []string {
	return shared(reflect.ValueOf(a).Elem(), reflect.ValueOf(b).Elem(), "")
}

func shared(a, b reflect.Value, name string) (list []string) {
	for i := range a.NumField() {
		f := a.Type().Field(i)
		x, y := a.Field(i), b.Field(i)
		switch k := x.Kind(); {
		case f.Name == "moments" || f.Name == "base": // of the plan: never written to
		case k == reflect.Struct:
			list = append(list, shared(x, y, name+f.Name+".")...)
		case (k == reflect.Slice || k == reflect.Map) && x.Len() > 0 && x.Pointer() == y.Pointer():
			list = append(list, name+f.Name)
		}
	}
	return list
}

// Written is all that an evolution has come to, in words.
func Written(ev *Evolution) string {
	return fmt.Sprint(ev.t, ev.h, ev.cells, ev.energy, ev.massBook, ev.tracks, ev.steps, ev.rejected)
}
