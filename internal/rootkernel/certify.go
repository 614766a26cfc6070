package rootkernel

import "math"

// u is half the distance from 1 to the next float64.
const u = 0x1p-53

// A Disc holds exactly one root, and neither another disc nor the conjugate of one meets it.
// It stands for itself and its conjugate unless Y is 0: then its root is real.
type Disc struct {
	X, Y         float64 // the centre
	Radius       float64
	HalfX, HalfY float64 // bounds on the distance of the root from the centre, part by part
}

// A Point is a point not proven to belong to a root; Y is 0 or positive.
type Point struct{ X, Y float64 }

// A Failure says what Certify could not do; of several reasons, the last in this list.
type Failure int8

const (
	None      Failure = iota
	OnAxis            // the real part of a root may be zero
	Imprecise         // a disc came out too wide
	Meeting           // two discs meet
)

// Certify moves the points once or twice more, with the polynomial evaluated in twice the
// working precision, and proves a disc about each that holds exactly one root. n disjoint
// ones hold all roots, and one that is its own mirror image holds a real root. It appends
// the discs to dst, the centres by ascending X, then Y.
//
// With origin, a disc of radius 0 at 0 stands among them for roots there that the
// polynomial was divided by.
//
// What is not proven stands in [Kernel.Left] afterwards, and the failure says why.
func (k *Kernel) Certify(dst []Disc, origin bool) ([]Disc, Failure) {
	if origin {
		dst = append(dst, Disc{})
	}
	k.Left = k.Left[:0]
	failure := None
	for _, q := range k.pairs() {
		d, why := k.certifyPair(q.x, q.y)
		if why == None && !d.normal() {
			why = Imprecise
		}
		if why == None {
			dst = append(dst, d)
		} else {
			k.Left = append(k.Left, Point{q.x, q.y})
			failure = max(failure, why)
		}
	}
	for _, q := range k.reals() {
		d, why := k.certifyReal(q.x)
		if why == None && !d.normal() {
			why = Imprecise
		}
		if why == None {
			dst = append(dst, d)
		} else {
			k.Left = append(k.Left, Point{q.x, 0})
			failure = max(failure, why)
		}
	}
	Sort(dst)
	if !Disjoint(dst) {
		failure = Meeting
	}
	return dst, failure
}

// normal reports whether nothing of the disc has left the range of normal numbers on its way out
// of the frame it was proven in.
func (d Disc) normal() bool {
	return d.Radius <= math.MaxFloat64 &&
		(d.X == 0 || math.Abs(d.X) > 0x1p-900) && (d.Y == 0 || d.Y > 0x1p-900)
}

// Sort orders discs by X, then Y.
func Sort(discs []Disc) {
	for i := 1; i < len(discs); i++ {
		d := discs[i]
		j := i
		for ; j > 0 && (discs[j-1].X > d.X || discs[j-1].X == d.X && discs[j-1].Y > d.Y); j-- {
			discs[j] = discs[j-1]
		}
		discs[j] = d
	}
}

// Disjoint reports whether sorted discs, and their conjugates, have no common point.
func Disjoint(discs []Disc) bool {
	largest := 0.0
	for _, d := range discs {
		if d.Y != 0 && !(d.Y > d.Radius) {
			return false
		}
		largest = max(largest, d.Radius)
	}
	for i := range discs {
		a := &discs[i]
		reach := float64((a.Radius + largest) * (1 + 0x1p-50))
		for j := i + 1; j < len(discs); j++ {
			b := &discs[j]
			dx, dy := b.X-a.X, b.Y-a.Y
			if dx > reach {
				break
			}
			if sum := float64((a.Radius + b.Radius) * (1 + 0x1p-50)); math.Abs(dy) > sum || dx > sum {
				continue
			}
			if modulus(dx, dy) <= (a.Radius+b.Radius)*(1+0x1p-50) {
				return false
			}
		}
	}
	return true
}

// The error bounds of the evaluation. With exact coefficients c + lo and m = Σ|cᵢ|·|z|ⁱ:
//
// Each step of Horner's rule y ← y·z + c errs by an ε that the transformations of Knuth
// and (by fused multiply-add) of the product give exactly, |ε| ≤ 3u·(|y||z| + |c|) for a
// complex z and up to terms in u² which the factors below have room for; p(z) is the last y
// plus Σ ε·zⁱ (S. Graillat, V. Ménissier-Morain, Accurate summation, dot product and
// polynomial evaluation in complex floating point arithmetic, Information and Computation
// 216 (2012) 57–71). Since |y| ≤ m/|z|ⁱ, Σ|ε||z|ⁱ ≤ 6(n+1)·u·m; the parts of the ε
// that are added up to it come to 8(n+1)·u·m at most. That sum is evaluated in float64
// with a relative error of 4(n+2)·u per term, whether fused or not. So the compensated
// value errs by less than 32(n+2)²·u²·m = 2⁻¹⁰¹(n+2)²·m, besides its own last rounding.
//
// The derivative, by Horner's rule on the same y, errs by 8(n+1)·u·Σ i|cᵢ||z|ⁱ⁻¹ at
// most, and that sum is at most n·m/|z|.
//
// Moving to z + h, with τ = |h|/|z| ≤ 2⁻²⁰/n: by Taylor, p(z+h) differs from p + h·p′ by at
// most n²·m·τ²/2·1.01, and p′(z+h) from p′ by at most n²·m/|z|·τ·1.01.
//
// floor joins m at each step: where products are so small that their losses are no float64
// any more, m grows beyond what matters to it and the discs come out too wide, not wrong.
const floor = 0x1p-960

// discRadius returns the radius R of a disc about z + h that holds exactly one root, from
// r = |z|, |p′(z)| as evaluated, |h|, and bounds: bend on |p″|·r² within 2⁻⁵²·r of the segment
// from z to z + h, tangent on |p(z) + h·p′(z)| for that p′(z), slopeMiss on its error. It is
// infinite or NaN where nothing can be said.
//
// On the circle of radius R about z + h, p differs from its tangent p + p′·(s - z - h) by at
// most bend/r²·R²/2, and the tangent's modulus is at least |p′|·R - |p|. Where that is more,
// both have the same number of zeros inside (Rouché), and the tangent has one.
func (k *Kernel) discRadius(r, d, h, bend, tangent, slopeMiss float64) float64 {
	tau := h / r
	if !(tau < 0x1p-20/float64(k.n)) {
		return math.Inf(1)
	}
	slope := float64(d*(1-8*u)) - slopeMiss - float64(bend/r*tau)
	if !(slope > d/2) {
		return math.Inf(1)
	}
	residue := float64(tangent*1.01) + float64(bend*tau*tau) + float64(slopeMiss*h) + float64(4*u*h*d)
	radius := float64(residue / slope * 1.02)
	if !(bend/r*(radius/r) < 0.019*slope) {
		return math.Inf(1)
	}
	return radius
}

// fastBounds returns the bounds on |p″|·r² and on the errors of p and p′, after compensated.
func (k *Kernel) fastBounds(m, r float64) (bend, miss, slopeMiss float64) {
	n := float64(k.n + 2)
	bend = float64(n * n * 1.02 * m)
	return bend, valueMiss(k.n, m), float64(bend / r * (10 * u))
}

// valueMiss bounds the error of the compensated p(z), besides its own last rounding.
func valueMiss(n int, m float64) float64 {
	return float64(float64((n+2)*(n+2)) * 0x1p-101 * m)
}

// Value returns the polynomial with the coefficients c + lo by power at x + jy, evaluated as if
// in twice the working precision, and a bound on its error besides the rounding of each part.
// The bound is infinite or NaN where something overflows.
func Value(c, lo []float64, x, y float64) (re, im, miss float64) {
	var m float64
	if y == 0 {
		re, _, m = compensatedReal(c, lo, x, math.Abs(x))
	} else {
		re, im, _, _, m = compensated(c, lo, x, y, modulus(x, y))
	}
	return re, im, float64(valueMiss(len(c)-1, m) * 1.01)
}

// carefulBounds does so after values; p2 is |p″|/2 as evaluated, h the step. Horner's rule for
// p″ errs by less than 24(n+2)³·u·m/r², and p‴ is at most n³·m/r³.
func (k *Kernel) carefulBounds(m, r, p2, h float64) (bend, slopeMiss float64) {
	n := float64(k.n + 2)
	cube := float64(n * n * n * m)
	return float64(2.01*p2*r*r) + float64(cube*(24*u+float64(1.05*(h/r+0x1p-52)))), float64(cube / r * 0x1p-98)
}

// sharp is how small a disc about a point must be beside its modulus, before the centre is
// rounded; each part must be known to partSharp of itself.
const (
	sharp        = 0x1p-54
	sharpCareful = 0x1p-52
	partSharp    = 0x1p-48
)

// attempts limits the evaluations for one point.
const attempts = 4

func (k *Kernel) certifyPair(x, y float64) (Disc, Failure) {
	failure := Imprecise
	for range attempts {
		unit, enough := 1.0, sharp
		var r, pr, pi, dr, di, p2, m, bend, miss, slopeMiss float64
		if k.careful {
			if r = modulus(x, y); !k.enter(r) {
				return Disc{}, Imprecise
			}
			unit, enough = k.frame.unit, sharpCareful
			x, y, r = x/unit, y/unit, r/unit
			pr, pi, dr, di, p2, m, miss = k.frame.values(k.n, x, y, r)
		} else {
			square := float64(x*x) + float64(y*y)
			if !(square > 0x1p-900 && square < 0x1p900) {
				return Disc{}, Imprecise
			}
			r = math.Sqrt(square)
			pr, pi, dr, di, m = compensated(k.c, k.lo, x, y, r)
			bend, miss, slopeMiss = k.fastBounds(m, r)
		}
		d2 := float64(dr*dr) + float64(di*di)
		if !(d2 > 0x1p-900 && d2 < 0x1p900) {
			return Disc{}, Imprecise
		}
		t := 1 / d2
		ur, ui := float64(dr*t), float64(di*t) // in this order no product underflows that matters
		hx, hy := -(float64(pr*ur) + float64(pi*ui)), -(float64(pi*ur) - float64(pr*ui))
		h := math.Abs(hx) + math.Abs(hy)
		if k.careful {
			bend, slopeMiss = k.carefulBounds(m, r, p2, h)
		}
		// |p + h·p′| as it is, whatever may have been lost on the way to h.
		miss += math.Abs(pr+(float64(hx*dr)-float64(hy*di))) + math.Abs(pi+(float64(hx*di)+float64(hy*dr))) + float64(8*u*(math.Abs(pr)+math.Abs(pi)))
		rho := k.discRadius(r, math.Sqrt(d2), h, bend, miss, slopeMiss)
		X, Y := x+hx, y+hy
		if rho <= enough*r && rho <= partSharp*math.Abs(Y) && Y > 0 {
			if rho <= partSharp*math.Abs(X) {
				lostX, lostY := (x-X)+hx, (y-Y)+hy
				up := float64(unit * (1 + 0x1p-48))
				return Disc{
					X: X * unit, Y: Y * unit,
					Radius: (math.Sqrt(float64(lostX*lostX)+float64(lostY*lostY)) + rho) * up,
					HalfX:  (math.Abs(lostX) + rho) * up,
					HalfY:  (math.Abs(lostY) + rho) * up,
				}, None
			}
			if k.Mirrored && math.Abs(X) <= rho {
				// A disc of three times the radius holds this root and its mirror image,
				// and still only one: they are the same.
				half := float64((math.Abs((y-Y)+hy) + rho) * (unit * (1 + 0x1p-48)))
				return Disc{Y: Y * unit, Radius: half, HalfY: half}, None
			}
			failure = OnAxis
		}
		x, y = float64(X*unit), float64(Y*unit)
	}
	return Disc{}, failure
}

func (k *Kernel) certifyReal(x float64) (Disc, Failure) {
	for range attempts {
		unit, enough := 1.0, sharp
		r := math.Abs(x)
		var p, d, p2, m, bend, miss, slopeMiss float64
		if k.careful {
			if !k.enter(r) {
				return Disc{}, Imprecise
			}
			unit, enough = k.frame.unit, sharpCareful
			x, r = x/unit, r/unit
			p, d, p2, m, miss = k.frame.valuesReal(k.n, x, r)
		} else {
			if !(r > 0x1p-450 && r < 0x1p450) {
				return Disc{}, Imprecise
			}
			p, d, m = compensatedReal(k.c, k.lo, x, r)
			bend, miss, slopeMiss = k.fastBounds(m, r)
		}
		h := -p / d
		if k.careful {
			bend, slopeMiss = k.carefulBounds(m, r, p2, math.Abs(h))
		}
		miss += math.Abs(p+float64(h*d)) + float64(8*u*math.Abs(p))
		rho := k.discRadius(r, math.Abs(d), math.Abs(h), bend, miss, slopeMiss)
		X := x + h
		if rho <= enough*r {
			half := float64((math.Abs((x-X)+h) + rho) * (unit * (1 + 0x1p-48)))
			return Disc{X: X * unit, Radius: half, HalfX: half}, None
		}
		x = float64(X * unit)
	}
	return Disc{}, Imprecise
}

// compensated returns p(z), p′(z) and m, as above.
func compensated(c, lo []float64, x, y, r float64) (pr, pi, dr, di, m float64) {
	var er, ei float64
	n := len(c) - 1
	pr = c[n]
	m = math.Abs(c[n]) + floor
	if lo != nil {
		er = lo[n]
	}
	for i := n - 1; i >= 0; i-- {
		dr, di = float64(dr*x)-float64(di*y)+pr, float64(dr*y)+float64(di*x)+pi
		m = float64(m*r) + math.Abs(c[i]) + floor

		p1, p2 := float64(pr*x), float64(pi*y)
		p3, p4 := float64(pr*y), float64(pi*x)
		e1, e2 := math.FMA(pr, x, -p1), math.FMA(pi, y, -p2)
		e3, e4 := math.FMA(pr, y, -p3), math.FMA(pi, x, -p4)

		s := p1 - p2
		t := s - p1
		f1 := (p1 - (s - t)) - (p2 + t)
		q := s + c[i]
		t = q - s
		f2 := (s - (q - t)) + (c[i] - t)
		w := p3 + p4
		t = w - p3
		f3 := (p3 - (w - t)) + (p4 - t)
		pr, pi = q, w

		local := (e1 - e2) + (f1 + f2)
		if lo != nil {
			local += lo[i]
		}
		er, ei = float64(er*x)-float64(ei*y)+local, float64(er*y)+float64(ei*x)+((e3+e4)+f3)
	}
	return pr + er, pi + ei, dr, di, m
}

// compensatedReal does the same on the real axis.
func compensatedReal(c, lo []float64, x, r float64) (p, d, m float64) {
	var e float64
	n := len(c) - 1
	p = c[n]
	m = math.Abs(c[n]) + floor
	if lo != nil {
		e = lo[n]
	}
	for i := n - 1; i >= 0; i-- {
		d = float64(d*x) + p
		m = float64(m*r) + math.Abs(c[i]) + floor
		p1 := float64(p * x)
		e1 := math.FMA(p, x, -p1)
		q := p1 + c[i]
		t := q - p1
		local := e1 + ((p1 - (q - t)) + (c[i] - t))
		if lo != nil {
			local += lo[i]
		}
		e = float64(e*x) + local
		p = q
	}
	return p + e, d, m
}
