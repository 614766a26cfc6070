package tf

import (
	"cmp"
	"math"
	"slices"
)

// fewPeriods is the delay from which on whole periods are treated as a phase.
const fewPeriods = 6

// phaseCrossoversOfPeriods finds the phase crossovers of a function of z that is behind many
// whole periods of delay. Written out, these are as many poles at z = 0 and a polynomial of high
// degree with as many roots; as a phase they are solved like dead time, between the breaks of
// the rest, which is of low order.
func (a *axisForm) phaseCrossoversOfPeriods() ([]Crossover, bool) {
	if a.period == 0 || a.onBoundary > 0 {
		return nil, false
	}
	n, d := a.sampled[0], a.sampled[1]
	k := 0
	for k < d.Degree() && d.Coefficient(k) == 0 {
		k++
	}
	if k+a.delay < fewPeriods || n.Degree() < 0 {
		return nil, false
	}
	b := newAxisForm(n, withoutPowers(d, k), 0, a.period)
	if !b.ok || b.onBoundary > 0 {
		return nil, false
	}
	turn := turning{periods: float64(k + a.delay), unit: b.unit}
	// Extrema of the whole phase: s(N)·|D|² - s(D)·|N|² = |N|²·|D|²·2·periods·unit/(1 + unit²·x).
	slope := b.phaseSlope(0)
	u2 := b.unit * b.unit
	whole := newIntervalPoly(len(slope.c) + 1)
	whole.addProduct(1, slope, intervalPoly{[]float64{1, u2}, []float64{0, 0}}, 0)
	size, _ := b.nn.trim()
	other, _ := b.dd.trim()
	squares := newIntervalPoly(len(size.c) + len(other.c))
	squares.addProduct(1, size, other, 0)
	squares, _ = squares.trim()
	w := 2 * turn.periods * b.unit
	whole.addProduct(-1, squares, intervalPoly{[]float64{w}, []float64{unitRoundoff * w}}, 0)
	crossings, ok1 := b.looseRoots(b.im)
	extrema, ok2 := b.looseRoots(whole)
	if !ok1 || !ok2 {
		return nil, false
	}
	edges := []float64{0, 0}
	for _, x := range append(crossings, extrema...) {
		edges = append(edges, math.Sqrt(x))
	}
	slices.Sort(edges)
	edges = slices.Compact(edges)
	first, last := 1/b.unit, 1/b.unit
	if len(edges) > 1 {
		first, last = min(first, edges[1]), max(last, edges[len(edges)-1])
	}
	edges[0] = 1e-10 * first
	edges = append(edges, 1e8*last)
	var found []Crossover
	for i := 1; i < len(edges); i++ {
		found = b.solvePhase(edges[i-1], edges[i], turn, found)
	}
	end := math.Pi / a.period
	if m := a.marginAtInfinity(); m > 0 {
		// The crossing at the end itself, and what rounding makes of it just before.
		found = slices.DeleteFunc(found, func(c Crossover) bool { return c.Frequency > end*(1-1e-7) })
		found = append(found, Crossover{end, m})
	}
	slices.SortFunc(found, func(x, y Crossover) int { return cmp.Compare(x.Frequency, y.Frequency) })
	return found, true
}
