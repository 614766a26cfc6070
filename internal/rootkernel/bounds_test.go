package rootkernel

import (
	"math"
	"math/big"
	"math/rand"
	"testing"
)

// number returns 0 with so many bits that nothing here is rounded.
func number() *big.Float { return new(big.Float).SetPrec(2500) }

// exactValues returns p, p′ and p″/2 at x + jy exactly, as pairs of parts, for c + lo.
func exactValues(c, lo []float64, x, y float64) (values [3][2]*big.Float) {
	for i := range values {
		values[i] = [2]*big.Float{number(), number()}
	}
	a, b := number().SetFloat64(x), number().SetFloat64(y)
	for i := len(c) - 1; i >= 0; i-- {
		for l := 2; l >= 0; l-- {
			re, im := values[l][0], values[l][1]
			t := number().Mul(im, b)
			newRe := number().Mul(re, a)
			newRe.Sub(newRe, t)
			newIm := number().Mul(re, b)
			newIm.Add(newIm, number().Mul(im, a))
			if l > 0 {
				newRe.Add(newRe, values[l-1][0])
				newIm.Add(newIm, values[l-1][1])
			} else {
				newRe.Add(newRe, number().SetFloat64(c[i]))
				if lo != nil {
					newRe.Add(newRe, number().SetFloat64(lo[i]))
				}
			}
			values[l] = [2]*big.Float{newRe, newIm}
		}
	}
	return values
}

// off returns |(x + jy) - exact| rounded.
func off(x, y float64, exact [2]*big.Float) float64 {
	dx, dy := number().SetFloat64(x), number().SetFloat64(y)
	a, _ := dx.Sub(dx, exact[0]).Float64()
	b, _ := dy.Sub(dy, exact[1]).Float64()
	return math.Hypot(a, b)
}

// Every bound that the proof rests on, against exact arithmetic: coefficients over many
// orders of magnitude, points in the open and beside a root, where everything cancels.
func TestBoundsHold(t *testing.T) {
	r := rand.New(rand.NewSource(1))
	count := 400
	if testing.Short() {
		count = 100
	}
	worst := [3]float64{}
	for range count {
		n := 1 + r.Intn(20)
		c, lo := make([]float64, n+1), make([]float64, n+1)
		spread := 20 * r.Float64() * r.Float64()
		for i := range c {
			c[i] = math.Ldexp(2*r.Float64()-1, int(spread*r.NormFloat64()))
			lo[i] = c[i] * 0x1p-54 * (2*r.Float64() - 1)
		}
		if r.Intn(2) == 0 {
			lo = nil
		}
		var k Kernel
		k.Set(c, lo)
		k.Start(0)
		k.Iterate(30)
		points := append([]Point{{2*r.Float64() - 1, r.Float64()}, {2*r.Float64() - 1, 0}}, k.Points()...)
		k.Careful()
		for _, z := range points {
			size := modulus(z.X, z.Y)
			if !(size > 0x1p-100 && size < 0x1p100) {
				continue
			}
			want := exactValues(c, lo, z.X, z.Y)
			var pr, pi, dr, di, m float64
			if z.Y == 0 {
				pr, dr, m = compensatedReal(c, lo, z.X, size)
			} else {
				pr, pi, dr, di, m = compensated(c, lo, z.X, z.Y, size)
			}
			bend, miss, slopeMiss := k.fastBounds(m, size)
			check := func(which int, name string, got, bound float64) {
				if !(got <= bound) {
					t.Errorf("%s: c = %v, lo = %v, z = %v: off by %g, bound %g", name, c, lo, z, got, bound)
				}
				worst[which] = max(worst[which], got/bound)
			}
			check(0, "p", off(pr, pi, want[0]), miss+2*u*(math.Abs(pr)+math.Abs(pi)))
			check(0, "p′", off(dr, di, want[1]), slopeMiss)
			check(0, "p″", 2*off(0, 0, want[2]), bend/(size*size))

			if !k.enter(size) {
				t.Fatalf("no frame for %v", z)
			}
			f := &k.frame
			e := math.Ldexp(1, f.e)
			x, y, rr := z.X/e, z.Y/e, size/e
			want = exactValues(f.c[:n+1], f.lo[:n+1], x, y)
			var p2 float64
			if y == 0 {
				pr, dr, p2, m, miss = f.valuesReal(n, x, rr)
				pi, di = 0, 0
			} else {
				pr, pi, dr, di, p2, m, miss = f.values(n, x, y, rr)
			}
			bend, slopeMiss = k.carefulBounds(m, rr, p2, 0)
			check(1, "careful p", off(pr, pi, want[0]), miss+2*u*(math.Abs(pr)+math.Abs(pi)))
			check(1, "careful p′", off(dr, di, want[1]), slopeMiss+2*u*(math.Abs(dr)+math.Abs(di)))
			check(1, "careful p″", 2*off(0, 0, want[2]), bend/(rr*rr))
		}
		if t.Failed() {
			return
		}
	}
	t.Logf("largest error beside its bound: fast %.3g, careful %.3g", worst[0], worst[1])
}

// The answer has the same bits on every processor: run this with other values of GOARCH and
// GOAMD64 too.
func TestSameBits(t *testing.T) {
	r := rand.New(rand.NewSource(2))
	hash := uint64(14695981039346656037)
	var k Kernel
	for range 300 {
		n := 1 + r.Intn(24)
		c := make([]float64, n+1)
		for i := range c {
			c[i] = float64(r.Intn(2000001) - 1000000)
		}
		if c[0] == 0 || c[n] == 0 {
			continue
		}
		k.Set(c, nil)
		k.Start(0)
		settled := k.Iterate(40)
		discs, failure := k.Certify(nil, false)
		if !settled || failure != None {
			k.Careful()
			k.Iterate(40)
			discs, _ = k.Certify(nil, false)
		}
		for _, d := range discs {
			for _, x := range [...]float64{d.X, d.Y, d.Radius, d.HalfX, d.HalfY} {
				hash = (hash ^ math.Float64bits(x)) * 1099511628211
			}
		}
	}
	if hash != sameBits {
		t.Errorf("the bits differ: %#x, want %#x", hash, uint64(sameBits))
	}
}

const sameBits = 0x7bf311a581b9df8a
