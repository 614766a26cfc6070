package exact

import "math"

// The functions of this file tell on which side of a boundary every point lies whose real part
// differs from re by at most halfRe and whose imaginary part differs from im by at most halfIm:
// -1 inside, +1 outside, 0 if that is not certain.

// SideOfLine tells whether Re s < sigma (-1) or Re s > sigma (+1).
func SideOfLine(re, halfRe, sigma float64) int {
	return bounded{re, halfRe}.sub(bounded{sigma, 0}).sign()
}

// SideOfRays tells whether |arg(-s)| < acos zeta (-1) or > (+1), for 0 < zeta < 1.
func SideOfRays(re, halfRe, im, halfIm, zeta float64) int {
	z := bounded{zeta, 0}
	one := bounded{1, 0}
	across := one.sub(z).mul(one.add(z)).sqrt()
	x, y := bounded{re, halfRe}, bounded{math.Abs(im), halfIm}
	return across.mul(x).add(z.mul(y)).sign()
}

// SideOfCircle tells whether |s| < radius (-1) or > (+1).
func SideOfCircle(re, halfRe, im, halfIm, radius float64) int {
	x, y, r := bounded{re, halfRe}, bounded{im, halfIm}, bounded{radius, 0}
	return x.mul(x).add(y.mul(y)).sub(r.mul(r)).sign()
}
