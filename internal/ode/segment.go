package ode

// A Segment is the solution over one step, as a polynomial in time.
type Segment struct {
	From, To     float64
	n            int
	nested       bool // in the basis θ, θ(1-θ), θ²(1-θ), …; else in powers of θ
	start        []float64
	coefficients []float64 // n of each term after another
}

func (s Segment) clone() Segment {
	s.start = append([]float64(nil), s.start...)
	s.coefficients = append([]float64(nil), s.coefficients...)
	return s
}

// At writes the solution at time t into y; outside [From, To] it is extrapolated.
func (s Segment) At(t float64, y []float64) {
	theta := (t - s.From) / (s.To - s.From)
	for i := range y[:s.n] {
		y[i] = s.component(i, theta)
	}
}

// Component returns component i of the solution at time t.
func (s Segment) Component(i int, t float64) float64 {
	return s.component(i, (t-s.From)/(s.To-s.From))
}

func (s Segment) component(i int, theta float64) float64 {
	terms := len(s.coefficients) / s.n
	v := 0.0
	for j := terms - 1; j >= 0; j-- {
		v += s.coefficients[j*s.n+i]
		if s.nested && j%2 == 1 {
			v *= 1 - theta
		} else {
			v *= theta
		}
	}
	return s.start[i] + v
}

// set prepares the segment for terms terms of n components, keeping its memory.
func (s *Segment) set(from, to float64, start []float64, terms int, nested bool) {
	s.From, s.To, s.n, s.nested = from, to, len(start), nested
	s.start = append(s.start[:0], start...)
	if cap(s.coefficients) < terms*s.n {
		s.coefficients = make([]float64, terms*s.n)
	}
	s.coefficients = s.coefficients[:terms*s.n]
}
