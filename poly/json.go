package poly

import (
	"bytes"
	"encoding/json"
	"fmt"
	"strconv"

	"github.com/polewright/polewright/internal/exact"
)

// MarshalJSON writes the coefficients, highest power first, as an array: [1,6,11,6]. A
// coefficient that is no float64 is a string that holds it exactly, in hexadecimal. A polynomial
// that remembers its roots is an object with the fields "coefficients" and "roots", the latter
// an array of numbers, or of pairs [re, im]. What [Poly.UnmarshalJSON] reads is the same
// polynomial. The error is that of an invalid polynomial.
func (p Poly) MarshalJSON() ([]byte, error) {
	if p.err != nil {
		return nil, p.err
	}
	var b bytes.Buffer
	roots, given := p.GivenRoots()
	given = given && len(roots) > 0
	if given {
		b.WriteString(`{"coefficients":`)
	}
	b.WriteByte('[')
	for i := len(p.c) - 1; i >= 0; i-- {
		if text := p.exactText(i); isHexadecimal(text) {
			b.WriteString(strconv.Quote(text))
		} else {
			b.WriteString(text)
		}
		if i > 0 {
			b.WriteByte(',')
		}
	}
	b.WriteByte(']')
	if given {
		b.WriteString(`,"roots":[`)
		for i, s := range roots {
			if i > 0 {
				b.WriteByte(',')
			}
			if imag(s) == 0 {
				b.WriteString(shortest(real(s)))
			} else {
				fmt.Fprintf(&b, "[%s,%s]", shortest(real(s)), shortest(imag(s)))
			}
		}
		b.WriteString("]}")
	}
	return b.Bytes(), nil
}

func shortest(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }

func isHexadecimal(text string) bool {
	return len(text) > 2 && (text[1] == 'x' || text[2] == 'x')
}

// UnmarshalJSON reads what [Poly.MarshalJSON] writes, and a string as [Parse] reads it. null
// leaves the polynomial as it is. A number means the float64 nearest to it. The error is
// a [*FormatError] that names the place: for an unknown or repeated field, a number beyond
// float64 or too small for it, more than [MaxDegree]+1 coefficients, and roots that are not
// those of the coefficients, among others.
func (p *Poly) UnmarshalJSON(data []byte) error {
	data = bytes.TrimSpace(data)
	if string(data) == "null" {
		return nil
	}
	q, err := fromJSON(data)
	if err != nil {
		return err
	}
	*p = q
	return nil
}

func fromJSON(data []byte) (Poly, error) {
	if len(data) == 0 {
		return Poly{}, &FormatError{Place: "JSON", Reason: "it is empty"}
	}
	switch data[0] {
	case '"':
		var text string
		if err := json.Unmarshal(data, &text); err != nil {
			return Poly{}, &FormatError{Place: "JSON", Reason: err.Error()}
		}
		return Parse(text)
	case '[':
		return coefficientsFromJSON("coefficients", data)
	case '{':
	default:
		return Poly{}, &FormatError{Place: "JSON", Reason: "a polynomial is an array, an object or a string"}
	}
	decoder := json.NewDecoder(bytes.NewReader(data))
	if _, err := decoder.Token(); err != nil {
		return Poly{}, &FormatError{Place: "JSON", Reason: err.Error()}
	}
	fields := map[string]json.RawMessage{}
	for decoder.More() {
		key, err := decoder.Token()
		if err != nil {
			return Poly{}, &FormatError{Place: "JSON", Reason: err.Error()}
		}
		name, _ := key.(string)
		if name != "coefficients" && name != "roots" {
			return Poly{}, &FormatError{Place: fmt.Sprintf("field %q", name), Reason: `unknown; the fields are "coefficients" and "roots"`}
		}
		if _, twice := fields[name]; twice {
			return Poly{}, &FormatError{Place: name, Reason: "the field comes twice"}
		}
		var value json.RawMessage
		if err := decoder.Decode(&value); err != nil {
			return Poly{}, &FormatError{Place: name, Reason: err.Error()}
		}
		fields[name] = value
	}
	coefficients, ok := fields["coefficients"]
	if !ok {
		return Poly{}, &FormatError{Place: "coefficients", Reason: "the field is missing"}
	}
	p, err := coefficientsFromJSON("coefficients", coefficients)
	if err != nil {
		return Poly{}, err
	}
	if roots, ok := fields["roots"]; ok {
		return rememberRoots(p, roots)
	}
	return p, nil
}

// coefficientsFromJSON reads an array of numbers and of strings with hexadecimal numbers.
func coefficientsFromJSON(place string, data []byte) (Poly, error) {
	var values []json.RawMessage
	if err := json.Unmarshal(data, &values); err != nil || values == nil {
		return Poly{}, &FormatError{Place: place, Reason: "expected an array of coefficients, highest power first"}
	}
	if len(values) > MaxDegree+1 {
		return Poly{}, &FormatError{Place: place, Reason: fmt.Sprintf("%d coefficients; at most %d", len(values), MaxDegree+1)}
	}
	parts := make([]Poly, len(values))
	for i, value := range values {
		c, reason := coefficientFromJSON(value)
		if reason != "" {
			return Poly{}, &FormatError{Place: fmt.Sprintf("%s[%d]", place, i), Reason: reason}
		}
		parts[len(values)-1-i] = c
	}
	p, ok := joinConstants(parts)
	if !ok {
		return Poly{}, &FormatError{Place: place, Reason: "they are too far apart in size"}
	}
	return p, nil
}

func coefficientFromJSON(value json.RawMessage) (c Poly, reason string) {
	switch {
	case value[0] == '"':
		var text string
		if err := json.Unmarshal(value, &text); err != nil {
			return Poly{}, err.Error()
		}
		return parseExact(text)
	case value[0] == '-' || value[0] >= '0' && value[0] <= '9':
		x, reason := parseDecimal(string(value))
		return New(x), reason
	}
	return Poly{}, fmt.Sprintf("%s is no number", value)
}

// rememberRoots returns p with its given roots, if they are its roots.
func rememberRoots(p Poly, data []byte) (Poly, error) {
	var values []json.RawMessage
	if err := json.Unmarshal(data, &values); err != nil || values == nil {
		return Poly{}, &FormatError{Place: "roots", Reason: "expected an array of numbers and pairs [re, im]"}
	}
	if len(values) != p.Degree() {
		return Poly{}, &FormatError{Place: "roots", Reason: fmt.Sprintf("%d roots of a polynomial of degree %d", len(values), p.Degree())}
	}
	roots := make([]complex128, len(values))
	for i, value := range values {
		parts := []json.RawMessage{value}
		if value[0] == '[' {
			if err := json.Unmarshal(value, &parts); err != nil || len(parts) != 2 {
				return Poly{}, &FormatError{Place: fmt.Sprintf("roots[%d]", i), Reason: "expected a number or a pair [re, im]"}
			}
		}
		var x [2]float64
		for j, part := range parts {
			reason := fmt.Sprintf("%s is no number", part)
			if part[0] == '-' || part[0] >= '0' && part[0] <= '9' {
				x[j], reason = parseDecimal(string(part))
			}
			if reason != "" {
				return Poly{}, &FormatError{Place: fmt.Sprintf("roots[%d]", i), Reason: reason}
			}
		}
		roots[i] = complex(x[0], x[1])
	}
	// The lead need be no float64, so that it is multiplied on afterwards.
	monic, err := FromRoots(1, roots...)
	if err != nil {
		return Poly{}, &FormatError{Place: "roots", Reason: err.Error()}
	}
	n := len(p.c) - 1
	lead := constant(p.integers(), n)
	product := monic.Mul(lead)
	if !product.Equal(p) {
		return Poly{}, &FormatError{Place: "roots", Reason: "they are not the roots of the coefficients"}
	}
	p.given = monic.given
	return p, nil
}

// constant returns a coefficient as a polynomial of degree 0.
func constant(x exact.Poly, power int) Poly {
	integers, exponent := x.Integers()
	return fromInteger(exact.New(integers[power:power+1], exponent))
}
