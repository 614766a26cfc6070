package timeresp

import "math"

// What a delay equation left to itself can still do is bounded by its fundamental
// solutions: with the states x and the largest |y| of the last T at some breaking point
// gathered in a vector v ≥ 0, v after N intervals is at most P·v, and every |y| in between at
// most c·v. P and c come from the solutions that start from one state each, and from the
// response to an impulse in the delayed signal, whose absolute integral over T multiplies
// the largest |y|. If P·μ ≤ q·μ for some μ > 0 and q < 1, the solution dies away and |y| stays
// below c·μ times the largest v/μ.

// A decay is such a bound.
type decay struct {
	weight []float64 // μ, the last one of the signal
	reach  float64   // c·μ
	ok     bool
}

// bound returns what can still come of states and signal, as deviations from the limit.
func (d *decay) bound(v []float64) float64 {
	s := 0.0
	for i, x := range v {
		s = max(s, math.Abs(x)/d.weight[i])
	}
	return s * d.reach
}

const (
	mostBlocks     = 512    // intervals over which decay is looked for
	mostBoundCells = 60_000 // cells of one fundamental solution
)

// A fundamental is one fundamental solution in float64: the bound needs few digits.
type fundamental struct {
	x      []float64
	loop   [][]float64
	xs     [][]float64
	factor []float64
	dirac  float64 // weight of the impulse in the signal
	mean   bool    // |y| and |x| count by their integral over T
	last   []float64
	most   float64 // largest, over all intervals, of the signal

	previous float64 // integral over the interval before
}

// decay looks for a bound.
func (q *delayEquation) decay() (d decay) {
	n := q.n
	a, b := make([]float64, n), make([]float64, n)
	for i := range n {
		a[i], b[i] = q.a[n-1-i].hi, q.fromLoop[n-1-i].hi
	}
	direct := q.loopD.hi
	if math.Abs(direct) >= 1 {
		return d
	}
	solutions := make([]fundamental, n+1)
	factor := make([]float64, earlyTerms)
	for k := range factor {
		factor[k] = q.h / float64(k+1)
	}
	for j := range solutions {
		s := &solutions[j]
		s.x = make([]float64, n)
		s.loop = make([][]float64, q.cells)
		for i := range s.loop {
			s.loop[i] = make([]float64, earlyTerms)
		}
		s.xs = make([][]float64, n+1)
		for i := range s.xs {
			s.xs[i] = make([]float64, earlyTerms+1)
		}
		s.factor = factor
		s.last = make([]float64, n+1)
		if j < n {
			s.x[j] = 1
		} else {
			copy(s.x, b)
			s.dirac = direct
			s.mean = true
		}
	}
	next := 1
	for block := 1; block <= mostBlocks && block*q.cells <= mostBoundCells; block++ {
		for j := range solutions {
			solutions[j].interval(q, a, b, direct)
		}
		if block < next {
			continue
		}
		next += 1 + next/4
		p := make([][]float64, n+1)
		worst := 0.0
		for i := range p {
			p[i] = make([]float64, n+1)
			for j := range solutions {
				p[i][j] = solutions[j].last[i]
				worst = max(worst, p[i][j])
			}
		}
		if worst > 1e30 || worst != worst {
			return d
		}
		if mu, ok := contracts(p); ok {
			d.ok, d.weight = true, mu
			for j := range solutions {
				d.reach += solutions[j].most * mu[j]
			}
			return d
		}
	}
	return d
}

// contracts looks for μ > 0 with p·μ ≤ 0.9·μ, by power iteration on the positive p + tiny.
func contracts(p [][]float64) (mu []float64, ok bool) {
	n := len(p)
	mu = make([]float64, n)
	next := make([]float64, n)
	for i := range mu {
		mu[i] = 1
	}
	for range 60 {
		// μ ← μ + p·μ converges to the Perron vector of p and stays positive.
		top := 0.0
		ok = true
		for i := range n {
			sum := 0.0
			for j := range n {
				sum += p[i][j] * mu[j]
			}
			ok = ok && sum <= 0.9*mu[i]
			next[i] = sum + 1e-3*mu[i]
			top = max(top, next[i])
		}
		if ok {
			return mu, true
		}
		if top == 0 || top != top {
			return nil, false
		}
		for i := range n {
			mu[i] = max(next[i]/top, 1e-30)
		}
	}
	return nil, false
}

// interval continues the solution over one T and notes what the next step of the bound needs.
func (s *fundamental) interval(q *delayEquation, a, b []float64, direct float64) {
	n := q.n
	largest, integral := 0.0, 0.0
	clear(s.last)
	for c := range q.cells {
		y := s.loop[c]
		for i := range n {
			s.xs[i][0] = s.x[i]
		}
		for k := range earlyTerms {
			w, x1 := y[k], 0.0
			if n > 0 {
				x1 = s.xs[0][k]
			}
			for i := range n {
				s.xs[i][k+1] = s.factor[k] * (s.xs[i+1][k] - a[i]*x1 + b[i]*w)
			}
			y[k] = x1 + direct*w
		}
		size, mean := 0.0, 0.0
		for k, v := range y {
			size += math.Abs(v)
			mean += math.Abs(v) / float64(k+1)
		}
		largest = max(largest, size)
		integral += mean * q.h
		for i := range n {
			sum, mean := 0.0, 0.0
			for k, v := range s.xs[i] {
				sum += v
				mean += math.Abs(v) / float64(k+1)
			}
			s.x[i] = sum
			s.last[i] += mean * q.h
		}
	}
	if !s.mean {
		for i := range n {
			s.last[i] = math.Abs(s.x[i])
		}
		s.last[n] = largest
		s.most = max(s.most, largest)
		return
	}
	// The integral over a window of length T that ends anywhere in the interval is at most
	// that of this interval and the one before.
	s.last[n] = integral + s.previous + math.Abs(s.dirac)
	s.most = max(s.most, s.last[n])
	s.previous = integral
	// The impulse itself goes round: it kicks the states and is reflected.
	if s.dirac != 0 {
		for i := range n {
			s.x[i] += b[i] * s.dirac
		}
		s.dirac *= direct
	}
}
