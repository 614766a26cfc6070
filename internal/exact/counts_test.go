package exact

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// A piece is a real factor with known roots: which sides they lie on is decided by comparing
// dyadic numbers.
type piece struct {
	poly Poly
	at   Count
}

func (c Count) add(d Count, times int) Count {
	return Count{c.Inside + times*d.Inside, c.Boundary + times*d.Boundary, c.Outside + times*d.Outside}
}

// place returns a Count of n roots on the side that the sign tells: negative is inside.
func place(n, side int) Count {
	switch {
	case side < 0:
		return Count{Inside: n}
	case side > 0:
		return Count{Outside: n}
	}
	return Count{Boundary: n}
}

func product(r *rand.Rand, draw func() piece) (Poly, Count) {
	p, want := integers(int64(1-2*r.IntN(2))*3), Count{}
	for range r.IntN(6) {
		f, times := draw(), 1+r.IntN(3)
		p = p.Mul(f.poly.Power(times))
		want = want.add(f.at, times)
	}
	return p, want
}

// eighths draws a number with few bits, so that equal ones are drawn often.
func eighths(r *rand.Rand) float64 { return float64(r.IntN(41)-20) / 8 }

func TestLeftOf(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	for range 1000 {
		sigma := eighths(r)
		p, want := product(r, func() piece {
			a := eighths(r)
			if r.IntN(3) == 0 {
				a = sigma
			}
			if r.IntN(2) == 0 {
				return piece{fromRoots(a), place(1, sign(a-sigma))}
			}
			w := 1 + eighths(r)
			return piece{FromFloats(a*a+w*w, -2*a, 1), place(2, sign(a-sigma))}
		})
		if got := leftOf(p, Float(sigma)); p.Degree() > 0 && got != want {
			t.Fatalf("leftOf(%v, %v) = %+v, want %+v", p, sigma, got, want)
		}
		if got := LeftOf(p, Float(sigma)); got != want {
			t.Fatalf("LeftOf(%v, %v) = %+v, want %+v", p, sigma, got, want)
		}
	}
}

func TestInDisc(t *testing.T) {
	r := rand.New(rand.NewPCG(2, 1))
	for range 1000 {
		radius := float64(1+r.IntN(16)) / 8
		p, want := product(r, func() piece {
			if r.IntN(2) == 0 {
				a := eighths(r)
				if r.IntN(3) == 0 {
					a = math.Copysign(radius, a)
				}
				return piece{fromRoots(a), place(1, sign(math.Abs(a)-radius))}
			}
			m := float64(1+r.IntN(16)) / 8
			if r.IntN(3) == 0 {
				m = radius
			}
			return piece{FromFloats(m*m, 2*m*float64(r.IntN(15)-7)/8, 1), place(2, sign(m-radius))}
		})
		if got := inDisc(p, Float(radius)); p.Degree() > 0 && got != want {
			t.Fatalf("inDisc(%v, %v) = %+v, want %+v", p, radius, got, want)
		}
		if got := InDisc(p, Float(radius)); got != want {
			t.Fatalf("InDisc(%v, %v) = %+v, want %+v", p, radius, got, want)
		}
	}
}

func TestInSector(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 1))
	zetas := []float64{0.5, math.Nextafter(0.5, 0), math.Nextafter(0.5, 1), 0.25, 0.125, 0.875, 0.75,
		math.Sqrt2 / 2, math.Cos(math.Pi / 5), math.Cos(math.Pi / 9), 1e-9, 1 - 1.0/(1<<53), 1e-300}
	for range 300 {
		zeta := zetas[r.IntN(len(zetas))]
		p, want := product(r, func() piece {
			switch r.IntN(4) {
			case 0:
				a := eighths(r)
				return piece{fromRoots(a), place(1, sign(a))}
			case 1: // the damping of the sector itself
				m := float64(1+r.IntN(16)) / 8
				return piece{FromFloats(m*m, 0, 1).Add(integers(0, 1).Scale(Float(2 * m).Mul(Float(zeta)))), place(2, 0)}
			case 2: // the third roots of a number
				a := eighths(r)
				if a == 0 {
					return piece{integers(0, 1), place(1, 0)}
				}
				// s³ = a: angles 0 and ±120° for a > 0, 180° and ±60° for a < 0.
				at := place(2, sign(0.5-zeta)).opposite()
				if a > 0 {
					return piece{FromFloats(-a, 0, 0, 1), at.add(Count{Outside: 1}, 1)}
				}
				return piece{FromFloats(-a, 0, 0, 1), Count{Inside: 1, Outside: 2}}
			}
			d := zetas[r.IntN(len(zetas))]
			m := float64(1+r.IntN(16)) / 8
			return piece{FromFloats(m*m, 0, 1).Add(integers(0, 1).Scale(Float(2 * m).Mul(Float(d)))), place(2, sign(zeta-d))}
		})
		if got := inSector(p, Float(zeta)); p.Degree() > 0 && got != want {
			t.Fatalf("inSector(%v, %v) = %+v, want %+v", p, zeta, got, want)
		}
		if got := InSector(p, Float(zeta)); got != want {
			t.Fatalf("InSector(%v, %v) = %+v, want %+v", p, zeta, got, want)
		}
	}
}

func (c Count) opposite() Count { return Count{c.Outside, c.Boundary, c.Inside} }

func TestCountsOfFew(t *testing.T) {
	for _, p := range []Poly{{}, New([]*big.Int{big.NewInt(7)}, 3)} {
		if c := LeftOf(p, Float(1)); c != (Count{}) {
			t.Errorf("LeftOf of a constant: %+v", c)
		}
		if c := InSector(p, Float(0.5)); c != (Count{}) {
			t.Errorf("InSector of a constant: %+v", c)
		}
		if c := InDisc(p, Float(1)); c != (Count{}) {
			t.Errorf("InDisc of a constant: %+v", c)
		}
	}
}

// TestFiltersAgainstExact sets the stages in float64 against exact arithmetic.
func TestFiltersAgainstExact(t *testing.T) {
	r := rand.New(rand.NewPCG(4, 1))
	settled, total := [3]int{}, 0
	for range 2000 {
		p := randomPoly(r, 1+r.IntN(10))
		switch r.IntN(4) {
		case 0:
			p = p.Mul(randomPoly(r, 1+r.IntN(3)))
		case 1:
			p = p.Mul(integers(0, 1))
		case 2:
			for i := range p.c { // wide exponents
				p = p.Add(FromDyadics(p.Coefficient(i).Mul(PowerOfTwo(r.IntN(3000) - 1500))).Mul(integers(0, 1).Power(i)))
			}
		}
		if p.Degree() < 1 {
			continue
		}
		total++
		sigma := Float([...]float64{0, 0, r.NormFloat64(), 1, 1e-300}[r.IntN(5)])
		zeta := Float([...]float64{0.5, 0.7, r.Float64(), 1e-9, math.Cos(math.Pi / 5), 1 - 1.0/(1<<53)}[r.IntN(6)])
		radius := Float([...]float64{1, 0.5, r.ExpFloat64() + 1e-3, 1e-200}[r.IntN(4)])
		for i, question := range []struct {
			filter func(*filtered) (Count, bool)
			exact  func() Count
		}{
			{func(f *filtered) (Count, bool) { return f.leftOf(boundedOf(sigma)) }, func() Count { return leftOf(p, sigma) }},
			{func(f *filtered) (Count, bool) { return f.inSector(boundedOf(zeta)) }, func() Count { return inSector(p, zeta) }},
			{func(f *filtered) (Count, bool) { return f.inDisc(boundedOf(radius)) }, func() Count { return inDisc(p, radius) }},
		} {
			var f filtered
			if !f.fromPoly(p) {
				t.Fatal("a polynomial of low degree is refused")
			}
			if got, ok := question.filter(&f); ok {
				settled[i]++
				if want := question.exact(); got != want {
					t.Fatalf("question %d of %v, %v, %v, %v: %+v, exactly %+v", i, p, sigma, zeta, radius, got, want)
				}
			}
		}
	}
	t.Logf("settled in float64: %v of %d", settled, total)
	for _, n := range settled {
		if n < total/3 {
			t.Errorf("a stage in float64 settles less than a third of the cases: %v of %d", settled, total)
		}
	}
}

func TestLeading(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 1))
	for range 1000 {
		x := new(big.Int).Rsh(new(big.Int).SetUint64(r.Uint64()), uint(r.IntN(64)))
		x.Lsh(x, uint(r.IntN(200))).Add(x, big.NewInt(int64(r.IntN(3)-1)))
		if r.IntN(2) == 0 {
			x.Neg(x)
		}
		m, e := leading(x)
		got := Float(m.v).Mul(PowerOfTwo(e))
		miss := got.Sub(Int(x, 0))
		if miss.Sign() < 0 {
			miss = miss.Neg()
		}
		if miss.Cmp(Float(m.e).Mul(PowerOfTwo(e))) > 0 {
			t.Fatalf("%v: %v·2^%d misses by more than %v", x, m.v, e, m.e)
		}
	}
}
