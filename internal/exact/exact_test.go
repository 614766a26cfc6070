package exact

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// integers returns the polynomial with the given integer coefficients, lowest power first.
func integers(c ...int64) Poly {
	b := make([]*big.Int, len(c))
	for i, x := range c {
		b[i] = big.NewInt(x)
	}
	return New(b, 0)
}

// fromRoots returns the product of (s - x).
func fromRoots(xs ...float64) Poly {
	p := integers(1)
	for _, x := range xs {
		p = p.Mul(FromFloats(-x, 1))
	}
	return p
}

func inf(s int) Dyadic { return Float(math.Inf(s)) }

// randomPoly leans to the hard ones: small coefficients that share factors, or floats of all
// sizes.
func randomPoly(r *rand.Rand, degree int) Poly {
	c := make([]float64, degree+1)
	for i := range c {
		switch r.IntN(4) {
		case 0:
			c[i] = float64(r.IntN(5) - 2)
		case 1:
			c[i] = math.Ldexp(r.NormFloat64(), r.IntN(60)-30)
		default:
			c[i] = r.NormFloat64()
		}
	}
	return FromFloats(c...)
}

func TestPrimeTable(t *testing.T) {
	last := uint64(1 << 62)
	for _, p := range primeTable {
		if p >= last || !new(big.Int).SetUint64(p).ProbablyPrime(20) {
			t.Errorf("%d is no prime below the one before", p)
		}
		last = p
	}
}

func TestField(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for _, p := range primeTable[:4] {
		f := newField(p)
		m := new(big.Int).SetUint64(p)
		for range 200 {
			x := new(big.Int).Mul(big.NewInt(r.Int64()), big.NewInt(r.Int64()-(1<<62)))
			y := new(big.Int).Mul(x, big.NewInt(r.Int64()-(1<<62)))
			want := new(big.Int).Mul(x, y)
			want.Mod(want, m)
			if got := f.plain(f.mul(f.element(x), f.element(y))); got != want.Uint64() {
				t.Fatalf("%v·%v mod %d = %d, want %d", x, y, p, got, want)
			}
			if f.element(x) != 0 && f.mul(f.element(x), f.inverse(f.element(x))) != f.one {
				t.Fatalf("inverse of %v mod %d is wrong", x, p)
			}
		}
	}
}

func TestAffineAndAt(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for range 300 {
		p := randomPoly(r, r.IntN(12))
		a := Float(math.Ldexp(float64(r.IntN(9)-4), r.IntN(20)-10))
		b := Float(math.Ldexp(r.NormFloat64(), r.IntN(20)-10))
		x := Float(math.Ldexp(float64(r.IntN(99)-49), r.IntN(20)-10))
		got, want := p.Affine(a, b).At(x), p.At(a.Mul(x).Add(b))
		if got.Cmp(want) != 0 {
			t.Fatalf("p(a·x+b): got %v, want %v", got.Rat(), want.Rat())
		}
		// Independently, with fractions.
		sum, power := new(big.Rat), big.NewRat(1, 1)
		for i := 0; i <= p.Degree(); i++ {
			sum.Add(sum, new(big.Rat).Mul(p.Coefficient(i).Rat(), power))
			power.Mul(power, x.Rat())
		}
		if v := p.At(x); v.Rat().Cmp(sum) != 0 {
			t.Fatalf("p(x): got %v, want %v", v.Rat(), sum)
		}
	}
}

func TestDivision(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for range 300 {
		p, q := randomPoly(r, r.IntN(12)), randomPoly(r, r.IntN(6))
		if q.IsZero() {
			continue
		}
		quot, rem, m := p.PseudoDivide(q)
		if rem.Degree() >= max(q.Degree(), 1) {
			t.Fatalf("remainder of degree %d for a divisor of degree %d", rem.Degree(), q.Degree())
		}
		if !quot.Mul(q).Add(rem).Equal(p.Scale(Int(m, 0))) {
			t.Fatal("multiplier·p ≠ quotient·q + remainder")
		}
		if got, ok := p.Mul(q).Divide(q); !ok || !got.Equal(p) {
			t.Fatal("p·q/q ≠ p")
		}
		if !rem.IsZero() {
			if _, ok := p.Divide(q); ok {
				t.Fatal("a divisor with a remainder divides")
			}
		}
	}
	if _, ok := integers(1, 1).Divide(integers(3)); ok {
		t.Error("(s+1)/3 has no dyadic coefficients")
	}
	if got, ok := integers(6, 6).Divide(integers(12)); !ok || !got.Equal(FromFloats(0.5, 0.5)) {
		t.Error("(6s+6)/12 is s/2 + 1/2")
	}
}

func TestGCD(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	for range 400 {
		a, b, g := randomPoly(r, r.IntN(8)), randomPoly(r, r.IntN(8)), randomPoly(r, r.IntN(5))
		p, q := a.Mul(g), b.Mul(g)
		d := GCD(p, q)
		switch {
		case p.IsZero() && q.IsZero():
			if !d.IsZero() {
				t.Fatal("gcd(0, 0) ≠ 0")
			}
			continue
		case p.IsZero() || q.IsZero():
			continue
		}
		// The chain of remainders ends with the same divisor.
		chain := NewChain(p, q)
		if want := positive(chain[len(chain)-1].Primitive()); chain[len(chain)-1].Degree() > 0 && !d.Equal(want) {
			t.Fatalf("gcd of degree %d, by remainders %d", d.Degree(), want.Degree())
		}
		if d.Degree() < g.Degree() || d.Degree() != chain[len(chain)-1].Degree() {
			t.Fatalf("gcd of degree %d with a common factor of degree %d", d.Degree(), g.Degree())
		}
	}
}

func TestSquareFree(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	for range 200 {
		p := integers(int64(r.IntN(9) - 20))
		for range r.IntN(4) {
			p = p.Mul(randomPoly(r, 1+r.IntN(3)).Power(1 + r.IntN(4)))
		}
		if p.IsZero() {
			continue
		}
		product, last := integers(1), 0
		for _, f := range p.SquareFree() {
			if f.Multiplicity <= last || f.Poly.Degree() < 1 || f.Poly.LeadSign() < 0 {
				t.Fatal("factors out of order or no polynomials")
			}
			last = f.Multiplicity
			if !Coprime(f.Poly, f.Poly.Derivative()) {
				t.Fatal("a factor is not square-free")
			}
			product = product.Mul(f.Poly.Power(f.Multiplicity))
		}
		if !product.Equal(positive(p.Primitive())) && p.Degree() > 0 {
			t.Fatal("the factors do not multiply to p")
		}
	}
}

// TestRealRoots sets Descartes against Sturm, and both against roots that are known.
func TestRealRoots(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	for range 400 {
		p := randomPoly(r, 1+r.IntN(6))
		if p.Degree() < 1 {
			continue
		}
		var known []float64
		for range r.IntN(4) {
			x := math.Ldexp(float64(r.IntN(64)-32), r.IntN(40)-20)
			known = append(known, x)
			p = p.Mul(fromRoots(x).Power(1 + r.IntN(3)))
		}
		lo, hi := inf(-1), inf(+1)
		if r.IntN(2) == 0 {
			lo, hi = Float(r.NormFloat64()-1), Float(r.NormFloat64()+1)
			if len(known) > 0 && r.IntN(2) == 0 {
				lo = Float(known[0])
			}
		}
		if lo.Cmp(hi) > 0 {
			lo, hi = hi, lo
		}
		chain := SturmChain(p)
		for _, ends := range []Ends{Open, ClosedOpen, OpenClosed, Closed} {
			want := 0
			if lo.Cmp(hi) < 0 {
				want = chain.Count(lo, hi)
			}
			withLo := lo.Inf() == 0 && p.SignAt(lo) == 0 && (ends == ClosedOpen || ends == Closed)
			withHi := hi.Inf() == 0 && p.SignAt(hi) == 0 && (ends == OpenClosed || ends == Closed)
			if lo.Cmp(hi) == 0 {
				if withLo && withHi {
					want = 1
				}
			} else {
				if withLo {
					want++
				}
				if withHi {
					want++
				}
			}
			roots := p.RealRoots(lo, hi, ends)
			if len(roots) != want {
				t.Fatalf("%d roots, by Sturm %d", len(roots), want)
			}
			counted := 0
			last := lo
			for _, root := range roots {
				if root.Lo.Cmp(last) < 0 {
					t.Fatal("roots out of order")
				}
				last = root.Hi
				counted += root.Multiplicity
				x, side := root.Nearest()
				checkNearest(t, p.SquareFreePart(), x, side)
			}
			if d, c := p.CountReal(lo, hi, ends); d != want || c != counted {
				t.Fatalf("CountReal = %d, %d, want %d, %d", d, c, want, counted)
			}
		}
		for _, x := range known {
			found := false
			for _, root := range p.RealRoots(inf(-1), inf(1), Open) {
				if v, side := root.Nearest(); v == x && side == 0 {
					found = true
				}
			}
			if !found {
				t.Fatalf("root %v not found", x)
			}
		}
	}
}

// checkNearest proves by signs that a root lies within half a place of x, on the given side.
func checkNearest(t *testing.T, p Poly, x float64, side int) {
	t.Helper()
	at := p.SignAtFloat(x)
	if side == 0 {
		if at != 0 {
			t.Fatalf("%v is no root", x)
		}
		return
	}
	next := math.Nextafter(x, math.Inf(side))
	middle := Midpoint(Float(x), Float(next))
	if s := p.SignAt(middle); at*s > 0 {
		t.Fatalf("no root within half a place of %v", x)
	}
}

func TestNearestHard(t *testing.T) {
	tests := []struct {
		name string
		p    Poly
		want []float64
	}{
		{"all scales", fromRoots(-1e300, -1e-300, 1e-300, 1, 1e300), []float64{-1e300, -1e-300, 1e-300, 1, 1e300}},
		{"neighbours", fromRoots(1, math.Nextafter(1, 2)), []float64{1, math.Nextafter(1, 2)}},
		{"square root of two", integers(-2, 0, 1), []float64{-math.Sqrt2, math.Sqrt2}},
		{"beyond the range", integers(-1, 1).Stretch(PowerOfTwo(-2000)), []float64{math.Inf(1)}},
		{"below the range", integers(-1, 3).Stretch(PowerOfTwo(2000)), []float64{0}},
		{"zero", integers(0, 0, 1), []float64{0}},
		// Mignotte's polynomial s^20 - 2(1000s - 1)²: two roots about 1e-33 beside 1e-3;
		// the others by mpmath.polyroots.
		{"Mignotte", integers(1).Mul(New([]*big.Int{big.NewInt(-2), big.NewInt(4000), big.NewInt(-2000000)}, 0)).Add(integers(0, 1).Power(20)), []float64{-2.239127212050401223, 0.001, 0.001, 2.2389049898081130593}},
	}
	for _, test := range tests {
		roots := test.p.RealRoots(inf(-1), inf(1), Open)
		if len(roots) != len(test.want) {
			t.Errorf("%s: %d roots, want %d", test.name, len(roots), len(test.want))
			continue
		}
		for i, r := range roots {
			x, side := r.Nearest()
			if math.Abs(x-test.want[i]) > 1e-15*math.Abs(x) {
				t.Errorf("%s: root %v, want %v", test.name, x, test.want[i])
			}
			if twin := test.name == "Mignotte" && x > 0 && x < 1; !twin && !math.IsInf(x, 0) {
				checkNearest(t, test.p.SquareFreePart(), x, side)
			}
		}
	}
}

func TestCauchyIndex(t *testing.T) {
	// 1/s jumps up at 0; s/(s²-1) does so at -1 and at 1; -1/(s-2) down.
	tests := []struct {
		p, q Poly
		want int
	}{
		{integers(1), integers(0, 1), 1},
		{integers(0, 1), integers(-1, 0, 1), 2},
		{integers(-1), integers(-2, 1), -1},
		{integers(1), integers(0, 0, 1), 0},
		{integers(0, 0, 0, 1), integers(-1, 1), 1},
		{integers(), integers(-1, 1), 0},
		{integers(0, 1, 1), integers(0, -1, 1), 1},
	}
	for _, test := range tests {
		if got := CauchyIndex(test.p, test.q, inf(-1), inf(1)); got != test.want {
			t.Errorf("index of %v/%v: got %d, want %d", test.p, test.q, got, test.want)
		}
	}
}
