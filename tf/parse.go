package tf

import (
	"fmt"
	"math"
	"math/big"

	"github.com/polewright/polewright/poly"
)

// A ParseError reports the first place where a text is no transfer function.
type ParseError struct {
	Column   int    // where, counted from 1 in characters; one past the end if the text breaks off
	Found    string // what stands there; empty at the end
	Expected string // what was expected, or what is wrong
}

func (e *ParseError) Error() string {
	found := "the end"
	if e.Found != "" {
		found = fmt.Sprintf("%q", e.Found)
	}
	return fmt.Sprintf("tf.Parse: column %d: found %s; %s", e.Column, found, e.Expected)
}

// MustParse is [Parse] for texts in a program. It panics if the text is wrong.
func MustParse(text string) Function {
	g, err := Parse(text)
	if err != nil {
		panic(err)
	}
	return g
}

// Parse reads a transfer function in ordinary algebra:
//
//	18 exp(-0.02 s) / (s (s + 3))
//	0.2 z / (z - 0.8), period 0.01
//	(1 + 0.5 z^-1) / (1 - z^-1), period 1e-3, dead time 2e-3
//
// There are numbers, s or z, + - * / ^ with whole exponents, parentheses, products without a
// sign, and exp(-T s) for a dead time. A function of z needs its period in seconds behind a
// comma. After a division a product needs its sign, or parentheses, since 1/s(s+1) is read
// in two ways; only exp(…) may follow.
//
// Arithmetic is exact: a decimal number is the nearest float64, a hexadecimal one as in Go,
// 0x1.8p-3, is itself, and no sum or product rounds. Nothing cancels; z^-1 is notation, not a
// factor, and is moved to the other side of the fraction. The roots of factors such as
// (s + 2)^3 and ((s + 1)^2 + 3^2), which is a pair at -1 ± 3j, are kept as those of
// [FromRoots]. The error is a [*ParseError].
func Parse(text string) (Function, error) {
	p := parser{}
	if err := p.scan(text); err != nil {
		return invalid(err)
	}
	g, err := p.function()
	if err != nil {
		return invalid(err)
	}
	return g, nil
}

// Bounds on what a text may ask for, so that none takes long.
const (
	maxDepth    = 200     // of parentheses
	maxBits     = 1 << 16 // of a coefficient
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

// parser reads a list of tokens by recursive descent.
type parser struct {
	tokens   []token
	at       int
	variable string // s or z, as soon as one is met
	depth    int
	delayed  token // the first exp, if any
	work     int   // what the products have cost so far, see spend
}

func (p *parser) peek() token { return p.tokens[p.at] }

func (p *parser) next() token {
	t := p.tokens[p.at]
	if t.kind != endToken {
		p.at++
	}
	return t
}

func (p *parser) accept(kind tokenKind) bool {
	if p.peek().kind == kind {
		p.at++
		return true
	}
	return false
}

func (t token) wrong(format string, values ...any) error {
	return &ParseError{Column: t.column, Found: t.text, Expected: fmt.Sprintf(format, values...)}
}

const operand = `expected a number, s, z, exp or "("`

// function is the whole text.
func (p *parser) function() (Function, error) {
	v, err := p.sum()
	if err != nil {
		return Function{}, err
	}
	period, dead := math.NaN(), math.NaN()
	var deadAt token
	for p.accept(commaToken) {
		t := p.next()
		switch {
		case t.kind == periodToken && math.IsNaN(period):
			at := p.peek()
			if period, err = p.suffixNumber(); err != nil {
				return Function{}, err
			}
			if !(period > 0) {
				return Function{}, at.wrong("a period is greater than 0")
			}
			if p.variable == "s" || p.delayed.kind == expToken {
				return Function{}, t.wrong("a function of s has no period")
			}
		case t.kind == deadToken && math.IsNaN(dead):
			if u := p.next(); u.kind != timeToken {
				return Function{}, u.wrong(`expected "dead time" and a number of seconds`)
			}
			deadAt = p.peek()
			if dead, err = p.suffixNumber(); err != nil {
				return Function{}, err
			}
		default:
			return Function{}, t.wrong(`expected "period" or "dead time", each at most once`)
		}
	}
	if t := p.peek(); t.kind != endToken {
		return Function{}, t.wrong(`expected an operator, or a comma and "period"`)
	}
	if p.variable == "z" && math.IsNaN(period) {
		return Function{}, p.peek().wrong(`a function of z needs ", period" and a number of seconds`)
	}
	if v.delay.Sign() < 0 {
		return Function{}, p.delayed.wrong("dividing by a dead time looks into the future")
	}
	switch {
	case v.power > 0:
		v.numerator = v.numerator.Mul(powerOfVariable(v.power))
	case v.power < 0:
		v.denominator = v.denominator.Mul(powerOfVariable(-v.power))
	}
	g := Function{
		numerator:   keepRoot(v.numerator),
		denominator: keepRoot(v.denominator),
		delay:       deadTimeOf(v.delay),
		made:        true,
	}
	if !math.IsNaN(period) {
		g.period = period
	}
	if !math.IsNaN(dead) {
		if v.delay.Sign() != 0 {
			return Function{}, deadAt.wrong("the dead time is given twice")
		}
		if g, err = g.WithDeadTime(dead); err != nil {
			return Function{}, deadAt.wrong("expected a dead time of a whole number of periods")
		}
	}
	return g, nil
}

// suffixNumber is a number behind a comma.
func (p *parser) suffixNumber() (float64, error) {
	t := p.next()
	if t.kind != numberToken {
		return 0, t.wrong("expected a number of seconds")
	}
	x := t.value.Coefficient(0)
	if math.IsInf(x, 0) || x == 0 && t.value.Degree() == 0 || !poly.New(x).Equal(t.value) {
		return 0, t.wrong("expected a number of seconds that a float64 holds")
	}
	return x, nil
}

// sum is terms with + and - between.
func (p *parser) sum() (fraction, error) {
	if p.depth++; p.depth > maxDepth {
		return fraction{}, p.peek().wrong("parentheses are nested more than %d deep", maxDepth)
	}
	defer func() { p.depth-- }()
	negative := false
	if p.accept(minusToken) {
		negative = true
	} else {
		p.accept(plusToken)
	}
	v, err := p.term()
	if err != nil {
		return fraction{}, err
	}
	if negative {
		v = v.negated()
	}
	for {
		t := p.peek()
		if t.kind != plusToken && t.kind != minusToken {
			return v, nil
		}
		p.at++
		w, err := p.term()
		if err != nil {
			return fraction{}, err
		}
		if t.kind == minusToken {
			w = w.negated()
		}
		if v, err = p.plus(v, w, t); err != nil {
			return fraction{}, err
		}
	}
}

// term is factors with *, / or nothing between.
func (p *parser) term() (fraction, error) {
	v, err := p.factor()
	if err != nil {
		return fraction{}, err
	}
	divided := false
	for {
		t := p.peek()
		switch t.kind {
		case timesToken, overToken:
			p.at++
		case numberToken, variableToken, openToken:
			if divided {
				return fraction{}, t.wrong(`after a division, write "*" or put the denominator in parentheses`)
			}
		case expToken:
		default:
			return v, nil
		}
		w, err := p.factor()
		if err != nil {
			return fraction{}, err
		}
		if t.kind == overToken {
			divided = true
			v, err = p.over(v, w, t)
		} else {
			divided = divided && t.kind != timesToken
			v, err = p.times(v, w, t)
		}
		if err != nil {
			return fraction{}, err
		}
	}
}

// factor is an operand, perhaps with a sign before it and powers behind it.
func (p *parser) factor() (fraction, error) {
	t := p.next()
	var v fraction
	switch t.kind {
	case minusToken, plusToken: // as in 2 * -3
		if p.depth++; p.depth > maxDepth {
			return fraction{}, t.wrong("signs are nested more than %d deep", maxDepth)
		}
		defer func() { p.depth-- }()
		v, err := p.factor()
		if err == nil && t.kind == minusToken {
			v = v.negated()
		}
		return v, err
	case numberToken:
		v = numberFraction(t.value)
	case variableToken:
		if p.variable != "" && p.variable != t.text {
			return fraction{}, t.wrong("the text is of %s; s and z do not mix", p.variable)
		}
		if t.text == "z" && p.delayed.kind == expToken {
			return fraction{}, t.wrong("the text has a dead time in s; s and z do not mix")
		}
		p.variable = t.text
		v = numberFraction(powerOfVariable(1))
		v.variable = true
	case expToken:
		var err error
		if v, err = p.deadTime(t); err != nil {
			return fraction{}, err
		}
	case openToken:
		var err error
		if v, err = p.sum(); err != nil {
			return fraction{}, err
		}
		if u := p.next(); u.kind != closeToken {
			return fraction{}, u.wrong(`expected an operator or ")"`)
		}
	default:
		return fraction{}, t.wrong(operand)
	}
	for p.peek().kind == powerToken {
		caret := p.next()
		n, err := p.exponent()
		if err != nil {
			return fraction{}, err
		}
		if v, err = p.toThe(v, n, caret); err != nil {
			return fraction{}, err
		}
	}
	return v, nil
}

// exponent is a whole number with a sign, perhaps in parentheses.
func (p *parser) exponent() (int, error) {
	inside := p.accept(openToken)
	negative := false
	if p.accept(minusToken) {
		negative = true
	} else {
		p.accept(plusToken)
	}
	t := p.next()
	n := t.value.Coefficient(0)
	if t.kind != numberToken || n != math.Trunc(n) || n > maxExponent {
		return 0, t.wrong("expected a whole exponent up to %d", maxExponent)
	}
	if inside {
		if u := p.next(); u.kind != closeToken {
			return 0, u.wrong(`expected ")"`)
		}
	}
	if negative {
		n = -n
	}
	return int(n), nil
}

// deadTime is what follows exp: (-T s) with a number T.
func (p *parser) deadTime(exp token) (fraction, error) {
	if u := p.next(); u.kind != openToken {
		return fraction{}, u.wrong(`expected "("`)
	}
	at := p.peek()
	if p.delayed.kind != expToken {
		p.delayed = exp
	}
	v, err := p.sum()
	if err != nil {
		return fraction{}, err
	}
	if u := p.next(); u.kind != closeToken {
		return fraction{}, u.wrong(`expected ")"`)
	}
	if p.variable == "z" {
		return fraction{}, exp.wrong("a function of z has its dead time as z^-n")
	}
	const wanted = "expected a dead time such as exp(-0.02 s)"
	n, d := v.numerator, v.denominator
	if v.delay.Sign() != 0 || v.power != 0 || d.Degree() != 0 || n.Degree() > 1 || n.Degree() >= 0 && !isZeroAtOrigin(n) {
		return fraction{}, at.wrong(wanted)
	}
	result := numberFraction(one)
	if n.Degree() < 0 {
		return result, nil
	}
	if unit, ok := exactCoefficient(d, 0); ok && unit.Cmp(big.NewRat(1, 1)) == 0 {
		r, ok := exactCoefficient(n, 1)
		if !ok {
			return fraction{}, at.wrong(wanted)
		}
		result.delay.Neg(r)
	} else {
		x := -coefficientRatio(n, 1, d, 0)
		if math.IsInf(x, 0) || x == 0 {
			return fraction{}, at.wrong("the dead time is beyond the range of float64")
		}
		result.delay.SetFloat64(x)
	}
	if x, _ := result.delay.Float64(); math.IsInf(x, 0) || x == 0 {
		return fraction{}, at.wrong("the dead time is beyond the range of float64")
	}
	if result.delay.Sign() < 0 {
		return fraction{}, at.wrong("a dead time has a negative exponent, such as exp(-0.02 s)")
	}
	return result, nil
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
		if p.work += terms; terms > 1 {
			p.work += terms * (50 + words(pair[0])*words(pair[1]))
		}
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
