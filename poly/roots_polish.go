package poly

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/internal/rootkernel"
)

// polish takes single points near roots home by Newton's iteration in math/big and proves a
// disc about each, by the theorem of rootkernel's discRadius. It is not ok if one does not
// arrive.
func polish(f exact.Poly, points []rootkernel.Point, mirrored bool) ([]rootkernel.Disc, bool) {
	a, _ := f.Integers()
	discs := make([]rootkernel.Disc, 0, len(points))
	var evaluators [4]*evaluator
	for _, point := range points {
		arrived := false
		if math.IsNaN(point.X-point.X) || math.IsNaN(point.Y-point.Y) {
			return nil, false
		}
		z := bigComplex{new(big.Float).SetFloat64(point.X), new(big.Float).SetFloat64(point.Y)}
		for level := range evaluators {
			bits := uint(192) << (level)
			if evaluators[level] == nil {
				evaluators[level] = newEvaluator(a, bits)
			}
			if d, ok := evaluators[level].newton(z, point.Y == 0, mirrored); ok {
				if math.IsInf(d.X, 0) || math.IsInf(d.Y, 0) || d.X == 0 && d.Y == 0 {
					return nil, false // no float64: the next stage says so
				}
				discs = append(discs, d)
				arrived = true
				break
			}
		}
		if !arrived {
			return nil, false
		}
	}
	return discs, true
}

// An evaluator evaluates one polynomial with big.Float coefficients at one precision.
type evaluator struct {
	n    int
	bits uint
	a    []*big.Float // by power
	size []*big.Float // their moduli in short
	p, d bigComplex   // the values at the last point
	t    [6]*big.Float
}

func newEvaluator(a []*big.Int, bits uint) *evaluator {
	v := &evaluator{n: len(a) - 1, bits: bits, a: make([]*big.Float, len(a)), size: make([]*big.Float, len(a))}
	for i, n := range a {
		v.a[i] = v.float().SetInt(n)
		v.size[i] = short().SetInt(n)
		v.size[i].Abs(v.size[i])
	}
	for i := range v.t {
		v.t[i] = v.float()
	}
	v.p, v.d = bigComplex{v.float(), v.float()}, bigComplex{v.float(), v.float()}
	return v
}

func (v *evaluator) float() *big.Float { return new(big.Float).SetPrec(v.bits) }

// at evaluates at z and returns m = Σ|aᵢ||z|ⁱ in short.
//
// The error of p: a complex product and sum at P bits err by less than √8·2⁻ᴾ + 2⁻ᴾ of the
// moduli that enter, the coefficients by 2⁻ᴾ, so Horner's rule errs by less than
// 5·(n+1)·2⁻ᴾ·m to first order; 8·(n+1)·2⁻ᴾ·m pays for the rest. That of the derivative is
// less than twice as much times n/|z|.
func (v *evaluator) at(z bigComplex) (m *big.Float) {
	r := modulus(z)
	m = short().Set(v.size[v.n])
	zero := z.im.Sign() == 0
	v.p.re.Set(v.a[v.n])
	v.p.im.SetInt64(0)
	v.d.re.SetInt64(0)
	v.d.im.SetInt64(0)
	for i := v.n - 1; i >= 0; i-- {
		if zero {
			v.d.re.Mul(v.d.re, z.re)
			v.d.re.Add(v.d.re, v.p.re)
			v.p.re.Mul(v.p.re, z.re)
		} else {
			v.multiply(v.d, z)
			v.d.re.Add(v.d.re, v.p.re)
			v.d.im.Add(v.d.im, v.p.im)
			v.multiply(v.p, z)
		}
		v.p.re.Add(v.p.re, v.a[i])
		m.Mul(m, r)
		m.Add(m, v.size[i])
	}
	return m
}

// multiply sets x to x·y.
func (v *evaluator) multiply(x, y bigComplex) {
	t := &v.t
	t[0].Mul(x.re, y.re)
	t[1].Mul(x.im, y.im)
	t[2].Mul(x.re, y.im)
	t[3].Mul(x.im, y.re)
	x.re.Sub(t[0], t[1])
	x.im.Add(t[2], t[3])
}

// unitBits returns k·2⁻ᴾ.
func (v *evaluator) unitBits(k int) *big.Float {
	x := short().SetInt64(int64(k))
	return x.SetMantExp(x, -int(v.bits))
}

// tight is how well a root is known before it is rounded to float64: relative to its
// modulus, and to each of its parts.
const tight = -58

// newton moves z, which it changes, to a root and proves a disc.
func (v *evaluator) newton(z bigComplex, isReal, mirrored bool) (rootkernel.Disc, bool) {
	z.re.SetPrec(v.bits)
	z.im.SetPrec(v.bits)
	n := v.n
	for range 12 {
		m := v.at(z)
		r := modulus(z)
		d := modulus(v.d)
		p := modulus(v.p)
		if d.Sign() == 0 || r.Sign() == 0 {
			return rootkernel.Disc{}, false
		}
		// The disc about z: see discRadius. bend = n²·m·1.02, in units of |z|.
		bend := short().Mul(m, short().SetInt64(int64((n+2)*(n+2))))
		bend.Mul(bend, big.NewFloat(1.02))
		slope := short().Mul(m, v.unitBits(20*(n+1)*n))
		slope.Quo(slope, r)
		slope.Sub(d, slope)
		residue := short().Mul(m, v.unitBits(8*(n+1)))
		residue.Add(residue, p)
		if slope.Cmp(short().Mul(d, big.NewFloat(0.5))) > 0 {
			radius := short().Quo(residue, slope)
			radius.Mul(radius, big.NewFloat(1.02))
			relative := short().Quo(radius, r)
			limit := short().Mul(slope, big.NewFloat(0.019))
			if short().Quo(bend.Mul(bend, relative), r).Cmp(limit) < 0 && relative.Cmp(short().SetMantExp(big.NewFloat(1), tight)) < 0 {
				l := location{re: z.re, im: z.im, radius: radius, real: isReal, distinct: 1}
				switch {
				case isReal:
					return l.disc(), true
				case !small(radius, z.im):
				case small(radius, z.re):
					return l.disc(), true
				case mirrored && within(z.re, radius):
					l.imaginary = true
					return l.disc(), true
				}
			}
		}
		// z ← z - p/d
		v.t[4].Mul(v.d.re, v.d.re)
		v.t[5].Mul(v.d.im, v.d.im)
		v.t[4].Add(v.t[4], v.t[5])
		v.t[5].Quo(v.t[5].SetInt64(1), v.t[4])
		v.d.im.Neg(v.d.im)
		v.multiply(v.p, v.d)
		v.p.re.Mul(v.p.re, v.t[5])
		v.p.im.Mul(v.p.im, v.t[5])
		if step := modulus(v.p); step.Cmp(short().Mul(r, v.unitBits(1))) < 0 {
			return rootkernel.Disc{}, false // as near as this precision gets
		}
		z.re.Sub(z.re, v.p.re)
		z.im.Sub(z.im, v.p.im)
		if isReal {
			z.im.SetInt64(0)
		} else if z.im.Sign() <= 0 {
			return rootkernel.Disc{}, false
		}
	}
	return rootkernel.Disc{}, false
}

// A location is a disc in extended precision.
type location struct {
	re, im, radius  *big.Float
	real, imaginary bool // lies on the axis: proven for one root, in effect for a cluster
	distinct        int
}

// disc rounds a location to float64. A centre or a radius beyond the range becomes infinite,
// a centre below it zero.
func (l location) disc() rootkernel.Disc {
	var d rootkernel.Disc
	d.X, d.HalfX = roundPart(l.re, l.radius, l.imaginary, l.distinct)
	d.Y, d.HalfY = roundPart(l.im, l.radius, l.real, l.distinct)
	d.Radius = hypotUp(d.HalfX, d.HalfY)
	return d
}

// roundPart returns the float64 nearest to x and a bound on its distance from anything
// within radius of x; 0 for a part that is zero.
func roundPart(x, radius *big.Float, zero bool, distinct int) (float64, float64) {
	if zero {
		if distinct == 1 {
			return 0, 0
		}
		return 0, upward(short().Add(short().Abs(x), radius))
	}
	f, _ := x.Float64()
	if math.IsInf(f, 0) {
		return f, math.Inf(1)
	}
	miss := new(big.Float).SetPrec(x.Prec() + 1200).SetFloat64(f)
	miss.Sub(miss, x)
	miss.Abs(miss)
	return f + 0, upward(new(big.Float).SetPrec(miss.Prec()).Add(miss, radius))
}

// upward rounds x ≥ 0 up to a float64, with a little to spare.
func upward(x *big.Float) float64 {
	f, _ := x.Float64()
	return up(f + math.SmallestNonzeroFloat64)
}

// up returns something a little larger than x > 0.
func up(x float64) float64 {
	if x == 0 {
		return 0
	}
	return x + (x*0x1p-50 + math.SmallestNonzeroFloat64)
}

// hypotUp returns an upper bound of √(a²+b²).
func hypotUp(a, b float64) float64 {
	if a == 0 || b == 0 {
		return a + b
	}
	return up(up(math.Hypot(a, b)))
}

const shortBits = 64 // precision of magnitudes and bounds

func short() *big.Float { return new(big.Float).SetPrec(shortBits) }

// bigComplex is a complex number in extended precision.
type bigComplex struct{ re, im *big.Float }

// modulus returns |z| within 2⁻⁶⁰ of itself.
func modulus(z bigComplex) *big.Float {
	if z.im.Sign() == 0 {
		x := short().Set(z.re)
		return x.Abs(x)
	}
	x, y := short().Set(z.re), short().Set(z.im)
	x.Mul(x, x)
	y.Mul(y, y)
	x.Add(x, y)
	if x.Sign() == 0 {
		return x
	}
	return x.Sqrt(x)
}

// within reports whether |x| ≤ r.
func within(x, r *big.Float) bool {
	return new(big.Float).Abs(x).Cmp(r) <= 0
}

// small reports whether a part is known well if it is within r.
func small(r, part *big.Float) bool {
	limit := short().Abs(part)
	return r.Cmp(limit.SetMantExp(limit, tight)) <= 0
}
