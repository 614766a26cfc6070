package spec

import (
	"math"
	"math/cmplx"
)

// lastOutside returns the last time at which |f - about| exceeds the limit, 0 if it never
// does. The final value has to lie within it, and the tail after the horizon.
func (s *signal) lastOutside(about, limit float64) float64 {
	// Monotone stretches run from extremum to extremum; look from the end.
	end, fEnd := s.horizon, s.f[len(s.f)-1]
	for j := len(s.turns) - 1; j >= -1; j-- {
		a, fa := 0.0, s.f[0]
		if j >= 0 {
			u := &s.turns[j]
			if !u.refined && math.Abs(u.f-about)+roughness*math.Abs(u.f-s.final) < limit {
				end, fEnd = u.t, u.f
				continue
			}
			s.refine(u)
			a, fa = u.t, u.f
		}
		if math.Abs(fa-about) <= limit {
			end, fEnd = a, fa
			continue
		}
		if math.Abs(fEnd-about) > limit*(1+1e-15) {
			return end
		}
		sign := 1.0
		if fa < about {
			sign = -1
		}
		// The samples narrow the bracket down to one step.
		lo, hi := a, end
		for i := len(s.t) - 1; i >= 0 && s.t[i] > a; i-- {
			if s.t[i] >= hi {
				continue
			}
			if math.Abs(s.f[i]-about) > limit {
				lo = s.t[i]
				break
			}
			hi = s.t[i]
		}
		return increasing(lo, hi, lo+(hi-lo)/2, func(t float64) (float64, float64) {
			f, d := s.at(t)
			return limit - sign*(f-about), -sign * d
		})
	}
	return 0
}

// squared returns ∫tⁿ(f - final)² dt, n 0 or 1, in closed form: with all poles written out,
// the sum of wᵢwⱼ/(-(pᵢ + pⱼ))^(n+1).
func (s *signal) squared(n int) float64 {
	sum := 0.0
	term := func(w, p complex128) float64 {
		q := -p
		if n == 1 {
			q *= q
		}
		return real(w / q)
	}
	for i := range s.wr {
		wi, pi := complex(s.wr[i], s.wi[i]), complex(s.modes.re[i], s.modes.im[i])
		for j := range s.wr {
			wj, pj := complex(s.wr[j], s.wi[j]), complex(s.modes.re[j], s.modes.im[j])
			// Re(a)·Re(b) = (Re(ab) + Re(a·conj b))/2.
			sum += (term(wi*wj, pi+pj) + term(wi*cmplx.Conj(wj), pi+cmplx.Conj(pj))) / 2
		}
	}
	return sum
}

// absolute returns ∫tⁿ|f - final| dt, n 0 or 1, up to the horizon, which has to be far out:
// the antiderivative between the zeros of f - final, one in each monotone stretch at most.
func (s *signal) absolute(n int) float64 {
	antiderivative := func(t float64) float64 {
		sum := 0.0
		for i := range s.wr {
			p := complex(s.modes.re[i], s.modes.im[i])
			z := complex(s.wr[i], s.wi[i]) * cmplx.Exp(p*complex(t, 0)) / p
			if n == 1 {
				z *= complex(t, 0) - 1/p
			}
			sum += real(z)
		}
		return sum
	}
	total, last := 0.0, antiderivative(0)
	from := 0.0
	add := func(to float64) {
		a := antiderivative(to)
		total += math.Abs(a - last)
		last, from = a, to
	}
	stretch := func(to float64) {
		fa, _ := s.at(from)
		fb, _ := s.at(to)
		if ea, eb := fa-s.final, fb-s.final; ea*eb < 0 {
			sign := 1.0
			if ea > 0 {
				sign = -1
			}
			add(increasing(from, to, from+(to-from)/2, func(t float64) (float64, float64) {
				f, d := s.at(t)
				return sign * (f - s.final), sign * d
			}))
		}
		add(to)
	}
	for i := range s.turns {
		s.estimate(&s.turns[i])
		stretch(s.turns[i].t)
	}
	stretch(s.horizon)
	return total
}
