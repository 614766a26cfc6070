package poly

import (
	"encoding/binary"
	"errors"
	"math"
	"math/big"
	"testing"
)

// numbers reads float64s out of fuzz data: eight bytes each, or two for a short one.
func numbers(data []byte, most int) []float64 {
	var xs []float64
	for len(data) > 0 && len(xs) < most {
		kind := data[0]
		data = data[1:]
		switch {
		case kind < 100 && len(data) >= 1: // a small whole number
			xs = append(xs, float64(int8(data[0])))
			data = data[1:]
		case kind < 160 && len(data) >= 2: // a few digits at any scale
			xs = append(xs, math.Ldexp(float64(int8(data[0])), 8*int(int8(data[1]))))
			data = data[2:]
		case len(data) >= 8:
			xs = append(xs, math.Float64frombits(binary.LittleEndian.Uint64(data)))
			data = data[8:]
		default:
			return xs
		}
	}
	return xs
}

func encode(xs ...float64) []byte {
	var data []byte
	for _, x := range xs {
		data = append(data, 255)
		data = binary.LittleEndian.AppendUint64(data, math.Float64bits(x))
	}
	return data
}

// FuzzRoots proves every answer again, on polynomials of degree 24 at most.
func FuzzRoots(f *testing.F) {
	for _, c := range [][]float64{
		{1, 6, 8}, {1, 0, 0, 1}, {1, 3, 3, 1}, {1, 0, 2, 0, 1}, {1, 0.2, 1, 0.2, 0, 0},
		{1e-300, 1, 1e300}, {5e-324, 1, 3}, {1, -120, 6580, -218400, 4899622}, {1e150, -1e-150, 1, 7},
		{1, 0, 0, 0, 0, 0, -1e4, 200, -1}, {math.NaN(), 1}, {math.MaxFloat64, 1, math.MaxFloat64},
	} {
		f.Add(encode(c...))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		p := New(numbers(data, 25)...)
		roots, err := p.Roots()
		if err != nil {
			var outside *RangeError
			if p.Err() == nil && p.Degree() >= 0 && !errors.As(err, &outside) {
				t.Errorf("%x: %v", p.c, err)
			}
			return
		}
		checkShape(t, p, roots)
		if wrong := newJudge(p).check(roots); wrong != "" {
			t.Errorf("%x: %s", p.c, wrong)
		}
	})
}

// FuzzFromRoots checks that given roots come back and that the polynomial vanishes there.
func FuzzFromRoots(f *testing.F) {
	f.Add(encode(1, -1, 0, -2, 0))
	f.Add(encode(2.5, -0.1, 3, 1e-300, 0, -0.1, 3))
	f.Add(encode(1e-300, 1e300, 1e-300))
	f.Add(encode(1, math.Inf(1), 0))
	f.Fuzz(func(t *testing.T, data []byte) {
		xs := numbers(data, 13)
		if len(xs) == 0 {
			return
		}
		var given []complex128
		for i := 1; i+1 < len(xs); i += 2 {
			given = append(given, complex(xs[i], xs[i+1]))
			if xs[i+1] != 0 {
				given = append(given, complex(xs[i], -xs[i+1]))
			}
		}
		p, err := FromRoots(xs[0], given...)
		if err != nil {
			if p.Err() == nil {
				t.Errorf("%v: the polynomial beside the error %v is valid", given, err)
			}
			return
		}
		if p.Degree() != len(given) {
			t.Fatalf("%v: degree %d", given, p.Degree())
		}
		for _, s := range given {
			if re, im, _ := exactAt(p.integers(), real(s), imag(s)); re.Sign() != 0 || im.Sign() != 0 {
				t.Errorf("%v: p(%v) = %v + %vj", given, s, re, im)
			}
		}
		roots, err := p.Scale(-3).Roots()
		if err != nil {
			t.Fatal(err)
		}
		count := 0
		for _, r := range roots {
			count += r.Multiplicity
			if r.Radius != 0 || r.HalfRe != 0 || r.HalfIm != 0 {
				t.Errorf("%v: %+v is not as given", given, r)
			}
		}
		if count != len(given) {
			t.Errorf("%v: %d roots", given, count)
		}
		// Solved afresh, the discs hold what was given. Parts hundreds of orders of magnitude
		// apart need thousands of bits, too slow for fuzzing.
		for _, s := range given {
			for _, part := range [...]float64{real(s), imag(s)} {
				if part != 0 && (math.Abs(part) < 1e-60 || math.Abs(part) > 1e60) {
					return
				}
			}
		}
		solved, err := FromIntegers(p.Integers()).Roots()
		if err != nil {
			t.Fatalf("%v: %v", given, err)
		}
		for _, s := range given {
			hits := 0
			for _, r := range solved {
				if math.Hypot(real(r.Value)-real(s), imag(r.Value)-imag(s)) <= r.Radius*(1+0x1p-50) {
					hits++
				}
			}
			if hits != 1 {
				t.Errorf("%v: %v lies in %d discs of %v", given, s, hits, solved)
			}
		}
	})
}

// FuzzArithmetic compares with rational arithmetic of the standard library.
func FuzzArithmetic(f *testing.F) {
	f.Add(encode(0.1, 0.3, 1e-300, 0.7, 1e17, 3), 1.5)
	f.Add(encode(1, 0x1p-53, 0x1p-106, 1, 3, 5), 0x1p-53)
	f.Add(encode(math.MaxFloat64, 1, -math.MaxFloat64, 5e-324), 1e300)
	f.Add(encode(1, 1+0x1p-52, 1-0x1p-53, 1), 1+0x1p-52)
	f.Fuzz(func(t *testing.T, data []byte, k float64) {
		xs := numbers(data, 12)
		p, q := New(xs[:len(xs)/2]...), New(xs[len(xs)/2:]...)
		if p.Err() != nil || q.Err() != nil || k-k != 0 {
			if p.Mul(q).Scale(k).Err() == nil || p.Scale(k).Add(q).Err() == nil {
				t.Errorf("%v %v %v: invalid, but nothing says so", p, q, k)
			}
			return
		}
		a, b := rational(p), rational(q)
		kk := new(big.Rat).SetFloat64(k)
		sum, product, scaled := map[int]*big.Rat{}, map[int]*big.Rat{}, map[int]*big.Rat{}
		at := func(m map[int]*big.Rat, i int) *big.Rat {
			if m[i] == nil {
				m[i] = new(big.Rat)
			}
			return m[i]
		}
		for i, x := range a {
			at(sum, i).Add(at(sum, i), x)
			for j, y := range b {
				at(product, i+j).Add(at(product, i+j), new(big.Rat).Mul(x, y))
			}
		}
		for i, y := range b {
			at(sum, i).Add(at(sum, i), new(big.Rat).Mul(kk, y))
			at(scaled, i).Mul(kk, y)
		}
		compare(t, "p + k·q", p.Add(q.Scale(k)), sum)
		compare(t, "p - (-k)·q", p.Sub(q.Scale(-k)), sum)
		compare(t, "p·q", p.Mul(q), product)
		compare(t, "k·q", q.Scale(k), scaled)
		derivative := map[int]*big.Rat{}
		for i, x := range product {
			if i > 0 {
				derivative[i-1] = new(big.Rat).Mul(x, big.NewRat(int64(i), 1))
			}
		}
		compare(t, "(p·q)′", p.Mul(q).Derivative(), derivative)
		if s := p.Add(q.Scale(k)); !s.Sub(p).Equal(q.Scale(k)) || !s.Equal(q.Scale(k).Add(p)) {
			t.Errorf("%v %v %v: Equal does not see equals", p, q, k)
		}
	})
}

func rational(p Poly) []*big.Rat {
	r := make([]*big.Rat, p.Degree()+1)
	for i := range r {
		r[i] = new(big.Rat).SetFloat64(p.Coefficient(i))
	}
	return r
}

func compare(t *testing.T, name string, got Poly, want map[int]*big.Rat) {
	t.Helper()
	degree := -1
	for i, x := range want {
		if x.Sign() != 0 {
			degree = max(degree, i)
		}
	}
	if got.Degree() != degree {
		t.Errorf("%s = %v: degree %d, want %d", name, got, got.Degree(), degree)
		return
	}
	for i := 0; i <= degree; i++ {
		x := want[i]
		if x == nil {
			x = new(big.Rat)
		}
		if c := exactCoefficient(got, i); c.Cmp(x) != 0 {
			t.Errorf("%s, s^%d: %v, want %v", name, i, c, x)
		}
		if f, _ := x.Float64(); got.Coefficient(i) != f {
			t.Errorf("%s, s^%d: rounded to %g, want %g", name, i, got.Coefficient(i), f)
		}
	}
}
