package spec

import "math"

// The standard second-order step in normalised time τ = ωt. Letters: z the damping ratio,
// wd = √(1-z²), slow and fast the magnitudes of the real poles for z ≥ 1.
//
// Everything follows from one function, the first time at which the step reaches a level:
// between two extrema the error repeats the first half period, scaled, since
//
//	e(tₙ + τ) = (-1)ⁿ e(tₙ) (1 - y(τ)),  tₙ = nπ/wd,  |e(tₙ)| = exp(-nπz/wd).

// dampedFactor returns √(1-z²) for 0 ≤ z ≤ 1.
func dampedFactor(z float64) float64 { return math.Sqrt((1 - z) * (1 + z)) }

// realPoles returns z - √(z²-1) and z + √(z²-1) for z ≥ 1.
func realPoles(z float64) (slow, fast float64) {
	if z > 1e150 { // z² would overflow; √(z²-1) is z to the last bit
		return 0.5 / z, 2 * z
	}
	fast = z + math.Sqrt((z-1)*(z+1))
	return 1 / fast, fast
}

// standardError returns e = 1 - y and y′ at time t ≥ 0.
func standardError(z, t float64) (e, slope float64) {
	if z < 1 {
		wd := dampedFactor(z)
		sin, cos := math.Sincos(wd * t)
		decay := math.Exp(-z * t)
		s := t
		if wd > 0 {
			s = sin / wd
		}
		return decay * (cos + z*s), decay * s
	}
	// With ν = √(z²-1), cosh and sinh carry e^(νt) together with e^(-zt); all terms are positive.
	slow, fast := realPoles(z)
	decay := math.Exp(-slow * t)
	spread := fast - slow // 2ν
	s := t
	if spread > 0 {
		s = -math.Expm1(-spread*t) / spread
	}
	return decay * ((1+math.Exp(-spread*t))/2 + z*s), decay * s
}

// standardStep returns y at time t ≥ 0 with small relative error, also where y is tiny.
func standardStep(z, t float64) float64 {
	if t*math.Max(1, z) < 0.25 {
		// Power series of y″ + 2zy′ + y = 1; terms fall at least like 0.5ⁿ/n!.
		term1, term0 := 0.0, 0.0 // c₍ₙ₊₁₎t^(n+1), cₙtⁿ
		sum := 0.0
		for n := 0.0; n < 30; n++ {
			next := -(2*z*t*(n+1)*term1 + t*t*term0) / ((n + 2) * (n + 1))
			if n == 0 {
				next = t * t / 2
			}
			sum += next
			if math.Abs(next) < 1e-18*math.Abs(sum) {
				break
			}
			term0, term1 = term1, next
		}
		return sum
	}
	e, _ := standardError(z, t)
	return 1 - e
}

// timeToLevel returns the first time at which y reaches level: 0 < level ≤ 1 + overshoot
// for z < 1, 0 < level < 1 otherwise.
func timeToLevel(z, level float64) float64 {
	if level <= 0 {
		return 0
	}
	if z < 1 {
		lo, hi := 0.0, math.Pi/dampedFactor(z)
		return increasing(lo, hi, math.Min(hi, math.Sqrt(2*level)), func(t float64) (float64, float64) {
			_, slope := standardError(z, t)
			return standardStep(z, t) - level, slope
		})
	}
	return timeToError(z, 1-level, level)
}

// timeToError returns, for z ≥ 1, the time at which the error has fallen to e; level is
// 1 - e, given apart so that neither need be the rounded one.
func timeToError(z, e, level float64) float64 {
	slow, _ := realPoles(z)
	hi := 1 / slow
	for range 1100 {
		if now, _ := standardError(z, hi); now <= e {
			break
		}
		hi *= 2
	}
	if level < 0.5 {
		return increasing(0, hi, hi/2, func(t float64) (float64, float64) {
			_, slope := standardError(z, t)
			return standardStep(z, t) - level, slope
		})
	}
	// The logarithm of the error is close to a straight line.
	log := math.Log(e)
	return increasing(0, hi, hi/2, func(t float64) (float64, float64) {
		now, slope := standardError(z, t)
		return log - math.Log(now), slope / now
	})
}

// settling returns the time of the last entry into the band, 0 < band < 1, and the number
// of extrema outside it.
func settling(z, band float64) (time float64, outside int) {
	if z >= 1 {
		return timeToError(z, band, 1-band), 0
	}
	wd := dampedFactor(z)
	decrement := math.Pi * z / wd // per half period
	l := -math.Log(band)
	n := 0.0
	if decrement > 0 && !math.IsInf(decrement, 1) {
		n = math.Max(0, math.Ceil(l/decrement)-1)
	}
	// Extremum n exceeds the band; 1 - band/|e(tₙ)| of the way back, the error enters it.
	level := -math.Expm1(n*decrement - l)
	return n*math.Pi/wd + timeToLevel(z, level), int(math.Min(n, math.MaxInt32))
}

// increasing returns the root in [lo, hi] of a function that does not decrease there,
// given with its derivative, by Newton's method kept inside a shrinking bracket.
func increasing(lo, hi, start float64, f func(float64) (value, slope float64)) float64 {
	x := start
	for range 200 {
		y, slope := f(x)
		switch {
		case y == 0:
			return x
		case y < 0:
			lo = x
		default:
			hi = x
		}
		next := x - y/slope
		if !(next > lo && next < hi) { // NaN too
			next = lo + (hi-lo)/2
		}
		if math.Abs(next-x) <= 1e-16*math.Abs(x) || next == lo || next == hi {
			return next
		}
		x = next
	}
	return x
}
