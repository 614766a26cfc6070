package spec

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

type preference int

const (
	greatestSlack preference = iota
	lowestEffort
	nearestWanted
)

// LowestEffort makes [Sheet.Design] recommend the gain of the windows with the smallest
// largest effort for the unit reference step, over all loops.
func LowestEffort() Option { return func(s *settings) { s.preference = lowestEffort } }

// NearestTo makes [Sheet.Design] recommend the gain of the windows that is nearest to the
// given one.
func NearestTo(gain float64) Option {
	return func(s *settings) { s.preference, s.wanted = nearestWanted, gain }
}

// Available makes [Sheet.Design] recommend one of the given gains, by the preference in
// force, or none if none of them lies in a window.
func Available(gains ...float64) Option {
	return func(s *settings) { s.available = append([]float64{}, gains...) }
}

// InUse makes [Sheet.Design] say of a gain in use whether it is inside the windows, how far
// from their ends, and what refuses it.
func InUse(gain float64) Option {
	return func(s *settings) { s.inUse, s.hasInUse = gain, true }
}

// Design is the answer of [Sheet.Design].
type Design struct {
	Sheet    Sheet
	Gains    Gains
	Feasible bool // a gain is recommended

	// Gain is the recommended gain, NaN if there is none. Where the optimum is Unbounded, it
	// is the smallest gain looked at that comes within a twentieth of the best slack (or
	// effort) seen up to Gains.SearchedTo, or, where that is infinite, a thousand times the
	// largest critical gain.
	Gain      float64
	Unbounded bool
	Window    int       // index of the window that holds it; -1 if none
	Loops     []tf.Loop // with the recommended gain in them
	Reports   []Report  // of each loop
	Slack     float64   // the smallest slack of all requirements on all loops, a limit of 0 met exactly left aside; +Inf if there is no other
	By        Cause     // the requirement and loop with that slack

	Rule       Rule          // what the second-order map would have chosen
	Resembles  []Resemblance // of each loop at the recommended gain; nil where none or not supported
	OtherSign  *Gains        // where no gain of the sign asked for works: the windows of the other sign; nil if there are none either
	Conflict   []int         // where no gain works: the smallest set of requirements that no gain meets together, by index; empty if no gain is even stable
	Nearest    *Miss         // where no gain works: the gain that misses least; nil if no gain is stable
	InUse      *Use          // with the option of that name
	Reason     string        // where no gain is recommended: why, in a sentence
	Preference string        // what the recommendation goes by, in words
	Warnings   []string      // in sentences: requirements that say little of these loops, windows that were only estimated
}

// A Miss is the gain that misses a sheet least: with the greatest smallest slack.
type Miss struct {
	Gain    float64
	Slack   float64 // < 0
	By      Cause   // the requirement and loop that misses most
	Reports []Report
}

// A Use is what there is to say of a gain in use.
type Use struct {
	Place   Place
	Reports []Report // of each loop
	Refused []Cause  // requirements not met, stability included; empty inside
}

// A Rule is what the second-order map would have chosen, and whether that really holds.
type Rule struct {
	Map         Map
	Windows     []GainWindow // gains that put all poles of all loops into the region of the map
	OnTheLine   *RuleGain    // the gain at the top of the last window, or 1.5 times its lower end if it is unbounded
	InTheMiddle *RuleGain    // the geometric mean of the last window
	Holds       poly.Verdict // Holds if both gains meet the sheet; Fails if one does not, or the map wrongly finds no gain
	Sentence    string       // in plain words
}

// A RuleGain is a gain that the map would choose, judged on the true loops.
type RuleGain struct {
	Gain    float64
	Met     bool
	Refused []Cause
	Reports []Report
}

// Design looks for the windows of gains as [Sheet.Windows] does, recommends a gain and
// reports on it, or says why there is none. By default it recommends the gain with the
// greatest smallest slack over all requirements and loops, the largest of several; where that
// gain stands on a jump of a figure, such as a settling time at an extremum that touches the band, the one with the
// greatest smallest slack within 2 % on both sides.
func (s Sheet) Design(ctx context.Context, loops []tf.Loop, opt ...Option) (Design, error) {
	const call = "spec.Sheet.Design"
	set := newSettings(opt)
	switch {
	case set.hasInUse && !finite(set.inUse):
		return Design{}, &poly.ArgumentError{Call: call, Argument: "InUse", Reason: fmt.Sprintf("%v is not a finite gain", set.inUse)}
	case set.preference == nearestWanted && !finite(set.wanted):
		return Design{}, &poly.ArgumentError{Call: call, Argument: "NearestTo", Reason: fmt.Sprintf("%v is not a finite gain", set.wanted)}
	}
	h, err := s.hunt(call, loops, set)
	if err != nil {
		return Design{}, err
	}
	d := Design{Sheet: s, Gain: math.NaN(), Window: -1, Slack: math.NaN()}
	found, err := h.windows(ctx, h.all())
	if err != nil {
		return Design{}, err
	}
	gain, unbounded, why, err := h.recommend(ctx, found)
	if err != nil {
		return Design{}, err
	}
	d.Preference = h.preference()
	d.Reason = why
	if d.Rule, err = h.rule(ctx, found); err != nil {
		return Design{}, err
	}
	if !math.IsNaN(gain) {
		d.Feasible, d.Unbounded = true, unbounded
		j, err := h.judge(ctx, gain)
		if err != nil {
			return Design{}, err
		}
		d.Gain, d.Loops, d.Reports, d.Slack, d.By = h.signed(gain), j.loops, j.reports, j.slack, j.by
		for _, l := range j.loops {
			r, err := Resembles(ctx, l)
			if err != nil {
				d.Resembles = nil
				break
			}
			d.Resembles = append(d.Resembles, r)
		}
	} else if len(found.Windows) == 0 {
		if err := h.explain(ctx, &d, loops, opt); err != nil {
			return Design{}, err
		}
	}
	d.Warnings = h.warnings(d, found)
	d.Gains = h.mirrored(found)
	if d.Feasible {
		d.Window, _ = d.Gains.Find(d.Gain)
	}
	if set.hasInUse {
		use := set.inUse
		if set.negative {
			use = -use
		}
		j, err := h.judge(ctx, use)
		if err != nil {
			return Design{}, err
		}
		d.InUse = &Use{Place: d.Gains.Place(set.inUse), Reports: j.reports, Refused: j.refused}
	}
	return d, nil
}

// warnings says what a reader of the design should know.
func (h *hunt) warnings(d Design, g Gains) []string {
	var out []string
	damping := ""
	for _, r := range h.sheet {
		if l, ok := r.(*limited); ok && l.kind == dampingRatio {
			damping = "The sheet asks for a damping ratio"
		}
	}
	for i, r := range d.Resembles {
		if damping == "" || r.Verdict != poly.Fails {
			continue
		}
		loop := ""
		if len(d.Resembles) > 1 {
			loop = fmt.Sprintf(" %d", i)
		}
		out = append(out, damping+", which says little of loop"+loop+" at the recommended gain. "+r.Sentence)
	}
	if g.Estimated {
		out = append(out, "The windows rest on samples of a figure; a window narrower than the samples may have been missed.")
	}
	for _, w := range g.Windows {
		for _, e := range [2]End{w.Lo, w.Hi} {
			if !e.Proven && e.Gain != 0 && !math.IsInf(e.Gain, 0) {
				out = append(out, fmt.Sprintf("At gain %.8g the answer gave out: the window may go on.", h.signed(e.Gain)))
			}
		}
	}
	if !d.Feasible {
		return out
	}
	// Slack alone is greatest at hardly any gain where nothing asks for speed or accuracy.
	if i, ok := g.Find(math.Abs(d.Gain)); !ok || g.Windows[i].Lo.Gain != 0 {
		return out
	}
	for i, l := range d.Loops {
		path, err := l.Path(tf.Reference, tf.Output)
		if err != nil {
			continue
		}
		if rest := real(path.At(0)); math.Abs(1-rest) > 0.5 {
			loop := ""
			if len(d.Loops) > 1 {
				loop = fmt.Sprintf(" of loop %d", i)
			}
			out = append(out, fmt.Sprintf("No requirement ends the window at low gains, and at the recommended one the output%s rests at %.3g for a unit step of the reference; a step error, a rise time or a bandwidth in the sheet would keep the gain up.", loop, rest))
		}
	}
	return out
}

func (h *hunt) signed(k float64) float64 {
	if h.set.negative {
		return -k
	}
	return k
}

func (h *hunt) preference() string {
	words := "greatest smallest slack"
	switch h.set.preference {
	case lowestEffort:
		words = "lowest effort"
	case nearestWanted:
		words = fmt.Sprintf("nearest to %g", h.set.wanted)
	}
	if h.set.available != nil {
		words += ", among the available gains"
	}
	return words
}

// judged is the sheet checked on all loops at one gain.
type judged struct {
	k       float64
	loops   []tf.Loop
	reports []Report
	slack   float64
	by      Cause
	refused []Cause
	met     bool
}

func (h *hunt) judge(ctx context.Context, k float64) (judged, error) {
	j := judged{k: k, slack: inf, met: true}
	for n, m := range h.models {
		loop, err := m.loopAt(k, h.set)
		if err != nil {
			return judged{}, err
		}
		r, err := h.sheet.check(ctx, loop)
		var refused *tf.UnsupportedError
		if errors.As(err, &refused) {
			// Next to the limit of stability a response may be out of reach: no gain to choose.
			r, err = Report{Sheet: h.sheet, Findings: make([]Finding, len(h.sheet)), Binding: -1}, nil
			c := Cause{Requirement: -1, Name: "want of an answer next to the limit of stability", Loop: n, Kind: Stability}
			j.refused, j.slack, j.by = append(j.refused, c), math.Inf(-1), c
		}
		if err != nil {
			return judged{}, err
		}
		if refused != nil {
			j.loops, j.reports, j.met = append(j.loops, loop), append(j.reports, r), false
			continue
		}
		j.loops, j.reports = append(j.loops, loop), append(j.reports, r)
		j.met = j.met && r.Met()
		if r.Stable != poly.Holds {
			j.refused = append(j.refused, Cause{Requirement: -1, Name: "stability", Loop: n, Kind: Stability})
			j.slack = math.Inf(-1)
			j.by = j.refused[len(j.refused)-1]
			continue
		}
		for i, f := range r.Findings {
			c := Cause{Requirement: i, Name: h.sheet[i].Name(), Loop: n, Kind: Crossing}
			if f.Verdict != poly.Holds {
				j.refused = append(j.refused, c)
			}
			if f.Slack < j.slack && !f.settled() {
				j.slack, j.by = f.Slack, c
			}
		}
	}
	return j, nil
}

// recommend returns the gain by the preference in force, NaN with the reason if there is none.
func (h *hunt) recommend(ctx context.Context, g Gains) (gain float64, unbounded bool, why string, err error) {
	nan := math.NaN()
	if len(g.Windows) == 0 {
		return nan, false, "", nil
	}
	cost := func(k float64) (float64, error) { // the smaller the better
		j, err := h.judge(ctx, k)
		return -j.slack, err
	}
	switch h.set.preference {
	case lowestEffort:
		cost = func(k float64) (float64, error) { return h.effortAt(ctx, k) }
	case nearestWanted:
		cost = func(k float64) (float64, error) { return math.Abs(h.signed(k) - h.set.wanted), nil }
	}
	if h.set.available != nil {
		best := inf
		gain = nan
		for _, a := range h.set.available {
			if h.set.negative {
				a = -a
			}
			if !g.Contains(a) {
				continue
			}
			c, err := cost(a)
			if err != nil {
				return nan, false, "", err
			}
			if math.IsNaN(gain) || c < best {
				best, gain = c, a
			}
		}
		if math.IsNaN(gain) {
			why = "none of the available gains lies in a window"
		}
		return gain, false, why, nil
	}
	if h.set.preference == nearestWanted {
		w := h.set.wanted
		if h.set.negative {
			w = -w
		}
		best := inf
		gain = nan
		for _, v := range g.Windows {
			lo, hi := v.Lo.Gain, v.Hi.Gain
			span := math.Min(hi, math.Max(2*lo, 1)) - lo
			if !v.Lo.Closed { // the nearest gain of an open window is a hair inside
				lo += 1e-9 * span
			}
			if !v.Hi.Closed && !math.IsInf(hi, 1) {
				hi -= 1e-9 * (hi - v.Lo.Gain)
			}
			k := math.Min(math.Max(w, lo), hi)
			if c := math.Abs(k - w); c < best {
				best, gain = c, k
			}
		}
		return gain, false, "", nil
	}
	best := inf
	gain = nan
	for _, w := range g.Windows {
		k, c, open, err := h.best(ctx, g, w, cost)
		if err != nil {
			return nan, false, "", err
		}
		if k, c, err = h.awayFromJumps(ctx, g, w, k, c, cost); err != nil {
			return nan, false, "", err
		}
		if math.IsNaN(gain) || c < best {
			best, gain, unbounded = c, k, open
		}
	}
	return gain, unbounded, "", nil
}

// awayFromJumps moves a gain that stands on a jump of a figure, where the least change would
// lose the slack that it was chosen for: it is replaced by the gain with the least worst cost
// within 2 % on both sides (a quarter of the window, if that is less).
func (h *hunt) awayFromJumps(ctx context.Context, g Gains, w GainWindow, k, c float64, cost func(float64) (float64, error)) (float64, float64, error) {
	if w.Lo.Gain == w.Hi.Gain || math.IsInf(c, 0) {
		return k, c, nil
	}
	hair := 1e-7 * k
	onJump := false
	for _, x := range [2]float64{k - hair, k + hair} {
		d, err := cost(x)
		if err != nil {
			return 0, 0, err
		}
		onJump = onJump || d > c+0.02*math.Abs(c)+1e-4
	}
	if !onJump {
		return k, c, nil
	}
	room := func(k float64) float64 {
		r := 0.02 * k
		if !math.IsInf(w.Hi.Gain, 1) {
			r = math.Min(r, (w.Hi.Gain-w.Lo.Gain)/4)
		}
		return r
	}
	worst := func(k float64) (float64, error) {
		m := math.Inf(-1)
		for _, x := range [5]float64{-1, -0.5, 0, 0.5, 1} {
			d, err := cost(k + x*room(k))
			if err != nil {
				return 0, err
			}
			m = math.Max(m, d)
		}
		return m, nil
	}
	k, _, _, err := h.best(ctx, g, w, worst)
	if err != nil {
		return 0, 0, err
	}
	c, err = cost(k)
	return k, c, err
}

// effortAt returns the largest effort for the unit step over all loops.
func (h *hunt) effortAt(ctx context.Context, k float64) (float64, error) {
	most := 0.0
	for _, m := range h.models {
		l, err := m.loopAt(k, h.set)
		if err != nil {
			return 0, err
		}
		e, err := NewEvidence(l)
		if err != nil {
			return 0, err
		}
		v, err := largestEffort(ctx, e, 1, inf)
		var refused *tf.UnsupportedError
		if errors.As(err, &refused) {
			return inf, nil
		}
		if err != nil {
			return 0, err
		}
		most = math.Max(most, v.reached)
	}
	return most, nil
}

// best returns the gain of the window with the least cost: samples, then golden section
// about the best of them. A cost without preference gives the middle. open tells that the
// cost still falls at the far end of an unbounded window.
func (h *hunt) best(ctx context.Context, g Gains, w GainWindow, cost func(float64) (float64, error)) (gain, least float64, open bool, err error) {
	lo, hi := w.Lo.Gain, w.Hi.Gain
	if lo == hi {
		c, err := cost(lo)
		return lo, c, false, err
	}
	free := math.IsInf(hi, 1)
	if free {
		hi = g.SearchedTo
		if math.IsInf(hi, 1) { // nothing was searched: all requirements have exact windows
			hi = math.Max(h.scale[1]*reachUp, lo*10)
		}
	}
	if lo == 0 {
		lo = math.Min(hi/1e6, g.SearchedFrom)
		if lo == 0 {
			lo = hi / 1e6
		}
	}
	logarithmic := hi > 4*lo
	at := func(u float64) float64 {
		switch {
		case u <= 0:
			return lo
		case u >= 1:
			return hi
		case logarithmic:
			return lo * math.Pow(hi/lo, u)
		}
		return lo + u*(hi-lo)
	}
	n := 24
	if free || w.Lo.Gain == 0 {
		n = 60
	}
	type point struct{ u, c float64 }
	points := make([]point, 0, n+1)
	margin := 1e-6 // open ends are not gains of the window
	for i := 0; i <= n; i++ {
		u := float64(i) / float64(n)
		if i == 0 && !w.Lo.Closed {
			u = margin
		}
		if i == n && !w.Hi.Closed && !free {
			u = 1 - margin
		}
		c, err := cost(at(u))
		if err != nil {
			return 0, 0, false, err
		}
		points = append(points, point{u, c})
	}
	flat := true
	i := 0
	for j, p := range points {
		flat = flat && p.c == points[0].c
		if p.c <= points[i].c {
			i = j
		}
	}
	if flat {
		k := at(0.5)
		return k, points[0].c, free, nil
	}
	if free && (i == n || math.IsInf(points[n].c, -1) || points[n].c <= points[i].c+1e-9*math.Abs(points[i].c)) {
		// The best lies beyond every bound: the smallest gain that is nearly as good.
		limit := points[i].c + 0.05*math.Abs(points[i].c)
		for _, p := range points {
			if p.c <= limit {
				return at(p.u), p.c, true, nil
			}
		}
	}
	a, b := points[max(i-1, 0)].u, points[min(i+1, n)].u
	best := points[i]
	const ratio = 0.6180339887498949
	x, y := b-ratio*(b-a), a+ratio*(b-a)
	cx, err := cost(at(x))
	if err != nil {
		return 0, 0, false, err
	}
	cy, err := cost(at(y))
	if err != nil {
		return 0, 0, false, err
	}
	for range 30 {
		if err := ctx.Err(); err != nil {
			return 0, 0, false, err
		}
		if cx < best.c {
			best = point{x, cx}
		}
		if cy < best.c {
			best = point{y, cy}
		}
		if cx < cy {
			b, y, cy = y, x, cx
			x = b - ratio*(b-a)
			if cx, err = cost(at(x)); err != nil {
				return 0, 0, false, err
			}
		} else {
			a, x, cx = x, y, cy
			y = a + ratio*(b-a)
			if cy, err = cost(at(y)); err != nil {
				return 0, 0, false, err
			}
		}
	}
	return at(best.u), best.c, false, nil
}

// rule says what the second-order map would have chosen.
func (h *hunt) rule(ctx context.Context, g Gains) (Rule, error) {
	r := Rule{}
	var err error
	if r.Map, err = h.sheet.Map(); err != nil {
		return r, err
	}
	windows := []GainWindow{{Hi: End{Gain: inf}}}
	for j, m := range h.models {
		if ok, err := m.prefilterIn(r.Map.AllPoles); err != nil {
			return r, err
		} else if !ok {
			windows = nil
			break
		}
		w, err := m.regionWindows(r.Map.AllPoles, Cause{Requirement: -1, Name: "region of the map", Loop: j}, false)
		if err != nil {
			return r, err
		}
		windows = intersect(windows, w)
	}
	if len(windows) == 0 {
		r.Holds = poly.Holds
		r.Sentence = "The second-order map says that no gain works."
		if len(g.Windows) > 0 {
			r.Holds = poly.Fails
			r.Sentence = "The second-order map says that no gain works, wrongly: the true loop meets the sheet in the windows listed."
		}
		return r, nil
	}
	last := windows[len(windows)-1]
	line, middle := last.Hi.Gain*(1-1e-6), math.Sqrt(last.Lo.Gain)*math.Sqrt(last.Hi.Gain)
	if math.IsInf(last.Hi.Gain, 1) {
		line = math.Max(1.5*last.Lo.Gain, h.scale[0])
		middle = 2 * line
	}
	if last.Lo.Gain == 0 {
		middle = line / 2
	}
	choose := func(k float64) (*RuleGain, error) {
		j, err := h.judge(ctx, k)
		if err != nil {
			return nil, err
		}
		return &RuleGain{Gain: h.signed(k), Met: j.met, Refused: j.refused, Reports: j.reports}, nil
	}
	if r.OnTheLine, err = choose(line); err != nil {
		return r, err
	}
	if r.InTheMiddle, err = choose(middle); err != nil {
		return r, err
	}
	r.Windows = h.mirrored(Gains{Windows: windows}).Windows
	r.Holds = poly.Fails
	switch {
	case r.OnTheLine.Met && r.InTheMiddle.Met:
		r.Holds = poly.Holds
		r.Sentence = fmt.Sprintf("The second-order map would choose a gain of %.6g, and that meets the sheet on the true loop.", r.OnTheLine.Gain)
	case !r.OnTheLine.Met:
		r.Sentence = fmt.Sprintf("The second-order map would choose a gain of %.6g, which fails on the true loop: %s.", r.OnTheLine.Gain, names(r.OnTheLine.Refused))
	default:
		r.Sentence = fmt.Sprintf("The second-order map allows a gain of %.6g, which fails on the true loop: %s.", r.InTheMiddle.Gain, names(r.InTheMiddle.Refused))
	}
	return r, nil
}

// names lists what refuses a gain, each once.
func names(causes []Cause) string {
	var out []string
	for _, c := range causes {
		if !slices.Contains(out, c.Name) {
			out = append(out, c.Name)
		}
	}
	s := ""
	for i, n := range out {
		switch {
		case i == 0:
		case i == len(out)-1:
			s += " and "
		default:
			s += ", "
		}
		s += n
	}
	return s
}

// explain fills in why no gain works.
func (h *hunt) explain(ctx context.Context, d *Design, loops []tf.Loop, opt []Option) error {
	// The other sign of the gain.
	flipped := *h.set
	flipped.negative = !flipped.negative
	o, err := h.sheet.hunt("spec.Sheet.Design", loops, &flipped)
	if err != nil {
		return err
	}
	other, err := o.windows(ctx, o.all())
	if err != nil {
		return err
	}
	if len(other.Windows) > 0 {
		other = o.mirrored(other)
		d.OtherSign = &other
	}
	// The smallest set of requirements that exclude each other: each alone, then pairs, and so on.
	stable, err := h.windows(ctx, nil)
	if err != nil {
		return err
	}
	sign := "k > 0"
	if h.set.negative {
		sign = "k < 0"
	}
	if len(stable.Windows) == 0 {
		d.Reason = "no gain " + sign + " makes every loop stable"
		return nil
	}
	alone := make([][]GainWindow, len(h.sheet))
	for i := range h.sheet {
		g, err := h.windows(ctx, []int{i})
		if err != nil {
			return err
		}
		alone[i] = g.Windows
	}
	for size := 1; size <= len(alone) && d.Conflict == nil; size++ {
		d.Conflict = conflict(alone, size, 0, nil)
	}
	var words []string
	for _, i := range d.Conflict {
		words = append(words, describe(h.sheet[i]))
	}
	switch len(words) {
	case 0:
		d.Reason = "no gain " + sign + " meets the sheet"
	case 1:
		d.Reason = "no gain " + sign + " meets: " + words[0]
	default:
		d.Reason = "no gain " + sign + " meets these together: "
		for i, w := range words {
			if i > 0 {
				d.Reason += "; "
			}
			d.Reason += w
		}
	}
	// The gain that misses least.
	best := judged{slack: math.Inf(-1), k: math.NaN()}
	for _, w := range stable.Windows {
		wide := Gains{SearchedFrom: h.scale[0] / reachDown, SearchedTo: math.Max(h.scale[1]*reachUp, w.Lo.Gain*10)}
		k, _, _, err := h.best(ctx, wide, w, func(k float64) (float64, error) {
			j, err := h.judge(ctx, k)
			return -j.slack, err
		})
		if err != nil {
			return err
		}
		j, err := h.judge(ctx, k)
		if err != nil {
			return err
		}
		if j.slack > best.slack || math.IsNaN(best.k) {
			best = j
		}
	}
	d.Nearest = &Miss{Gain: h.signed(best.k), Slack: best.slack, By: best.by, Reports: best.reports}
	return nil
}

// conflict returns the first set of the given size, taken from index from on and joined with
// chosen, that has no gain in common.
func conflict(alone [][]GainWindow, size, from int, chosen []int) []int {
	if size == 0 {
		w := []GainWindow{{Hi: End{Gain: inf}}}
		for _, i := range chosen {
			w = intersect(w, alone[i])
		}
		if len(w) == 0 {
			return slices.Clone(chosen)
		}
		return nil
	}
	for i := from; i+size <= len(alone); i++ {
		if c := conflict(alone, size-1, i+1, append(chosen, i)); c != nil {
			return c
		}
	}
	return nil
}
