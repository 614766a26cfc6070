package timeresp

import (
	"math"

	"github.com/polewright/polewright/poly"
)

// Letters of this file: τ = w·t scaled time, w a power of two not below the largest pole;
// z = s/w; p a pole in z; y⁽ᵏ⁾ a derivative by τ.

// A transform is the Laplace transform num/den of a signal in scaled time, den monic.
type transform struct {
	scale    int    // w = 2^scale
	num, den []wide // by power of z; the last of den is 1
	poles    []pole // of den; one of each conjugate pair

	numerator, denominator poly.Poly // of the function, exact
	in                     factor
}

// A pole has im ≥ 0; one with im > 0 stands for itself and its conjugate.
type pole struct {
	at           wideComplex
	exact        wideComplex // equal to at if that is the pole exactly
	multiplicity int
}

// A mode is one pole's share in the signal, for a pair that of both:
// Re(e^(pτ)·Σ a[k]τ^k) with k < multiplicity, the a in kernel.amplitudes from first on.
type mode struct {
	re, im, reLo, imLo float64
	ar, ai             float64 // a[0]
	size, fourth       float64 // |a[0]|, |a[0]·p⁴|
	first, count       int32   // of the a; count is 1 for a simple pole
}

// A modal is a sum of modes and of a polynomial, the share of a pole at 0.
type modal struct {
	drift      []float64 // by power of τ
	modes      []mode
	amplitudes []complex128 // of multiple poles
}

// A kernel is a signal that is zero before t = 0 and has a rational Laplace transform
// after. Early on, where the modes nearly cancel, it is a chain of Taylor polynomials; then
// it is the sum of its modes.
type kernel struct {
	modal
	w        float64
	early    []float64 // len(early) = pieces·earlyTerms coefficients of (τ - τᵢ)/h
	step     float64   // h
	earlyEnd float64   // scaled; the modes are used from here on
	leading  int       // the first piece is this power times its polynomial
	stages   []stage   // if not empty, they and not the modes are used from earlyEnd on
}

const (
	earlyTerms   = 26 // kept of a piece; h^k/k! falls below 2⁻⁵² of the sum
	longestEarly = 80 // scaled

	// modalRounding bounds the rounding of one mode's value relative to its envelope:
	// exponential and sine are good to a unit in the last place or better and the argument
	// is compensated; up to six products lie behind a power in a block of samples, then
	// there are three products and a sum.
	modalRounding = 12 * 0x1p-53
	tolerance     = 8e-12 // of max |y| on [0, t], below the 1e-11 that is promised
)

// newKernel inverts a strictly proper transform.
func newKernel(f *transform) (*kernel, error) {
	k := &kernel{w: math.Ldexp(1, f.scale)}
	k.expand(f)
	if largest, ok := k.begin(f); !ok {
		if err := k.extend(f, largest); err != nil {
			return nil, err
		}
	}
	return k, nil
}

// expand finds the amplitudes of the modes: those of the Laurent series at each pole.
func (k *kernel) expand(f *transform) {
	k.modes = make([]mode, 0, len(f.poles))
	var series [8]wideComplex
	for i := range f.poles {
		p := &f.poles[i]
		a := series[:]
		if p.multiplicity > len(a) {
			a = make([]wideComplex, p.multiplicity)
		}
		a = a[:p.multiplicity]
		shiftedSeries(a, f.num, p.at)
		if p.multiplicity == 1 {
			a[0] = a[0].div(f.separation(i))
		}
		for j := range f.poles {
			if p.multiplicity == 1 {
				break
			}
			q := &f.poles[j]
			if j != i {
				divideSeries(a, p.at.sub(q.at), q.multiplicity)
			}
			if q.at.im.hi != 0 {
				conjugate := wideComplex{q.at.re, q.at.im.neg()}
				divideSeries(a, p.at.sub(conjugate), q.multiplicity)
			}
		}
		// Now a[0] belongs to (z-p)^-m, that is τ^(m-1)/(m-1)!.
		if p.at.re.hi == 0 && p.at.im.hi == 0 {
			k.drift = make([]float64, len(a))
			factorial := 1.0
			for power := range a {
				if power > 1 {
					factorial *= float64(power)
				}
				k.drift[power] = a[len(a)-1-power].re.float() / factorial
			}
			continue
		}
		double := 1.0
		if p.at.im.hi != 0 {
			double = 2
		}
		m := mode{re: p.at.re.hi, reLo: p.at.re.lo, im: p.at.im.hi, imLo: p.at.im.lo, first: int32(len(k.amplitudes)), count: int32(len(a))}
		factorial := 1.0
		for power := range a {
			if power > 1 {
				factorial *= float64(power)
			}
			c := a[len(a)-1-power].complex()
			c = complex(double*real(c)/factorial, double*imag(c)/factorial)
			if power == 0 {
				m.ar, m.ai = real(c), imag(c)
			}
			if len(a) > 1 {
				k.amplitudes = append(k.amplitudes, c)
			}
		}
		m.measure()
		k.modes = append(k.modes, m)
	}
}

// measure sets what the bounds need.
func (m *mode) measure() {
	square := m.re*m.re + m.im*m.im
	m.size = math.Hypot(m.ar, m.ai)
	m.fourth = m.size * square * square
}

// separation returns the product of the distances of pole i from all others.
func (f *transform) separation(i int) wideComplex {
	p := &f.poles[i]
	product := wideComplex{re: wide{1, 0}}
	for j := range f.poles {
		q := &f.poles[j]
		var d wideComplex
		real := p.at.im.hi == 0
		switch {
		case q.at.im.hi == 0 && j != i:
			d = wideComplex{p.at.re.sub(q.at.re), p.at.im}
		case q.at.im.hi == 0:
			continue
		case j == i:
			d = wideComplex{im: p.at.im.mulFloat(2)}
		case real:
			re := p.at.re.sub(q.at.re)
			d.re = re.mul(re).add(q.at.im.mul(q.at.im))
		default:
			re := p.at.re.sub(q.at.re)
			d = wideComplex{re, p.at.im.sub(q.at.im)}.mul(wideComplex{re, p.at.im.add(q.at.im)})
		}
		for range q.multiplicity {
			if d.im.hi == 0 && real {
				product.re = product.re.mul(d.re)
			} else {
				product = product.mul(d)
			}
		}
	}
	return product
}

// shiftedSeries sets a to the first coefficients of num about p, by repeated synthetic
// division.
func shiftedSeries(a []wideComplex, num []wide, p wideComplex) {
	if len(a) == 1 && p.im.hi == 0 {
		var y wide
		for i := len(num) - 1; i >= 0; i-- {
			y = y.mul(p.re).add(num[i])
		}
		a[0] = wideComplex{re: y}
		return
	}
	if len(a) == 1 {
		var y wideComplex
		for i := len(num) - 1; i >= 0; i-- {
			y = y.mul(p)
			y.re = y.re.add(num[i])
		}
		a[0] = y
		return
	}
	work := make([]wideComplex, len(num))
	for i, c := range num {
		work[i].re = c
	}
	for k := range a {
		if k >= len(work) {
			a[k] = wideComplex{}
			continue
		}
		for i := len(work) - 2; i >= k; i-- {
			work[i] = work[i].add(work[i+1].mul(p))
		}
		a[k] = work[k]
	}
}

// divideSeries divides the power series a by (d + x)^m.
func divideSeries(a []wideComplex, d wideComplex, m int) {
	for ; m > 0; m-- {
		a[0] = a[0].div(d)
		for k := 1; k < len(a); k++ {
			a[k] = a[k].sub(a[k-1]).div(d)
		}
	}
}

// begin lays Taylor polynomials from t = 0 on until the modal sum is good enough. The
// derivatives come from the differential equation den(d/dτ)y = 0, in wide arithmetic.
// It returns the largest value at the ends of the polynomials, and is not ok if the sum of
// the modes is not good enough there.
func (k *kernel) begin(f *transform) (largest float64, ok bool) {
	n := len(f.den) - 1
	if n == 0 {
		return 0, true
	}
	// The longest of five steps with |p|·h ≤ 2, and with so few poles that the polynomials
	// have terms enough.
	fastest := 0.0
	for i := range f.poles {
		fastest = max(fastest, f.poles[i].at.abs())
	}
	size := len(earlySteps) - 1
	for size > 1 && earlySteps[size]*fastest > 2 {
		size--
	}
	shift := earlyTerms + 2 + n/2
	for {
		var verdict early
		largest, verdict = k.beginWith(f, shift, size)
		switch {
		case verdict == shiftTooShort && shift < 3*(earlyTerms+n):
			shift += 12 + n
		case verdict == stepTooLong && size > 0:
			size--
		default:
			return largest, verdict == enough
		}
	}
}

// early says how laying the early polynomials has ended.
type early int8

const (
	enough        early = iota // the modes can take over
	notEnough                  // they cannot, but there is no use in going on
	shiftTooShort              // too few terms in the series that carry the derivatives from one polynomial to the next
	stepTooLong                // too few terms in the polynomials
)

// beginWith is begin with one of the steps, and with so many terms in the series that carry
// the derivatives on.
func (k *kernel) beginWith(f *transform, shift, size int) (largest float64, verdict early) {
	n := len(f.den) - 1
	terms := shift + n
	var small [128]wide
	buffer := small[:]
	if 2*terms > len(buffer) {
		buffer = make([]wide, 2*terms)
	}
	y, next := buffer[:terms], buffer[terms:2*terms]
	var smallEarly [8 * earlyTerms]float64
	pieces := smallEarly[:0]
	defer func() { k.early = append([]float64(nil), pieces...) }()
	k.earlyEnd = 0
	for i := 0; i < n; i++ { // y⁽ⁱ⁾(0+) by long division
		var c wide
		if j := n - 1 - i; j < len(f.num) {
			c = f.num[j]
		}
		y[i] = c.sub(dotWide(y[:i], f.den[n-i:n]))
	}
	k.leading = 0
	for k.leading < n && y[k.leading].hi == 0 {
		k.leading++
	}
	if k.leading == n { // the zero signal
		k.leading = 0
		return 0, enough
	}
	k.step = earlySteps[size]
	weights := weightTables[size][:]
	// A derivative is a sum over den of earlier ones: it loses so much of the largest of them.
	weight, top := 0.0, 0.0
	for i := range f.den {
		weight += math.Abs(f.den[i].hi)
	}
	left := 0.0 // of the series that carry the derivatives on: what lies beyond their terms
	for piece := 0; ; piece++ {
		start := k.step * float64(piece)
		// What is lost of the k-th derivative, by rounding and by what is left out, comes back
		// at most as τ^k/k! of it: the share of poles near 0. Where poles lie far in the right
		// half-plane the signal grows as well.
		rounded, without, power := 0.0, 0.0, 1.0
		for i := range n {
			top = max(top, math.Abs(y[i].hi))
			rounded += power
			without += left * power
			power *= start / float64(i+1)
		}
		rounded *= 0x1p-98 * weight * top
		if piece > 0 && rounded+without > tolerance/32*largest {
			if without > rounded {
				return largest, shiftTooShort
			}
			return largest, notEnough
		}
		if k.roundingAt(start) <= tolerance*largest {
			return largest, enough
		}
		if start >= longestEarly {
			return largest, notEnough
		}
		for i := n; i < terms; i++ {
			y[i] = dotWide(y[i-n:i], f.den[:n]).neg()
			top = max(top, math.Abs(y[i].hi))
			if i >= shift {
				left = max(left, 2*weights[shift].hi*math.Abs(y[i].hi))
			}
		}
		skip := 0
		if piece == 0 {
			skip = k.leading
		}
		for i := 0; i < earlyTerms; i++ {
			pieces = append(pieces, y[i+skip].hi*weights[i+skip].hi)
		}
		k.earlyEnd = start + k.step
		rest := 0.0 // of the polynomial: the first terms left out
		for i := earlyTerms + skip; i < earlyTerms+skip+2; i++ {
			rest += math.Abs(y[i].hi) * weights[i].hi
		}
		for i := 0; i < n; i++ { // step on
			next[i] = dotWide(y[i:i+shift], weights[:shift])
		}
		y, next = next, y
		largest = math.Max(largest, math.Abs(y[0].hi))
		if rest > 1e-3*tolerance*largest {
			return largest, stepTooLong
		}
	}
}

// earlySteps are the lengths h of the early pieces to choose from, and weightTables their h^k/k!.
var (
	earlySteps   = [...]float64{1, 2, 2.5, 3, 3.5}
	weightTables = func() (t [len(earlySteps)][600]wide) {
		for q := range t {
			t[q][0] = wide{1, 0}
			for i := 1; i < len(t[q]); i++ {
				t[q][i] = t[q][i-1].mulFloat(earlySteps[q]).div(wide{float64(i), 0})
			}
		}
		return t
	}()
)

// piece returns the early piece at τ + lo and the fraction of it.
func (k *kernel) piece(tau, lo float64) (i int, x float64) {
	i = min(int(tau/k.step), len(k.early)/earlyTerms-1)
	return i, ((tau - k.step*float64(i)) + lo) / k.step
}

// roundingAt bounds the rounding of the modal sum at τ and, for a decaying signal, later.
func (k *modal) roundingAt(tau float64) float64 {
	sum := 0.0
	for i := len(k.drift) - 1; i >= 0; i-- {
		sum = sum*tau + math.Abs(k.drift[i])
	}
	for i := range k.modes {
		m := &k.modes[i]
		e := math.Exp(m.re * tau)
		if m.count == 1 {
			sum += e * (math.Abs(m.ar) + math.Abs(m.ai))
			continue
		}
		a := k.amplitudes[m.first : m.first+m.count]
		size := 0.0
		for j := len(a) - 1; j >= 0; j-- {
			size = size*tau + math.Abs(real(a[j])) + math.Abs(imag(a[j]))
		}
		sum += e * size
	}
	return modalRounding * sum
}

// at returns the signal at t + lo, lo being below a unit in the last place of t.
func (k *kernel) at(t, lo float64) float64 {
	tau := t * k.w
	lo *= k.w
	if tau < k.earlyEnd {
		return k.earlyAt(tau, lo)
	}
	if len(k.stages) > 0 {
		return k.stageOf(tau).at(tau, lo)
	}
	return k.modalAt(tau, lo)
}

func (k *kernel) earlyAt(tau, lo float64) float64 {
	piece, x := k.piece(tau, lo)
	c := k.early[piece*earlyTerms:][:earlyTerms]
	y := 0.0
	for i := len(c) - 1; i >= 0; i-- {
		y = y*x + c[i]
	}
	if piece == 0 && k.leading > 0 {
		y *= math.Pow(x, float64(k.leading))
	}
	return y
}

func (k *modal) modalAt(tau, lo float64) float64 {
	y := 0.0
	for i := len(k.drift) - 1; i >= 0; i-- {
		y = y*tau + k.drift[i]
	}
	for i := range k.modes {
		m := &k.modes[i]
		re, im := m.turn(tau, lo)
		if m.count == 1 {
			y += m.ar*re - m.ai*im
			continue
		}
		a := k.amplitudes[m.first : m.first+m.count]
		ar, ai := 0.0, 0.0
		for j := len(a) - 1; j >= 0; j-- {
			ar, ai = ar*tau+real(a[j]), ai*tau+imag(a[j])
		}
		y += ar*re - ai*im
	}
	return y
}
