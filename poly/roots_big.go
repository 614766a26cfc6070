package poly

import (
	"fmt"
	"math"
	"math/big"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/internal/rootkernel"
)

// bigSolver moves points towards the roots of one square-free polynomial.
type bigSolver struct {
	n     int
	whole []*big.Int   // coefficients by power
	prec  uint         // bits
	a     []*big.Float // the coefficients at this precision
	size  []*big.Float // their moduli at 64 bits
	z     []bigComplex
	done  []bool
	t     [8]*big.Float
}

// setPrecision continues with so many bits.
func (b *bigSolver) setPrecision(bits uint) {
	b.prec = bits
	for i, n := range b.whole {
		b.a[i] = new(big.Float).SetPrec(bits).SetInt(n)
		b.size[i] = short().SetInt(n)
		b.size[i].Abs(b.size[i])
	}
	for i := range b.z {
		b.z[i].re.SetPrec(bits)
		b.z[i].im.SetPrec(bits)
		b.done[i] = false
	}
	for i := range b.t {
		b.t[i] = b.float()
	}
}

func (b *bigSolver) float() *big.Float { return new(big.Float).SetPrec(b.prec) }

// start places the points on circles by the Newton polygon of the moduli: D. A. Bini,
// Numerical computation of polynomial zeros by means of Aberth's method, Numerical
// Algorithms 13 (1996) 179–200, section 2.
func (b *bigSolver) start(turn float64) {
	logs := make([]float64, b.n+1)
	for i, s := range b.size {
		logs[i] = math.Inf(-1)
		if s.Sign() != 0 {
			m := new(big.Float)
			e := s.MantExp(m)
			f, _ := m.Float64()
			logs[i] = math.Log2(f) + float64(e)
		}
	}
	var hull []int
	for i := range logs {
		if math.IsInf(logs[i], -1) {
			continue
		}
		for len(hull) >= 2 {
			j, k := hull[len(hull)-2], hull[len(hull)-1]
			if (logs[k]-logs[j])*float64(i-j) > (logs[i]-logs[j])*float64(k-j) {
				break
			}
			hull = hull[:len(hull)-1]
		}
		hull = append(hull, i)
	}
	at := 0
	for h := 1; h < len(hull); h++ {
		i, j := hull[h-1], hull[h]
		m := j - i
		modulus := (logs[i] - logs[j]) / float64(m)
		e := math.Floor(modulus)
		r := math.Exp2(modulus - e)
		for k := 0; k < m; k++ {
			sin, cos := math.Sincos(2*math.Pi*(float64(k)/float64(m)+float64(h)/float64(b.n)) + turn)
			for _, part := range [...]struct {
				to   *big.Float
				from float64
			}{{b.z[at].re, r * cos}, {b.z[at].im, r * sin}} {
				part.to.SetFloat64(part.from)
				part.to.SetMantExp(part.to, int(e))
			}
			at++
		}
	}
}

// evaluate returns p(z), p′(z) and a bound on the error of p(z).
//
// The bound: a complex product and sum at P bits err by less than √8·2⁻ᴾ + 2⁻ᴾ of the
// moduli that enter, the coefficients by 2⁻ᴾ, so Horner's rule errs by less than
// 5·(n+1)·2⁻ᴾ·Σ|aᵢ||z|ⁱ to first order; 8 pays for the rest and for the short sum.
func (b *bigSolver) evaluate(z bigComplex) (p, d bigComplex, bound *big.Float) {
	p = bigComplex{b.float(), b.float()}
	d = bigComplex{b.float(), b.float()}
	r := modulus(z)
	sum := short()
	p.re.Set(b.a[b.n])
	sum.Set(b.size[b.n])
	for i := b.n - 1; i >= 0; i-- {
		b.multiply(d, z)
		d.re.Add(d.re, p.re)
		d.im.Add(d.im, p.im)
		b.multiply(p, z)
		p.re.Add(p.re, b.a[i])
		sum.Mul(sum, r)
		sum.Add(sum, b.size[i])
	}
	bound = sum.Mul(sum, short().SetMantExp(short().SetInt64(8*int64(b.n+1)), -int(b.prec)))
	return p, d, bound
}

// multiply sets x to x·y.
func (b *bigSolver) multiply(x, y bigComplex) {
	b.t[0].Mul(x.re, y.re)
	b.t[1].Mul(x.im, y.im)
	b.t[2].Mul(x.re, y.im)
	b.t[3].Mul(x.im, y.re)
	x.re.Sub(b.t[0], b.t[1])
	x.im.Add(b.t[2], b.t[3])
}

// inverse returns 1/z in short precision, for z ≠ 0.
func inverse(z bigComplex) bigComplex {
	x, y := short().Set(z.re), short().Set(z.im)
	m := short().Mul(x, x)
	m.Add(m, short().Mul(y, y))
	x.Quo(x, m)
	y.Quo(y, m)
	return bigComplex{x, y.Neg(y)}
}

// restless returns how many points still move.
func (b *bigSolver) restless() (count int) {
	for _, done := range b.done {
		if !done {
			count++
		}
	}
	return count
}

// sweep moves each point once and reports whether all stand still.
func (b *bigSolver) sweep() bool {
	still := true
	for i := range b.z {
		if b.done[i] {
			continue
		}
		p, d, bound := b.evaluate(b.z[i])
		if modulus(p).Cmp(bound) <= 0 {
			b.done[i] = true // as good as this precision can tell
			continue
		}
		// w = p/(p′ - p·Σ 1/(z - zⱼ)); the sum needs few digits.
		sum := bigComplex{short(), short()}
		for j := range b.z {
			if j == i {
				continue
			}
			gap := bigComplex{b.float().Sub(b.z[i].re, b.z[j].re), b.float().Sub(b.z[i].im, b.z[j].im)}
			if gap.re.Sign() == 0 && gap.im.Sign() == 0 {
				continue
			}
			v := inverse(gap)
			sum.re.Add(sum.re, v.re)
			sum.im.Add(sum.im, v.im)
		}
		q := bigComplex{b.float().Set(p.re), b.float().Set(p.im)}
		b.multiply(q, sum)
		d.re.Sub(d.re, q.re)
		d.im.Sub(d.im, q.im)
		if d.re.Sign() == 0 && d.im.Sign() == 0 {
			// A saddle: step aside.
			b.z[i].re.Add(b.z[i].re, short().Quo(modulus(b.z[i]), big.NewFloat(64)))
			still = false
			continue
		}
		v := inverse(d)
		b.multiply(p, v)
		b.z[i].re.Sub(b.z[i].re, p.re)
		b.z[i].im.Sub(b.z[i].im, p.im)
		limit := modulus(b.z[i])
		limit.SetMantExp(limit, 8-int(b.prec))
		if modulus(p).Cmp(limit) <= 0 {
			b.done[i] = true
		} else {
			still = false
		}
	}
	return still
}

// radii returns for each point n·|p(zᵢ)|/(|aₙ|·∏|zᵢ - zⱼ|), rounded up: the union of these
// discs holds all roots, and a set of m of them that meets no other holds exactly m (B. T.
// Smith, Error bounds for zeros of a polynomial based upon Gerschgorin's theorems, J. ACM 17
// (1970) 661–674). Points that coincide get an infinite radius.
func (b *bigSolver) radii() []*big.Float {
	radii := make([]*big.Float, b.n)
	for i := range b.z {
		p, _, bound := b.evaluate(b.z[i])
		r := modulus(p)
		r.Add(r, bound)
		r.Mul(r, short().SetInt64(int64(b.n)))
		r.Quo(r, b.size[b.n])
		for j := range b.z {
			if j == i {
				continue
			}
			gap := bigComplex{b.float().Sub(b.z[i].re, b.z[j].re), b.float().Sub(b.z[i].im, b.z[j].im)}
			g := modulus(gap)
			if g.Sign() == 0 {
				r.SetInf(false)
				break
			}
			r.Quo(r, g)
		}
		// Every short operation errs by 2⁻⁶⁰ at most, the gaps by 2⁻ᴾ relative to the
		// larger coordinate, which is why points must not be closer than that allows.
		radii[i] = r.Mul(r, big.NewFloat(1+0x1p-20))
	}
	return radii
}

// maxBits bounds the precision, maxWork the work, in products of two words: some seconds.
const (
	maxBits = 1 << 15
	maxWork = 1 << 31
)

// locate finds all roots of a square-free polynomial, not zero at 0, at once: single ones
// and clusters that float64 cannot part. It starts at the given points (the upper ones of
// conjugate pairs), if they are all there.
func locate(call string, f exact.Poly, points []rootkernel.Point, mirrored bool) ([]located, error) {
	a, _ := f.Integers()
	n := len(a) - 1
	b := &bigSolver{n: n, whole: a, a: make([]*big.Float, n+1), size: make([]*big.Float, n+1), z: make([]bigComplex, n), done: make([]bool, n)}
	for i := range b.z {
		b.z[i] = bigComplex{new(big.Float), new(big.Float)}
	}
	b.setPrecision(128)
	if !b.startAt(points) {
		b.start(0.7)
	}
	work := 0
	for bits := uint(128); bits <= maxBits && work < maxWork; bits *= 2 {
		b.setPrecision(bits)
		words := int(bits / 64)
		for k := 0; k < 60+4*n && work < maxWork; k++ {
			work += b.restless() * n * (8*words*words + 50)
			if b.sweep() {
				break
			}
		}
		if found, ok := b.settle(mirrored); ok {
			return inRange(found, call)
		}
	}
	return nil, &ArgumentError{Call: call, Argument: "p", Reason: "its roots were not parted within the bound on precision and work"}
}

// startAt starts at given points and reports whether they are usable.
func (b *bigSolver) startAt(points []rootkernel.Point) bool {
	var all []rootkernel.Point
	seen := map[rootkernel.Point]bool{}
	for _, p := range points {
		if size := math.Hypot(p.X, p.Y); !(size > 0) || math.IsInf(size, 0) || seen[p] {
			return false
		}
		seen[p] = true
		all = append(all, p)
		if p.Y != 0 {
			all = append(all, rootkernel.Point{X: p.X, Y: -p.Y})
		}
	}
	if len(all) != b.n {
		return false
	}
	for i, p := range all {
		// Off the axes of symmetry, on which points could not leave each other.
		size := math.Hypot(p.X, p.Y)
		b.z[i].re.SetFloat64(p.X + 0x1p-60*size*float64(i%7))
		b.z[i].im.SetFloat64(p.Y + 0x1p-60*size*float64(i%5-2))
	}
	return true
}

// inRange rounds locations to float64, or says which is out of its range.
func inRange(found []location, call string) ([]located, error) {
	rounded := make([]located, 0, len(found))
	for _, l := range found {
		d := l.disc()
		side := ""
		switch size := math.Hypot(d.X, d.Y); {
		case math.IsInf(size, 0) || math.IsInf(d.Radius, 0):
			side = "large"
		case size == 0:
			side = "small, without being zero"
		}
		if side != "" {
			return nil, &RangeError{Call: call, Reason: fmt.Sprintf("a root of modulus %s is too %s for a float64", modulus(bigComplex{l.re, l.im}).Text('g', 6), side)}
		}
		rounded = append(rounded, located{d, l.distinct, l.distinct})
	}
	return rounded, nil
}

// settle proves discs and reports whether they are good enough.
func (b *bigSolver) settle(mirror bool) ([]location, bool) {
	radii := b.radii()
	// Components of discs that meet.
	group := make([]int, b.n)
	for i := range group {
		group[i] = i
	}
	find := func(i int) int {
		for group[i] != i {
			i = group[i]
		}
		return i
	}
	for i := range b.z {
		if radii[i].IsInf() {
			return nil, false
		}
		for j := 0; j < i; j++ {
			if !b.apart(b.z[i], radii[i], b.z[j], radii[j]) {
				group[find(i)] = find(j)
			}
		}
	}
	members := map[int][]int{}
	for i := range group {
		members[find(i)] = append(members[find(i)], i)
	}
	var discs []location
	for _, m := range members {
		// One disc about the first point that covers the component.
		c := b.z[m[0]]
		r := short()
		for _, i := range m {
			gap := modulus(bigComplex{b.float().Sub(b.z[i].re, c.re), b.float().Sub(b.z[i].im, c.im)})
			gap.Add(gap, radii[i])
			if gap.Cmp(r) > 0 {
				r.Set(gap)
			}
		}
		r.Mul(r, big.NewFloat(1+0x1p-20))
		limit := modulus(c)
		if r.Cmp(limit.SetMantExp(limit, tight)) > 0 {
			return nil, false
		}
		discs = append(discs, location{re: c.re, im: c.im, radius: r, distinct: len(m)})
	}
	for i := range discs {
		for j := range discs[:i] {
			if !b.apart(bigComplex{discs[i].re, discs[i].im}, discs[i].radius, bigComplex{discs[j].re, discs[j].im}, discs[j].radius) {
				return nil, false // covering discs must stay apart too
			}
		}
	}
	// Symmetry: a disc whose mirror image meets no other disc holds its own mirror images.
	var found []location
	for i := range discs {
		d := &discs[i]
		if within(d.im, d.radius) {
			if !b.alone(discs, i, bigComplex{d.re, new(big.Float).Neg(d.im)}) {
				return nil, false
			}
			d.real = true
		} else if !small(d.radius, d.im) {
			return nil, false
		}
		if within(d.re, d.radius) && !d.real {
			if mirror {
				if !b.alone(discs, i, bigComplex{new(big.Float).Neg(d.re), d.im}) {
					return nil, false
				}
				d.imaginary = true
			} else {
				return nil, false
			}
		} else if !d.real && !small(d.radius, d.re) {
			return nil, false
		}
		if d.real || d.im.Sign() > 0 {
			found = append(found, *d)
		}
	}
	return found, true
}

// apart reports whether two closed discs have no common point.
func (b *bigSolver) apart(c bigComplex, r *big.Float, d bigComplex, s *big.Float) bool {
	gap := modulus(bigComplex{b.float().Sub(c.re, d.re), b.float().Sub(c.im, d.im)})
	gap.Mul(gap, big.NewFloat(1-0x1p-20))
	return gap.Cmp(short().Add(r, s)) > 0
}

// alone reports whether the disc of discs[i], moved to c, meets no other disc.
func (b *bigSolver) alone(discs []location, i int, c bigComplex) bool {
	for j := range discs {
		if j != i && !b.apart(c, discs[i].radius, bigComplex{discs[j].re, discs[j].im}, discs[j].radius) {
			return false
		}
	}
	return true
}
