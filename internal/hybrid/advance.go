package hybrid

import (
	"context"
	"math"
	"slices"
	"sort"
)

// segment is the loop over [from, to]: all that is needed to form its series anew.
type segment struct {
	from, to      float64
	mode          Mode
	demand, slope float64 // of a sampled controller: what it asks for, and its slope behind an extrapolating hold
	effort        float64 // of the actuator, where the segment begins
	states        []float64
	delayed       *[lines]series // what comes out of the delay lines; nil without dead time
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
	last     float64 // s, how long a segment the series last allowed
	turns    int     // changes of mode at this instant
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
		for _, x := range r.seg.states {
			if x-x != 0 {
				return nil, &OverflowError{Time: r.seg.from}
			}
		}
	}
	return r.result, nil
}

// advance makes one segment. After a switch the demand stands on the limit, and the sign
// of its distance from it is noise.
func (r *runner) advance(until float64, switched bool) bool {
	r.takeSample()
	r.fillDelayed()
	end := r.segmentEnd(until)
	h := end - r.seg.from
	r.expand(&r.seg, &r.now)
	limited := r.loop.Amplitude > 0 || r.loop.Rate > 0
	if limited && !switched {
		r.settleMode()
	}
	// The last segment tells about how long this one can be.
	if room := math.Min(h, 8*r.last); room > 0 {
		h = room
	}
	if h = r.now.length(h, r.scale); h < end-r.seg.from {
		end = r.seg.from + h
	}
	r.last = h
	if end <= r.seg.from {
		end = math.Nextafter(r.seg.from, math.Inf(1))
	}
	to := r.seg.mode
	if limited {
		var at float64
		at, to = r.firstSwitch(end-r.seg.from, switched)
		if to != r.seg.mode && at == 0 {
			if r.turns++; r.turns <= mostTurns {
				r.turn(to)
				return true
			}
			to = r.seg.mode // a touch, or a tie that rounding cannot break: the mode stays
		}
		if to != r.seg.mode {
			end = math.Min(end, math.Max(r.seg.from+at, math.Nextafter(r.seg.from, math.Inf(1))))
		}
	}
	r.finish(end)
	r.turns = 0
	if to == r.seg.mode {
		return false
	}
	r.turn(to)
	return true
}

// mostTurns bounds the changes of mode at one instant.
const mostTurns = 4

// turn changes the mode where the segment being made begins.
func (r *runner) turn(to Mode) {
	before := r.seg.mode
	r.seg.mode = to
	if to == Linear && r.loop.Rate > 0 {
		// The demand may be too fast to be followed from the first.
		r.fillDelayed()
		r.expand(&r.seg, &r.now)
		r.seg.mode = r.follow()
	}
	r.result.Switches = append(r.result.Switches, Switch{Time: r.seg.from, From: before, To: r.seg.mode})
}

// follow returns the mode of an actuator that stands where its demand is.
func (r *runner) follow() Mode {
	const slack = 1 + 1e-12
	switch rate := r.now.signal[Demand][1]; {
	case r.loop.Rate > 0 && rate > slack*r.loop.Rate:
		return Rising
	case r.loop.Rate > 0 && rate < -slack*r.loop.Rate:
		return Falling
	}
	return Linear
}

// settleMode finds the mode where an input, a sample, or what comes out of a delay line, may
// have jumped.
func (r *runner) settleMode() {
	before := r.seg.mode
	mode := r.fittingMode()
	if mode == before {
		return
	}
	r.seg.mode = mode
	r.expand(&r.seg, &r.now)
	if r.seg.from > 0 {
		r.result.Switches = append(r.result.Switches, Switch{Time: r.seg.from, From: before, To: mode})
	}
}

// fittingMode returns the mode that fits the demand of the moment. With a limited rate the
// effort cannot jump, so the demand follows from it; else the demand of a linear actuator
// decides, unless the present mode still fits.
func (r *runner) fittingMode() Mode {
	limit := math.Inf(1)
	if r.loop.Amplitude > 0 {
		limit = r.loop.Amplitude
	}
	const slack = 1e-12
	present := r.seg.mode
	demand := func(m Mode) float64 {
		if r.seg.mode != m {
			r.seg.mode = m
			r.expand(&r.seg, &r.now)
		}
		return r.now.signal[Demand][0]
	}
	defer func() {
		if r.seg.mode != present {
			r.seg.mode = present
			r.expand(&r.seg, &r.now)
		}
	}()
	if r.loop.Rate > 0 {
		w := demand(Rising)
		target := math.Max(-limit, math.Min(limit, w))
		near := slack * math.Max(math.Abs(r.seg.effort), math.Abs(target))
		switch {
		case target > r.seg.effort+near:
			return Rising
		case target < r.seg.effort-near:
			return Falling
		case w > limit*(1+slack):
			return Upper
		case w < -limit*(1+slack):
			return Lower
		}
		demand(Linear)
		return r.follow()
	}
	switch w := demand(present); {
	case present == Linear && math.Abs(w) <= limit*(1+slack), present == Upper && w >= limit*(1-slack), present == Lower && w <= -limit*(1-slack):
		return present
	}
	switch w := demand(Linear); {
	case w > limit:
		return Upper
	case w < -limit:
		return Lower
	}
	return Linear
}

// firstSwitch returns when within the next h seconds the mode ends first, and what follows.
func (r *runner) firstSwitch(h float64, switched bool) (at float64, to Mode) {
	limit := r.loop.Amplitude
	demand, effort := &r.now.signal[Demand], &r.now.signal[Effort]
	at, to = h, r.seg.mode
	// look takes the distance from where the mode ends, which is above zero while it lasts,
	// and the size beside which it is noise.
	look := func(distance series, size float64, next Mode) {
		noise := 1e-15 * (size + distance.size(h))
		if switched && math.Abs(distance[0]) <= 1e-9*size || math.Abs(distance[0]) <= noise {
			// It starts where the mode would end: the root there is divided out.
			copy(distance[:], distance[1:])
			distance[terms-1] = 0
			noise /= h
			if b := distance.bernstein(h); firstSign(&b, noise, false) < 0 {
				at, to = 0, next
				return
			}
		}
		var room [terms]float64
		if found := distance.roots(h, noise, room[:0]); len(found) > 0 && (found[0] < at || to == r.seg.mode) {
			at, to = found[0], next
		}
	}
	least := func(s *series, sign, level float64) (d series) {
		for i, c := range s {
			d[i] = sign * c
		}
		d[0] += level
		return d
	}
	apart := func(sign float64) (d series) {
		for i := range d {
			d[i] = sign * (demand[i] - effort[i])
		}
		return d
	}
	switch r.seg.mode {
	case Linear:
		if limit > 0 {
			look(least(demand, -1, limit), limit, Upper)
			look(least(demand, +1, limit), limit, Lower)
		}
		if rate := r.loop.Rate; rate > 0 {
			slope := demand.derivative()
			look(least(&slope, -1, rate), rate, Rising)
			look(least(&slope, +1, rate), rate, Falling)
		}
	case Upper:
		look(least(demand, +1, -limit), limit, Linear)
	case Lower:
		look(least(demand, -1, -limit), limit, Linear)
	case Rising, Falling:
		sign, end := 1.0, Upper
		if r.seg.mode == Falling {
			sign, end = -1, Lower
		}
		if limit > 0 {
			look(least(effort, -sign, limit), limit, end)
		}
		look(apart(sign), demand.size(h)+effort.size(h), Linear)
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
	r.seg.effort = r.now.signal[Effort].at(h)
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
	r.seg.demand = v
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
