package report

import (
	"fmt"
	"math"

	"keelfall/solver/heat"
)

// fitText writes a geotherm's fit to samples.
func fitText(pg *page, f *heat.Fit) {
	pg.section("GEOTHERM")
	for i := range f.Fitted {
		pg.say("Fitted to %s: %s.", Count(len(f.Residuals), "sample"), fittedWords(&f.Fitted[i]))
	}
	long := 6
	for i := range f.Residuals {
		long = max(long, min(len([]rune(sampleName(f, i))), 20))
	}
	pg.line("%s  %8s  %8s  %13s  %9s  %11s", pad("sample", long), "km", "GPa", "measured degC", "geotherm", "residual K")
	for i := range f.Residuals {
		r := &f.Residuals[i]
		pg.line("%s  %8.2f  %8.3f  %13s  %9.0f  %11s", pad(cut(sampleName(f, i), long), long), r.Depth/km, r.Pressure/1e9,
			measuredTemperature(r), r.Model-zero, fmt.Sprintf("%+.0f ± %.0f", math.Round(r.Residual)+0, r.Uncertainty))
	}
	if f.Freedom > 0 {
		pg.say("Chi squared %s for %s of freedom. Errors are one standard deviation; a residual's joins the sample's errors of temperature and of pressure or depth.", sig(f.ChiSquare, 3), Count(f.Freedom, "degree"))
	}
	for _, n := range f.Notes {
		pg.item(degrees(n))
	}
}

func measuredTemperature(r *heat.Residual) string {
	s := fmt.Sprintf("%.0f", r.Temperature-zero)
	if r.TemperatureError > 0 {
		s += fmt.Sprintf(" ± %.0f", r.TemperatureError)
	}
	return s
}

func sampleName(f *heat.Fit, i int) string {
	if n := f.Residuals[i].Name; n != "" {
		return n
	}
	return fmt.Sprint(i + 1)
}

// fittedWords says a fitted value with its error.
func fittedWords(v *heat.Fitted) string {
	switch v.Key {
	case "base.temperature":
		return fmt.Sprintf("basal temperature %.0f ± %.0f degC", v.Value-zero, v.Error)
	case "base.heat-flow":
		return fmt.Sprintf("basal heat flow %.2f ± %.2f mW/m2", v.Value*1e3, v.Error*1e3)
	}
	return fmt.Sprintf("%s %.3f ± %.3f", v.Name, v.Value, v.Error)
}
