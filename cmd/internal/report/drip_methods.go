package report

import (
	"fmt"

	"keelfall/solver/drip"
	"keelfall/solver/race"
)

// dripMethods says how the drip was found.
func dripMethods(w func(string, ...any), r *race.Result) {
	pb := r.Problem
	set := &pb.Drip
	start := fmt.Sprintf("of %g m, the same at all wavelengths", set.Amplitude)
	switch {
	case len(set.Rough.Wavelength) > 0:
		start = fmt.Sprintf("whose amplitude is that of the table %s, straight in logarithms between its rows; at wavelengths beyond its ends there is none", set.Spectrum)
	case !set.White():
		start = fmt.Sprintf("of %g m × (wavelength/%g km)^%g; a wavelength at which that reaches the drip itself is left out", set.Amplitude, set.Rough.At/km, set.Rough.Exponent)
	}
	how := "the exact solution of dξ/dt = A ξ for the column as it is at the start"
	if pb.Moving() {
		how = "dξ/dt = A(t) ξ by matrix exponentials, with A of the column at that time and a wavelength that moves with the stretch, an undulation beginning anew after every drip; where nothing drips in the window, the first drip is looked for up to twice its length"
	}
	w("An undulation %s, on the base of the lowest root layer, all other contacts flat; %s. It has dripped when the base has descended by %g × the root's thickness; the drip then takes %g of the root's mass.", start, how, set.Criterion, set.Removes)
	if t := r.Drip.Thermal; t != nil {
		thermalMethods(w, t)
	}
	if len(r.Drip.First.StrainRate) > 0 {
		w("The drip's strain rate and stress are second invariants of the flow that all displacements drive at that time, at the upper side of the root's base, the largest along it.")
	}
	if r.Drip.Soft != nil {
		softMethods(w, pb)
	}
	if r.Study.Critical != nil {
		w("The critical thickness is the one nearest to that in use at which the root drips just as the window ends, to 0.1 %% of that time: all root layers are scaled together, what lies below moves down, and all else stays.")
	}
	if r.Study.Exponents != nil {
		w("Exponents of the drip time are central differences over ± 5 %% of each layer's viscosity, at the first drip's wavelength.")
	}
	w("")
}

// thermalMethods says how the heat counts that the undulation carries along.
func thermalMethods(w func(string, ...any), t *drip.Thermal) {
	how := "it is carried, and diffuses"
	if t.Mode == "frozen" {
		how = "it is carried, and does not diffuse"
	}
	state := "The drip time, its band and its history have it, at the first drip's wavelength, looked for from that of the drip without it to either side; the times of all other wavelengths leave it out."
	if !t.Included {
		state = "The drip time leaves it out: the closure does not know it. What it does is that of linear theory."
	}
	w("The undulation's perturbation of temperature is zero at the start; %s, as a state of the same system (no perturbation of viscosity). %s Without it the drip takes %s in linear theory, with it %s.", how, state, myr(t.Without), myr(t.With))
}

// softMethods says how rock softens that the drip itself strains.
func softMethods(w func(string, ...any), pb *race.Problem) {
	w("The drip softens its own rock: A depends on ξ. At every depth the viscosities follow from the rock's full law at the strain rate of the undulation and of the background together, averaged over a wavelength, and are iterated with the flow to a fixed point: the best field of one harmonic, by least dissipation (derived). It flows too slowly, so that its own time is a slow bound where one n holds everywhere. The best estimate multiplies the flow with what two-dimensional solutions made for keelfall showed for uniform rock over a fluid, by n and k times the root's thickness, and with what the finite amplitude of a full drip did there.")
	if pb.Moving() {
		w("In a column that changes the closure is that of the column at each time, interpolated between times so close that halving their distance moves no drip by 0.1 %%; both factors are those of the moment.")
	}
	if pb.Strain.ExtensionRate != 0 || pb.Moving() {
		w("Where the column is strained, the closure is exact while the undulation's strain rate is small beside the background's, and most too slow, by 8, 13 and 19 %% for n of 2, 3 and 5, where the two are equal. Between these and no background the shortfall is interpolated, by parabolas in r²/(1 + r²), r the ratio of the two: nothing checks that.")
	}
}
