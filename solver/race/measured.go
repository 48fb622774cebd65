package race

import (
	"fmt"
	"math"
	"strings"

	"keelfall/solver/state"
)

// Measured is what a layer that came from the rows of a measured section brought with it.
type Measured struct {
	Layer          string
	File           string
	Rows           int
	HasDensity     bool    // the rows give densities
	Density        float64 // their mean weighted by thickness, kg/m³
	Scatter        float64 // one standard deviation of the rows about it, kg/m³; 0 for one row
	RowError       float64 // of a row's own measurement, kg/m³; 0 where none is given
	HasTemperature bool
	Temperature    float64 // mean of the rows that give one, K
	HasPressure    bool
	Pressure       float64 // mean of the rows that give one, Pa
}

// farFrom is what a measured temperature in K and pressure in Pa may differ from the
// column's without a word: about twice what thermobarometers are good to (common
// practice, no source).
const (
	farFromT = 100.0
	farFromP = 0.2e9
)

// measured warns where rocks of a measured section lie at other pressures and
// temperatures in the column than those measured in them.
func (p *Problem) measured(s *state.State) []string {
	var out []string
	for _, m := range p.Measured {
		for i := range s.Column.Layers {
			if s.Column.Layers[i].Name != m.Layer {
				continue
			}
			top, bottom := s.Span(i)
			T, _ := s.TemperatureAt(i, top+(bottom-top)/2)
			P := s.PressureAt(i, top+(bottom-top)/2)
			var far []string
			if m.HasPressure && math.Abs(m.Pressure-P) > farFromP {
				far = append(far, fmt.Sprintf("%.2f GPa measured and %.2f GPa in the column", m.Pressure/1e9, P/1e9))
			}
			if m.HasTemperature && s.HasTemperature && math.Abs(m.Temperature-T) > farFromT {
				far = append(far, fmt.Sprintf("%.0f degC measured and %.0f degC in the column", m.Temperature-273.15, T-273.15))
			}
			if far != nil {
				out = append(out, fmt.Sprintf("%s of %s: %s, each at the middle", m.Layer, m.File, strings.Join(far, ", ")))
			}
		}
	}
	return out
}
