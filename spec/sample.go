package spec

import (
	"fmt"
	"math"

	"github.com/polewright/polewright/poly"
)

// An engine makes samples of one loop: what the search knows of the closed loop at one gain.
type engine struct {
	m         *model
	character floats
	output    floats
	effort    floats
	load      floats
	around    floats // numerator of the open loop
	pre       []complex128
	preLead   float64

	needEffort, needLoad, needOutput bool
	unity                            bool // output is k·W exactly
	until                            float64
	loadUntil                        float64
	small                            float64 // fraction of the final value
	loadSmall                        float64 // in units of the output
	effortSmall                      float64
	limit                            int

	coefficients []float64
	evaluated    int
}

// sample is one closed loop.
type sample struct {
	k                         float64
	y, u, load                *signal
	weight                    float64    // V: total variation of the step response of W = B/(A + kB)
	supY, supU, supLoad, supE float64    // bounds on |y|, |u|, |load|, |1 - y| at every time
	partY, partU              float64    // bounds on the step responses of ∂numerator/∂k over the characteristic
	found                     []judgment // one for each probe
}

// judgment is what a probe says of a sample: margin ≥ 0 where the requirement is met.
type judgment struct {
	margin float64
	where  float64
	jump   bool // at margin 0 the figure jumps rather than crosses
}

// polesOf returns the poles at gain k, and the leading coefficient.
func (e *engine) polesOf(k float64) ([]complex128, float64, error) {
	e.coefficients = e.character.at(k, e.coefficients)
	c := e.coefficients
	if len(c) == 0 {
		return nil, 0, fmt.Errorf("spec: the characteristic polynomial vanishes at gain %g", k)
	}
	return rootsOf(c)
}

func rootsOf(c []float64) ([]complex128, float64, error) {
	down := make([]float64, len(c))
	for i, a := range c {
		down[len(c)-1-i] = a
	}
	roots, err := poly.New(down...).Roots()
	if err != nil {
		return nil, 0, err
	}
	var poles []complex128
	for _, r := range roots {
		poles = appendPole(poles, r.Value, r.Multiplicity)
	}
	return poles, c[len(c)-1], nil
}

// appendPole adds a pole as often as its multiplicity says. A repeated one is spread over a
// small circle, so that all modes are simple: the polynomial (s-p)^m - ε^m has the same
// response to order ε^m, and the cancellation between the modes costs ε^(1-m) of the
// rounding. Only loops that repeat a pole at every gain come here, and the gain at a break
// point; the figures reported are computed elsewhere, with confluent forms.
func appendPole(poles []complex128, p complex128, multiplicity int) []complex128 {
	if multiplicity == 1 {
		return append(poles, p)
	}
	m := float64(multiplicity)
	radius := math.Hypot(real(p), imag(p)) * math.Pow(1e-16, 1/(2*m-1)) * 2
	for j := range multiplicity {
		sin, cos := math.Sincos(2 * math.Pi * (float64(j) + 0.5) / m)
		if imag(p) == 0 && multiplicity%2 == 1 { // one of them stays real
			sin, cos = math.Sincos(2 * math.Pi * float64(j) / m)
		}
		if math.Abs(sin) < 1e-9 {
			sin = 0
		}
		if imag(p) < 0 {
			sin = -sin
		}
		poles = append(poles, p+complex(radius*cos, radius*sin))
	}
	return poles
}

// newSignal returns the step response of numerator/(lead·∏(s - p)), dead time left out; nil
// if the numerator has the higher degree, so that the response has an impulse.
func newSignal(numerator []float64, lead float64, poles []complex128) *signal {
	if len(numerator) > len(poles)+1 {
		return nil
	}
	n := 0
	for _, p := range poles {
		if imag(p) >= 0 {
			n++
		}
	}
	store := make([]float64, 5*n)
	s := &signal{
		modes: &modes{re: store[0:0:n], im: store[n : n : 2*n]},
		wr:    store[2*n : 2*n : 3*n], wi: store[3*n : 3*n : 4*n], size: store[4*n : 4*n : 5*n],
	}
	// The final value, N(0)/D(0), with D(0) = lead·∏(-p): a pair gives |p|².
	d0 := lead
	for _, p := range poles {
		switch {
		case imag(p) > 0:
			d0 *= real(p)*real(p) + imag(p)*imag(p)
		case imag(p) == 0:
			d0 *= -real(p)
		}
	}
	if len(numerator) > 0 {
		s.final = numerator[0] / d0
	}
	s.scale = math.Abs(s.final)
	for i, p := range poles {
		if imag(p) < 0 {
			continue
		}
		x, y := horner(numerator, real(p), imag(p))
		w := complex(x, y) / (p * complex(lead, 0))
		for j, q := range poles {
			if j != i {
				w /= p - q
			}
		}
		if imag(p) > 0 {
			w *= 2
		}
		s.modes.re, s.modes.im = append(s.modes.re, real(p)), append(s.modes.im, imag(p))
		size := math.Hypot(real(w), imag(w))
		if imag(p) == 0 {
			w = complex(real(w), 0)
			size = math.Abs(real(w))
		}
		s.wr, s.wi, s.size = append(s.wr, real(w)), append(s.wi, imag(w)), append(s.size, size)
		s.scale += size
	}
	return s
}

// at samples the closed loop at gain k, which has to be stable there.
func (e *engine) at(k float64, probes []*probe) (*sample, error) {
	e.evaluated++
	poles, lead, err := e.polesOf(k)
	if err != nil {
		return nil, err
	}
	for i, p := range poles {
		// A billionth of a gap from the limit of stability, the rounding of the coefficients may
		// put a pole on the axis.
		if size := math.Hypot(real(p), imag(p)); real(p) >= 0 && real(p) < 1e-12*size && size > 0 {
			poles[i] = complex(-1e-15*size, imag(p))
			continue
		}
		if !(real(p) < 0) {
			return nil, fmt.Errorf("spec: gain %g inside a stable window gave the pole %v", k, p)
		}
	}
	s := &sample{k: k}
	all, allLead := poles, lead
	if len(e.pre) > 0 {
		all = append(append(make([]complex128, 0, len(poles)+len(e.pre)), poles...), e.pre...)
	}
	allLead *= e.preLead
	var buffer [64]float64
	if e.needOutput {
		s.y = newSignal(e.output.at(k, buffer[:0]), allLead, all)
		if s.y == nil {
			return nil, fmt.Errorf("spec: the path from reference to output is improper at gain %g", k)
		}
		s.y.trace(e.until, e.small*math.Abs(s.y.final), e.limit)
		s.supY = supremum(s.y, 0)
		s.supE = supremum(s.y, 1)
	}
	if e.unity && s.y != nil {
		s.weight = s.y.variation() / math.Abs(k)
	} else {
		w := newSignal(e.around.scaled, lead, poles)
		if w == nil {
			s.weight = inf
		} else {
			w.trace(0, 0.02*math.Max(math.Abs(w.final), w.scale*1e-3), e.limit)
			s.weight = w.variation()
			w.release()
		}
	}
	if e.needEffort {
		s.u = newSignal(e.effort.at(k, buffer[:0]), allLead, all)
		if s.u != nil {
			s.u.trace(0, e.effortSmall, e.limit)
			s.supU = supremum(s.u, 0)
		}
	}
	if e.needLoad {
		s.load = newSignal(e.load.at(k, buffer[:0]), lead, poles)
		if s.load == nil {
			return nil, fmt.Errorf("spec: the path from load to output is improper at gain %g", k)
		}
		s.load.trace(e.loadUntil, e.loadSmall, e.limit)
		s.supLoad = supremum(s.load, 0)
	}
	switch e.m.vary {
	case controllerGain:
		s.partY, s.partU = s.supY/math.Abs(k), s.supU/math.Abs(k)
	case controllerPart:
		s.partY = e.part(e.output.scaled, allLead, all, s.y != nil)
		s.partU = e.part(e.effort.scaled, allLead, all, s.u != nil)
	}
	s.found = make([]judgment, len(probes))
	for i, p := range probes {
		s.found[i] = p.judge(s)
	}
	return s, nil
}

// part bounds the step response of the part of a numerator that the gain multiplies.
func (e *engine) part(numerator []float64, lead float64, poles []complex128, wanted bool) float64 {
	for len(numerator) > 0 && numerator[len(numerator)-1] == 0 {
		numerator = numerator[:len(numerator)-1]
	}
	if !wanted || len(numerator) == 0 {
		return 0
	}
	p := newSignal(numerator, lead, poles)
	if p == nil {
		return inf
	}
	p.trace(0, 0.1*p.scale, e.limit)
	sup := supremum(p, 0)
	p.release()
	return sup
}

// supremum bounds |f - about| at every time.
func supremum(s *signal, about float64) float64 {
	m := math.Max(math.Abs(s.f[0]-about), math.Abs(s.f[len(s.f)-1]-about))
	for i := range s.turns {
		f := s.turns[i].f
		m = math.Max(m, math.Abs(f-about)+roughness*math.Abs(f-s.final))
	}
	return math.Max(m, math.Abs(s.final-about)+s.tail)
}

// spans are the bounds on how far the responses between two neighbouring gains stray from
// the straight line between them, at any time.
type spans struct{ y, u, load float64 }

// between returns the bounds for the gains between a and b.
//
// With A + kB the characteristic, W = B/(A + kB) and P₀ + kP₁ the numerator of a response,
// the response at k + δ is (y + δp)/(1 + δW), p being that of P₁; its second derivative by δ
// is -2W(p - Wy)/(1 + δW)³. An operator with a step response of total variation V enlarges
// no supremum by more than V, and 1/(1 + δW) by no more than 1/(1 - |δ|V) if |δ|V < 1. So
// the second derivative stays within 2V(|p| + V|y|)/(1 - |δ|V)³, and the distance from the
// chord within an eighth of it times the square of the step. For unity feedback p - Wy is
// W(1 - y), which is smaller.
func (e *engine) between(a, b *sample) spans {
	h := math.Abs(b.k - a.k)
	var c spans
	for _, s := range [2]*sample{a, b} {
		room := 1 - h/2*s.weight
		if !(room > 0) {
			return spans{inf, inf, inf}
		}
		f := 2 * s.weight / (room * room * room) * h * h / 8
		q := s.partY + s.weight*s.supY
		if e.unity && e.m.vary == controllerGain {
			q = math.Min(q, s.weight*s.supE)
		}
		c.y = math.Max(c.y, f*q)
		c.u = math.Max(c.u, f*(s.partU+s.weight*s.supU))
		c.load = math.Max(c.load, f*s.weight*s.supLoad)
	}
	return c
}
