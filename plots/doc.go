// Package plots turns results into figures fit for a paper: the column, growth and
// drip time against wavelength, every branch of modes, the fastest mode, both fates
// against time, thermal histories and pressure–temperature paths.
//
// A figure is a pure function of the data it shows; the same result and width give
// the same bytes in every format. Results are in SI; the axes are in the units of
// the trade (km, °C, GPa, kg/m³, Pa s, Myr, Ma, 1/Myr). All text is Liberation Sans,
// 7 to 8 points, whatever the width; lines differ by dashes and widths as well as by
// colour. Lengths on the page are in points from the lower left corner.
//
// Not drawn: maps, ensembles.
package plots
