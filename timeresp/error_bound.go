package timeresp

import "math"

// ErrorBound returns a bound on the error of [Response.At] at t: the roundings of every term
// of the sum that At forms there, and what its series leave out. It is below 1e-11 of the
// largest |y| up to t, and in most places far below.
func (r *Response) ErrorBound(t float64) float64 {
	sum := 0.0
	for i := range r.arcs {
		a := &r.arcs[i]
		if !(t >= a.from) {
			break
		}
		sum += a.signal.errorAt(t - a.from)
	}
	return sum
}

const (
	// polynomialRounding bounds what Horner's rule loses, relative to the sum of the
	// magnitudes: two roundings for each of the terms, of which the first ones weigh.
	polynomialRounding = 2 * earlyTerms * 0x1p-53
	// seriesRest bounds what lies beyond the terms kept, relative to the sum of their
	// magnitudes: 2^26/26! and the ever smaller rest.
	seriesRest = 2e-17
)

func (k *kernel) errorAt(t float64) float64 {
	tau := t * k.w
	switch {
	case tau < k.earlyEnd:
		piece, x := k.piece(tau, 0)
		sum := 0.0
		c := k.early[piece*earlyTerms:][:earlyTerms]
		for i := len(c) - 1; i >= 0; i-- {
			sum = sum*x + math.Abs(c[i])
		}
		if piece == 0 && k.leading > 0 {
			// The power itself and the rounding of x are good to a few units each.
			sum *= math.Pow(x, float64(k.leading)) * (1 + float64(k.leading)/earlyTerms)
		}
		return sum * (polynomialRounding + seriesRest)
	case len(k.stages) > 0:
		g := k.stageOf(tau)
		s := tau - g.start
		sum := g.roundingAt(s)
		for i := range g.chains {
			c := &g.chains[i]
			q, x := c.locate(s, 0)
			size := 0.0
			for j := len(q) - 1; j >= 0; j-- {
				size = size*x + abs(q[j])
			}
			sum += size * math.Exp(c.re*s) * (modalRounding + polynomialRounding + seriesRest)
		}
		return sum
	}
	return k.roundingAt(tau)
}

func (s *stepwise) errorAt(t float64) float64 {
	tau := t * s.w
	if tau/s.h > float64(len(s.q)/earlyTerms) {
		if s.settled {
			return s.spreads[len(s.spreads)-1] + 0x1p-52*math.Abs(s.at(t, 0))
		}
		return 0x1p-40 * math.Abs(s.at(t, 0)) // continued in wide arithmetic
	}
	i, x := s.locate(tau, 0, false)
	i = min(i, len(s.q)/earlyTerms-1)
	sum := 0.0
	q := s.q[i*earlyTerms:][:earlyTerms]
	for k := len(q) - 1; k >= 0; k-- {
		sum = sum*x + math.Abs(q[k])
	}
	if i == 0 && s.leading > 0 {
		sum *= math.Pow(x, float64(s.leading)) * (1 + float64(s.leading)/earlyTerms)
	}
	// What the cells before have lost, in wide arithmetic, weighs little: 2⁻⁶⁷ is enough.
	if i > 0 {
		sum += 0x1p-20 * s.largest[i-1] // times 2⁻⁴⁷
	}
	return sum * (polynomialRounding + seriesRest)
}
