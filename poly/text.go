package poly

import (
	"fmt"
	"math"
	"math/big"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/polewright/polewright/internal/exact"
)

// maxExponent bounds the binary exponents that [Parse] accepts, so that a short text cannot
// ask for endless memory. Every polynomial of degree up to [MaxDegree] with coefficients of a
// few factors of float64 size is far inside.
const maxExponent = 1 << 20

// A FormatError reports a text, or a JSON value, that is no polynomial.
type FormatError struct {
	Place  string // where: "offset 12", counted in bytes from 0, or "coefficients[2]"
	Reason string // what is wrong there
}

func (e *FormatError) Error() string { return fmt.Sprintf("poly: %s: %s", e.Place, e.Reason) }

// String returns the polynomial as on paper, in s: "s³ + 6s² + 11s + 6". Each coefficient has
// the fewest digits that tell its float64 from others. [Poly.MarshalText] keeps coefficients
// that are no float64.
func (p Poly) String() string { return p.Text("s", 'g', -1) }

// Text returns the polynomial as on paper, in the given variable, with coefficients in the
// format and precision of [strconv.FormatFloat].
func (p Poly) Text(variable string, format byte, precision int) string {
	return p.text(variable, func(power int) string {
		x := p.c[power]
		if x == 0 || math.IsInf(x, 0) {
			// Not zero, but beyond the range of float64.
			integers, exponent := p.integers().Integers()
			f := new(big.Float).SetPrec(53).SetInt(integers[power])
			return f.SetMantExp(f, exponent).Text(format, precision)
		}
		return strconv.FormatFloat(x, format, precision, 64)
	})
}

// text writes the terms with the coefficients as given: signed, and left out where they are "1".
func (p Poly) text(variable string, coefficient func(power int) string) string {
	switch {
	case p.err != nil:
		return "invalid polynomial"
	case len(p.c) == 0:
		return "0"
	}
	var b strings.Builder
	for i := len(p.c) - 1; i >= 0; i-- {
		if p.sign(i) == 0 {
			continue
		}
		c, negative := strings.CutPrefix(coefficient(i), "-")
		switch {
		case b.Len() == 0 && negative:
			b.WriteByte('-')
		case b.Len() > 0 && negative:
			b.WriteString(" - ")
		case b.Len() > 0:
			b.WriteString(" + ")
		}
		if i == 0 {
			b.WriteString(c)
			continue
		}
		if c != "1" {
			b.WriteString(c)
			if strings.ContainsAny(c, "epEP") {
				b.WriteString("·") // 1e-05·s: the digits before the variable are an exponent
			}
		}
		b.WriteString(variable)
		if i > 1 {
			b.WriteString(superscript(i))
		}
	}
	return b.String()
}

const superscripts = "⁰¹²³⁴⁵⁶⁷⁸⁹"

func superscript(n int) string {
	digits := []rune(superscripts)
	var b strings.Builder
	for _, d := range strconv.Itoa(n) {
		b.WriteRune(digits[d-'0'])
	}
	return b.String()
}

// Format implements [fmt.Formatter]: %v and %s write as [Poly.String] does; %e, %f, %g and
// their capitals, or %v with a precision, write each coefficient in that format. A width pads
// the whole, on the right with the flag '-'. %#v writes Go syntax.
func (p Poly) Format(f fmt.State, verb rune) {
	precision, given := f.Precision()
	if !given {
		precision = -1
	}
	var s string
	switch {
	case verb == 'v' && f.Flag('#'):
		c := p.Coefficients()
		arguments := make([]string, len(c))
		for i, x := range c {
			arguments[i] = strconv.FormatFloat(x, 'g', -1, 64)
		}
		s = "poly.New(" + strings.Join(arguments, ", ") + ")"
	case verb == 'v' || verb == 's':
		s = p.Text("s", 'g', precision)
	case strings.ContainsRune("eEfFgG", verb):
		if !given && verb != 'g' && verb != 'G' {
			precision = 6
		}
		if verb == 'F' {
			verb = 'f'
		}
		s = p.Text("s", byte(verb), precision)
	default:
		fmt.Fprintf(f, "%%!%c(poly.Poly=%s)", verb, p.String())
		return
	}
	padding := ""
	if width, ok := f.Width(); ok {
		padding = strings.Repeat(" ", max(0, width-utf8.RuneCountInString(s)))
	}
	if f.Flag('-') {
		s += padding
	} else {
		s = padding + s
	}
	f.Write([]byte(s))
}

// MarshalText writes the polynomial as [Poly.String] does, but a coefficient that is no float64
// in hexadecimal, exactly: what [Parse] reads is the same polynomial. That roots were given is
// not kept; [Poly.MarshalJSON] keeps it. The error is that of an invalid polynomial.
func (p Poly) MarshalText() ([]byte, error) {
	if p.err != nil {
		return nil, p.err
	}
	return []byte(p.text("s", p.exactText)), nil
}

// exactText writes a coefficient without loss: decimal if it is a float64, else hexadecimal.
func (p Poly) exactText(power int) string {
	if p.inexact() {
		integers, e := p.integers().Integers()
		n := integers[power]
		if x, ok := nearest(n, e); !ok || x == 0 && n.Sign() != 0 {
			if zeros := n.TrailingZeroBits(); zeros > 0 {
				n = new(big.Int).Rsh(n, zeros)
				e += int(zeros)
			}
			sign := ""
			if n.Sign() < 0 {
				sign, n = "-", new(big.Int).Neg(n)
			}
			return fmt.Sprintf("%s0x%sp%+d", sign, n.Text(16), e)
		}
	}
	return strconv.FormatFloat(p.c[power], 'g', -1, 64)
}

// UnmarshalText reads what [Parse] reads.
func (p *Poly) UnmarshalText(text []byte) error {
	q, err := Parse(string(text))
	if err != nil {
		return err
	}
	*p = q
	return nil
}

// Parse reads a polynomial as on paper: terms such as "6s²", "6 s^2", "1.5e-3·s", "2*s" or "7",
// in any order, those of equal power added exactly. The variable is any one letter or word. A decimal number means the float64
// nearest to it; a hexadecimal one, such as 0x1.8p-1100, is taken exactly.
//
// The error is a [*FormatError] with the offset of what cannot be read: a number beyond the
// range of float64, or so small that it would become zero, among it.
func Parse(text string) (Poly, error) {
	s := scanner{text: text}
	p, err := s.polynomial()
	if err != nil {
		return invalid(err), err
	}
	return p, nil
}

// A scanner walks through the text of a polynomial.
type scanner struct {
	text     string
	at       int
	variable string
}

func (s *scanner) fail(format string, arguments ...any) error {
	return &FormatError{Place: fmt.Sprintf("offset %d", s.at), Reason: fmt.Sprintf(format, arguments...)}
}

func (s *scanner) space() {
	for s.at < len(s.text) {
		r, size := utf8.DecodeRuneInString(s.text[s.at:])
		if !unicode.IsSpace(r) {
			return
		}
		s.at += size
	}
}

// accept steps over one of the given symbols, longer ones first.
func (s *scanner) accept(symbols ...string) bool {
	for _, symbol := range symbols {
		if strings.HasPrefix(s.text[s.at:], symbol) {
			s.at += len(symbol)
			return true
		}
	}
	return false
}

func (s *scanner) polynomial() (Poly, error) {
	var terms [MaxDegree + 1]Poly // constants
	highest := -1
	for first := true; ; first = false {
		s.space()
		if s.at == len(s.text) && !first {
			break
		}
		negative := false
		switch {
		case s.accept("-", "−"):
			negative = true
		case s.accept("+"), first:
		default:
			return Poly{}, s.fail("expected + or -")
		}
		s.space()
		c, power, err := s.term()
		if err != nil {
			return Poly{}, err
		}
		if negative {
			c = c.Scale(-1)
		}
		terms[power] = terms[power].Add(c)
		highest = max(highest, power)
	}
	p, ok := joinConstants(terms[:highest+1])
	if !ok {
		return Poly{}, s.fail("the coefficients are too far apart in size")
	}
	return p, nil
}

// joinedBits bounds the memory for coefficients that have to share an exponent: 32 MB.
const joinedBits = 1 << 28

// joinConstants returns the polynomial with the given coefficients, by power; it is not ok if
// that would take too much memory.
func joinConstants(coefficients []Poly) (Poly, bool) {
	common, found := 0, false
	parts := make([]exact.Poly, len(coefficients))
	for i, c := range coefficients {
		parts[i] = c.integers()
		if _, e := parts[i].Integers(); !parts[i].IsZero() && (!found || e < common) {
			common, found = e, true
		}
	}
	joined, bits := make([]*big.Int, len(parts)), 0
	for i, part := range parts {
		joined[i] = new(big.Int)
		if integers, e := part.Integers(); len(integers) > 0 {
			if bits += e - common; bits > joinedBits {
				return Poly{}, false
			}
			joined[i].Lsh(integers[0], uint(e-common))
		}
	}
	return fromInteger(exact.New(joined, common)), true
}

// term reads a number, a power of the variable, or both.
func (s *scanner) term() (c Poly, power int, err error) {
	c = New(1)
	number := false
	if s.at < len(s.text) && (s.text[s.at] >= '0' && s.text[s.at] <= '9' || s.text[s.at] == '.') {
		if c, err = s.number(); err != nil {
			return Poly{}, 0, err
		}
		number = true
	}
	s.space()
	product := number && s.accept("·", "*", "⋅", "×")
	if product {
		s.space()
	}
	start := s.at
	for s.at < len(s.text) {
		r, size := utf8.DecodeRuneInString(s.text[s.at:])
		if !unicode.IsLetter(r) {
			break
		}
		s.at += size
	}
	name := s.text[start:s.at]
	switch {
	case name == "" && product:
		return Poly{}, 0, s.fail("expected the variable")
	case name == "" && !number:
		return Poly{}, 0, s.fail("expected a number or the variable")
	case name == "":
		return c, 0, nil
	case s.variable == "":
		s.variable = name
	case s.variable != name:
		s.at = start
		return Poly{}, 0, s.fail("variable %q after %q", name, s.variable)
	}
	power, err = s.power()
	return c, power, err
}

// power reads what stands behind the variable: nothing, superscripts, or "^3".
func (s *scanner) power() (int, error) {
	start := s.at
	n, digits := 0, 0
	next := func(d int) {
		n = min(10*n+d, MaxDegree+1)
		digits++
	}
	s.space()
	if s.accept("^") {
		s.space()
		for ; s.at < len(s.text) && s.text[s.at] >= '0' && s.text[s.at] <= '9'; s.at++ {
			next(int(s.text[s.at] - '0'))
		}
		if digits == 0 {
			return 0, s.fail("expected a power that is a whole number")
		}
	} else {
		s.at = start
		for s.at < len(s.text) {
			r, size := utf8.DecodeRuneInString(s.text[s.at:])
			d := strings.IndexRune(superscripts, r)
			if r == utf8.RuneError || d < 0 {
				break
			}
			s.at += size
			next(utf8.RuneCountInString(superscripts[:d]))
		}
		if digits == 0 {
			return 1, nil
		}
	}
	if n > MaxDegree {
		s.at = start
		return 0, s.fail("a power above %d", MaxDegree)
	}
	return n, nil
}

// number reads an unsigned number.
func (s *scanner) number() (Poly, error) {
	rest := s.text[s.at:]
	if strings.HasPrefix(rest, "0x") || strings.HasPrefix(rest, "0X") {
		n := 2
		for n < len(rest) && strings.IndexByte("0123456789abcdefABCDEF._", rest[n]) >= 0 {
			n++
		}
		n = exponentEnd(rest, n, "pP")
		c, reason := parseExact(rest[:n])
		if reason != "" {
			return Poly{}, s.fail("%s", reason)
		}
		s.at += n
		return c, nil
	}
	n := 0
	for n < len(rest) && (rest[n] >= '0' && rest[n] <= '9' || rest[n] == '.') {
		n++
	}
	n = exponentEnd(rest, n, "eE")
	x, reason := parseDecimal(rest[:n])
	if reason != "" {
		return Poly{}, s.fail("%s", reason)
	}
	s.at += n
	return New(x), nil
}

// exponentEnd returns where the exponent ends that starts at n, or n if none does.
func exponentEnd(text string, n int, mark string) int {
	end := n
	if end < len(text) && strings.IndexByte(mark, text[end]) >= 0 {
		end++
		if end < len(text) && (text[end] == '+' || text[end] == '-') {
			end++
		}
		digits := end
		for end < len(text) && text[end] >= '0' && text[end] <= '9' {
			end++
		}
		if end > digits {
			return end
		}
	}
	return n
}

// parseDecimal returns the float64 nearest to a decimal number, or the reason why there is none.
func parseDecimal(text string) (x float64, reason string) {
	x, err := strconv.ParseFloat(text, 64)
	switch {
	case err != nil && math.IsInf(x, 0):
		return 0, fmt.Sprintf("%s is beyond the range of float64", text)
	case err != nil:
		return 0, fmt.Sprintf("%q is no number", text)
	case x == 0 && strings.ContainsAny(strings.FieldsFunc(text, func(r rune) bool { return r == 'e' || r == 'E' })[0], "123456789"):
		return 0, fmt.Sprintf("%s is not zero, but too small for float64", text)
	}
	return x, ""
}

// parseExact returns the constant that a hexadecimal number with a binary exponent means.
func parseExact(text string) (c Poly, reason string) {
	unsigned := strings.TrimPrefix(text, "-")
	if !strings.HasPrefix(unsigned, "0x") && !strings.HasPrefix(unsigned, "0X") || strings.Contains(text, "_") {
		return Poly{}, fmt.Sprintf("%q is no hexadecimal number", text)
	}
	if i := strings.LastIndexAny(unsigned, "pP"); i >= 0 {
		if e, err := strconv.Atoi(unsigned[i+1:]); err != nil || e > maxExponent || e < -maxExponent {
			return Poly{}, fmt.Sprintf("%q has no exponent up to ±%d", text, maxExponent)
		}
	}
	// Four bits a digit hold the mantissa without rounding.
	f, _, err := big.ParseFloat(text, 0, uint(4*len(text)), big.ToNearestEven)
	if err != nil || f.IsInf() {
		return Poly{}, fmt.Sprintf("%q is no hexadecimal number", text)
	}
	if f.Sign() == 0 {
		return Poly{}, ""
	}
	e := f.MantExp(nil) - int(f.MinPrec())
	n, _ := new(big.Float).SetMantExp(f, -e).Int(nil)
	return fromInteger(exact.New([]*big.Int{n}, e)), ""
}
