package tf

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/poly"
)

// Bounds on what a text may ask for, so that none takes long.
const (
	maxDepth    = 200     // of parentheses
	maxBits     = 1 << 20 // of a coefficient: more than the roots of any function of bounded degree need
	maxExponent = 1 << 12 // of a number
	maxWork     = 1 << 29 // about nanoseconds, for all products together
)

// fraction is a value on the way: variableᵖᵒʷᵉʳ·numerator/denominator·exp(-s·delay).
type fraction struct {
	numerator, denominator poly.Poly
	power                  int // what negative powers of the variable left over
	delay                  *big.Rat

	variable     bool      // the variable itself and nothing else
	squareOf     poly.Poly // the square of this, if it is linear; else zero
	squareNumber float64   // the square of this number; else zero
}

func numberFraction(p poly.Poly) fraction {
	return fraction{numerator: p, denominator: one, delay: new(big.Rat)}
}

// exactCoefficient returns a coefficient as a fraction; not ok if that would be unwieldy.
func exactCoefficient(p poly.Poly, power int) (*big.Rat, bool) {
	c, e := p.Integers()
	if power >= len(c) {
		return new(big.Rat), true
	}
	if e < -maxBits || e > maxBits {
		return nil, false
	}
	if e >= 0 {
		return new(big.Rat).SetInt(c[power].Lsh(c[power], uint(e))), true
	}
	return new(big.Rat).SetFrac(c[power], new(big.Int).Lsh(big.NewInt(1), uint(-e))), true
}

// within checks that a value stays within the bounds on work.
func (v fraction) within(t token) (fraction, error) {
	for _, p := range []poly.Poly{v.numerator, v.denominator} {
		if p.Degree()+abs(v.power) > poly.MaxDegree {
			return fraction{}, t.wrong("the degree exceeds %d", poly.MaxDegree)
		}
		if tooWide(p) {
			return fraction{}, t.wrong("the coefficients need more than %d bits", maxBits)
		}
	}
	return v, nil
}

// spend adds up what products cost, about, and refuses a text that would take long.
func (p *parser) spend(t token, products ...[2]poly.Poly) error {
	words := func(q poly.Poly) int {
		c, _ := q.Integers()
		bits := 0
		for _, n := range c {
			bits = max(bits, n.BitLen())
		}
		return bits/64 + 1
	}
	for _, pair := range products {
		terms := (pair[0].Degree() + 1) * (pair[1].Degree() + 1)
		p.work += terms * (50 + words(pair[0])*words(pair[1]))
	}
	if p.work > maxWork {
		return t.wrong("the text asks for too long a computation")
	}
	return nil
}

// tooWide tells whether the coefficients reach over more than maxBits.
func tooWide(p poly.Poly) bool {
	narrow := true
	for i := 0; i <= p.Degree(); i++ {
		c := math.Abs(p.Coefficient(i))
		narrow = narrow && c < 0x1p1000 && (c > 0x1p-1000 || c == 0)
	}
	if narrow && p.Degree() < 30 { // no product of that can have grown far
		c, e := p.Integers()
		return len(c) > 0 && e < -maxBits
	}
	c, e := p.Integers()
	for _, n := range c {
		if n.BitLen() > maxBits {
			return true
		}
	}
	return e < -maxBits || e > maxBits
}

func abs(n int) int { return max(n, -n) }

func (v fraction) plain() fraction {
	v.variable, v.squareOf, v.squareNumber = false, poly.Poly{}, 0
	return v
}

func (v fraction) negated() fraction {
	v.numerator = v.numerator.Scale(-1)
	return v.plain()
}

func (p *parser) times(v, w fraction, t token) (fraction, error) {
	if err := p.spend(t, [2]poly.Poly{v.numerator, w.numerator}, [2]poly.Poly{v.denominator, w.denominator}); err != nil {
		return fraction{}, err
	}
	return fraction{
		numerator:   keepRoot(v.numerator).Mul(keepRoot(w.numerator)),
		denominator: keepRoot(v.denominator).Mul(keepRoot(w.denominator)),
		power:       v.power + w.power,
		delay:       new(big.Rat).Add(v.delay, w.delay),
	}.within(t)
}

func (p *parser) over(v, w fraction, t token) (fraction, error) {
	if w.numerator.Degree() < 0 {
		return fraction{}, t.wrong("what follows is zero; nothing can be divided by it")
	}
	w.numerator, w.denominator = w.denominator, w.numerator
	w.power, w.delay = -w.power, new(big.Rat).Neg(w.delay)
	return p.times(v, w, t)
}

func (p *parser) plus(v, w fraction, t token) (fraction, error) {
	if v.squareNumber == 0 && w.squareNumber != 0 && v.squareOf.Degree() == 1 {
		if p, ok := pairOfRoots(v.squareOf, w.squareNumber); ok {
			return numberFraction(p), nil
		}
	}
	switch {
	case v.numerator.Degree() < 0 && v.denominator.Degree() == 0:
		return w.plain(), nil
	case w.numerator.Degree() < 0 && w.denominator.Degree() == 0:
		return v.plain(), nil
	case v.delay.Cmp(w.delay) != 0:
		return fraction{}, t.wrong("terms with different dead times do not add up to a rational function")
	}
	if err := p.spend(t, [2]poly.Poly{v.numerator, w.denominator}, [2]poly.Poly{w.numerator, v.denominator}, [2]poly.Poly{v.denominator, w.denominator}); err != nil {
		return fraction{}, err
	}
	power := min(v.power, w.power)
	a, b := v.numerator, w.numerator
	if v.power > power {
		a = a.Mul(powerOfVariable(v.power - power))
	}
	if w.power > power {
		b = b.Mul(powerOfVariable(w.power - power))
	}
	return fraction{
		numerator:   a.Mul(w.denominator).Add(b.Mul(v.denominator)),
		denominator: v.denominator.Mul(w.denominator),
		power:       power,
		delay:       v.delay,
	}.within(t)
}

func (p *parser) toThe(v fraction, n int, t token) (fraction, error) {
	if n < 0 && v.variable {
		r := numberFraction(one)
		r.power = n
		return r.within(t)
	}
	if n < 0 {
		w, err := p.over(numberFraction(one), v, t)
		if err != nil {
			return fraction{}, err
		}
		if two, ok := v.powerOfTwo(); ok { // 2^-9 is a number
			w = numberFraction(two)
		}
		v, n = w, -n
	}
	if d := max(v.numerator.Degree(), v.denominator.Degree()) + abs(v.power); d > 0 && n > poly.MaxDegree/d {
		return fraction{}, t.wrong("the degree exceeds %d", poly.MaxDegree)
	}
	result := numberFraction(one)
	for square, m := v, n; m > 0; {
		var err error
		if m&1 != 0 {
			if result, err = p.times(result, square, t); err != nil {
				return fraction{}, err
			}
		}
		if m >>= 1; m > 0 {
			if square, err = p.times(square, square, t); err != nil {
				return fraction{}, err
			}
		}
	}
	if n == 2 && v.power == 0 && v.delay.Sign() == 0 && v.denominator.Equal(one) {
		switch v.numerator.Degree() {
		case 0:
			if x := v.numerator.Coefficient(0); poly.New(x).Equal(v.numerator) {
				result.squareNumber = x
			}
		case 1:
			result.squareOf = v.numerator
		}
	}
	return result, nil
}

// powerOfTwo returns the reciprocal of v if that is a power of two.
func (v fraction) powerOfTwo() (poly.Poly, bool) {
	if v.numerator.Degree() != 0 || v.power != 0 || v.delay.Sign() != 0 || !v.denominator.Equal(one) {
		return poly.Poly{}, false
	}
	c, e := v.numerator.Integers()
	n := c[0]
	shift := n.TrailingZeroBits()
	if n.Sign() < 0 || int(shift) != n.BitLen()-1 {
		return poly.Poly{}, false
	}
	return poly.FromIntegers([]*big.Int{big.NewInt(1)}, -e-int(shift)), true
}

// pairOfRoots returns (s + a)² + b² with its roots -a ± jb.
func pairOfRoots(linear poly.Poly, b float64) (poly.Poly, bool) {
	root, ok := exactRoot(linear)
	if !ok || !linear.Derivative().Equal(one) {
		return poly.Poly{}, false
	}
	p, err := poly.FromRoots(1, complex(root, b), complex(root, -b))
	return p, err == nil
}

// keepRoot returns a polynomial of degree 1 with its root, if that is a float64.
func keepRoot(p poly.Poly) poly.Poly {
	if p.Degree() != 1 {
		return p
	}
	if _, ok := p.GivenRoots(); ok {
		return p
	}
	root, ok := exactRoot(p)
	if !ok {
		return p
	}
	q, err := poly.FromRoots(1, complex(root, 0))
	if err != nil {
		return p
	}
	return q.Mul(p.Derivative())
}

// exactRoot returns the root of a polynomial of degree 1, if it is a float64.
func exactRoot(p poly.Poly) (float64, bool) {
	root := -coefficientRatio(p, 0, p, 1) + 0
	if math.IsInf(root, 0) {
		return 0, false
	}
	return root, poly.New(1, -root).Mul(p.Derivative()).Equal(p)
}
