package spec

import (
	"math"
	"slices"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// delayedStableWindows returns the gains k > 0 at which a loop with dead time is internally
// stable. Roots pass the imaginary axis only where L is real and negative: at the phase
// crossovers, at zero frequency, and, for a direct path, where |L(j∞)| reaches one. Between
// two such gains the verdict is that of any gain in between.
//
// Infinitely many crossovers lie above the frequency up to which they are listed. There |L|
// is small, so that their gains are large, and a loop that is not stable at the largest gain
// listed has lost roots that no larger gain brings back within the frequencies listed.
func (m *model) delayedStableWindows(index int) ([]GainWindow, error) {
	if m.vary == controllerPart || m.open.fixed.Degree() >= 0 {
		return nil, &tf.UnsupportedError{Call: "spec.Sheet.Windows", What: "a part of the controller varied in a loop with dead time"}
	}
	if ok, err := m.prefilterIn(locus.LeftOf(0)); err != nil || !ok {
		return nil, err
	}
	set := &settings{vary: m.vary, negative: m.negative}
	loop, err := m.loopAt(1, set)
	if err != nil {
		return nil, err
	}
	margins, err := loop.Margins()
	if err != nil {
		return nil, err
	}
	knots := []float64{0}
	add := func(k float64) {
		if k > 0 && !math.IsInf(k, 1) {
			knots = append(knots, k)
		}
	}
	for _, c := range margins.PhaseCrossovers {
		add(c.Margin)
	}
	n, d := m.open.scaled, m.openDen
	if d.Coefficient(0) != 0 && n.Coefficient(0) != 0 {
		add(-d.Coefficient(0) / n.Coefficient(0))
	}
	top := inf // |L(j∞)| < 1 is needed: above, infinitely many roots stand on the right
	if n.Degree() == d.Degree() {
		top = math.Abs(d.Coefficient(d.Degree()) / n.Coefficient(n.Degree()))
		add(top)
	}
	slices.Sort(knots)
	knots = slices.Compact(knots)
	cause := Cause{Requirement: -1, Name: "stability", Loop: index, Kind: Stability}
	var out []GainWindow
	for i, lo := range knots {
		if lo >= top {
			break
		}
		hi, k := inf, 2*lo+1
		if i+1 < len(knots) {
			hi = knots[i+1]
			k = inside(lo, hi)
		} else if len(knots) > 1 {
			continue // beyond the crossovers listed
		}
		at, err := m.loopAt(k, set)
		if err != nil {
			return nil, err
		}
		verdict, err := at.Margins()
		if err != nil {
			return nil, err
		}
		if verdict.Stable != poly.Holds {
			continue
		}
		w := GainWindow{Lo: End{Gain: lo}, Hi: End{Gain: hi}}
		if lo > 0 {
			w.Lo.Proven, w.Lo.By = true, []Cause{cause}
		}
		if !math.IsInf(hi, 1) {
			w.Hi.Proven, w.Hi.By = true, []Cause{cause}
		}
		out = append(out, w)
	}
	return out, nil
}
