package timeresp

import "math"

// Integrals are integrals over t ≥ 0 of the deviation e = y - Final of a response from its
// final value, the time before the response starts included. Of the error of a loop that
// goes to zero they are the usual criteria of its quality; of an effort, Absolute is what is
// spent beyond the steady effort and Variation how far the actuator travels.
type Integrals struct {
	Absolute     float64 // ∫ |e| dt (IAE)
	Square       float64 // ∫ e² dt (ISE)
	TimeAbsolute float64 // ∫ t·|e| dt (ITAE)
	TimeSquare   float64 // ∫ t·e² dt (ITSE)
	Variation    float64 // ∫ |dy|: the total way that y travels, jumps included
}

// integralRest is what of the largest deviation may be left when the integration ends.
const integralRest = 1e-14

// Integrals returns the integrals of the deviation from the final value. Those of a sum of
// simple modes are closed: between zeros of the deviation, and over all time for the
// squares. Other responses are integrated by Gauss's rule between zeros and breaking points,
// until nothing that counts is left. Each has a relative error of about 1e-11.
//
// The error is a [*NoFinalValueError] if the response has no limit, and a
// [*tf.UnsupportedError] as that of [Response.Figures].
func (r *Response) Integrals() (Integrals, error) {
	nan := math.NaN()
	none := Integrals{nan, nan, nan, nan, nan}
	if err := r.ready("timeresp.Response.Integrals"); err != nil {
		return none, err
	}
	var sum Integrals
	if len(r.arcs) == 0 {
		return sum, nil
	}
	c, w := r.curve()
	v := travel{scan: scan{curve: c, inverse: 1}, final: r.final, start: r.arcs[0].from * w}
	// Before the start the response is zero.
	f, from := math.Abs(r.final), v.start
	sum.Absolute = f * from
	sum.Square = f * f * from
	sum.TimeAbsolute = f * from * from / 2
	sum.TimeSquare = f * f * from * from / 2
	v.sum = &sum
	if v.run(); v.open {
		return none, unsettled("timeresp.Response.Integrals")
	}
	sum.Absolute /= w
	sum.Square /= w
	sum.TimeAbsolute /= w * w
	sum.TimeSquare /= w * w
	if k, ok := c.(*kernel); ok && len(r.arcs) == 1 {
		if s, ts, ok := k.squares(); ok {
			// ∫ (start + τ)·e² over all τ ≥ 0.
			sum.Square = (f*f*from + s) / w
			sum.TimeSquare = (f*f*from*from/2 + from*s + ts) / (w * w)
		}
	}
	return sum, nil
}

// squares returns ∫ e² dτ and ∫ τ·e² dτ of a sum of simple modes in closed form, with
// ∫ e^((p+q)τ) dτ = -1/(p+q) and ∫ τ·e^((p+q)τ) dτ = 1/(p+q)². It is not ok if so much cancels
// that digits would be lost.
func (k *kernel) squares() (square, timeSquare float64, ok bool) {
	if len(k.stages) > 0 {
		return 0, 0, false
	}
	var size, timeSize float64
	for i := range k.modes {
		m := &k.modes[i]
		if m.count > 1 {
			return 0, 0, false
		}
		for j := range k.modes {
			n := &k.modes[j]
			// Re(a·e^(pτ))·Re(b·e^(qτ)) = Re(ab·e^((p+q)τ) + a·conj b·e^((p+conj q)τ))/2
			a, b := complex(m.ar, m.ai), complex(n.ar, n.ai)
			for _, turn := range [2]float64{1, -1} {
				b := complex(real(b), turn*imag(b))
				s := complex(m.re+n.re, m.im+turn*n.im)
				x := a * b / s / 2
				y := x / s
				square -= real(x)
				timeSquare += real(y)
				size += abs(x)
				timeSize += abs(y)
			}
		}
	}
	return square, timeSquare, size <= 1e4*square && timeSize <= 1e4*timeSquare
}

// travel goes along a response, monotone piece by monotone piece without change of sign.
type travel struct {
	scan
	final, start float64
	largest      float64 // deviation so far
	sum          *Integrals
}

func (v *travel) run() {
	var a, b node
	v.fill(0, false, &a)
	v.sum.Variation = math.Abs(a.y)
	horizon := v.curve.horizon()
	for {
		v.largest = max(v.largest, math.Abs(a.y-v.final))
		if a.t >= horizon && a.spread <= integralRest*v.largest {
			v.sum.Variation += math.Abs(a.y - v.final)
			return
		}
		end := v.curve.cellEnd(a.t)
		step := a.step
		if math.IsInf(end, 1) && math.IsInf(step, 1) || v.nodes > 4*maxNodes {
			v.open = a.spread > 1e-11*v.largest
			return
		}
		if a.t+step < end {
			v.fill(a.t+step, false, &b)
			v.part(&a, &b, 0)
			a = b
			continue
		}
		v.fill(end, true, &b)
		v.part(&a, &b, 0)
		v.fill(end, false, &a)
		v.sum.Variation += math.Abs(a.y - b.y)
	}
}

// part divides a cell into pieces on which y is monotone.
func (v *travel) part(a, b *node, depth int) {
	c := enclose(a, b, v.fourth(a, b))
	switch {
	case c.lowRate >= 0 || c.highRate <= 0 || depth > maxDepth || b.t-a.t <= 4e-16*b.t || v.nodes > 4*maxNodes:
		v.monotone(a, b)
	case c.lowCurve >= 0 || c.highCurve <= 0:
		if a.d*b.d < 0 {
			m := v.extremum(*a, *b)
			v.monotone(a, &m)
			v.monotone(&m, b)
		} else {
			v.monotone(a, b)
		}
	case depth > 4 && math.Abs(c.high-c.low) <= 1e-13*v.largest:
		v.monotone(a, b)
	default:
		m := v.node(a.t + (b.t-a.t)/2)
		v.part(a, &m, depth+1)
		v.part(&m, b, depth+1)
	}
}

func (v *travel) monotone(a, b *node) {
	v.sum.Variation += math.Abs(b.y - a.y)
	if (a.y-v.final)*(b.y-v.final) < 0 {
		m := v.crossing(*a, *b, v.final)
		v.integrate(a.t, m.t)
		v.integrate(m.t, b.t)
		return
	}
	v.integrate(a.t, b.t)
}

// Nodes and weights of Gauss's rule with ten points on [-1, 1]: M. Abramowitz and
// I. A. Stegun, Handbook of Mathematical Functions, table 25.4.
var gaussNodes = [5]float64{0.1488743389816312, 0.4333953941292472, 0.6794095682990244, 0.8650633666889845, 0.9739065285171717}
var gaussWeights = [5]float64{0.2955242247147529, 0.2692667193099964, 0.2190863625159820, 0.1494513491505806, 0.0666713443086881}

func (v *travel) integrate(a, b float64) {
	h := (b - a) / 2
	if !(h > 0) {
		return
	}
	m := a + h
	var n node
	for i, x := range gaussNodes {
		for _, x := range [2]float64{x, -x} {
			t := m + h*x
			v.fill(t, false, &n)
			e := math.Abs(n.y - v.final)
			g := gaussWeights[i] * h
			v.sum.Absolute += g * e
			v.sum.Square += g * e * e
			v.sum.TimeAbsolute += g * e * (t + v.start)
			v.sum.TimeSquare += g * e * e * (t + v.start)
		}
	}
}

// HalfCycles returns how many extrema of the response lie outside the band before it enters
// it for good: 0 without overshoot beyond the band, 1 for a single one, and so on. The band
// is a fraction of the final value. It is 0 if the final value is 0.
func (r *Response) HalfCycles(band float64) (int, error) {
	const call = "timeresp.Response.HalfCycles"
	if err := checkBand(call, band); err != nil {
		return 0, err
	}
	if err := r.ready(call); err != nil || r.final == 0 || len(r.arcs) == 0 {
		return 0, err
	}
	s, _, _ := r.scan()
	s.band = band
	h := halfCycles{last: s.settle()}
	h.scan = s
	if h.open || s.open {
		return 0, unsettled(call)
	}
	return h.run(), nil
}

// halfCycles counts extrema outside the band.
type halfCycles struct {
	scan
	last  float64
	count int
	rate  float64 // the last derivative other than zero
}

func (h *halfCycles) run() int {
	var a, b node
	h.fill(0, false, &a)
	h.rate = a.d
	for a.t < h.last {
		end := min(h.curve.cellEnd(a.t), h.last)
		if a.t+a.step < end {
			h.fill(a.t+a.step, false, &b)
			h.part(&a, &b, 0)
			a = b
			continue
		}
		h.fill(end, true, &b)
		h.part(&a, &b, 0)
		h.fill(end, false, &a)
		if a.t < h.last && a.y != b.y {
			h.turn(&b, a.y-b.y) // a jump
		}
		if a.t < h.last {
			h.turn(&a, a.d)
		}
	}
	return h.count
}

// turn takes note of the direction in which the response leaves a node.
func (h *halfCycles) turn(n *node, rate float64) {
	if rate == 0 {
		return
	}
	if h.rate*rate < 0 && math.Abs(n.y-1) > h.band {
		h.count++
	}
	h.rate = rate
}

func (h *halfCycles) part(a, b *node, depth int) {
	c := enclose(a, b, h.fourth(a, b))
	switch {
	case c.lowRate >= 0 || c.highRate <= 0 || depth > maxDepth || b.t-a.t <= 4e-16*b.t || h.nodes > 4*maxNodes,
		c.low > 1-h.band && c.high < 1+h.band:
		h.turn(b, b.d)
	case c.lowCurve >= 0 || c.highCurve <= 0:
		if a.d*b.d < 0 {
			m := h.extremum(*a, *b)
			h.turn(&m, b.d)
		}
		h.turn(b, b.d)
	default:
		m := h.node(a.t + (b.t-a.t)/2)
		h.part(a, &m, depth+1)
		h.part(&m, b, depth+1)
	}
}
