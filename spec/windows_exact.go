package spec

import (
	"math"
	"slices"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
)

// Windows that need no search: stability, regions for the poles, steady-state errors, gain
// margins.

// family returns the internal characteristic as a function of the gain.
func (m *model) family() (locus.Family, error) {
	return locus.Parameter(m.character.fixed, m.character.scaled)
}

// stableWindows returns the gains k > 0 at which the closed loop is internally stable.
func (m *model) stableWindows(index int) ([]GainWindow, error) {
	if m.around != 0 {
		return m.delayedStableWindows(index)
	}
	ok, err := m.prefilterIn(locus.LeftOf(0))
	if err != nil || !ok {
		return nil, err
	}
	return m.regionWindows(locus.LeftOf(0), Cause{Requirement: -1, Name: "stability", Loop: index, Kind: Stability}, false)
}

// prefilterIn reports whether the poles of the prefilter, which no gain moves, lie in the region.
func (m *model) prefilterIn(r locus.Region) (bool, error) {
	if m.prefilter.Degree() < 1 {
		return true, nil
	}
	roots, err := m.prefilter.Roots()
	if err != nil {
		return false, err
	}
	for _, p := range roots {
		if !r.Contains(p.Value) {
			return false, nil
		}
	}
	return true, nil
}

// regionWindows returns the gains k > 0 with all roots in the region; closed says that the
// boundary counts as inside, and then windows that only touch it are joined.
func (m *model) regionWindows(r locus.Region, cause Cause, closed bool) ([]GainWindow, error) {
	if m.character.scaled.Degree() < 0 { // the gain moves nothing
		roots, err := m.character.fixed.Roots()
		if err != nil {
			return nil, err
		}
		for _, p := range roots {
			if !r.Contains(p.Value) {
				return nil, nil
			}
		}
		return []GainWindow{{Lo: End{}, Hi: End{Gain: inf}}}, nil
	}
	family, err := m.family()
	if err != nil {
		return nil, err
	}
	windows, err := family.Windows(r)
	if err != nil {
		return nil, err
	}
	var out []GainWindow
	for _, w := range windows {
		if !(w.Hi > 0) {
			continue
		}
		g := GainWindow{Lo: End{Gain: math.Max(w.Lo, 0)}, Hi: End{Gain: w.Hi}}
		if w.Lo > 0 || w.Lo == 0 {
			g.Lo.Proven = true
		}
		if g.Lo.Gain > 0 {
			g.Lo.Closed, g.Lo.By = closed, []Cause{cause}
		}
		if !math.IsInf(w.Hi, 1) {
			g.Hi.Closed, g.Hi.Proven, g.Hi.By = closed, true, []Cause{cause}
		}
		if n := len(out); closed && n > 0 && out[n-1].Hi.Gain == g.Lo.Gain {
			out[n-1].Hi = g.Hi
			continue
		}
		out = append(out, g)
	}
	return out, nil
}

// allReal returns the gains k > 0 with only real roots: it changes at break points.
func (m *model) allReal(cause Cause) ([]GainWindow, error) {
	if m.character.scaled.Degree() < 0 {
		n, err := complexRoots(m.character.fixed)
		if err != nil || n > 0 {
			return nil, err
		}
		return []GainWindow{{Hi: End{Gain: inf}}}, nil
	}
	family, err := m.family()
	if err != nil {
		return nil, err
	}
	points, err := family.BreakPoints()
	if err != nil {
		return nil, err
	}
	knots := []float64{0}
	for _, p := range points {
		if p.Gain > 0 && imag(p.S) == 0 {
			knots = append(knots, p.Gain)
		}
	}
	slices.Sort(knots)
	knots = slices.Compact(knots)
	var out []GainWindow
	for i, lo := range knots {
		hi := inf
		k := lo*2 + 1
		if i+1 < len(knots) {
			hi = knots[i+1]
			k = lo + (hi-lo)/2
		}
		n, err := complexRoots(m.character.at(k))
		if err != nil {
			return nil, err
		}
		if n > 0 {
			continue
		}
		w := GainWindow{Lo: End{Gain: lo}, Hi: End{Gain: hi}}
		if lo > 0 {
			w.Lo.Closed, w.Lo.Proven, w.Lo.By = true, true, []Cause{cause}
		}
		if !math.IsInf(hi, 1) {
			w.Hi.Closed, w.Hi.Proven, w.Hi.By = true, true, []Cause{cause}
		}
		if n := len(out); n > 0 && out[n-1].Hi.Gain == lo {
			out[n-1].Hi = w.Hi
			continue
		}
		out = append(out, w)
	}
	return out, nil
}

func complexRoots(p poly.Poly) (int, error) {
	roots, err := p.Roots()
	if err != nil {
		return 0, err
	}
	n := 0
	for _, r := range roots {
		if imag(r.Value) != 0 {
			n += r.Multiplicity
		}
	}
	return n, nil
}

// marginWindows returns the gains at which the loop gain may grow (or, with down, shrink) by
// the ratio before stability is lost: the windows of stability, cut short.
func marginWindows(stable []GainWindow, ratio float64, down bool, cause Cause) []GainWindow {
	var out []GainWindow
	for _, w := range stable {
		cut := w
		if down {
			if w.Lo.Gain > 0 {
				cut.Lo = End{Gain: w.Lo.Gain * ratio, Closed: true, Proven: true, By: []Cause{cause}}
			}
		} else if !math.IsInf(w.Hi.Gain, 1) {
			cut.Hi = End{Gain: w.Hi.Gain / ratio, Closed: true, Proven: true, By: []Cause{cause}}
		}
		if ratio == 1 { // met by every stable loop
			cut = w
		}
		if cut.Lo.Gain < cut.Hi.Gain {
			out = append(out, cut)
		}
	}
	return out
}

// errorSeries returns the coefficients of s⁰ to sⁿ of D and of D - N, each linear in the
// gain, T = N/D being the path from reference to output: then e = Σ sⁱ(D - N)ᵢ/D, and the
// steady error of the input tⁿ/n! is (D - N)ₙ/D₀ if all (D - N)ᵢ before it vanish. zero tells
// that the pair vanishes exactly.
type affine struct {
	fixed, scaled float64
	zero          bool
}

func (a affine) at(k float64) float64 { return a.fixed + k*a.scaled }

func (m *model) errorSeries(n int) (d affine, e []affine) {
	den := linear{m.openDen, poly.Poly{}}
	open := m.open
	f := m.prefilter
	e = make([]affine, n+1)
	if m.rational() {
		full := m.character.mul(f)
		miss := linear{full.fixed.Sub(m.output().fixed), full.scaled.Sub(m.output().scaled)}
		d = affine{fixed: full.fixed.Coefficient(0), scaled: full.scaled.Coefficient(0)}
		for i := range e {
			e[i] = affine{fixed: miss.fixed.Coefficient(i), scaled: miss.scaled.Coefficient(i)}
			e[i].zero = e[i].fixed == 0 && e[i].scaled == 0
		}
		return d, e
	}
	// Dead times as power series; exact zeros stay exact at s⁰, where they do not enter.
	delayed := func(p poly.Poly, seconds float64) []float64 {
		out := make([]float64, n+1)
		for i := range out {
			term := 1.0 // (-seconds)^j/j!
			for j := 0; j <= i; j++ {
				out[i] += p.Coefficient(i-j) * term
				term *= -seconds / float64(j+1)
			}
		}
		return out
	}
	den = den.mul(f)
	open = open.mul(f)
	d0, d1 := den.fixed, den.scaled
	of, os := delayed(open.fixed, m.around), delayed(open.scaled, m.around)
	nf, ns := delayed(m.output().fixed, m.forward), delayed(m.output().scaled, m.forward)
	exact := linear{den.fixed.Add(open.fixed).Sub(m.output().fixed), open.scaled.Sub(m.output().scaled)}
	for i := range e {
		e[i] = affine{fixed: d0.Coefficient(i) + of[i] - nf[i], scaled: d1.Coefficient(i) + os[i] - ns[i]}
		if i == 0 {
			e[0] = affine{fixed: exact.fixed.Coefficient(0), scaled: exact.scaled.Coefficient(0)}
		}
		e[i].zero = e[i].fixed == 0 && e[i].scaled == 0
	}
	d = affine{fixed: d0.Coefficient(0) + of[0], scaled: d1.Coefficient(0) + os[0]}
	return d, e
}

// steadyOrder returns the power n of the input tⁿ/n! of an error requirement.
func steadyOrder(k *kind) int {
	switch k {
	case rampError:
		return 1
	case parabolaError:
		return 2
	}
	return 0
}

// steadyError returns the steady error of the input tⁿ/n!, as magnitude; +Inf if it grows.
func (m *model) steadyError(n int, k float64) float64 {
	d, e := m.errorSeries(n)
	for i := range n {
		if !e[i].zero && e[i].at(k) != 0 {
			return inf
		}
	}
	if e[n].zero {
		return 0
	}
	return math.Abs(e[n].at(k) / d.at(k))
}

// steadyWindows returns the gains k > 0 at which the steady error is at most the limit.
func (m *model) steadyWindows(n int, limit float64, cause Cause) []GainWindow {
	d, e := m.errorSeries(n)
	everywhere := []GainWindow{{Hi: End{Gain: inf}}}
	single := math.NaN()
	for i := range n {
		if e[i].zero {
			continue
		}
		k := -e[i].fixed / e[i].scaled
		if !(k > 0) || math.IsInf(k, 0) || !math.IsNaN(single) && k != single {
			return nil
		}
		single = k
	}
	if !math.IsNaN(single) { // finite at one gain only
		if !e[n].zero && math.Abs(e[n].at(single)) > limit*math.Abs(d.at(single))*(1+rounding) {
			return nil
		}
		end := End{Gain: single, Closed: true, Proven: true, By: []Cause{cause}}
		return []GainWindow{{Lo: end, Hi: end}}
	}
	if e[n].zero {
		return everywhere
	}
	// |e| ≤ limit·|d|: the verdict changes where e = ±limit·d.
	var knots []float64
	for _, side := range [2]float64{1, -1} {
		k := -(e[n].fixed - side*limit*d.fixed) / (e[n].scaled - side*limit*d.scaled)
		if k > 0 && !math.IsInf(k, 1) {
			knots = append(knots, k)
		}
	}
	slices.Sort(knots)
	knots = slices.Compact(knots)
	met := func(k float64) bool { return math.Abs(e[n].at(k)) <= limit*math.Abs(d.at(k)) }
	at := func(k float64) End { return End{Gain: k, Closed: true, Proven: true, By: []Cause{cause}} }
	var out []GainWindow
	lo := End{Gain: 0}
	for i := 0; i <= len(knots); i++ {
		hi := End{Gain: inf}
		k := 2*lo.Gain + 1
		if i < len(knots) {
			hi = at(knots[i])
			k = lo.Gain + (hi.Gain-lo.Gain)/2
		}
		switch {
		case met(k):
			if j := len(out) - 1; j >= 0 && out[j].Hi.Gain == lo.Gain {
				out[j].Hi = hi
			} else {
				out = append(out, GainWindow{Lo: lo, Hi: hi})
			}
		case i > 0 && limit == 0 && (len(out) == 0 || out[len(out)-1].Hi.Gain < lo.Gain):
			out = append(out, GainWindow{Lo: lo, Hi: lo}) // the error vanishes at this gain alone
		}
		lo = hi
	}
	return out
}
