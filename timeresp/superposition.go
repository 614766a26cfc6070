package timeresp

import "math"

// curve returns the response as the figures look at it, time counted from the start of the
// first arc and multiplied by w.
func (r *Response) curve() (c curve, w float64) {
	first := r.arcs[0].signal
	w = first.rate()
	if len(r.arcs) == 1 {
		return first, w
	}
	s := &superposition{arcs: r.arcs, at: make([]float64, len(r.arcs))}
	for i := range r.arcs {
		s.at[i] = (r.arcs[i].from - r.arcs[0].from) * w
	}
	return s, w
}

// limit returns the limit of the sum.
func (r *Response) limit() float64 {
	if len(r.arcs) == 0 {
		return 0
	}
	if len(r.arcs) == 1 {
		return r.arcs[0].signal.ultimate()
	}
	// The drifts add up to a polynomial of the time since the last arc began, which has to
	// be a constant. Its coefficients are rounded sums.
	w := r.arcs[0].signal.rate()
	last := r.arcs[len(r.arcs)-1].from
	var sum, size []float64
	for i := range r.arcs {
		drift, ok := r.arcs[i].signal.trend()
		if !ok {
			return math.NaN()
		}
		for len(sum) < len(drift) {
			sum, size = append(sum, 0), append(size, 0)
		}
		absolute := make([]float64, len(drift))
		for j, c := range drift {
			absolute[j] = math.Abs(c)
		}
		d := (last - r.arcs[i].from) * w
		for j, c := range shifted(drift, d) {
			sum[j] += c
		}
		for j, c := range shifted(absolute, d) {
			size[j] += c
		}
	}
	for j := 1; j < len(sum); j++ {
		if math.Abs(sum[j]) > 1e-13*size[j] {
			return math.NaN()
		}
	}
	if len(sum) == 0 || math.Abs(sum[0]) <= 1e-15*size[0] {
		return 0
	}
	return sum[0]
}

// A superposition is the sum of arcs of one system.
type superposition struct {
	arcs []arc
	at   []float64 // τ at which they begin
}

func (s *superposition) node(tau float64, before bool, n *node) {
	*n = node{t: tau, step: math.Inf(1)}
	var part node
	for i := range s.arcs {
		if s.at[i] > tau || before && s.at[i] == tau {
			break
		}
		s.arcs[i].signal.node(tau-s.at[i], before, &part)
		n.y += part.y
		n.d += part.d
		n.c += part.c
		n.spread += part.spread
		n.fourth += part.fourth
		n.step = min(n.step, part.step)
	}
}

func (s *superposition) fourth(a, b *node) float64 {
	sum := 0.0
	for i := range s.arcs {
		if s.at[i] >= b.t {
			break
		}
		var from node
		to := node{t: b.t - s.at[i]}
		s.arcs[i].signal.node(a.t-s.at[i], false, &from)
		sum += s.arcs[i].signal.fourth(&from, &to)
	}
	return sum
}

func (s *superposition) cellEnd(tau float64) float64 {
	end := math.Inf(1)
	for i := range s.arcs {
		if s.at[i] > tau {
			return min(end, s.at[i])
		}
		next := s.arcs[i].signal.cellEnd(tau - s.at[i])
		if s.at[i]+next <= tau { // by rounding
			next = s.arcs[i].signal.cellEnd(math.Nextafter(next, math.Inf(1)))
		}
		end = min(end, max(s.at[i]+next, math.Nextafter(tau, math.Inf(1))))
	}
	return end
}

func (s *superposition) cellStart(tau float64) float64 {
	start := 0.0
	for i := range s.arcs {
		if s.at[i] >= tau {
			break
		}
		next := s.arcs[i].signal.cellStart(tau - s.at[i])
		if s.at[i]+next >= tau { // by rounding
			next = s.arcs[i].signal.cellStart(math.Nextafter(next, 0))
		}
		start = max(start, min(s.at[i]+next, math.Nextafter(tau, 0)))
	}
	return start
}

func (s *superposition) horizon() float64 {
	end := 0.0
	for i := range s.arcs {
		end = max(end, s.at[i]+s.arcs[i].signal.horizon())
	}
	return end
}

func (s *superposition) calm(level float64) float64 {
	// Each arc may keep its part of the level.
	tau := s.horizon()
	for i := range s.arcs {
		tau = max(tau, s.at[i]+s.arcs[i].signal.calm(level/float64(len(s.arcs))))
	}
	return tau
}
