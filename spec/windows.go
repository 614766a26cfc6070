package spec

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
	"github.com/polewright/polewright/timeresp"
)

// Windows returns every gain k > 0 that meets the sheet on every one of the loops. The gain
// multiplies the controller of each (see [VaryController], [VarySensor] and
// [NegativeGains] for other choices).
//
// Stability, regions for the poles, steady errors and margins come out of real roots of
// polynomials, without search. Requirements on time responses are searched: cells of
// neighbouring gains are halved until each is proven, by a bound on how far the response can
// stray from the chord between its ends, or is narrower than a ten-thousandth of its gap.
// Ends are located to rounding. Where two requirements end a window at the same gain, both
// are named.
//
// A touch of a limit does not split a window. Errors: a *[SheetError] for the sheet, a
// *[poly.ArgumentError] for an invalid loop or an empty list, a *[tf.UnsupportedError] for
// combinations that are not supported, the error of the context.
func (s Sheet) Windows(ctx context.Context, loops []tf.Loop, opt ...Option) (Gains, error) {
	h, err := s.hunt("spec.Sheet.Windows", loops, newSettings(opt))
	if err != nil {
		return Gains{}, err
	}
	g, err := h.windows(ctx, h.all())
	if err != nil {
		return Gains{}, err
	}
	return h.mirrored(g), nil
}

// A hunt looks for the windows of a sheet on a list of loops.
type hunt struct {
	sheet  Sheet
	set    *settings
	models []*model
	knots  []float64 // critical gains of all loops, ascending
	scale  [2]float64
	stable [][]GainWindow // of each loop
	looked int
}

func (s Sheet) hunt(call string, loops []tf.Loop, set *settings) (*hunt, error) {
	if err := s.Validate(); err != nil {
		return nil, err
	}
	if len(loops) == 0 {
		return nil, &poly.ArgumentError{Call: call, Argument: "loops", Reason: "there must be at least one"}
	}
	h := &hunt{sheet: s, set: set, scale: [2]float64{inf, 0}}
	for i, l := range loops {
		m, err := newModel(call, l, set)
		if err != nil {
			return nil, fmt.Errorf("loop %d: %w", i, err)
		}
		if m.period != 0 {
			return nil, &tf.UnsupportedError{Call: call, What: "loops with a sampling period"}
		}
		if l.Limits != (tf.Limits{}) && s.stepped() {
			return nil, &tf.UnsupportedError{Call: call, What: "response requirements on loops with actuator limits"}
		}
		h.models = append(h.models, m)
		w, err := m.stableWindows(i)
		if err != nil {
			return nil, fmt.Errorf("loop %d: %w", i, err)
		}
		h.stable = append(h.stable, w)
		if err := h.addKnots(m, w); err != nil {
			return nil, fmt.Errorf("loop %d: %w", i, err)
		}
	}
	slices.Sort(h.knots)
	h.knots = slices.Compact(h.knots)
	for _, k := range h.knots {
		h.scale[0], h.scale[1] = math.Min(h.scale[0], k), math.Max(h.scale[1], k)
	}
	if !(h.scale[1] > 0) {
		h.scale = [2]float64{1, 1}
	}
	return h, nil
}

// stepped reports whether a requirement is judged on a time response.
func (s Sheet) stepped() bool {
	for _, r := range s {
		if l, ok := r.(*limited); !ok || l.kind.stepped {
			return true
		}
	}
	return false
}

func (h *hunt) all() []int {
	out := make([]int, len(h.sheet))
	for i := range out {
		out[i] = i
	}
	return out
}

// addKnots collects the critical gains of one loop: the ends of stability, break points, and
// for scale the gains at which the loop has magnitude one near its open-loop roots.
func (h *hunt) addKnots(m *model, stable []GainWindow) error {
	add := func(k float64) {
		if k > 0 && !math.IsInf(k, 0) {
			h.knots = append(h.knots, k)
		}
	}
	for _, w := range stable {
		add(w.Lo.Gain)
		add(w.Hi.Gain)
	}
	if m.character.scaled.Degree() < 0 {
		return nil
	}
	if m.around == 0 {
		// Break points scale the search and nothing else: where A·B′ = A′·B and the gain -A/B is
		// real to rounding.
		a, b := m.character.fixed, m.character.scaled
		roots, err := a.Derivative().Mul(b).Sub(a.Mul(b.Derivative())).Roots()
		if err == nil { // the polynomial vanishes where A and B are proportional
			for _, r := range roots {
				if k := -a.AtComplex(r.Value) / b.AtComplex(r.Value); math.Abs(imag(k)) < 1e-9*math.Abs(real(k)) {
					add(real(k))
				}
			}
		}
	}
	for _, p := range [2]poly.Poly{m.character.fixed, m.character.scaled} {
		if p.Degree() < 1 {
			continue
		}
		roots, err := p.Roots()
		if err != nil {
			return err
		}
		for _, r := range roots {
			w := math.Hypot(real(r.Value), imag(r.Value))
			if w == 0 {
				continue
			}
			s := complex(0, w)
			a, b := m.character.fixed.AtComplex(s), m.character.scaled.AtComplex(s)
			if k := math.Hypot(real(a), imag(a)) / math.Hypot(real(b), imag(b)); k > 0 && !math.IsInf(k, 0) {
				h.scale[0], h.scale[1] = math.Min(h.scale[0], k), math.Max(h.scale[1], k)
			}
		}
	}
	return nil
}

// mirrored turns the answer for k < 0 round.
func (h *hunt) mirrored(g Gains) Gains {
	if !h.set.negative {
		return g
	}
	slices.Reverse(g.Windows)
	for i, w := range g.Windows {
		w.Lo, w.Hi = w.Hi, w.Lo
		w.Lo.Gain, w.Hi.Gain = -w.Lo.Gain, 0-w.Hi.Gain
		g.Windows[i] = w
	}
	g.SearchedFrom, g.SearchedTo = -g.SearchedTo, -g.SearchedFrom
	return g
}

// windows returns the gains that meet the requirements with the given indices, for positive
// k of the model.
func (h *hunt) windows(ctx context.Context, which []int) (Gains, error) {
	g := Gains{SearchedFrom: 0, SearchedTo: inf}
	g.Windows = []GainWindow{{Lo: End{}, Hi: End{Gain: inf}}}
	before := h.looked
	var probed, other []int
	for j, m := range h.models {
		g.Windows = intersect(g.Windows, h.stable[j])
		for _, i := range which {
			w, how, err := h.exact(m, j, i)
			if err != nil {
				return Gains{}, err
			}
			switch how {
			case byFormula:
				g.Windows = intersect(g.Windows, w)
			case byProof:
				if !slices.Contains(probed, i) {
					probed = append(probed, i)
				}
			default:
				if !slices.Contains(other, i) {
					other = append(other, i)
				}
			}
		}
	}
	for n := range g.Windows { // what formulas leave open is proven to be open
		w := &g.Windows[n]
		w.Lo.Proven = w.Lo.Proven || w.Lo.Gain == 0
		w.Hi.Proven = w.Hi.Proven || math.IsInf(w.Hi.Gain, 1)
	}
	for _, i := range other { // one loop needs figures: all do
		if at := slices.Index(probed, i); at >= 0 {
			probed = slices.Delete(probed, at, at+1)
		}
	}
	if len(probed) > 0 && len(g.Windows) > 0 {
		if err := h.search(ctx, &g, h.probing(probed)); err != nil {
			return Gains{}, err
		}
	}
	if len(other) > 0 && len(g.Windows) > 0 {
		g.Estimated = true
		if err := h.search(ctx, &g, h.judging(ctx, other)); err != nil {
			return Gains{}, err
		}
	}
	g.Evaluations = h.looked - before
	return g, nil
}

type manner int

const (
	byFormula manner = iota
	byProof
	byFigures
)

// A WindowFinder is a requirement that knows the gains which meet it without search. It is
// given the family of internal characteristics of a loop, 1 + k·L or what stands for it,
// and its windows of stability.
type WindowFinder interface {
	FindWindows(family locus.Family, stable []GainWindow) ([]GainWindow, error)
}

// exact returns the windows of requirement i on loop j, where they come by formula.
func (h *hunt) exact(m *model, j, i int) ([]GainWindow, manner, error) {
	cause := Cause{Requirement: i, Name: h.sheet[i].Name(), Loop: j, Kind: Crossing}
	r, ok := h.sheet[i].(*limited)
	if !ok {
		if f, ok := h.sheet[i].(WindowFinder); ok && m.around == 0 && !h.set.negative {
			family, err := m.family()
			if err != nil {
				return nil, 0, err
			}
			w, err := f.FindWindows(family, slices.Clone(h.stable[j]))
			return w, byFormula, err
		}
		return nil, byFigures, nil
	}
	none := []GainWindow(nil)
	pure := m.open.fixed.Degree() < 0 // the loop gain is proportional to k
	switch r.kind {
	case stepError, rampError, parabolaError:
		return m.steadyWindows(steadyOrder(r.kind), r.limit, cause), byFormula, nil
	case gainMargin, gainReductionMargin:
		if !pure {
			return nil, byFigures, nil
		}
		return marginWindows(h.stable[j], r.limit, r.kind == gainReductionMargin, cause), byFormula, nil
	case dampingRatio, poleRegion:
		if m.around != 0 {
			return nil, 0, &tf.UnsupportedError{Call: "spec: " + r.kind.word, What: "the poles of a loop with dead time, which are infinitely many"}
		}
		if r.kind == dampingRatio && r.limit == 1 {
			n, err := complexRoots(m.prefilter)
			if m.prefilter.Degree() < 1 {
				n, err = 0, nil
			}
			if err != nil || n > 0 {
				return none, byFormula, err
			}
			w, err := m.allReal(cause)
			return w, byFormula, err
		}
		region, closed := r.region, false
		if r.kind == dampingRatio {
			region, closed = locus.Damped(r.limit), true
		}
		if ok, err := m.prefilterIn(region); err != nil || !ok {
			return none, byFormula, err
		}
		w, err := m.regionWindows(region, cause, closed)
		return w, byFormula, err
	case phaseMargin, delayMargin, sensitivityPeak, complementaryPeak, noiseAmplification:
		if m.around != 0 || !pure {
			return nil, byFigures, nil
		}
		s := newSpectrum(m.open.scaled, m.openDen)
		var holes []GainWindow
		var err error
		switch r.kind {
		case phaseMargin:
			holes, err = s.phaseHoles(r.limit, cause)
		case delayMargin:
			holes, err = s.delayHoles(r.limit, cause)
		case sensitivityPeak:
			holes, err = s.sensitivityHoles(r.limit, cause)
		case complementaryPeak:
			holes, err = s.complementaryHoles(r.limit, cause)
		case noiseAmplification:
			holes, err = s.noiseHoles(m.noise().scaled, r.limit, cause)
		}
		for i, w := range holes {
			// At a pole on the axis the frequency of gain 0 is known to rounding only.
			if w.Lo.Gain < 1e-12*w.Hi.Gain && !math.IsInf(w.Hi.Gain, 1) && r.kind != phaseMargin && r.kind != delayMargin {
				holes[i].Lo = End{}
			}
		}
		return complement(holes), byFormula, err
	}
	if m.rational() && newProbe(r, 0, 0) != nil {
		return nil, byProof, nil
	}
	return nil, byFigures, nil
}

// A seeker is a survey together with the causes of a change of verdict.
type seeker struct {
	survey
	causes   func(e edge) []Cause
	answered bool  // at one gain at least
	refused  error // why there was no answer at a gain
}

// gap returns the width of the narrowest gap between critical gains that [a, b] meets; past
// the last critical gain, the gain itself.
func (h *hunt) gap(a, b float64) float64 {
	i, _ := slices.BinarySearch(h.knots, a)
	if i < len(h.knots) && h.knots[i] == a {
		i++
	}
	width := inf
	for ; ; i++ {
		lo := 0.0
		if i > 0 {
			lo = h.knots[i-1]
		}
		if i >= len(h.knots) {
			return math.Min(width, math.Max(a, lo))
		}
		width = math.Min(width, h.knots[i]-lo)
		if h.knots[i] >= b {
			return width
		}
	}
}

const (
	resolution  = 5e-5 // of a gap: where halving stops, half of what is promised
	reachDown   = 1e4  // below the critical gains: how far windows are searched
	reachUp     = 1e3  // above them
	furtherDown = 1e9  // beyond that: how far the verdict is sampled
	furtherUp   = 1e3
	edgeOffset  = 1e-9 // of a gap: how near to an end of stability the search begins
)

// search replaces the windows of g by the parts of them that the seeker accepts.
func (h *hunt) search(ctx context.Context, g *Gains, s *seeker) error {
	s.floor = func(a, b float64) float64 {
		return math.Max(resolution*h.gap(a, b), 1e-13*b)
	}
	var out []GainWindow
	for _, w := range g.Windows {
		s.budget = h.set.evaluations
		found, missed, err := h.searchWindow(ctx, g, s, w)
		if err != nil {
			return err
		}
		out = append(out, found...)
		g.MissedBelow = math.Max(g.MissedBelow, missed)
	}
	if s.refused != nil && !s.answered {
		return s.refused
	}
	g.Windows = out
	return nil
}

func (h *hunt) searchWindow(ctx context.Context, g *Gains, s *seeker, w GainWindow) ([]GainWindow, float64, error) {
	if w.Lo.Gain == w.Hi.Gain {
		l, err := s.at(w.Lo.Gain)
		if err != nil || !l.met {
			return nil, 0, err
		}
		return []GainWindow{w}, 0, nil
	}
	lo, hi := w.Lo.Gain, w.Hi.Gain
	missed := 0.0
	// A bounded window that shrank from both sides may be narrower than its gap.
	width := hi - lo
	if math.IsInf(hi, 1) {
		width = math.Max(lo, h.scale[1])
	}
	offset := func(e End, gap float64) float64 {
		if e.Closed {
			return 0
		}
		o := math.Min(edgeOffset*gap, 1e-3*width)
		missed = math.Max(missed, o/gap)
		return o
	}
	var gains []float64
	if lo == 0 {
		first := math.Min(h.scale[0]/reachDown, hi/reachDown)
		for q := furtherDown; q > 1; q /= 1e3 {
			gains = append(gains, first/q)
		}
		gains = append(gains, first)
		g.SearchedFrom = math.Max(g.SearchedFrom, first)
	} else {
		gains = append(gains, lo+offset(w.Lo, h.gap(lo, math.Min(hi, 2*lo))))
	}
	if math.IsInf(hi, 1) {
		last := math.Max(h.scale[1]*reachUp, lo*10)
		gains = append(gains, last)
		for q := 10.0; q <= furtherUp; q *= 10 {
			gains = append(gains, last*q)
		}
		g.SearchedTo = math.Min(g.SearchedTo, last)
	} else {
		gains = append(gains, hi-offset(w.Hi, h.gap(math.Max(lo, hi/2), hi)))
	}
	looks := make([]*look, len(gains))
	for i, k := range gains {
		l, err := s.at(k)
		if err != nil {
			return nil, 0, err
		}
		looks[i] = l
	}
	var cells []cell
	for i := 0; i+1 < len(looks); i++ {
		a, b := looks[i], looks[i+1]
		if a.k >= b.k {
			continue
		}
		far := lo == 0 && b.k <= g.SearchedFrom || math.IsInf(hi, 1) && a.k >= g.SearchedTo
		if far && a.met == b.met {
			cells = append(cells, cell{a, b, true}) // sampled only; the ends say so
			continue
		}
		more, err := s.cells(ctx, a, b)
		if err != nil {
			return nil, 0, err
		}
		cells = append(cells, more...)
	}
	runs, m, err := s.stretches(cells, func(a, b float64) float64 { return (b - a) / h.gap(a, b) })
	if err != nil {
		return nil, 0, err
	}
	missed = math.Max(missed, m)
	if len(cells) == 0 && looks[0].met {
		runs = []stretch{{}}
	}
	var out []GainWindow
	for _, r := range runs {
		v := w
		v.Lo.Proven = v.Lo.Proven && lo > 0
		v.Hi.Proven = v.Hi.Proven && !math.IsInf(hi, 1)
		if r.lo != nil {
			v.Lo = End{Gain: r.lo.met.k, Closed: true, Proven: !r.lo.not.unknown, By: s.causes(*r.lo)}
		}
		if r.hi != nil {
			v.Hi = End{Gain: r.hi.met.k, Closed: true, Proven: !r.hi.not.unknown, By: s.causes(*r.hi)}
		}
		out = append(out, v)
	}
	return out, missed, nil
}

// probing returns the seeker for requirements judged on trajectories.
func (h *hunt) probing(which []int) *seeker {
	var probes []*probe
	for n, i := range which {
		probes = append(probes, newProbe(h.sheet[i].(*limited), n, 0))
	}
	engines := make([]*engine, len(h.models))
	for j, m := range h.models {
		engines[j] = h.engine(m, which)
	}
	s := &seeker{}
	s.at = func(k float64) (*look, error) {
		l := &look{k: k, met: true, margin: inf}
		samples := make([]*sample, len(engines))
		for j, e := range engines {
			h.looked++
			x, err := e.at(k, probes)
			if err != nil {
				return nil, err
			}
			samples[j] = x
			if x.y != nil { // long responses cost more
				s.budget -= len(x.y.t) / 2000
			}
			for _, f := range x.found {
				l.margin = math.Min(l.margin, f.margin)
			}
		}
		l.met = l.margin >= 0
		l.data = samples
		return l, nil
	}
	s.prove = func(a, b *look) (all, none bool) {
		sa, sb := a.data.([]*sample), b.data.([]*sample)
		all = a.met
		for j := range sa {
			c := engines[j].between(sa[j], sb[j])
			if math.IsInf(c.y, 1) {
				return false, false
			}
			for i, p := range probes {
				if a.met {
					if !p.pass(sa[j], sb[j], c) {
						return false, false
					}
				} else if sa[j].found[i].margin < 0 && sb[j].found[i].margin < 0 && p.fail(sa[j], sb[j], c) {
					return false, true
				}
			}
		}
		return all, false
	}
	s.causes = func(e edge) []Cause {
		met, not := e.met.data.([]*sample), e.not.data.([]*sample)
		var out []Cause
		for j := range not {
			for i, f := range not[j].found {
				if f.margin >= 0 {
					continue
				}
				kind := Crossing
				if f.jump || met[j].found[i].jump && math.IsInf(f.margin, -1) {
					kind = Jump
				}
				r := which[i]
				out = append(out, Cause{Requirement: r, Name: h.sheet[r].Name(), Loop: j, Kind: kind})
			}
		}
		return out
	}
	return s
}

// engine returns what samples a loop for the given requirements.
func (h *hunt) engine(m *model, which []int) *engine {
	e := &engine{
		m: m, character: newFloats(m.character), output: newFloats(m.output()), effort: newFloats(m.effort()),
		load: newFloats(m.load()), around: newFloats(linear{poly.Poly{}, m.character.scaled}),
		preLead: 1, unity: m.unity && m.vary == controllerGain,
		small: 0.25, loadSmall: inf, effortSmall: inf, limit: 2000,
	}
	e.around.scaled = trimmed(e.around.scaled)
	if m.prefilter.Degree() >= 0 {
		e.preLead = m.prefilter.Coefficient(m.prefilter.Degree())
	}
	if m.prefilter.Degree() > 0 {
		if roots, err := m.prefilter.Roots(); err == nil {
			for _, r := range roots {
				e.pre = appendPole(e.pre, r.Value, r.Multiplicity)
			}
		}
	}
	for _, i := range which {
		r := h.sheet[i].(*limited)
		switch r.kind {
		case effort, effortForStep:
			e.needEffort = true
			e.effortSmall = math.Min(e.effortSmall, 1e-3*r.limit/math.Max(r.second, 1))
		case loadPeak:
			e.needLoad = true
			e.loadSmall = math.Min(e.loadSmall, 1e-3*r.limit)
		case loadRecovery:
			e.needLoad = true
			e.loadSmall = math.Min(e.loadSmall, 0.25*r.second)
			e.loadUntil = math.Max(e.loadUntil, r.limit)
		case overshoot, undershoot:
			e.needOutput = true
			e.small = math.Min(e.small, math.Max(r.limit, excess)/4)
		case settlingTime:
			e.needOutput = true
			e.small = math.Min(e.small, r.second/4)
			e.until = math.Max(e.until, r.limit)
		case peakTime:
			e.needOutput = true
			e.until = math.Max(e.until, r.limit)
		case riseTime:
			e.needOutput = true
			e.small = math.Min(e.small, 0.05) // past the horizon 90 % is behind
		default:
			e.needOutput = true
		}
	}
	return e
}

func trimmed(c []float64) []float64 {
	for len(c) > 0 && c[len(c)-1] == 0 {
		c = c[:len(c)-1]
	}
	return c
}

// judging returns the seeker for requirements judged by their findings.
func (h *hunt) judging(ctx context.Context, which []int) *seeker {
	s := &seeker{}
	type slacks [][]float64 // by loop, by requirement
	s.at = func(k float64) (*look, error) {
		l := &look{k: k, met: true, margin: inf}
		all := make(slacks, len(h.models))
		for j, m := range h.models {
			h.looked++
			loop, err := m.loopAt(k, h.set)
			if err != nil {
				return nil, err
			}
			e, err := NewEvidence(loop)
			if err != nil {
				return nil, err
			}
			for _, i := range which {
				f, err := h.sheet[i].Judge(ctx, e)
				var near *tf.UnsupportedError
				var restless *timeresp.NoFinalValueError
				if (errors.As(err, &near) || errors.As(err, &restless)) && m.around != 0 {
					// Next to the limit of stability a response with dead time may be out of
					// reach; the windows then end there, without proof.
					s.refused = err
					f, err = Finding{Slack: math.Inf(-1)}, nil
					l.unknown = true
				}
				if err != nil {
					return nil, err
				}
				slack := f.Slack
				if f.Verdict != poly.Holds && !(slack < 0) {
					slack = math.Inf(-1)
				}
				all[j] = append(all[j], slack)
				l.margin = math.Min(l.margin, slack)
				l.met = l.met && f.Verdict == poly.Holds
			}
		}
		l.data = all
		s.answered = s.answered || !l.unknown
		return l, nil
	}
	// Estimated: over a cell that is a small part of its gap, the slack that decides varies
	// by less than half of its distance to the limit.
	s.prove = func(a, b *look) (all, none bool) {
		if b.k-a.k > h.gap(a.k, b.k)/48 && b.k > a.k*1.1 {
			return false, false
		}
		x, y := a.data.(slacks), b.data.(slacks)
		all = a.met
		for j := range x {
			for i := range x[j] {
				p, q := x[j][i], y[j][i]
				steady := p == q || math.Abs(p-q) <= 0.5*math.Min(math.Abs(p), math.Abs(q))
				all = all && steady && p >= 0 && q >= 0
				none = none || steady && p < 0 && q < 0
			}
		}
		return all, none && !a.met
	}
	s.causes = func(e edge) []Cause {
		met, not := e.met.data.(slacks), e.not.data.(slacks)
		// A hair further on, a continuous figure has hardly moved and one that jumps has jumped.
		hair := 1e-9 * e.met.k
		if e.not.k < e.met.k {
			hair = -hair
		}
		beyond := not
		if l, err := s.at(e.met.k + hair); err == nil {
			beyond = l.data.(slacks)
		}
		var out []Cause
		for j := range not {
			for i := range not[j] {
				if not[j][i] >= -rounding && beyond[j][i] >= -rounding {
					continue
				}
				kind := Crossing
				if math.Abs(met[j][i]) > 1e-5 || math.Abs(beyond[j][i]) > 1e-5 {
					kind = Jump
				}
				r := which[i]
				out = append(out, Cause{Requirement: r, Name: h.sheet[r].Name(), Loop: j, Kind: kind})
			}
		}
		return out
	}
	return s
}
