package timeresp

import "math"

func (k *kernel) rate() float64 { return k.w }

// ultimate returns the value that the signal tends to; NaN if there is none.
func (k *kernel) ultimate() float64 {
	p, ok := k.trend()
	for i := 1; i < len(p); i++ {
		ok = ok && p[i] == 0
	}
	switch {
	case !ok:
		return math.NaN()
	case len(p) == 0:
		return 0
	}
	return p[0]
}

func (k *kernel) trend() ([]float64, bool) {
	for i := range k.modes {
		if m := &k.modes[i]; m.re >= 0 {
			return nil, false
		}
	}
	return k.drift, true
}

// node fills n with the signal at τ.
func (k *kernel) node(tau float64, _ bool, n *node) {
	n.t = tau
	if tau < k.earlyEnd {
		k.earlyNode(tau, n)
		return
	}
	if len(k.stages) > 0 {
		k.stageOf(tau).node(tau, n)
		return
	}
	k.modalNode(tau, n)
	n.suggest()
}

// suggest sets the step over which the cubic misses the signal by about 2 % of the spread.
func (n *node) suggest() {
	n.step = math.Sqrt(math.Sqrt(384 * 0.02 * n.spread / n.fourth))
	if n.fourth == 0 {
		n.step = math.Inf(1)
	}
}

// horizon is where the early polynomials end.
func (k *kernel) horizon() float64 { return k.earlyEnd }

// calm takes the slowest mode for the rate at which the spread shrinks: not too early.
func (k *kernel) calm(level float64) float64 {
	if len(k.stages) > 0 {
		return calmBySearch(k, level)
	}
	slowest := math.Inf(1)
	for i := range k.modes {
		if k.modes[i].count > 1 {
			return calmBySearch(k, level)
		}
		slowest = min(slowest, -k.modes[i].re)
	}
	tau := k.earlyEnd
	for {
		spread := 0.0
		for i := range k.modes {
			spread += math.Exp(k.modes[i].re*tau) * k.modes[i].size
		}
		if spread <= level {
			return tau
		}
		tau += math.Log(spread/level)/slowest*(1+1e-12) + 1e-12*tau
	}
}

func (k *kernel) fourth(a, b *node) float64 {
	if b.t <= k.earlyEnd {
		return k.earlyFourth(a.t, b.t)
	}
	return a.fourth
}

// modalNode is node on the sum of the modes.
func (k *modal) modalNode(tau float64, n *node) {
	n.y, n.d, n.c, n.spread, n.fourth = 0, 0, 0, 0, 0
	switch len(k.drift) {
	case 0:
	case 1:
		n.y = k.drift[0]
	default:
		for i := len(k.drift) - 1; i >= 0; i-- {
			n.c = n.c*tau + 2*n.d
			n.d = n.d*tau + n.y
			n.y = n.y*tau + k.drift[i]
		}
		for i := len(k.drift) - 1; i >= 4; i-- {
			f := float64(i)
			n.fourth += f * (f - 1) * (f - 2) * (f - 3) * math.Abs(k.drift[i]) * math.Pow(2*tau, f-4)
		}
	}
	for i := range k.modes {
		m := &k.modes[i]
		e := math.Exp(m.re * tau)
		if m.count == 1 {
			n.spread += e * m.size
			n.fourth += e * m.fourth
			if m.im == 0 {
				v := m.ar * e
				n.y += v
				v *= m.re
				n.d += v
				n.c += v * m.re
				continue
			}
			y := m.im * tau
			lo := math.FMA(m.im, tau, -y) + m.imLo*tau
			sin, cos := math.Sincos(y)
			sin, cos = e*(sin+lo*cos), e*(cos-lo*sin)
			vr, vi := m.ar*cos-m.ai*sin, m.ar*sin+m.ai*cos
			n.y += vr
			dr, di := vr*m.re-vi*m.im, vr*m.im+vi*m.re
			n.d += dr
			n.c += dr*m.re - di*m.im
			continue
		}
		cos, sin := m.turn(tau, 0)
		k.confluentNode(m, tau, e, cos, sin, n)
	}
}

// confluentNode adds the share of a multiple pole, e being e^(Re p·τ) and re + j·im e^(pτ).
// With q(τ) = Σ a[k]τ^k its derivatives are
// e^(pτ)·((D+p)ʲq).
func (k *modal) confluentNode(m *mode, tau, e, re, im float64, n *node) {
	a := k.amplitudes[m.first : m.first+m.count]
	p := complex(m.re, m.im)
	var q [5]complex128 // derivatives of q
	for j := len(a) - 1; j >= 0; j-- {
		x := complex(tau, 0)
		q[2] = q[2]*x + 2*q[1]
		q[1] = q[1]*x + q[0]
		q[0] = q[0]*x + a[j]
	}
	turn := complex(re, im)
	y := q[0]
	d := q[1] + p*q[0]
	c := q[2] + p*(2*q[1]+p*q[0])
	n.y += real(turn * y)
	n.d += real(turn * d)
	n.c += real(turn * c)
	// Bounds from τ on: τ^k·e^(re·τ) is largest at k/|re|. The fourth derivative has the
	// coefficients Σ C(4,j)·p^(4-j)·(k+j)!/k!·a[k+j].
	size := math.Hypot(m.re, m.im)
	binomial := [5]float64{1, 4, 6, 4, 1}
	power := e // τ^j·e^(re·τ), or its largest value later on
	for j := range a {
		top := power
		if m.re < 0 && float64(j) > -m.re*tau {
			at := float64(j) / -m.re
			top = math.Exp(float64(j) * (math.Log(at) - 1))
		}
		n.spread += top * abs(a[j])
		sum, falling := 0.0, 1.0
		for i := 0; i <= 4 && j+i < len(a); i++ {
			if i > 0 {
				falling *= float64(j + i)
			}
			sum += binomial[i] * math.Pow(size, float64(4-i)) * falling * abs(a[j+i])
		}
		n.fourth += top * sum
		power *= tau
	}
}

func abs(z complex128) float64 { return math.Hypot(real(z), imag(z)) }

// earlyNode is node on the Taylor polynomials.
func (k *kernel) earlyNode(tau float64, n *node) {
	piece, x := k.piece(tau, 0)
	c := k.early[piece*earlyTerms:][:earlyTerms]
	var y, d, s float64
	for i := len(c) - 1; i >= 0; i-- {
		s = s*x + 2*d
		d = d*x + y
		y = y*x + c[i]
	}
	if r := float64(k.leading); piece == 0 && r > 0 {
		// (x^r·q)″ = x^r·q″ + 2r·x^(r-1)·q′ + r(r-1)·x^(r-2)·q
		p2, p1 := 0.0, 1.0
		if r > 1 {
			p2 = math.Pow(x, r-2)
			p1 = p2 * x
		}
		y, d, s = p1*x*y, p1*(x*d+r*y), p1*(x*s+2*r*d)+r*(r-1)*p2*y
	}
	h := 1 / k.step
	n.y, n.d, n.c = y, d*h, s*h*h
	n.spread, n.fourth, n.step = math.Inf(1), math.Inf(1), k.step/2
}

// earlyFourth bounds |y⁗| between a and b, which lie in one piece.
func (k *kernel) earlyFourth(a, b float64) float64 {
	piece, _ := k.piece(a+(b-a)/2, 0)
	x := (b - k.step*float64(piece)) / k.step
	c := k.early[piece*earlyTerms:][:earlyTerms]
	lead := 0
	if piece == 0 {
		lead = k.leading
	}
	sum := 0.0
	for i := len(c) - 1; i >= 0; i-- {
		j := float64(i + lead)
		if j < 4 {
			break
		}
		sum = sum*x + j*(j-1)*(j-2)*(j-3)*math.Abs(c[i])
	}
	if lead > 4 {
		sum *= math.Pow(x, float64(lead-4))
	}
	h := 1 / k.step
	return sum * h * h * h * h
}
