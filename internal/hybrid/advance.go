package hybrid

import (
	"context"
	"math"
	"slices"
	"sort"
)

// segment is the loop over [from, to]: all that is needed to form its series anew.
type segment struct {
	from, to     float64
	mode         Mode
	held, demand float64 // of a sampled controller: what the actuator gives and what was asked for
	slope        float64 // of both, behind an extrapolating hold
	states       []float64
	delayed      *[lines]series // what comes out of the delay lines; nil without dead time
}

// A Switch is an instant at which the actuator reaches or leaves its limit.
type Switch struct {
	Time     float64
	From, To Mode
}

// A Result is a loop followed from 0 to Until.
type Result struct {
	Until    float64
	Switches []Switch
	m        *machine
	segments []segment
	demand   []float64 // what a sampled controller asked for
	effort   []float64 // and what the actuator gave
}

// mostSegments bounds the work of one simulation.
const mostSegments = 300_000

// history is what went into a delay line, piece by piece.
type history struct {
	to     []float64
	from   []float64
	pieces []series
	first  int // the piece that comes out now
}

// runner is a simulation under way.
type runner struct {
	*machine
	result   *Result
	history  [lines]history
	anyDelay bool
	seg      segment // the one being made
	now      seriesOf
	scale    []float64 // largest size so far of each state
	sample   sampling
}

// sampling is the state of a sampled controller.
type sampling struct {
	index   int // of the next sample
	x, next []float64
	applyAt float64 // when the pending output is put out; +Inf if nothing is pending
	pending float64
	last    float64 // put out before
}

// Simulate follows the loop from rest at t = 0 to until, in seconds. Progress, unless nil,
// is told the time reached now and then. A cancelled context ends it within a few thousand
// segments.
func Simulate(ctx context.Context, l Loop, in Inputs, until float64, progress func(t float64)) (*Result, error) {
	m, err := newMachine(l, in)
	if err != nil {
		return nil, err
	}
	r := &runner{machine: m, result: &Result{Until: until, m: m}}
	for _, d := range m.delays {
		r.anyDelay = r.anyDelay || d > 0
	}
	r.seg.states = make([]float64, m.at[4])
	r.scale = make([]float64, m.at[4])
	r.sample = sampling{applyAt: math.Inf(1), x: make([]float64, m.controller.states()), next: make([]float64, m.controller.states())}
	switched := false
	for r.seg.from < until {
		if n := len(r.result.segments); n%2048 == 0 {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			if progress != nil {
				progress(r.seg.from)
			}
			if n >= mostSegments {
				return nil, ErrTooLong
			}
		}
		switched = r.advance(until, switched)
	}
	return r.result, nil
}

// advance makes one segment. After a switch the demand stands on the limit, and the sign
// of its distance from it is noise.
func (r *runner) advance(until float64, switched bool) bool {
	r.takeSample()
	r.fillDelayed()
	h := r.segmentEnd(until) - r.seg.from
	r.expand(&r.seg, &r.now)
	if r.loop.Amplitude > 0 && r.loop.Period == 0 && !switched {
		r.settleMode()
	}
	end := r.seg.from + h
	if short := r.now.length(h, r.scale); short < h {
		end = r.seg.from + short
	}
	if end <= r.seg.from {
		end = math.Nextafter(r.seg.from, math.Inf(1))
	}
	to := r.seg.mode
	if r.loop.Amplitude > 0 && r.loop.Period == 0 {
		var at float64
		at, to = r.firstSwitch(end-r.seg.from, switched)
		if to != r.seg.mode {
			end = math.Min(end, math.Max(r.seg.from+at, math.Nextafter(r.seg.from, math.Inf(1))))
		}
	}
	r.finish(end)
	if to == r.seg.mode {
		return false
	}
	r.result.Switches = append(r.result.Switches, Switch{Time: end, From: r.seg.mode, To: to})
	r.seg.mode = to
	return true
}

// settleMode finds the mode where an input, or what comes out of a delay line, may have
// jumped: linear if the linear demand is within the limit.
func (r *runner) settleMode() {
	limit := r.loop.Amplitude
	before := r.seg.mode
	slack := 1e-12 * limit
	w := r.now.signal[Demand][0]
	if before == Linear && math.Abs(w) <= limit+slack || before == Upper && w >= limit-slack || before == Lower && w <= -limit+slack {
		return
	}
	if before != Linear {
		r.seg.mode = Linear
		r.expand(&r.seg, &r.now)
		w = r.now.signal[Demand][0]
	}
	switch {
	case w > limit:
		r.seg.mode = Upper
	case w < -limit:
		r.seg.mode = Lower
	}
	if r.seg.mode != Linear {
		r.expand(&r.seg, &r.now)
	}
	if r.seg.mode != before && r.seg.from > 0 {
		r.result.Switches = append(r.result.Switches, Switch{Time: r.seg.from, From: before, To: r.seg.mode})
	}
}

// firstSwitch returns when within the next h seconds the mode ends first, and what follows.
func (r *runner) firstSwitch(h float64, switched bool) (at float64, to Mode) {
	limit := r.loop.Amplitude
	demand := &r.now.signal[Demand]
	noise := 1e-15 * (limit + demand.size(h))
	at, to = h, r.seg.mode
	look := func(sign, level float64, next Mode) {
		// The distance to the limit, above zero as long as the mode lasts.
		var g series
		for i, c := range demand {
			g[i] = sign * c
		}
		g[0] += level
		length := noise
		if switched && math.Abs(g[0]) <= 1e-9*limit || math.Abs(g[0]) <= noise {
			// It starts on the limit: the root there is divided out.
			copy(g[:], g[1:])
			g[terms-1] = 0
			length = noise / h
		}
		var room [terms]float64
		for _, root := range g.roots(h, length, room[:0]) {
			if root < at || root == at && to == r.seg.mode {
				at, to = root, next
			}
			break
		}
	}
	switch r.seg.mode {
	case Linear:
		look(-1, limit, Upper)
		look(+1, limit, Lower)
	case Upper:
		look(+1, -limit, Linear)
	case Lower:
		look(-1, -limit, Linear)
	}
	return at, to
}

// segmentEnd returns where the next segment has to end at the latest.
func (r *runner) segmentEnd(until float64) float64 {
	t := r.seg.from
	end := math.Min(until, t+r.longest)
	for i, in := range r.in {
		if in == nil {
			continue
		}
		end = math.Min(end, in.Next(t))
		if d := r.delays[lineReference]; i == inReference && d > 0 {
			if t < d {
				end = math.Min(end, d)
			} else {
				end = math.Min(end, math.Max(math.Nextafter(t, math.Inf(1)), in.Next(t-d)+d))
			}
		}
	}
	for i := lineDemand; i < lines; i++ {
		d := r.delays[i]
		if d == 0 {
			continue
		}
		if t < d {
			end = math.Min(end, d)
		} else if k := r.history[i].first; k < len(r.history[i].to) {
			end = math.Min(end, r.history[i].to[k]+d)
		}
	}
	if r.loop.Period > 0 {
		end = math.Min(end, math.Min(float64(r.sample.index)*r.loop.Period, r.sample.applyAt))
	}
	return end
}

// fillDelayed forms the series that come out of the delay lines from now on.
func (r *runner) fillDelayed() {
	if !r.anyDelay {
		return
	}
	r.seg.delayed = new([lines]series)
	t := r.seg.from
	if d := r.delays[lineReference]; d > 0 && t >= d && r.in[inReference] != nil {
		r.in[inReference].Taylor(t-d, r.seg.delayed[lineReference][:])
	}
	for i := lineDemand; i < lines; i++ {
		d, h := r.delays[i], &r.history[i]
		if d == 0 || t < d {
			continue
		}
		for h.first < len(h.to)-1 && h.to[h.first]+d <= t {
			h.first++
		}
		if h.first < len(h.pieces) {
			h.pieces[h.first].shifted(math.Max(0, t-(h.from[h.first]+d)), &r.seg.delayed[i])
		}
	}
}

// finish ends the segment at end and moves on.
func (r *runner) finish(end float64) {
	h := end - r.seg.from
	done := r.seg
	done.to = end
	done.states = slices.Clone(r.seg.states)
	r.result.segments = append(r.result.segments, done)
	for i := lineDemand; i < lines; i++ {
		if r.delays[i] > 0 {
			line := &r.history[i]
			line.from, line.to = append(line.from, done.from), append(line.to, end)
			line.pieces = append(line.pieces, r.now.line[i])
		}
	}
	for i := range r.seg.states {
		r.seg.states[i] = r.now.states[i].at(h)
		r.scale[i] = math.Max(r.scale[i], math.Abs(r.seg.states[i]))
	}
	r.seg.held += r.seg.slope * h
	r.seg.demand += r.seg.slope * h
	r.seg.from = end
}

// takeSample lets a sampled controller act, if its time has come.
func (r *runner) takeSample() {
	if r.loop.Period == 0 {
		return
	}
	s := &r.sample
	for {
		if s.applyAt <= r.seg.from {
			r.put(s.pending)
			s.applyAt = math.Inf(1)
		}
		if float64(s.index)*r.loop.Period > r.seg.from {
			return
		}
		// What the sensor says just now, before the controller acts.
		r.fillDelayed()
		r.expand(&r.seg, &r.now)
		e := r.now.signal[Error][0]
		c := &r.controller
		s.pending = c.output(s.x, e)
		c.slope(s.x, e, 0, s.next)
		s.x, s.next = s.next, s.x
		r.result.demand = append(r.result.demand, s.pending)
		r.result.effort = append(r.result.effort, clip(s.pending, r.loop.Amplitude))
		s.applyAt = float64(s.index)*r.loop.Period + r.loop.ComputationDelay
		s.index++
	}
}

func (r *runner) put(v float64) {
	r.seg.demand, r.seg.held = v, clip(v, r.loop.Amplitude)
	if r.loop.Extrapolate {
		r.seg.slope = (v - r.sample.last) / r.loop.Period
		r.sample.last = v
	}
}

func clip(v, limit float64) float64 {
	if limit == 0 {
		return v
	}
	return math.Max(-limit, math.Min(limit, v))
}

// Samples returns the demand and the effort of a sampled controller at its instants.
func (r *Result) Samples() (demand, effort []float64) {
	return slices.Clone(r.demand), slices.Clone(r.effort)
}

// Segments returns how many pieces the result has.
func (r *Result) Segments() int { return len(r.segments) }

// index returns the segment that holds t; at a boundary the later one.
func (r *Result) index(t float64) int {
	i := sort.Search(len(r.segments), func(i int) bool { return r.segments[i].from > t })
	return max(0, i-1)
}
