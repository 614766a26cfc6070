package rootkernel

import "math"

// roughLog returns log₂ x within 0.09, for normal x > 0: the exponent, and the fraction
// taken as linear.
func roughLog(x float64) float64 {
	return float64(float64(int64(math.Float64bits(x)))*0x1p-52) - 1023
}

// roughPower is the inverse of roughLog within its range, else 0 or a huge number.
func roughPower(l float64) float64 {
	if l < -1022 {
		return 0x1p-1022
	}
	if l > 1023 {
		return 0x1p1023
	}
	return math.Float64frombits(uint64((l + 1023) * 0x1p52))
}

// A corner is a corner of the Newton polygon.
type corner struct {
	power int
	log   float64 // log₂ of the modulus of the coefficient, roughly
}

// polygon finds the upper convex hull of the points (i, log₂|cᵢ|): the slopes of its edges
// are the moduli of the roots, roughly (D. A. Bini, Numerical computation of polynomial
// zeros by means of Aberth's method, Numerical Algorithms 13 (1996) 179–200, section 2).
func (k *Kernel) polygon(hull []corner) []corner {
	for i, x := range k.c {
		if x == 0 {
			continue
		}
		l := roughLog(math.Abs(x)) + float64(k.exponent(i))
		for len(hull) >= 2 {
			a, b := hull[len(hull)-2], hull[len(hull)-1]
			if (b.log-a.log)*float64(i-a.power) > (l-a.log)*float64(b.power-a.power) {
				break
			}
			hull = hull[:len(hull)-1]
		}
		hull = append(hull, corner{i, l})
	}
	return hull
}

// turnCos and turnSin turn each starting point against the last one; the angle is the golden
// section of a half turn, so that any number of points spreads evenly.
const (
	turnCos = -0.3623748900 // cos(π·0.618034)
	turnSin = 0.9320333000
)

// Start places the points by the Newton polygon. Edges of odd length meet in a pair with
// the next of their kind. A later attempt starts at other angles.
func (k *Kernel) Start(attempt int) {
	var room [32]corner
	hull := k.polygon(room[:0])
	k.pairCount, k.realCount, k.shift = 0, 0, false
	left := false // a real point of an earlier edge
	var leftLog, leftSign float64
	var leftPower int
	cos, sin := -0.4161468365471424, 0.9092974268256817
	if attempt > 0 {
		sin, cos = math.Sincos(2 + float64(attempt))
	}
	for h := 1; h < len(hull); h++ {
		a, b := hull[h-1], hull[h]
		m := b.power - a.power
		l := (a.log - b.log) / float64(m)
		r := roughPower(l)
		for ; m >= 2; m -= 2 {
			k.addPair(r*cos, r*math.Abs(sin))
			cos, sin = float64(cos*turnCos)-float64(sin*turnSin), float64(cos*turnSin)+float64(sin*turnCos)
		}
		if m == 0 {
			continue
		}
		// The real root of cⱼ·x^odd + cᵢ has the sign of -cᵢ/cⱼ.
		sign := 1.0
		if (k.c[a.power] > 0) == (k.c[b.power] > 0) {
			sign = -1
		}
		switch {
		case !left:
			left, leftLog, leftSign, leftPower = true, l, sign, a.power
		case leftPower+2 == b.power && k.exponents == nil && k.startQuadratic(leftPower):
			left = false
		case l-leftLog < 2 && sign == leftSign:
			g := roughPower((l + leftLog) / 2)
			k.addPair(sign*g*0.8, g*0.6)
			left = false
		default:
			k.addReal(leftSign * roughPower(leftLog))
			k.addReal(sign * r)
			left = false
		}
	}
	if left {
		k.addReal(leftSign * roughPower(leftLog))
	}
}

// startQuadratic places two points at the roots of the quadratic that three neighbouring
// corners of the polygon make, from the given power on: the other terms are smaller there.
func (k *Kernel) startQuadratic(power int) bool {
	lead := 1 / k.c[power+2]
	half := float64(-0.5 * k.c[power+1] * lead)
	product := float64(k.c[power] * lead)
	switch discriminant := float64(half*half) - product; {
	case discriminant < 0:
		k.addPair(half, math.Sqrt(-discriminant))
	case discriminant > 0:
		large := half + math.Copysign(math.Sqrt(discriminant), half)
		k.addReal(large)
		k.addReal(product / large)
	default:
		return false
	}
	return true
}

// Begin starts without points; [Kernel.Place] adds them.
func (k *Kernel) Begin() { k.pairCount, k.realCount, k.shift = 0, 0, false }

// Place adds the point x + jy, the upper one of a pair, or a real point with y = 0. It is not ok
// if there is no room.
func (k *Kernel) Place(x, y float64) bool {
	taken := 2*k.pairCount + k.realCount
	switch {
	case y > 0 && taken+2 <= k.n:
		k.addPair(x, y)
	case y == 0 && taken < k.n:
		k.addReal(x)
	default:
		return false
	}
	return true
}

// Complete tells whether there are as many points as roots.
func (k *Kernel) Complete() bool { return 2*k.pairCount+k.realCount == k.n }
