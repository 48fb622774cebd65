package column

import (
	"fmt"
	"math"
	"slices"
	"sort"
)

// Ranged is a Density that holds in a range of temperature and pressure only.
type Ranged interface {
	Density
	Covers(T, P float64) error // nil inside; outside, an error with the numbers
}

// Covered returns the error of a density that is asked outside its range, nil inside
// it and for densities without one. Whoever reports a density asks it first.
func Covered(d Density, T, P float64) error {
	if r, ok := d.(Ranged); ok {
		return r.Covers(T, P)
	}
	return nil
}

// Table is a density tabulated on a full rectangular grid of temperature and pressure,
// bilinear in between. Its slope in T jumps at the grid's temperatures, which a mesh
// must know: see Kinks.
//
// There is no extrapolation: Covers refuses what lies outside, and package state calls
// it at every depth. At and PerKelvin return there what they return at the nearest
// point of the edge, so that a search for the temperatures may pass through.
//
// A table is of one composition, or of an equilibrium assemblage: its whole change
// with pressure and temperature is the parcel's own, and Gradient is 0.
type Table struct {
	t, p []float64 // K and Pa, increasing
	rho  []float64 // kg/m³, row i of temperature: rho[i*len(p)+j]
}

// TableRow is one row of a table of densities: K, Pa, kg/m³.
type TableRow struct{ T, P, Density float64 }

// TableError says what keeps rows from being a table.
type TableError struct {
	Row  int // the row at fault, from 0; -1 where it is the table as a whole
	What string
}

func (e *TableError) Error() string { return e.What }

// OutsideError says that a column leaves what the user's table covers, with the numbers:
// the table is too short, not the computation at fault.
type OutsideError struct{ What string }

func (e *OutsideError) Error() string { return e.What }

// NewTable returns the table of the rows, in any order. Every temperature that occurs
// needs every pressure that occurs, once; two of each at least. Errors are *TableError.
func NewTable(rows []TableRow) (*Table, error) {
	var tab Table
	for i, r := range rows {
		switch {
		case !positive(r.T):
			return nil, &TableError{i, fmt.Sprintf("temperature %.6g K, must be > 0", r.T)}
		case math.IsNaN(r.P) || math.IsInf(r.P, 0) || r.P < 0:
			return nil, &TableError{i, fmt.Sprintf("pressure %.6g GPa, must be >= 0", r.P/1e9)}
		case !positive(r.Density):
			return nil, &TableError{i, fmt.Sprintf("density %.6g kg/m³, must be > 0", r.Density)}
		}
		tab.t, tab.p = append(tab.t, r.T), append(tab.p, r.P)
	}
	tab.t, tab.p = increasing(tab.t), increasing(tab.p)
	nt, np := len(tab.t), len(tab.p)
	if nt < 2 || np < 2 {
		return nil, &TableError{-1, fmt.Sprintf("is no grid: %d temperatures and %d pressures; needs two of each at least", nt, np)}
	}
	if nt > 2*len(rows)/np { // also keeps the grid from being far larger than the rows
		return nil, &TableError{-1, fmt.Sprintf("is no grid: %d temperatures and %d pressures occur, which need %d rows; it has %d", nt, np, nt*np, len(rows))}
	}
	tab.rho = make([]float64, nt*np)
	for i, r := range rows {
		a, _ := slices.BinarySearch(tab.t, r.T)
		b, _ := slices.BinarySearch(tab.p, r.P)
		at := &tab.rho[a*np+b]
		if *at != 0 {
			return nil, &TableError{i, fmt.Sprintf("%s stands in an earlier row already", where(r.T, r.P))}
		}
		*at = r.Density
	}
	if i := slices.Index(tab.rho, 0); i >= 0 {
		return nil, &TableError{-1, fmt.Sprintf("is no grid: there is no density for %s; every temperature needs every pressure", where(tab.t[i/np], tab.p[i%np]))}
	}
	return &tab, nil
}

func where(T, P float64) string { return fmt.Sprintf("T = %.6g degC, P = %.6g GPa", T-273.15, P/1e9) }

// tableSlack is how far outside, relative to the table's span, a point still counts as
// its edge: round-off of a basal temperature that is met to 1e-13.
const tableSlack = 1e-9

// Covers returns nil where the table has a density, an error with the numbers where
// it has not.
func (t *Table) Covers(T, P float64) error {
	nt, np := len(t.t), len(t.p)
	dT, dP := tableSlack*(t.t[nt-1]-t.t[0]), tableSlack*(t.p[np-1]-t.p[0])
	if T >= t.t[0]-dT && T <= t.t[nt-1]+dT && P >= t.p[0]-dP && P <= t.p[np-1]+dP {
		return nil
	}
	return &OutsideError{fmt.Sprintf("outside the table of densities: %s; it covers %.6g to %.6g degC and %.6g to %.6g GPa",
		where(T, P), t.t[0]-273.15, t.t[nt-1]-273.15, t.p[0]/1e9, t.p[np-1]/1e9)}
}

// cell returns the interval of the axis that holds x and where x lies in it, 0 to 1;
// out says that x was taken to the edge. The last point belongs to the last interval.
func cell(axis []float64, x float64) (i int, share float64, out bool) {
	i = min(max(sort.Search(len(axis), func(k int) bool { return axis[k] > x })-1, 0), len(axis)-2)
	share = (x - axis[i]) / (axis[i+1] - axis[i])
	return i, min(max(share, 0), 1), share < -tableSlack || share > 1+tableSlack
}

// At returns the density in kg/m³ at T in K and P in Pa.
func (t *Table) At(T, P, _ float64) float64 {
	i, u, _ := cell(t.t, T)
	j, v, _ := cell(t.p, P)
	cold, hot := t.along(i, j, v), t.along(i+1, j, v)
	return cold*(1-u) + hot*u
}

// along interpolates in pressure at the temperature i.
func (t *Table) along(i, j int, v float64) float64 {
	row := t.rho[i*len(t.p):]
	return row[j]*(1-v) + row[j+1]*v
}

// PerKelvin returns (∂ρ/∂T)_P in kg/m³/K of the bilinear form, from above at a
// temperature of the grid; 0 beyond the table's temperatures.
func (t *Table) PerKelvin(T, P, _ float64) float64 {
	i, _, out := cell(t.t, T)
	if out {
		return 0
	}
	j, v, _ := cell(t.p, P)
	return (t.along(i+1, j, v) - t.along(i, j, v)) / (t.t[i+1] - t.t[i])
}

// PerPascal returns (∂ρ/∂P)_T in kg/m³/Pa of the bilinear form, from above at a pressure
// of the grid; 0 beyond the table's pressures.
func (t *Table) PerPascal(T, P, _ float64) float64 {
	j, _, out := cell(t.p, P)
	if out {
		return 0
	}
	i, u, _ := cell(t.t, T)
	row := func(i int) float64 { return t.rho[i*len(t.p)+j+1] - t.rho[i*len(t.p)+j] }
	return (row(i)*(1-u) + row(i+1)*u) / (t.p[j+1] - t.p[j])
}

// Kinks are the grid's own temperatures, at which (∂ρ/∂T)_P jumps, and pressures, at
// which its slope does; the edge is none.
func (t *Table) Kinks() []Kink {
	var out []Kink
	for _, at := range t.t[1 : len(t.t)-1] {
		out = append(out, func(T, _ float64) float64 { return T - at })
	}
	for _, at := range t.p[1 : len(t.p)-1] {
		out = append(out, func(_, P float64) float64 { return P - at })
	}
	return out
}

// Gradient is zero.
func (t *Table) Gradient(_, _, _ float64) float64 { return 0 }

// NeedsTemperature is true.
func (t *Table) NeedsTemperature() bool { return true }

// Validate refuses a table that NewTable did not make.
func (t *Table) Validate() error {
	if t == nil || len(t.rho) == 0 {
		return fmt.Errorf("density: an empty table")
	}
	return nil
}

var _ Ranged = (*Table)(nil)
