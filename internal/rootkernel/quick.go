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
		if !(d.Radius <= relative*math.Sqrt(d.X*d.X+d.Y*d.Y)) {
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
	bend = n * n * 1.02 * m
	return bend, n * (7 * u) * m, bend / r * (10 * u)
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
		dr, di = dr*x-di*y+pr, dr*y+di*x+pi
		pr, pi = pr*x-pi*y+c, pr*y+pi*x
		m = m*r + (math.Abs(c) + floor)
	}
	d2 := dr*dr + di*di
	if !(d2 > 0x1p-900 && d2 < 0x1p900) {
		return Disc{Radius: math.Inf(1)}
	}
	t := 1 / d2
	ur, ui := dr*t, di*t
	hx, hy := -(pr*ur + pi*ui), -(pi*ur - pr*ui)
	bend, miss, slopeMiss := k.quickBounds(m, r)
	miss += math.Abs(pr+(hx*dr-hy*di)) + math.Abs(pi+(hx*di+hy*dr)) + 8*u*(math.Abs(pr)+math.Abs(pi))
	rho := k.discRadius(r, math.Sqrt(d2), math.Abs(hx)+math.Abs(hy), bend, miss, slopeMiss)
	radius := (rho + r*(2*u)) * (1 + 0x1p-40) // the sum z + h is rounded
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
		d = d*x + p
		p = p*x + c
		m = m*r + (math.Abs(c) + floor)
	}
	h := -p / d
	bend, miss, slopeMiss := k.quickBounds(m, r)
	miss += math.Abs(p+h*d) + 8*u*math.Abs(p)
	rho := k.discRadius(r, math.Abs(d), math.Abs(h), bend, miss, slopeMiss)
	radius := (rho + r*(2*u)) * (1 + 0x1p-40)
	return Disc{X: x + h, Radius: radius, HalfX: radius}
}
