package quotient

import (
	"math"
	"math/big"
)

// Ring is the polynomials modulo a monic polynomial of degree at least 1.
type Ring struct {
	precision uint
	modulus   []*big.Float // by power, the leading 1 left out
}

// Element is a polynomial modulo that of its ring, by power; one number for each power below
// its degree. Callers do not change it.
type Element []*big.Float

// New returns the ring modulo xⁿ + Σ modulus[i]·xⁱ, n numbers.
func New(precision uint, modulus []*big.Float) Ring {
	return Ring{precision: precision, modulus: modulus}
}

// Degree returns the degree of the modulus.
func (r Ring) Degree() int { return len(r.modulus) }

func (r Ring) number() *big.Float { return new(big.Float).SetPrec(r.precision) }

func (r Ring) zero() Element {
	e := make(Element, len(r.modulus))
	for i := range e {
		e[i] = r.number()
	}
	return e
}

// One returns the polynomial 1.
func (r Ring) One() Element {
	e := r.zero()
	e[0].SetInt64(1)
	return e
}

// Reduce returns a polynomial of any degree, by power, modulo that of the ring.
func (r Ring) Reduce(c []*big.Float) Element {
	n := len(r.modulus)
	work := make([]*big.Float, max(len(c), n))
	for i := range work {
		work[i] = r.number()
		if i < len(c) {
			work[i].Set(c[i])
		}
	}
	t := r.number()
	for k := len(work) - 1; k >= n; k-- {
		if work[k].Sign() == 0 {
			continue
		}
		for i, a := range r.modulus {
			if a.Sign() != 0 {
				work[k-n+i].Sub(work[k-n+i], t.Mul(work[k], a))
			}
		}
	}
	return work[:n]
}

// Mul returns a·b.
func (r Ring) Mul(a, b Element) Element {
	product := make([]*big.Float, 2*len(r.modulus)-1)
	for i := range product {
		product[i] = r.number()
	}
	t := r.number()
	for i, x := range a {
		if x.Sign() == 0 {
			continue
		}
		for j, y := range b {
			if y.Sign() != 0 {
				product[i+j].Add(product[i+j], t.Mul(x, y))
			}
		}
	}
	return r.Reduce(product)
}

// Add returns a + b.
func (r Ring) Add(a, b Element) Element {
	sum := make(Element, len(a))
	for i := range sum {
		sum[i] = r.number().Add(a[i], b[i])
	}
	return sum
}

// Scale returns k·a.
func (r Ring) Scale(a Element, k *big.Float) Element {
	scaled := make(Element, len(a))
	for i := range scaled {
		scaled[i] = r.number().Mul(a[i], k)
	}
	return scaled
}

// Lead returns the coefficient of the highest power that an element can have: for an element
// B, the sum of the residues of B/modulus.
func (r Ring) Lead(a Element) *big.Float { return a[len(a)-1] }

// ExpMinusOne returns exp(x·t) - 1, for roots of the modulus of magnitude about 1 at most:
// Taylor's series for a fraction of t, and then the doubling w → w² + 2w, which does not
// cancel for small w as squaring exp would. The precision should exceed log₂|t| by far.
func (r Ring) ExpMinusOne(t *big.Float) Element {
	sum := r.zero()
	if t.Sign() == 0 {
		return sum
	}
	// The smaller the argument of the series, the fewer its terms; a doubling costs about as
	// much as n of them.
	small := int(math.Sqrt(float64(r.precision)/float64(len(r.modulus)))) / 2
	halvings := max(0, t.MantExp(nil)+1+small) // now |t| < 2^-(small+1)
	step := r.number().SetMantExp(r.number().Set(t), -halvings)
	n := len(r.modulus)
	term := r.One()
	size := 0 // exponent of the largest coefficient met
	product, factor, index := r.number(), r.number(), r.number()
	for j := int64(1); ; j++ {
		factor.Quo(step, index.SetInt64(j))
		// term·x, in place: the leading coefficient wraps around through the modulus.
		top := term[n-1]
		copy(term[1:], term[:n-1])
		term[0] = r.number()
		if top.Sign() != 0 {
			for i, a := range r.modulus {
				if a.Sign() != 0 {
					term[i].Sub(term[i], product.Mul(top, a))
				}
			}
		}
		for i, x := range term {
			if x.Sign() != 0 {
				x.Mul(x, factor)
				sum[i].Add(sum[i], x)
			}
		}
		e, ok := exponent(term)
		if j == 1 {
			size = e
		}
		// Powers of x grow little: the roots are inside the unit disc.
		if !ok || e < size-int(r.precision)-8 && j > int64(2*n) {
			break
		}
	}
	for range halvings {
		square := r.Mul(sum, sum)
		for i, x := range sum {
			square[i].Add(square[i], x.SetMantExp(x, 1))
		}
		sum = square
		if e, ok := exponent(sum); ok && e > overflow {
			break
		}
	}
	return sum
}

// overflow is the exponent at which ExpMinusOne gives up: with fewer bits than doublings what
// grows is rounding, and a result that large tells the caller to use more.
const overflow = 1 << 20

// exponent returns the exponent of the largest coefficient, not ok if all are zero.
func exponent(a []*big.Float) (int, bool) {
	e, ok := 0, false
	for _, x := range a {
		if x.Sign() != 0 {
			if m := x.MantExp(nil); !ok || m > e {
				e, ok = m, true
			}
		}
	}
	return e, ok
}

// Characteristic returns the characteristic polynomial of multiplication by a, monic, by
// power with the leading 1: its roots are the values of a at the roots of the modulus. It
// goes by the traces of the powers and Newton's identities.
func (r Ring) Characteristic(a Element) []*big.Float {
	n := len(r.modulus)
	// Power sums of the roots of the modulus, s₀ to s₍ₙ₋₁₎.
	elementary := make([]*big.Float, n+1) // signed: coefficient of xⁿ⁻ᵏ
	elementary[0] = r.number().SetInt64(1)
	for k := 1; k <= n; k++ {
		elementary[k] = r.modulus[n-k]
	}
	sums := make([]*big.Float, n)
	sums[0] = r.number().SetInt64(int64(n))
	t := r.number()
	for k := 1; k < n; k++ {
		s := r.number().Mul(r.number().SetInt64(int64(-k)), elementary[k])
		for i := 1; i < k; i++ {
			s.Sub(s, t.Mul(elementary[i], sums[k-i]))
		}
		sums[k] = s
	}
	trace := func(e Element) *big.Float {
		y := r.number()
		for i, c := range e {
			y.Add(y, t.Mul(c, sums[i]))
		}
		return y
	}
	powers := make([]*big.Float, n+1)
	power := a
	for k := 1; k <= n; k++ {
		powers[k] = trace(power)
		if k < n {
			power = r.Mul(power, a)
		}
	}
	result := make([]*big.Float, n+1)
	result[n] = r.number().SetInt64(1)
	for k := 1; k <= n; k++ {
		s := r.number()
		for i := 1; i <= k; i++ {
			s.Sub(s, t.Mul(result[n-k+i], powers[i]))
		}
		result[n-k] = s.Quo(s, r.number().SetInt64(int64(k)))
	}
	return result
}
