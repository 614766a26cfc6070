package tf

import (
	"math"
	"slices"

	"github.com/polewright/polewright/poly"
)

// A GainInterval is an open interval of gains; Hi may be +Inf.
type GainInterval struct{ Lo, Hi float64 }

// StableGains returns every k > 0 for which the loop with its controller multiplied by k is
// stable, before any cancellation, as disjoint open intervals in ascending order: dead time
// included, decided between the gains at which a pole reaches the boundary of stability. Where
// a pole only touches it, two intervals meet. Ends are right to about 1e-11 relative.
//
// Without dead time locus.Family.Windows answers the same with proven ends. The error is that of
// [Loop.Open]; a [*DegenerateError] where L is real and negative over a range of frequencies; an
// [*UnsupportedError] where the phase crossovers to be looked at are too many.
func (l Loop) StableGains() ([]GainInterval, error) {
	const call = "tf.Loop.StableGains"
	a, err := l.openForm(call)
	if err != nil || !l.prefilterStable() {
		return nil, err
	}
	critical, limit, err := a.criticalGains(call)
	if err != nil {
		return nil, err
	}
	ends := append([]float64{0}, critical...)
	if len(ends) == 1 || ends[len(ends)-1] < limit {
		ends = append(ends, limit)
	}
	var out []GainInterval
	for i := 1; i < len(ends); i++ {
		lo, hi := ends[i-1], ends[i]
		// A gain inside, of few digits if there is room.
		k := math.Sqrt(lo) * math.Sqrt(hi)
		switch {
		case lo == 0 && math.IsInf(hi, 1):
			k = 1
		case lo == 0:
			k = hi / 2
		case math.IsInf(hi, 1):
			k = 2 * lo
		}
		if !(k > lo && k < hi) {
			continue
		}
		switch a.withGain(k).stable() {
		case poly.Holds:
			out = append(out, GainInterval{lo, hi})
		case poly.Undecided:
			return nil, &UnsupportedError{Call: call, What: "a loop whose stability between two critical gains is not decided"}
		}
	}
	return out, nil
}

// withGain returns the form of k·g.
func (a *axisForm) withGain(k float64) *axisForm {
	b := *a
	b.numerator = a.numerator.Scale(k)
	b.sampled[0] = a.sampled[0].Scale(k)
	b.prepare()
	return &b
}

// criticalGains returns the gains > 0, ascending, at which a closed-loop pole may lie on the
// boundary; beyond limit no gain is stable, or none changes anything.
func (a *axisForm) criticalGains(call string) (list []float64, limit float64, err error) {
	limit = math.Inf(1)
	add := func(m float64) {
		if m > 0 && !math.IsInf(m, 1) {
			list = append(list, m)
		}
	}
	add(a.marginAtZero())
	if a.deadTime == 0 {
		found, err := a.phaseCrossovers()
		if err != nil {
			return nil, 0, err
		}
		for _, c := range found {
			add(c.Margin)
		}
		add(a.marginAtInfinity())
	} else {
		// Beyond the last feature the phase only falls and the magnitude is monotone: each crossing
		// there takes a pair of poles into the right half-plane as the gain grows, for good. So the
		// last gain of interest is the first of these beyond all others.
		if n, d := a.numerator.Degree(), a.denominator.Degree(); n > d {
			return nil, 0, nil // never stable
		} else if n == d {
			limit = math.Abs(a.denominator.Coefficient(d) / a.numerator.Coefficient(n)) // |k·L(j∞)| ≥ 1
		}
		upTo := 0.0
		for range 12 {
			d, err := a.delayedPhaseCrossovers(upTo)
			if err != nil {
				return nil, 0, err
			}
			features := d.last * a.unit
			most, tail := 0.0, 0.0
			all := append(slices.Clone(d.crossovers), d.beyond...)
			for _, c := range all {
				if c.Frequency <= features*(1+1e-12) {
					most = max(most, c.Margin)
				} else {
					tail = max(tail, c.Margin)
				}
			}
			most = max(most, a.marginAtZero())
			if tail > most || tail > 0 && most >= limit {
				for _, c := range all {
					add(c.Margin)
				}
				slices.Sort(list)
				list = slices.Compact(list)
				i, _ := slices.BinarySearch(list, min(limit, tail))
				list = list[:i]
				// After the first tail crossing above all others nothing is stable any more.
				first := math.Inf(1)
				for _, c := range all {
					if c.Frequency > features*(1+1e-12) && c.Margin > most {
						first = min(first, c.Margin)
					}
				}
				limit = min(limit, first)
				list = slices.DeleteFunc(list, func(k float64) bool { return k >= limit })
				return list, limit, nil
			}
			if d.completeTo > 0 && upTo > d.completeTo {
				break // the list does not grow any more
			}
			upTo = 4 * max(d.completeTo, features, 1/a.deadTime)
		}
		return nil, 0, &UnsupportedError{Call: call, What: "a loop with so many phase crossovers below its last critical gain"}
	}
	slices.Sort(list)
	return slices.Compact(list), limit, nil
}
