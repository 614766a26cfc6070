package poly

import (
	"errors"
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// rationals returns the exact coefficients by power: the judge of everything here.
func rationals(p Poly) []*big.Rat {
	c := make([]*big.Rat, p.Degree()+1)
	for i := range c {
		c[i] = exactCoefficient(p, i)
	}
	return c
}

// longDivision divides as on paper, with fractions.
func longDivision(p, q []*big.Rat) (quotient, remainder []*big.Rat) {
	r := make([]*big.Rat, len(p))
	for i, x := range p {
		r[i] = new(big.Rat).Set(x)
	}
	n := len(q) - 1
	quotient = make([]*big.Rat, max(len(p)-n, 0))
	for k := len(p) - 1 - n; k >= 0; k-- {
		quotient[k] = new(big.Rat).Quo(r[n+k], q[n])
		for j := range q {
			r[k+j].Sub(r[k+j], new(big.Rat).Mul(quotient[k], q[j]))
		}
	}
	return quotient, r[:min(n, len(r))]
}

func allZero(c []*big.Rat) bool {
	for _, x := range c {
		if x.Sign() != 0 {
			return false
		}
	}
	return true
}

// isDyadic tells whether x is a whole number times a power of two.
func isDyadic(x *big.Rat) bool {
	d := x.Denom()
	return d.BitLen() == int(d.TrailingZeroBits())+1
}

func TestDivide(t *testing.T) {
	r := rand.New(rand.NewPCG(21, 1))
	exactly := 0
	for range 600 {
		p, q := drawPoly(r), drawPoly(r)
		switch r.IntN(3) {
		case 0:
			p = p.Mul(q)
		case 1:
			c := make([]float64, 1+r.IntN(5))
			for i := range c {
				c[i] = float64(r.IntN(7) - 3)
			}
			q = New(c...)
		}
		if q.Degree() < 0 {
			continue
		}
		d, err := p.Divide(q)
		if err != nil {
			t.Fatal(err)
		}
		checkDivision(t, p, q, d)
		if d.Exact {
			exactly++
		}
	}
	if exactly < 100 {
		t.Errorf("only %d divisions were exact", exactly)
	}
	d, err := New(1, 3, 3, 1).Divide(New(1, 1))
	if err != nil || !d.Exact || !d.Quotient.Equal(New(1, 2, 1)) || !d.Remainder.Equal(Poly{}) {
		t.Errorf("(s+1)³/(s+1) = %+v, %v", d, err)
	}
	d, err = New(1, 0, 1).Divide(New(3, 0))
	if err != nil || d.Exact || !d.Quotient.Equal(New(1.0/3, 0)) || !d.Remainder.Equal(New(1)) {
		t.Errorf("(s²+1)/(3s) = %+v, %v", d, err)
	}
	var argument *ArgumentError
	for _, bad := range [][2]Poly{{New(1), {}}, {New(math.NaN()), New(1)}, {New(1), New(math.NaN())}} {
		if _, err := bad[0].Divide(bad[1]); !errors.As(err, &argument) {
			t.Errorf("%v: %v, want an ArgumentError", bad, err)
		}
	}
}

func checkDivision(t *testing.T, p, q Poly, d Division) {
	t.Helper()
	quotient, remainder := longDivision(rationals(p), rationals(q))
	dyadic := true
	for _, part := range []struct {
		got  Poly
		want []*big.Rat
	}{{d.Quotient, quotient}, {d.Remainder, remainder}} {
		for _, w := range part.want {
			dyadic = dyadic && isDyadic(w)
		}
	}
	if d.Exact != dyadic {
		t.Fatalf("%v / %v: Exact is %v", p, q, d.Exact)
	}
	for _, part := range []struct {
		got  Poly
		want []*big.Rat
	}{{d.Quotient, quotient}, {d.Remainder, remainder}} {
		if part.got.Err() != nil {
			return // beyond the range
		}
		for i, w := range part.want {
			f, _ := w.Float64()
			if part.got.Coefficient(i) != f {
				t.Fatalf("%v / %v: coefficient of s^%d is %v, want %v", p, q, i, part.got.Coefficient(i), f)
			}
			if d.Exact && i <= part.got.Degree() && exactCoefficient(part.got, i).Cmp(w) != 0 {
				t.Fatalf("%v / %v: coefficient of s^%d is not exact", p, q, i)
			}
		}
		if part.got.Degree() >= len(part.want) {
			t.Fatalf("%v / %v: degree %d, want at most %d", p, q, part.got.Degree(), len(part.want)-1)
		}
	}
}

func TestPower(t *testing.T) {
	p, want := New(0.1, -3, 1e-20), New(1)
	for n := range 8 {
		if got := p.Power(n); !got.Equal(want) {
			t.Errorf("power %d: %v, want %v", n, got, want)
		}
		want = want.Mul(p)
	}
	if got := (Poly{}).Power(0); !got.Equal(New(1)) {
		t.Errorf("0⁰ = %v", got)
	}
	if got := (Poly{}).Power(3); got.Degree() != -1 || got.Err() != nil {
		t.Errorf("0³ = %v", got)
	}
	rooted, _ := FromRoots(2, -1, -1)
	if roots, ok := rooted.Power(3).GivenRoots(); !ok || len(roots) != 6 {
		t.Errorf("given roots of a power: %v, %v", roots, ok)
	}
	var argument *ArgumentError
	for _, bad := range []Poly{p.Power(-1), p.Power(MaxDegree), New(2).Power(MaxDegree + 1), New(math.NaN()).Power(2), New(math.NaN()).Power(0)} {
		if !errors.As(bad.Err(), &argument) {
			t.Errorf("%v: want an ArgumentError", bad.Err())
		}
	}
}

func TestAffine(t *testing.T) {
	r := rand.New(rand.NewPCG(22, 1))
	for range 300 {
		p := drawPoly(r)
		a, b := math.Ldexp(r.NormFloat64(), r.IntN(40)-20), r.NormFloat64()
		if r.IntN(4) == 0 {
			a = 0
		}
		q := p.Affine(a, b)
		// By powers of the inner polynomial.
		want := Poly{}
		for i := range p.Degree() + 1 {
			c, e := p.Integers()
			want = want.Add(FromIntegers(c[i:i+1], e).Mul(New(a, b).Power(i)))
		}
		if !q.Equal(want) {
			t.Fatalf("%v at %v·s + %v: %v, want %v", p, a, b, q, want)
		}
	}
	rooted, _ := FromRoots(3, -1, -3+4i, -3-4i, -2, -2)
	for _, test := range []struct {
		p    Poly
		want []complex128
	}{
		{rooted.Shift(-1), []complex128{0, -2 + 4i, -2 - 4i, -1, -1}},
		{rooted.Stretch(-2), []complex128{0.5, 1.5 - 2i, 1.5 + 2i, 1, 1}},
		{rooted.Shift(0.1), nil},
		{rooted.Stretch(3), nil},
	} {
		roots, ok := test.p.GivenRoots()
		if ok != (test.want != nil) || ok && cmp.Diff(test.want, roots) != "" {
			t.Errorf("given roots %v, %v; want %v", roots, ok, test.want)
		}
		if ok {
			again, err := FromRoots(test.p.Coefficient(5), roots...)
			if err != nil || !again.Equal(test.p) {
				t.Errorf("the given roots are those of %v, %v; not of %v", again, err, test.p)
			}
		}
	}
	var argument *ArgumentError
	for _, bad := range []Poly{rooted.Affine(math.NaN(), 0), rooted.Shift(math.Inf(1)), New(math.NaN()).Stretch(2)} {
		if !errors.As(bad.Err(), &argument) {
			t.Errorf("%v: want an ArgumentError", bad.Err())
		}
	}
}

func TestReverse(t *testing.T) {
	if got := New(1, 2, 3, 0, 0).Reverse(); !got.Equal(New(3, 2, 1)) {
		t.Errorf("got %v", got)
	}
	if got := (Poly{}).Reverse(); got.Degree() != -1 {
		t.Errorf("got %v", got)
	}
	p := New(0.1, 1).Mul(New(0.1, -7))
	if got := p.Reverse().Reverse(); !got.Equal(p) {
		t.Errorf("got %v, want %v", got, p)
	}
}

func TestSquareFree(t *testing.T) {
	a, b, c := New(1, 1), New(1, 0.1, 2), New(1, -0.3)
	p := New(-7).Mul(a.Power(3)).Mul(b.Power(2)).Mul(c)
	want := []Factor{{c, 1}, {b, 2}, {a, 3}}
	if diff := cmp.Diff(want, p.SquareFree()); diff != "" {
		// A leading coefficient in [1, 2) need not be 1: compare what the factors are.
		for i, f := range p.SquareFree() {
			if d, err := f.Poly.Divide(want[i].Poly); err != nil || d.Quotient.Degree() != 0 || d.Remainder.Degree() >= 0 || f.Multiplicity != want[i].Multiplicity {
				t.Error(diff)
			}
		}
	}
	if got, err := p.SquareFreePart().Divide(a.Mul(b).Mul(c)); err != nil || got.Remainder.Degree() >= 0 || got.Quotient.Degree() != 0 {
		t.Errorf("square-free part %v", p.SquareFreePart())
	}
	rooted, _ := FromRoots(2, -1, -1, 3)
	if roots, ok := rooted.SquareFreePart().GivenRoots(); !ok || len(roots) != 2 {
		t.Errorf("given roots %v, %v", roots, ok)
	}
	if New(5).SquareFree() != nil || (Poly{}).SquareFree() != nil || New(math.NaN()).SquareFree() != nil {
		t.Error("factors of a constant")
	}
	if !New(5).SquareFreePart().Equal(New(1)) || (Poly{}).SquareFreePart().Degree() != -1 || New(math.NaN()).SquareFreePart().Err() == nil {
		t.Error("square-free part of a constant")
	}
}

func TestCommonFactor(t *testing.T) {
	a, b := New(1, 1), New(1, 0.5, 4)
	p, q := a.Mul(b).Mul(New(1, 7)), b.Mul(New(1, 3))
	tests := []struct {
		name      string
		p, q      Poly
		tolerance float64
		want      Poly
	}{
		{"exact", p, q, 0, b},
		{"nothing in common", a, New(1, 3), 0, New(1)},
		{"nearly, but exact is asked for", New(1, 1), New(1, 1+1e-9), 0, New(1)},
		{"nearly", New(1, 4, 3), New(1, 1+1e-9), 1e-6, New(1, 1)},
		{"not near enough", New(1, 4, 3), New(1, 1.1), 1e-6, New(1)},
		{"a double root and a simple one", New(1, 2, 1), New(1, 1), 1e-6, New(1, 1)},
		{"a pair", New(1, 2, 5).Mul(New(1, 9)), New(1, 2, 5+1e-9), 1e-6, New(1, 2, 5)},
		{"the origin", New(1, 1, 0), New(1, 0, 0), 1e-6, New(1, 0)},
		{"zero and another", Poly{}, q, 0, q},
		{"another and zero", p, Poly{}, 0.1, p},
	}
	for _, test := range tests {
		got, err := test.p.CommonFactor(test.q, test.tolerance)
		if err != nil || !got.Equal(test.want) {
			t.Errorf("%s: %v, %v; want %v", test.name, got, err, test.want)
		}
	}
	var argument *ArgumentError
	for _, bad := range []struct {
		p, q      Poly
		tolerance float64
	}{{Poly{}, Poly{}, 0}, {p, q, -1}, {p, q, 1}, {p, q, math.NaN()}, {New(math.NaN()), q, 0}, {p, New(math.NaN()), 0}} {
		if got, err := bad.p.CommonFactor(bad.q, bad.tolerance); !errors.As(err, &argument) || got.Err() == nil {
			t.Errorf("%v: %v, want an ArgumentError", bad, err)
		}
	}
}

// TestEvaluate compares with fractions, at points next to roots too.
func TestEvaluate(t *testing.T) {
	r := rand.New(rand.NewPCG(23, 1))
	for range 1000 {
		p := drawPoly(r)
		x, y := r.NormFloat64(), r.NormFloat64()
		if r.IntN(2) == 0 {
			x, y = math.Nextafter(float64(r.IntN(17)-8)/8, math.Inf(1-2*r.IntN(2))), float64(r.IntN(9))/8
		}
		if r.IntN(4) == 0 {
			y = 0
		}
		re, im := new(big.Rat), new(big.Rat)
		sx, sy := new(big.Rat).SetFloat64(x), new(big.Rat).SetFloat64(y)
		for i := p.Degree(); i >= 0; i-- {
			a := new(big.Rat).Sub(new(big.Rat).Mul(re, sx), new(big.Rat).Mul(im, sy))
			b := new(big.Rat).Add(new(big.Rat).Mul(re, sy), new(big.Rat).Mul(im, sx))
			re, im = a.Add(a, exactCoefficient(p, i)), b
		}
		value, bound := p.EvaluateComplex(complex(x, y))
		checkBound(t, p, complex(x, y), value, bound, re, im)
		if y == 0 {
			v, e := p.Evaluate(x)
			checkBound(t, p, complex(x, 0), complex(v, 0), e, re, im)
		}
	}
	for _, x := range []float64{math.Inf(1), math.NaN()} {
		if _, bound := New(1, 1).Evaluate(x); !math.IsInf(bound, 1) {
			t.Errorf("at %v: bound %v", x, bound)
		}
		if _, bound := New(1, 1).EvaluateComplex(complex(0, x)); !math.IsInf(bound, 1) {
			t.Errorf("at %vj: bound %v", x, bound)
		}
	}
	if v, e := New(1e200, 0, 0).Evaluate(1e200); !math.IsInf(v, 1) || !math.IsInf(e, 1) {
		t.Errorf("beyond the range: %v ± %v", v, e)
	}
	if v, e := New(1, 6, 11, 6).Evaluate(-2); v != 0 || e != 0 {
		t.Errorf("at a root: %v ± %v", v, e)
	}
	if v, e := New(1, 0, 1).EvaluateComplex(1i); v != 0 || e != 0 {
		t.Errorf("at a root: %v ± %v", v, e)
	}
}

func checkBound(t *testing.T, p Poly, s, value complex128, bound float64, re, im *big.Rat) {
	t.Helper()
	if math.IsInf(bound, 0) {
		f, _ := re.Float64()
		g, _ := im.Float64()
		if !math.IsInf(f, 0) && !math.IsInf(g, 0) && !math.IsInf(math.Hypot(f, g), 0) {
			t.Fatalf("%v at %v: no bound", p, s)
		}
		return
	}
	dx := new(big.Rat).Sub(new(big.Rat).SetFloat64(real(value)), re)
	dy := new(big.Rat).Sub(new(big.Rat).SetFloat64(imag(value)), im)
	miss := new(big.Rat).Add(dx.Mul(dx, dx), dy.Mul(dy, dy))
	b := new(big.Rat).SetFloat64(bound)
	if miss.Cmp(b.Mul(b, b)) > 0 {
		f, _ := miss.Float64()
		t.Fatalf("%v at %v = %v ± %v, but it misses by %v", p, s, value, bound, math.Sqrt(f))
	}
	if m := math.Hypot(real(value), imag(value)); bound > m*0x1p-49 && bound > 4*math.SmallestNonzeroFloat64 {
		t.Fatalf("%v at %v = %v ± %v: the bound is too wide", p, s, value, bound)
	}
}
