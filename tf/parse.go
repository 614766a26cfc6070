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
