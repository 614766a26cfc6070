package poly

import (
	"fmt"
	"math"
	"math/big"
	"math/rand"
	"os"
	"slices"
	"testing"
)

// Every answer of Roots on seeded random polynomials is proved again, with integers and
// big.Float and nothing of the package's own stages: Newton's iteration from the given
// values at 400 bits and more leads to points about which tiny discs hold one root each (or
// one of the multiplicity that was told); they must lie within the radius and the bounds of
// the parts, and be all the roots there are.

// judge is the evaluator of the proof.
type judge struct {
	n        int
	a        []*big.Int
	digits   int // bits to which roots are refined
	prec     uint
	distinct int // degree of the square-free part
}

func newJudge(p Poly) *judge {
	a, _ := p.Integers()
	return &judge{n: len(a) - 1, a: a, distinct: p.integers().SquareFreePart().Degree()}
}

// taylor returns the first k Taylor coefficients of p at x + jy, and Σ|aᵢ||z|ⁱ.
func (j *judge) taylor(x, y *big.Float, k int) (re, im []*big.Float, size *big.Float) {
	float := func() *big.Float { return new(big.Float).SetPrec(j.prec) }
	re, im = make([]*big.Float, k), make([]*big.Float, k)
	for i := range re {
		re[i], im[i] = float(), float()
	}
	r := modulusOf(x, y)
	size = new(big.Float).SetPrec(64)
	t1, t2, t3 := float(), float(), float()
	flat := y.Sign() == 0
	for i := j.n; i >= 0; i-- {
		for l := k - 1; l >= 0; l-- {
			t1.Mul(re[l], x)
			if !flat {
				t2.Mul(im[l], y)
				t3.Mul(re[l], y)
				t1.Sub(t1, t2)
				t2.Mul(im[l], x)
				im[l].Add(t2, t3)
			}
			re[l].Set(t1)
			if l > 0 {
				re[l].Add(re[l], re[l-1])
				im[l].Add(im[l], im[l-1])
			} else {
				re[0].Add(re[0], t3.SetInt(j.a[i]))
			}
		}
		size.Mul(size, r)
		s := new(big.Float).SetPrec(64).SetInt(j.a[i])
		size.Add(size, s.Abs(s))
	}
	return re, im, size
}

func modulusOf(x, y *big.Float) *big.Float {
	a, b := new(big.Float).SetPrec(64).Set(x), new(big.Float).SetPrec(64).Set(y)
	a.Mul(a, a)
	a.Add(a, b.Mul(b, b))
	if a.Sign() == 0 {
		return a
	}
	return a.Sqrt(a)
}

// refine moves a root of multiplicity m home and returns it with the radius of a disc that
// holds exactly m roots; nil if that cannot be shown.
func (j *judge) refine(v complex128, m int) (x, y, radius *big.Float) {
	j.prec = uint(j.digits*m + 140)
	x, y = new(big.Float).SetPrec(j.prec).SetFloat64(real(v)), new(big.Float).SetPrec(j.prec).SetFloat64(imag(v))
	for step := 0; step < 12; step++ {
		// A root of multiplicity m is a simple one of the derivative m-1; its proof needs
		// the lower ones too.
		re, im, size := j.taylor(x, y, m+1)
		r := modulusOf(x, y)
		// Pellet: |bₘ|Rᵐ > Σ|bₖ|Rᵏ for k ≠ m; those above m are at most C(n,k)·size/rᵏ.
		R := new(big.Float).SetPrec(64).SetMantExp(r, -j.digits)
		left := modulusOf(re[m], im[m])
		right := new(big.Float).SetPrec(64)
		power := new(big.Float).SetPrec(64).SetInt64(1)
		noise := new(big.Float).SetPrec(64).SetMantExp(size, 20-int(j.prec))
		for k := 0; k < m; k++ {
			b := modulusOf(re[k], im[k])
			b.Add(b, new(big.Float).Quo(new(big.Float).Mul(noise, binomial(j.n, k)), powerOf(r, k)))
			right.Add(right, b.Mul(b, power))
			power.Mul(power, R)
		}
		left.Mul(left, power)
		for k := m + 1; k <= j.n; k++ {
			power.Mul(power, R)
			b := new(big.Float).Quo(new(big.Float).Mul(size, binomial(j.n, k)), powerOf(r, k))
			right.Add(right, b.Mul(b, power))
			if k > m+1 {
				right.Add(right, b) // the rest is far smaller
				break
			}
		}
		if left.Cmp(new(big.Float).Mul(right, big.NewFloat(1.001))) > 0 {
			return x, y, R
		}
		// Newton on the derivative m-1: bₘ₋₁/(m·bₘ).
		d := new(big.Float).SetPrec(j.prec).Mul(re[m], re[m])
		d.Add(d, new(big.Float).SetPrec(j.prec).Mul(im[m], im[m]))
		if d.Sign() == 0 {
			return nil, nil, nil
		}
		d.Mul(d, new(big.Float).SetInt64(int64(m)))
		f := func() *big.Float { return new(big.Float).SetPrec(j.prec) }
		wx := f().Add(f().Mul(re[m-1], re[m]), f().Mul(im[m-1], im[m]))
		wy := f().Sub(f().Mul(im[m-1], re[m]), f().Mul(re[m-1], im[m]))
		x.Sub(x, wx.Quo(wx, d))
		y.Sub(y, wy.Quo(wy, d))
	}
	return nil, nil, nil
}

func binomial(n, k int) *big.Float {
	return new(big.Float).SetPrec(64).SetInt(new(big.Int).Binomial(int64(n), int64(k)))
}

func powerOf(r *big.Float, k int) *big.Float {
	x := new(big.Float).SetPrec(64).SetInt64(1)
	for ; k > 0; k-- {
		x.Mul(x, r)
	}
	return x
}

// check proves an answer and returns what is wrong with it.
func (j *judge) check(roots []Root) string {
	distinct := 0
	for _, r := range roots {
		distinct += r.Distinct
		if imag(r.Value) < 0 || r.Value == 0 && r.Radius == 0 || r.Distinct > 1 {
			continue // judged with the conjugate; by the counts; by the counts
		}
		// A part that is far smaller than the other one needs more digits.
		wrong := ""
		for _, j.digits = range [...]int{130, 400, 1400, 3000} {
			if wrong = j.checkRoot(r); wrong == "" {
				break
			}
		}
		if wrong != "" {
			return fmt.Sprintf("%+v: %s", r, wrong)
		}
	}
	if distinct != j.distinct {
		return fmt.Sprintf("%d distinct roots told, there are %d", distinct, j.distinct)
	}
	return ""
}

func (j *judge) checkRoot(r Root) string {
	x, y, tiny := j.refine(r.Value, r.Multiplicity)
	if x == nil {
		return fmt.Sprintf("no proof of %d roots there", r.Multiplicity)
	}
	missX, missY := miss(x, real(r.Value)), miss(y, imag(r.Value))
	for _, bound := range []struct {
		name string
		miss *big.Float
		most float64
	}{{"Radius", modulusOf(missX, missY), r.Radius}, {"HalfRe", missX, r.HalfRe}, {"HalfIm", missY, r.HalfIm}} {
		limit := new(big.Float).SetPrec(3000).SetFloat64(bound.most)
		if bound.most == 0 {
			limit.Set(tiny) // exactly zero, as far as can be told
		} else {
			limit.Sub(limit, tiny)
		}
		if bound.miss.Cmp(limit) > 0 {
			return fmt.Sprintf("the true root is %v from it, above %s", bound.miss.Text('g', 20), bound.name)
		}
	}
	return ""
}

func miss(x *big.Float, v float64) *big.Float {
	d := new(big.Float).SetPrec(3000).SetFloat64(v)
	d.Sub(d, x)
	return d.Abs(d)
}

// families are the random polynomials of the bar, and harder ones.
var families = []struct {
	name string
	make func(*rand.Rand) Poly
}{
	{"uniform", func(r *rand.Rand) Poly {
		return New(randomCoefficients(r, func() float64 { return 2*r.Float64() - 1 })...)
	}},
	{"log-uniform over 1e±150", func(r *rand.Rand) Poly {
		return New(randomCoefficients(r, func() float64 {
			return math.Copysign(math.Pow(10, 300*r.Float64()-150), r.Float64()-0.5)
		})...)
	}},
	{"±1", func(r *rand.Rand) Poly {
		return New(randomCoefficients(r, func() float64 { return float64(2*r.Intn(2) - 1) })...)
	}},
	{"nearly equal roots", func(r *rand.Rand) Poly {
		n := 1 + r.Intn(30)
		p := New(1)
		spread := math.Pow(10, -16*r.Float64())
		for p.Degree() < n {
			re, im := 2*r.Float64()-1, 2*r.Float64()-1
			for m := 1 + r.Intn(4); m > 0 && p.Degree() < n; m-- {
				a, b := re*(1+spread*r.NormFloat64()), im*(1+spread*r.NormFloat64())
				if r.Intn(2) == 0 || p.Degree() == n-1 {
					p = roundedPoly(p.Mul(New(1, -a)))
				} else {
					p = roundedPoly(p.Mul(New(1, -2*a, a*a+b*b)))
				}
			}
		}
		return p
	}},
	{"exactly repeated roots", func(r *rand.Rand) Poly {
		p := New(r.Float64() + 0.5)
		for n := 1 + r.Intn(4); n > 0; n-- {
			f := New(1, math.Round(8*r.NormFloat64())/8)
			if r.Intn(2) == 0 {
				f = New(1, math.Round(8*r.NormFloat64())/8, math.Round(16*r.NormFloat64())/8)
			}
			for m := 1 + r.Intn(4); m > 0; m-- {
				p = p.Mul(f)
			}
		}
		return p
	}},
	{"light damping and the imaginary axis", func(r *rand.Rand) Poly {
		p := New(1)
		for n := 1 + r.Intn(5); n > 0; n-- {
			w := math.Exp(r.NormFloat64())
			zeta := 0.0
			if r.Intn(2) == 0 {
				zeta = math.Pow(10, -12*r.Float64())
			}
			p = p.Mul(New(1, 2*zeta*w, w*w))
		}
		if r.Intn(2) == 0 {
			p = p.Mul(New(1, r.Float64()))
		}
		return p
	}},
	{"small integers, many zero", func(r *rand.Rand) Poly {
		return New(randomCoefficients(r, func() float64 { return float64(max(0, r.Intn(12)-6)) })...)
	}},
	{"stable plants", func(r *rand.Rand) Poly { return New(randomStable(r, 1+r.Intn(30))...) }},
}

// roundedPoly returns p with its coefficients rounded to float64.
func roundedPoly(p Poly) Poly {
	c := make([]float64, p.Degree()+1)
	for i := range c {
		c[i] = p.Coefficient(p.Degree() - i)
	}
	return New(c...)
}

func randomCoefficients(r *rand.Rand, next func() float64) []float64 {
	c := make([]float64, 2+r.Intn(30))
	for i := range c {
		c[i] = next()
	}
	return c
}

// A few thousand by default; POLEWRIGHT_SWEEP=1 makes it a million, in ten rounds.
func TestRootsAreSound(t *testing.T) {
	count, rounds := 250, 1
	if testing.Short() {
		count = 60
	}
	if os.Getenv("POLEWRIGHT_SWEEP") != "" {
		count, rounds = 100_000/len(families), 10
	}
	for round := range rounds {
		for i, f := range families {
			t.Run(fmt.Sprintf("round=%d/%s", round, f.name), func(t *testing.T) {
				r := rand.New(rand.NewSource(int64(1000*round + i)))
				var s Solver
				for range count {
					if p := f.make(r); p.Degree() >= 0 {
						checkSound(t, p, &s)
					}
					if t.Failed() {
						return
					}
				}
			})
		}
	}
}

func checkSound(t *testing.T, p Poly, s *Solver) {
	roots, err := p.Roots()
	if err != nil {
		t.Errorf("%v: %v", p, err)
		return
	}
	checkShape(t, p, roots)
	if wrong := newJudge(p).check(roots); wrong != "" {
		t.Errorf("%v: %s", p, wrong)
	}
	again, err := s.Roots(p)
	if err != nil || !slices.Equal(again, roots) {
		t.Errorf("%v: the workspace variant differs: %v %v, want %v", p, again, err, roots)
	}
}
