package baseline

import "gonum.org/v1/gonum/mat"

// StepSamples returns n+1 samples, dt apart, of the unit step response of the strictly
// proper function num/den (highest power first), by repeated multiplication with one
// matrix exponential of the controllable canonical form with the input held as a state.
func StepSamples(num, den []float64, dt float64, n int) []float64 {
	order := len(den) - 1
	m := mat.NewDense(order+1, order+1, nil)
	for j := 0; j < order; j++ {
		m.Set(0, j, -den[j+1]/den[0]*dt)
	}
	m.Set(0, order, dt)
	for i := 1; i < order; i++ {
		m.Set(i, i-1, dt)
	}
	var e mat.Dense
	e.Exp(m)
	c := make([]float64, order)
	for i, b := range num {
		c[order-len(num)+i] = b / den[0]
	}
	x := mat.NewVecDense(order+1, nil)
	x.SetVec(order, 1)
	next := mat.NewVecDense(order+1, nil)
	out := make([]float64, 0, n+1)
	for i := 0; ; i++ {
		y := 0.0
		for j, cj := range c {
			y += cj * x.AtVec(j)
		}
		out = append(out, y)
		if i == n {
			return out
		}
		next.MulVec(&e, x)
		x, next = next, x
	}
}

// StepScan reads overshoot, rise time 10 % to 90 % and settling time off samples.
func StepScan(y []float64, dt, final, band float64) (overshoot, rise, settling float64) {
	peak, t10, t90 := 0.0, -1.0, -1.0
	for i, v := range y {
		v /= final
		t := float64(i) * dt
		if v > peak {
			peak = v
		}
		if t10 < 0 && v >= 0.1 {
			t10 = t
		}
		if t90 < 0 && v >= 0.9 {
			t90 = t
		}
		if v < 1-band || v > 1+band {
			settling = t + dt
		}
	}
	if peak > 1 {
		overshoot = peak - 1
	}
	return overshoot, t90 - t10, settling
}
