package timeresp

import (
	"math"

	"github.com/polewright/polewright/internal/hybrid"
)

// recordFigures reads the figures of merit off the series of the output.
func recordFigures(source recordSource, final, band float64) Figures {
	nan := math.NaN()
	f := Figures{Final: final, PeakTime: nan, PeakValue: nan, UndershootTime: nan, RiseTime: nan, SettlingTime: nan,
		DelayTime: nan, Reach100: nan, Reach10: nan, Reach90: nan}
	f.LargestValue, f.LargestTime = recordLargest(source, final)
	if final == 0 {
		f.Overshoot, f.Undershoot = nan, nan
		return f
	}
	const output = hybrid.Output
	d, n := source.reader(), source.segments()
	firsts := []struct {
		level float64
		at    *float64
	}{{0.1, &f.Reach10}, {0.5, &f.DelayTime}, {0.9, &f.Reach90}, {1, &f.Reach100}}
	most, least := math.Inf(-1), math.Inf(1) // of y/final
	var mostAt, leastAt, lastOutside float64
	outside := false
	var found []float64
	for i := 0; i < n; i++ {
		from, to := d.span(i)
		see := func(t, y float64) {
			if y > most {
				most, mostAt = y, t
			}
			if y < least {
				least, leastAt = y, t
			}
		}
		start := d.at(output, from) / final
		see(from, start)
		found = d.turns(output, i, found[:0])
		for _, t := range found {
			see(t, d.at(output, t)/final)
		}
		for _, first := range firsts {
			if !math.IsNaN(*first.at) {
				continue
			}
			if start >= first.level {
				*first.at = from
				continue
			}
			// A level that is reached where two segments meet shows only by being passed soon after.
			found = append(d.crossings(output, i, first.level*final, found[:0]), to)
			if d.at(output, from+(found[0]-from)/2)/final >= first.level {
				*first.at = from
			} else if len(found) > 1 {
				*first.at = found[0]
			}
		}
		// The last time outside the band: a crossing of either edge, or a jump that ends there.
		last := from
		for _, edge := range [2]float64{1 - band, 1 + band} {
			for _, t := range d.crossings(output, i, edge*final, found[:0]) {
				last = math.Max(last, t)
				lastOutside = math.Max(lastOutside, t)
			}
		}
		if math.Abs(start-1) > band {
			lastOutside = math.Max(lastOutside, from)
		}
		if math.Abs(d.at(output, last+(to-last)/2)/final-1) > band {
			lastOutside = to
		}
		if i == n-1 {
			end := d.at(output, to) / final
			see(to, end)
			outside = math.Abs(end-1) > band
		}
	}
	const none = 1e-9
	if most > 1+none {
		f.Overshoot, f.PeakTime, f.PeakValue = most-1, mostAt, most*final
	}
	if least < -none {
		f.Undershoot, f.UndershootTime = -least, leastAt
	}
	f.RiseTime = f.Reach90 - f.Reach10
	if !outside {
		f.SettlingTime = lastOutside
	}
	return f
}

// noFigures has NaN for every figure.
func noFigures() Figures {
	nan := math.NaN()
	return Figures{nan, nan, nan, nan, nan, nan, nan, nan, nan, nan, nan, nan, nan, nan}
}

// recordLargest returns the output of largest magnitude and when it is taken: the final value
// and NaN where the output stays below that.
func recordLargest(source recordSource, final float64) (value, time float64) {
	const output = hybrid.Output
	d, n := source.reader(), source.segments()
	value, time = final, math.NaN()
	most := math.Abs(final) * (1 + 1e-9)
	see := func(t float64) {
		if y := d.at(output, t); math.Abs(y) > most {
			value, time, most = y, t, math.Abs(y)
		}
	}
	var turns []float64
	for i := range n {
		from, to := d.span(i)
		see(from)
		turns = d.turns(output, i, turns[:0])
		for _, t := range turns {
			see(t)
		}
		if i == n-1 {
			see(to)
		}
	}
	return value, time
}
