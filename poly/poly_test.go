package poly

import (
	"errors"
	"math"
	"math/big"
	"testing"

	"github.com/google/go-cmp/cmp"
)

func TestArithmeticIsExact(t *testing.T) {
	a, b := New(0.1, 0.3, 1e-300), New(0.7, 1e17, 3)
	product := a.Mul(b)
	// Rational arithmetic of the standard library is the judge.
	for k := 0; k <= 4; k++ {
		want := new(big.Rat)
		for i := 0; i <= 2; i++ {
			if j := k - i; j >= 0 && j <= 2 {
				x, y := new(big.Rat).SetFloat64(a.Coefficient(i)), new(big.Rat).SetFloat64(b.Coefficient(j))
				want.Add(want, x.Mul(x, y))
			}
		}
		if got := exactCoefficient(product, k); got.Cmp(want) != 0 {
			t.Errorf("s^%d: got %v, want %v", k, got, want)
		}
		if f, _ := want.Float64(); product.Coefficient(k) != f {
			t.Errorf("s^%d: rounded to %v, want %v", k, product.Coefficient(k), f)
		}
	}
	if got := product.Sub(b.Mul(a)); got.Degree() != -1 {
		t.Errorf("a·b - b·a = %v", got)
	}
	if got := a.Add(b).Sub(b); !got.Equal(a) {
		t.Errorf("(a + b) - b = %v", got)
	}
	if diff := cmp.Diff(a.Scale(0.3).Mul(b), b.Scale(0.3).Mul(a)); diff != "" {
		t.Error(diff)
	}
	if got := New(1e-300, 1).Mul(New(1e-300, 1)).Degree(); got != 2 {
		t.Errorf("a leading coefficient of 1e-600 is none: degree %d", got)
	}
	if got := New(1e300, 1).Mul(New(1e300, 1)); got.Err() != nil || !math.IsInf(got.Coefficient(2), 1) {
		t.Errorf("a coefficient of 1e600: %v, %v", got.Coefficient(2), got.Err())
	}
	if got := New(0.1, 0.3, 5).Derivative(); exactCoefficient(got, 1).Cmp(new(big.Rat).SetFloat64(0.2)) != 0 {
		t.Errorf("derivative: %v", got)
	}
}

func exactCoefficient(p Poly, power int) *big.Rat {
	n, e := p.Integers()
	r := new(big.Rat).SetInt(n[power])
	scale := new(big.Int).Lsh(big.NewInt(1), uint(max(e, -e)))
	if e < 0 {
		return r.Quo(r, new(big.Rat).SetInt(scale))
	}
	return r.Mul(r, new(big.Rat).SetInt(scale))
}

func TestIntegersRoundTrip(t *testing.T) {
	for _, p := range []Poly{{}, New(3), New(0.1, 5e-324, -7e300), New(0.1, 3).Mul(New(0.7, 1e-30))} {
		if q := FromIntegers(p.Integers()); !q.Equal(p) {
			t.Errorf("%v became %v", p, q)
		}
	}
}

func TestInvalid(t *testing.T) {
	p := New(1, math.NaN(), 2)
	if p.Degree() != 2 || !math.IsNaN(p.Coefficient(1)) {
		t.Errorf("does not keep what it was given: %v", p)
	}
	for name, q := range map[string]Poly{
		"NaN": p, "infinite": New(math.Inf(1), 1), "sum": p.Add(New(1)), "difference": New(1).Sub(p), "product": New(1, 1).Mul(p),
		"zero times": New().Mul(p), "multiple": p.Scale(2), "NaN times": New(1, 1).Scale(math.NaN()), "derivative": p.Derivative(),
	} {
		var argument *ArgumentError
		if _, err := q.Roots(); !errors.As(err, &argument) {
			t.Errorf("%s: Roots gives the error %v", name, err)
		}
		if q.Err() == nil || !math.IsNaN(q.At(1)) || !math.IsNaN(real(q.AtComplex(1i))) {
			t.Errorf("%s: not seen as invalid", name)
		}
	}
	var argument *ArgumentError
	if _, err := New().Roots(); !errors.As(err, &argument) {
		t.Errorf("zero polynomial: %v", err)
	}
}

func TestFromRoots(t *testing.T) {
	p, err := FromRoots(2.5, -1, complex(-0.1, 3), -1, complex(-0.1, -3), 1e-9)
	if err != nil {
		t.Fatal(err)
	}
	want := []Root{
		{Value: -1, Multiplicity: 2, Distinct: 1}, {Value: complex(-0.1, -3), Multiplicity: 1, Distinct: 1},
		{Value: complex(-0.1, 3), Multiplicity: 1, Distinct: 1}, {Value: 1e-9, Multiplicity: 1, Distinct: 1},
	}
	for name, q := range map[string]Poly{"itself": p, "scaled": p.Scale(-1e-3)} {
		got, err := q.Roots()
		if err != nil || cmp.Diff(want, got) != "" {
			t.Errorf("%s: %v %s", name, err, cmp.Diff(want, got))
		}
	}
	q, _ := FromRoots(1, 1e-9, 7)
	got, err := p.Mul(q).Roots()
	if err != nil || len(got) != 5 || got[3] != (Root{Value: 1e-9, Multiplicity: 2, Distinct: 1}) || got[4].Value != 7 || got[4].Radius != 0 {
		t.Errorf("product: %v %v", got, err)
	}
	for name, call := range map[string]func() (Poly, error){
		"not closed": func() (Poly, error) { return FromRoots(1, 1i) }, "NaN": func() (Poly, error) { return FromRoots(1, complex(0, math.NaN())) },
		"no lead": func() (Poly, error) { return FromRoots(0, 1) }, "unequal": func() (Poly, error) { return FromRoots(1, 1i, 1i, -1i) },
	} {
		var argument *ArgumentError
		if _, err := call(); !errors.As(err, &argument) {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func TestRootsRange(t *testing.T) {
	for name, p := range map[string]Poly{
		"too large": New(1e-300, 1e300).Mul(New(1, 1)), "too small": New(1e300, 1e-300),
	} {
		var out *RangeError
		if roots, err := p.Roots(); !errors.As(err, &out) {
			t.Errorf("%s: %v %v", name, roots, err)
		}
	}
}

func TestEvaluation(t *testing.T) {
	p := New(1, -3, 3, -1) // (s-1)³
	x := 1 + 0x1p-30
	if got, want := p.At(x), 0x1p-90; got != want {
		t.Errorf("At: %g, want %g", got, want)
	}
	if got, want := p.AtComplex(complex(1, 0x1p-30)), complex(0, -0x1p-90); got != want {
		t.Errorf("AtComplex: %g, want %g", got, want)
	}
	if got := New(-2, 1, 5).At(math.Inf(-1)); !math.IsInf(got, -1) {
		t.Errorf("at -∞: %g", got)
	}
	if got := New(2, 0, 5).AtComplex(2i); got != -3 {
		t.Errorf("at 2j: %v", got)
	}
}
