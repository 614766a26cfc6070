package tf

import (
	"fmt"
	"math"
	"math/big"
	"sort"
	"strconv"
	"strings"

	"github.com/polewright/polewright/poly"
)

// String returns the function as [Parse] reads it: Parse gives back the identical function,
// with the roots that were given. A coefficient that is no float64 stands in hexadecimal. Of
// an invalid function the text is its error in parentheses, which Parse refuses.
func (g Function) String() string { return g.text(exactly) }

// Text returns the function as [Function.String] does, its numbers rounded to so many
// significant digits, for people to read: at least 1, at most 17.
func (g Function) Text(digits int) string { return g.text(min(max(digits, 1), 17)) }

// exactly, in the place of a number of digits, asks for all of them.
const exactly = 0

func (g Function) text(digits int) string {
	if g.err != nil {
		return "(" + g.err.Error() + ")"
	}
	g = g.filled()
	variable := "s"
	if g.period > 0 {
		variable = "z"
	}
	top := factored(g.numerator, variable, digits)
	if !g.delay.zero() {
		delay := exactNumber(g.delay.rat())
		if digits != exactly {
			delay = decimal(g.delay.near, digits)
		}
		delay = "exp(-" + delay + " s)"
		if len(top.factors) == 0 && top.lead == "1" {
			top.lead = ""
		}
		top.factors = append(top.factors, delay)
	}
	text := top.product(false)
	bottom := factored(g.denominator, variable, digits)
	if bottom.lead != "1" || len(bottom.factors) > 0 {
		text = top.product(true) + " / " + bottom.below()
	}
	if g.period > 0 {
		text += ", period " + decimal(g.period, digits)
		if g.periods > 0 {
			text += ", dead time " + decimal(g.DeadTime(), digits)
		}
	}
	return text
}

// GoString returns the call of [MustParse] that makes the function.
func (g Function) GoString() string { return fmt.Sprintf("tf.MustParse(%q)", g.String()) }

// factors is a polynomial as a product.
type factors struct {
	lead    string   // a number, perhaps with a sign; empty for 1 that is not written
	factors []string // sums in parentheses
	sum     string   // in the place of all this: a sum of several terms
}

// factored returns a polynomial as the product of its given roots, or as a sum.
func factored(p poly.Poly, variable string, digits int) factors {
	p = keepRoot(p)
	if p.Degree() < 0 {
		return factors{lead: "0"}
	}
	if roots, ok := p.GivenRoots(); ok {
		return factors{lead: coefficient(p, p.Degree(), digits), factors: linearFactors(roots, variable, digits)}
	}
	c, _ := p.Integers()
	var b strings.Builder
	terms := 0
	for i := p.Degree(); i >= 0; i-- {
		if c[i].Sign() == 0 {
			continue
		}
		number := coefficient(p, i, digits)
		switch negative := number[0] == '-'; {
		case terms == 0 && negative:
			b.WriteString("-")
		case negative:
			b.WriteString(" - ")
		case terms > 0:
			b.WriteString(" + ")
		}
		number = strings.TrimPrefix(number, "-")
		name := raised(variable, i)
		switch {
		case i == 0:
			b.WriteString(number)
		case number == "1":
			b.WriteString(name)
		default:
			b.WriteString(number + " " + name)
		}
		terms++
	}
	if terms == 1 { // a lone power
		return factors{lead: coefficient(p, p.Degree(), digits), factors: []string{raised(variable, p.Degree())}}
	}
	return factors{sum: b.String()}
}

// linearFactors returns the factors of the roots, equal ones as powers, in a fixed order.
func linearFactors(roots []complex128, variable string, digits int) []string {
	count := map[complex128]int{}
	for _, s := range roots {
		if imag(s) >= 0 {
			count[s]++
		}
	}
	distinct := make([]complex128, 0, len(count))
	for s := range count {
		distinct = append(distinct, s)
	}
	sort.Slice(distinct, func(i, j int) bool { // rightmost first, as in s (s + 3)
		a, b := distinct[i], distinct[j]
		if real(a) != real(b) {
			return real(a) > real(b)
		}
		return imag(a) < imag(b)
	})
	list := make([]string, 0, len(distinct))
	for _, s := range distinct {
		text := variable
		switch a := real(s); {
		case a > 0:
			text = "(" + variable + " - " + decimal(a, digits) + ")"
		case a < 0:
			text = "(" + variable + " + " + decimal(-a, digits) + ")"
		}
		if b := imag(s); b > 0 {
			text = "(" + text + "^2 + " + decimal(b, digits) + "^2)"
		}
		list = append(list, raised(text, count[s]))
	}
	return list
}

func raised(text string, n int) string {
	if n == 1 {
		return text
	}
	return text + "^" + strconv.Itoa(n)
}

// product writes the factors one behind the other; inside a fraction a sum gets parentheses.
func (f factors) product(inside bool) string {
	if f.sum != "" {
		if !inside && len(f.factors) == 0 {
			return f.sum
		}
		return strings.Join(append([]string{"(" + f.sum + ")"}, f.factors...), " ")
	}
	if len(f.factors) == 0 {
		return f.lead
	}
	body := strings.Join(f.factors, " ")
	if !inside && len(f.factors) == 1 && (f.lead == "" || f.lead == "1") {
		body = bare(body)
	}
	switch f.lead {
	case "", "1":
		return body
	case "-1":
		return "-" + body
	}
	return f.lead + " " + body
}

// bare takes the parentheses from a single sum that stands alone.
func bare(text string) string {
	if inner, ok := strings.CutPrefix(text, "("); ok && strings.HasSuffix(inner, ")") {
		return strings.TrimSuffix(inner, ")")
	}
	return text
}

// below writes the factors as a denominator.
func (f factors) below() string {
	if f.sum != "" {
		return "(" + f.sum + ")"
	}
	text := f.product(true)
	if len(f.factors) == 0 && f.lead[0] != '-' || len(f.factors) == 1 && f.lead == "1" {
		return text
	}
	return "(" + text + ")"
}

// coefficient returns a coefficient, with all its digits if it is beyond the range of float64.
func coefficient(p poly.Poly, power, digits int) string {
	x := p.Coefficient(power)
	if digits != exactly && !math.IsInf(x, 0) && x != 0 {
		return decimal(x, digits)
	}
	c, e := p.Integers()
	if n, exact := floatOf(c[power], e); exact && n == x {
		return decimal(x, exactly)
	}
	return hexadecimalText(c[power], e)
}

// floatOf returns n·2^e and whether it is a float64.
func floatOf(n *big.Int, e int) (float64, bool) {
	p := poly.FromIntegers([]*big.Int{n}, e)
	x := p.Coefficient(0)
	return x, poly.New(x).Equal(p)
}

// exactNumber returns a fraction whose denominator is a power of two with all its digits.
func exactNumber(r *big.Rat) string {
	if x, exact := r.Float64(); exact {
		return decimal(x, exactly)
	}
	return hexadecimalText(r.Num(), 1-r.Denom().BitLen())
}

func hexadecimalText(n *big.Int, e int) string {
	if n.Sign() == 0 {
		return "0"
	}
	shift := n.TrailingZeroBits()
	m := new(big.Int).Abs(n)
	m.Rsh(m, shift)
	sign := ""
	if n.Sign() < 0 {
		sign = "-"
	}
	return fmt.Sprintf("%s0x%xp%+d", sign, m, e+int(shift))
}

// decimal returns x to so many digits; exactly, that is the shortest decimal that reads back as x.
func decimal(x float64, digits int) string {
	if digits == exactly {
		digits = -1
	}
	text := strconv.FormatFloat(x, 'g', digits, 64)
	return strings.Replace(text, "e+", "e", 1)
}
