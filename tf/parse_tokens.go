package tf

import (
	"math"
	"math/big"
	"strconv"
	"strings"
	"unicode"

	"github.com/polewright/polewright/poly"
)

type tokenKind int

const (
	endToken tokenKind = iota
	numberToken
	variableToken
	expToken
	periodToken
	deadToken
	timeToken
	plusToken
	minusToken
	timesToken
	overToken
	powerToken
	openToken
	closeToken
	commaToken
)

type token struct {
	kind   tokenKind
	column int
	text   string
	value  poly.Poly // of a number
}

var signs = map[rune]tokenKind{
	'+': plusToken, '-': minusToken, '−': minusToken, '*': timesToken, '·': timesToken, '×': timesToken,
	'/': overToken, '^': powerToken, '(': openToken, ')': closeToken, ',': commaToken,
}

var words = map[string]tokenKind{
	"s": variableToken, "z": variableToken, "exp": expToken, "period": periodToken, "dead": deadToken, "time": timeToken,
}

// scan splits the text into tokens.
func (p *parser) scan(text string) error {
	runes := []rune(text)
	for i := 0; i < len(runes); {
		r := runes[i]
		t := token{column: i + 1, text: string(r)}
		switch {
		case unicode.IsSpace(r):
			i++
			continue
		case r >= '0' && r <= '9' || r == '.':
			n := numberLength(runes[i:])
			t.kind, t.text = numberToken, string(runes[i:i+n])
			var reason string
			if t.value, reason = constant(t.text); reason != "" {
				return t.wrong("%s", reason)
			}
			i += n
		case unicode.IsLetter(r):
			n := i
			for n < len(runes) && unicode.IsLetter(runes[n]) {
				n++
			}
			t.text = string(runes[i:n])
			kind, ok := words[t.text]
			if !ok {
				return t.wrong(operand)
			}
			t.kind = kind
			i = n
		default:
			kind, ok := signs[r]
			if !ok {
				return t.wrong(operand)
			}
			t.kind = kind
			i++
		}
		p.tokens = append(p.tokens, t)
	}
	p.tokens = append(p.tokens, token{column: len(runes) + 1})
	return nil
}

// numberLength returns how many characters belong to the number that begins the text.
func numberLength(text []rune) int {
	i := 0
	run := func(in string) {
		for i < len(text) && strings.ContainsRune(in, text[i]) {
			i++
		}
	}
	digits, exponent := "0123456789", "eE"
	if len(text) > 1 && text[0] == '0' && (text[1] == 'x' || text[1] == 'X') {
		i, digits, exponent = 2, "0123456789abcdefABCDEF", "pP"
	}
	run(digits)
	if i < len(text) && text[i] == '.' {
		i++
		run(digits)
	}
	if i < len(text) && strings.ContainsRune(exponent, text[i]) {
		before := i
		i++
		if i < len(text) && (text[i] == '+' || text[i] == '-') {
			i++
		}
		start := i
		run("0123456789")
		if i == start { // 3exp(-s): the e belongs to what follows
			i = before
		}
	}
	return i
}

// constant returns the value of a number as a constant, or what is wrong with it.
func constant(text string) (poly.Poly, string) {
	if len(text) > 1 && (text[1] == 'x' || text[1] == 'X') {
		return hexadecimal(text)
	}
	x, err := strconv.ParseFloat(text, 64)
	switch {
	case math.IsInf(x, 0):
		return poly.Poly{}, "the number is beyond the range of float64"
	case err != nil:
		return poly.Poly{}, "expected a number"
	case x == 0 && strings.ContainsAny(mantissa(text), "123456789"):
		return poly.Poly{}, "the number is below the range of float64"
	}
	return poly.New(x), ""
}

func mantissa(text string) string {
	if i := strings.IndexAny(text, "eE"); i >= 0 {
		return text[:i]
	}
	return text
}

// hexadecimal returns the exact value of 0xh.hhhp±d.
func hexadecimal(text string) (poly.Poly, string) {
	const wrong = "expected a hexadecimal number such as 0x1.8p-3"
	body, power, _ := strings.Cut(strings.ToLower(text[2:]), "p")
	whole, fraction, _ := strings.Cut(body, ".")
	n, ok := new(big.Int).SetString(whole+fraction, 16)
	if !ok || len(body) > maxBits/4 {
		return poly.Poly{}, wrong
	}
	e := 0
	if power != "" {
		var err error
		if e, err = strconv.Atoi(power); err != nil || abs(e) > maxBits {
			return poly.Poly{}, wrong
		}
	}
	return poly.FromIntegers([]*big.Int{n}, e-4*len(fraction)), ""
}
