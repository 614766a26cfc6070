package rootkernel

import "math"

// CertifyQuick is Certify in plain float64, for answers that need not be sharp: it moves each
// point once more and accepts discs of at most the given radius, relative to the modulus of
// the centre. Parts are bounded by the radius only.
func (k *Kernel) CertifyQuick(dst []Disc, origin bool, relative float64) ([]Disc, bool) {
	if origin {
		dst = append(dst, Disc{})
	}
	for _, q := range k.pairs() {
		d := k.quickPair(q.x, q.y)
		if !(d.Radius <= relative*math.Sqrt(float64(d.X*d.X)+float64(d.Y*d.Y))) {
			return dst, false
		}
		dst = append(dst, d)
	}
	for _, q := range k.reals() {
		d := k.quickReal(q.x)
		if !(d.Radius <= relative*math.Abs(d.X)) {
			return dst, false
		}
		dst = append(dst, d)
	}
	Sort(dst)
	return dst, Disjoint(dst)
}

// quickBounds returns the bounds as fastBounds does, for plain Horner schemes: a step errs by
// less than 3u·(|y||z| + |c|), and by u·|c| for coefficients that were rounded, which makes
// 7(n+1)·u·m.
func (k *Kernel) quickBounds(m, r float64) (bend, miss, slopeMiss float64) {
	n := float64(k.n + 2)
	bend = float64(n * n * 1.02 * m)
	return bend, float64(n * (7 * u) * m), float64(bend / r * (10 * u))
}

func (k *Kernel) quickPair(x, y float64) Disc {
	square := float64(x*x) + float64(y*y)
	if !(square > 0x1p-900 && square < 0x1p900) {
		return Disc{Radius: math.Inf(1)}
	}
	r := math.Sqrt(square)
	var pr, pi, dr, di, m float64
	for i := len(k.c) - 1; i >= 0; i-- {
		c := k.c[i]
		dr, di = float64(dr*x)-float64(di*y)+pr, float64(dr*y)+float64(di*x)+pi
		pr, pi = float64(pr*x)-float64(pi*y)+c, float64(pr*y)+float64(pi*x)
		m = float64(m*r) + (math.Abs(c) + floor)
	}
	d2 := float64(dr*dr) + float64(di*di)
	if !(d2 > 0x1p-900 && d2 < 0x1p900) {
		return Disc{Radius: math.Inf(1)}
	}
	t := 1 / d2
	ur, ui := float64(dr*t), float64(di*t)
	hx, hy := -(float64(pr*ur) + float64(pi*ui)), -(float64(pi*ur) - float64(pr*ui))
	bend, miss, slopeMiss := k.quickBounds(m, r)
	miss += math.Abs(pr+(float64(hx*dr)-float64(hy*di))) + math.Abs(pi+(float64(hx*di)+float64(hy*dr))) + float64(8*u*(math.Abs(pr)+math.Abs(pi)))
	rho := k.discRadius(r, math.Sqrt(d2), math.Abs(hx)+math.Abs(hy), bend, miss, slopeMiss)
	radius := float64((rho + float64(r*(2*u))) * (1 + 0x1p-40)) // the sum z + h is rounded
	return Disc{X: x + hx, Y: y + hy, Radius: radius, HalfX: radius, HalfY: radius}
}

func (k *Kernel) quickReal(x float64) Disc {
	r := math.Abs(x)
	if !(r > 0x1p-450 && r < 0x1p450) {
		return Disc{Radius: math.Inf(1)}
	}
	var p, d, m float64
	for i := len(k.c) - 1; i >= 0; i-- {
		c := k.c[i]
		d = float64(d*x) + p
		p = float64(p*x) + c
		m = float64(m*r) + (math.Abs(c) + floor)
	}
	h := -p / d
	bend, miss, slopeMiss := k.quickBounds(m, r)
	miss += math.Abs(p+float64(h*d)) + float64(8*u*math.Abs(p))
	rho := k.discRadius(r, math.Abs(d), math.Abs(h), bend, miss, slopeMiss)
	radius := float64((rho + float64(r*(2*u))) * (1 + 0x1p-40))
	return Disc{X: x + h, Radius: radius, HalfX: radius}
}
