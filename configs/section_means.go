package configs

import (
	"cmp"
	"math"
	"slices"
)

// spread is the mean of the rows' numbers and their scatter, weighted by thickness.
func (l *sectionLayer) spread(key string, x []float64, kind averaging) Scatter {
	s := Scatter{Key: key, N: len(x), Log: kind == geometric}
	y := slices.Clone(x)
	if s.Log {
		for i := range y {
			y[i] = math.Log(x[i])
		}
	}
	middle := l.mean(y)
	for i := range y {
		d := y[i] - middle
		y[i] = d * d
	}
	s.SD = math.Sqrt(l.mean(y))
	switch {
	case slices.Min(x) == slices.Max(x): // free of round-off
		s.Mean, s.SD = x[0], 0
	case kind == geometric:
		s.Mean = math.Exp(middle)
	case kind == harmonic:
		for i := range y {
			y[i] = 1 / x[i]
		}
		s.Mean = 1 / l.mean(y)
	default:
		s.Mean = middle
	}
	return s
}

// mean is Σ h x/Σ h over the rows.
func (l *sectionLayer) mean(x []float64) float64 {
	var sum, weight float64
	for i := range l.rows {
		sum += l.rows[i].weight * x[i]
		weight += l.rows[i].weight
	}
	return sum / weight
}

// rowError is √(Σ h σ²/Σ h) over the rows that give the error of their density.
func (l *sectionLayer) rowError() float64 {
	var sum, weight, same float64
	equal := true
	for i := range l.rows {
		if e, ok := l.rows[i].values["density_error"]; ok {
			equal = equal && (weight == 0 || e == same)
			same = cmp.Or(same, e)
			sum += l.rows[i].weight * e * e
			weight += l.rows[i].weight
		}
	}
	switch {
	case weight == 0:
		return 0
	case equal:
		return same
	}
	return math.Sqrt(sum / weight)
}

// conditions is the mean temperature or pressure of the rows that give one, else nil.
func (l *sectionLayer) conditions(word string) any {
	var sum, weight float64
	for i := range l.rows {
		if x, ok := l.rows[i].values[word]; ok {
			sum += l.rows[i].weight * x
			weight += l.rows[i].weight
		}
	}
	if weight == 0 {
		return nil
	}
	return sum / weight
}
