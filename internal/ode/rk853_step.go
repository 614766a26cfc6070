package ode

import "math"

// explicit is the working storage of the explicit method.
type explicit struct {
	k    [stages853Extended][]float64
	y    []float64 // argument of a stage, in the end the new state
	y12  []float64 // argument of the twelfth stage: with the end it shows stiffness
	err5 []float64
	err3 []float64
}

func newExplicit(n int) *explicit {
	e := &explicit{}
	for i := range e.k {
		e.k[i] = make([]float64, n)
	}
	e.y, e.y12 = make([]float64, n), make([]float64, n)
	e.err5, e.err3 = make([]float64, n), make([]float64, n)
	return e
}

// stage forms the argument of stage i and evaluates it.
func (e *explicit) stage(g *Integrator, i int, h float64) {
	row := &a853[i]
	for c := range e.y {
		var sum float64
		for j := 0; j < i; j++ {
			if row[j] != 0 {
				sum += row[j] * e.k[j][c]
			}
		}
		e.y[c] = g.y[c] + h*sum
	}
	g.evaluate(g.t+c853[i]*h, e.y, e.k[i])
}

// try makes one step. The error is that of Hairer, Nørsett, Wanner, section II.10: the
// estimate of order 5, damped by the one of order 3.
func (e *explicit) try(g *Integrator, end float64) (accepted bool, factor float64, err error) {
	h := end - g.t
	copy(e.k[0], g.dydt)
	for i := 1; i < stages853; i++ {
		if i == stages853-1 {
			e.stage(g, i, h)
			copy(e.y12, e.y)
			break
		}
		e.stage(g, i, h)
	}
	for c := range e.y {
		var sum, five, three float64
		for j := 0; j < stages853; j++ {
			w := a853[stages853][j]
			if w != 0 {
				sum += w * e.k[j][c]
			}
			five += e853of5[j] * e.k[j][c]
		}
		three = sum - b853of3[0]*e.k[0][c] - b853of3[8]*e.k[8][c] - b853of3[11]*e.k[11][c]
		e.y[c] = g.y[c] + h*sum
		e.err5[c], e.err3[c] = five, three
	}
	five, three := g.norm(e.err5, g.y, e.y), g.norm(e.err3, g.y, e.y)
	size := 0.0
	if five > 0 || three > 0 {
		size = math.Abs(h) * five * five / math.Sqrt(five*five+0.01*three*three)
	}
	if math.IsNaN(size) || math.IsInf(size, 0) {
		if math.Abs(h) < 1e3*unitRoundoff*math.Max(math.Abs(g.t), math.SmallestNonzeroFloat64*1e20) {
			return false, 0, ErrNotFinite
		}
		return false, 0.1, nil
	}
	const safety, least, most = 0.9, 1.0 / 3, 6
	factor = most
	if size > 0 {
		factor = math.Min(most, math.Max(least, safety*math.Pow(size, -1.0/8)))
	}
	if size > 1 && !g.unseen {
		return false, math.Min(factor, 1), nil
	}
	g.evaluate(end, e.y, e.k[stages853])
	if !finite(e.k[stages853]) {
		return false, 0.1, nil
	}
	e.keepDense(g, end, h)
	g.accept(end, e.y, e.k[stages853])
	return true, factor, nil
}

// keepDense makes the three further stages and the continuous extension of order 7.
func (e *explicit) keepDense(g *Integrator, end, h float64) {
	keep := e.err5 // the new state; the stages below use e.y
	copy(keep, e.y)
	for i := stages853 + 1; i < stages853Extended; i++ {
		e.stage(g, i, h)
	}
	copy(e.y, keep)
	d, n := &g.dense, g.n
	d.set(g.t, end, g.y, 7, true)
	first, last := e.k[0], e.k[stages853]
	for c := 0; c < n; c++ {
		dy := e.y[c] - g.y[c]
		d.coefficients[c] = dy
		d.coefficients[n+c] = h*first[c] - dy
		d.coefficients[2*n+c] = 2*dy - h*(last[c]+first[c])
		for r := range d853 {
			var sum float64
			for j, w := range d853[r] {
				if w != 0 {
					sum += w * e.k[j][c]
				}
			}
			d.coefficients[(3+r)*n+c] = h * sum
		}
	}
}
