package spec

import "math"

// A probe is a requirement on a time response as the search sees it: a margin that is
// continuous in the gain wherever that is possible, even where the figure itself jumps, and
// two proofs for all gains between two neighbours. The settling time, for one, jumps where
// an extremum touches the band; the largest distance from the final value after the time
// allowed does not.
type probe struct {
	judge func(s *sample) judgment
	// pass reports whether the requirement is met at every gain between a and b, given how
	// far responses may stray from the chord; fail whether it is met at none.
	pass, fail func(a, b *sample, c spans) bool
}

// sense returns +1 or -1, the side of the final value, and |final|.
func (s *sample) sense() (sign, final float64) {
	final = s.y.final
	if final < 0 {
		return -1, -final
	}
	return 1, final
}

// shares reports whether both responses go to the same side.
func shares(a, b *sample) bool { return a.y.final*b.y.final > 0 }

// stray is how far y - factor·final may stray from its chord.
func stray(a, b *sample, c spans, factor float64) float64 {
	if a.y.final == b.y.final {
		return c.y
	}
	return c.y * (1 + math.Abs(factor))
}

// excess is the excursion beyond the final value, as a fraction of it, that counts as none.
const excess = 1e-9

func noFinal() judgment { return judgment{margin: math.Inf(-1), where: none} }

// tops is a probe for sup(side·sense·y) ≤ factor·|final|.
func tops(side, factor float64) *probe {
	return &probe{
		judge: func(s *sample) judgment {
			sign, final := s.sense()
			if final == 0 {
				return noFinal()
			}
			v, w, above := s.y.largest(side*sign, 0, inf)
			if v <= factor*final && above > factor*final && s.y.extend() {
				v, w, _ = s.y.largest(side*sign, 0, inf)
			}
			return judgment{margin: factor*final - v, where: w}
		},
		pass: func(a, b *sample, c spans) bool {
			if !shares(a, b) {
				return false
			}
			d := stray(a, b, c, factor)
			for _, s := range [2]*sample{a, b} {
				sign, final := s.sense()
				if _, _, above := s.y.largest(side*sign, 0, inf); !(above+d <= factor*final) {
					return false
				}
			}
			return true
		},
		fail: nil, // set by index
	}
}

// failsAt reports whether side·sense·y - factor·|final| exceeds its stray at time t for
// both neighbours.
func failsAt(a, b *sample, c spans, side, factor, t float64) bool {
	if !shares(a, b) {
		return false
	}
	d := stray(a, b, c, factor)
	for _, s := range [2]*sample{a, b} {
		sign, final := s.sense()
		v := final * sign
		if !math.IsInf(t, 1) {
			v, _ = s.y.at(t)
		}
		if !(side*sign*v-factor*final > d) {
			return false
		}
	}
	return true
}

// newProbe returns the probe of requirement number i, nil for requirements that are not
// judged on trajectories. lead is the dead time before the response begins.
func newProbe(r *limited, i int, lead float64) *probe {
	var p *probe
	switch r.kind {
	case overshoot:
		factor := 1 + math.Max(r.limit, excess)
		p = tops(1, factor)
		p.fail = func(a, b *sample, c spans) bool {
			return failsAt(a, b, c, 1, factor, a.found[i].where) || failsAt(a, b, c, 1, factor, b.found[i].where)
		}
	case undershoot:
		factor := math.Max(r.limit, excess)
		p = tops(-1, factor)
		p.fail = func(a, b *sample, c spans) bool {
			return failsAt(a, b, c, -1, factor, a.found[i].where) || failsAt(a, b, c, -1, factor, b.found[i].where)
		}
	case settlingTime:
		p = settlingProbe(i, r.limit-lead, r.second)
	case riseTime:
		p = riseProbe(r.limit)
	case peakTime:
		p = peakProbe(i, r.limit-lead)
	case effortForStep: // without actuator limits, which the search does not take: linear
		p = boundProbe(i, 0, r.limit/r.second, func(s *sample) *signal { return s.u }, func(c spans) float64 { return c.u })
	case effort:
		p = boundProbe(i, 0, r.limit, func(s *sample) *signal { return s.u }, func(c spans) float64 { return c.u })
	case loadPeak:
		p = boundProbe(i, 0, r.limit, func(s *sample) *signal { return s.load }, func(c spans) float64 { return c.load })
	case loadRecovery:
		p = boundProbe(i, r.limit, r.second, func(s *sample) *signal { return s.load }, func(c spans) float64 { return c.load })
	}
	return p
}

// settlingProbe: |y - final| ≤ band·|final| at every time from t on.
func settlingProbe(i int, t, band float64) *probe {
	from := math.Max(t, 0)
	return &probe{
		judge: func(s *sample) judgment {
			_, final := s.sense()
			if final == 0 || t < 0 {
				return noFinal()
			}
			v, w, above := s.y.largestAbs(s.y.final, from, inf)
			if v <= band*final && above > band*final && s.y.extend() {
				v, w, _ = s.y.largestAbs(s.y.final, from, inf)
			}
			return judgment{margin: band*final - v, where: w, jump: w > from*(1+1e-7)}
		},
		pass: func(a, b *sample, c spans) bool {
			if !shares(a, b) || t < 0 {
				return false
			}
			d := stray(a, b, c, 1+band)
			for _, s := range [2]*sample{a, b} {
				_, final := s.sense()
				if _, _, above := s.y.largestAbs(s.y.final, from, inf); !(above+d <= band*final) {
					return false
				}
			}
			return true
		},
		fail: func(a, b *sample, c spans) bool {
			if t < 0 {
				return true
			}
			d := stray(a, b, c, 1+band)
			for _, s := range [2]*sample{a, b} {
				w := s.found[i].where
				if math.IsInf(w, 1) {
					continue
				}
				ya, _ := a.y.at(w)
				yb, _ := b.y.at(w)
				ea, eb := ya-a.y.final, yb-b.y.final
				if ea*eb > 0 && math.Abs(ea)-band*math.Abs(a.y.final) > d && math.Abs(eb)-band*math.Abs(b.y.final) > d {
					return true
				}
			}
			return false
		},
	}
}

// riseProbe: 90 % is reached within the time after 10 % was.
func riseProbe(limit float64) *probe {
	return &probe{
		judge: func(s *sample) judgment {
			sign, final := s.sense()
			if final == 0 {
				return noFinal()
			}
			start := s.y.firstAt(sign, 0.1*final)
			if start+limit > s.y.horizon && s.y.extend() {
				start = s.y.firstAt(sign, 0.1*final)
			}
			if math.IsInf(start, 1) {
				return noFinal()
			}
			end := start + limit
			v, w, _ := s.y.largest(sign, 0, end)
			return judgment{margin: v - 0.9*final, where: w, jump: w < end-1e-7*limit}
		},
		pass: func(a, b *sample, c spans) bool {
			if !shares(a, b) {
				return false
			}
			d1, d9 := stray(a, b, c, 0.1), stray(a, b, c, 0.9)
			start := inf
			for _, s := range [2]*sample{a, b} {
				sign, final := s.sense()
				start = math.Min(start, s.y.firstAt(sign, 0.1*final-d1))
			}
			if math.IsInf(start, 1) {
				return false
			}
			for _, s := range [2]*sample{a, b} {
				sign, _ := s.sense()
				_, w, _ := s.y.largest(sign, 0, start+limit)
				good := true
				for _, o := range [2]*sample{a, b} {
					sign, final := o.sense()
					y, _ := o.y.at(w)
					good = good && sign*y-0.9*final >= d9
				}
				if good {
					return true
				}
			}
			return false
		},
		fail: func(a, b *sample, c spans) bool {
			if !shares(a, b) {
				return false
			}
			d1, d9 := stray(a, b, c, 0.1), stray(a, b, c, 0.9)
			start := 0.0
			for _, s := range [2]*sample{a, b} {
				sign, final := s.sense()
				start = math.Max(start, s.y.firstAt(sign, 0.1*final+d1+1e-12*final)) // above the rounding of the check below
			}
			if math.IsInf(start, 1) {
				return false
			}
			for _, s := range [2]*sample{a, b} {
				sign, final := s.sense()
				if y, _ := s.y.at(start); !(sign*y-0.1*final >= d1) {
					return false
				}
				if _, _, above := s.y.largest(sign, 0, start+limit); !(above-0.9*final < -d9) {
					return false
				}
			}
			return true
		},
	}
}

// peakProbe: the largest value stands above the final one and not after t.
func peakProbe(i int, t float64) *probe {
	return &probe{
		judge: func(s *sample) judgment {
			sign, final := s.sense()
			if final == 0 || t < 0 {
				return noFinal()
			}
			v, w, above := s.y.largest(sign, 0, inf)
			if above > v && s.y.tail > excess*final/2 { // a later, smaller bump may be the largest
				s.y.trace(math.Max(t, 0), excess*final/2, maxSteps)
				v, w, _ = s.y.largest(sign, 0, inf)
			}
			if v <= final*(1+excess) {
				return judgment{margin: math.Inf(-1), where: none, jump: true}
			}
			// Where another extremum is as high as this one the peak time jumps, past t by far.
			return judgment{margin: t - w, where: w, jump: math.Abs(w-t) > 1e-6*t}
		},
		pass: func(a, b *sample, c spans) bool {
			if !shares(a, b) || t < 0 {
				return false
			}
			for _, s := range [2]*sample{a, b} {
				w := s.found[i].where
				if !(w <= t) {
					continue
				}
				good := true
				for _, o := range [2]*sample{a, b} {
					sign, final := o.sense()
					y, _ := o.y.at(w)
					_, _, above := o.y.largest(sign, t, inf)
					good = good && sign*y-above > 2*c.y+2*excess*final
				}
				if good {
					return true
				}
			}
			return false
		},
		fail: func(a, b *sample, c spans) bool {
			if t < 0 {
				return true
			}
			if !shares(a, b) {
				return false
			}
			early := true
			for _, s := range [2]*sample{a, b} {
				sign, final := s.sense()
				_, _, above := s.y.largest(sign, 0, t)
				early = early && above < final-stray(a, b, c, 1)
			}
			if early {
				return true
			}
			for _, s := range [2]*sample{a, b} {
				w := s.found[i].where
				if !(w > t) || math.IsInf(w, 1) {
					continue
				}
				good := true
				for _, o := range [2]*sample{a, b} {
					sign, _ := o.sense()
					y, _ := o.y.at(w)
					_, _, above := o.y.largest(sign, 0, t)
					good = good && sign*y-above > 2*c.y
				}
				if good {
					return true
				}
			}
			return false
		},
	}
}

// boundProbe: |f| ≤ limit at every time from t on.
func boundProbe(i int, t, limit float64, of func(*sample) *signal, span func(spans) float64) *probe {
	return &probe{
		judge: func(s *sample) judgment {
			f := of(s)
			if f == nil { // an impulse
				return judgment{margin: math.Inf(-1), where: 0}
			}
			v, w, above := f.largestAbs(0, t, inf)
			if v <= limit && above > limit && f.extend() {
				v, w, _ = f.largestAbs(0, t, inf)
			}
			if math.Abs(limit-v) <= 1e-14*limit {
				v = limit // as when the limit is the final value, which may not depend on the gain
			}
			return judgment{margin: limit - v, where: w, jump: t > 0 && w > t*(1+1e-7)}
		},
		pass: func(a, b *sample, c spans) bool {
			for _, s := range [2]*sample{a, b} {
				f := of(s)
				if f == nil {
					return false
				}
				if _, _, above := f.largestAbs(0, t, inf); !(above+span(c) <= limit) {
					return false
				}
			}
			return true
		},
		fail: func(a, b *sample, c spans) bool {
			for _, s := range [2]*sample{a, b} {
				fa, fb := of(a), of(b)
				if fa == nil && fb == nil {
					return true
				}
				if fa == nil || fb == nil {
					return false
				}
				va, vb := fa.final, fb.final
				if w := s.found[i].where; !math.IsInf(w, 1) {
					va, _ = fa.at(w)
					vb, _ = fb.at(w)
				}
				if va*vb > 0 && math.Abs(va) > limit+span(c) && math.Abs(vb) > limit+span(c) {
					return true
				}
			}
			return false
		},
	}
}
