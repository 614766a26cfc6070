package locus

import (
	"math"
	"math/cmplx"
	"strconv"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// A Family is the set of polynomials fixed + k·scaled for all real k: the characteristic
// polynomials of a loop with a variable gain, or of anything else that depends linearly on one
// parameter. It is formed without rounding.
//
// The zero value is no family; its calls return an error. A Family never changes; goroutines
// may share one.
type Family struct {
	fixed, scaled poly.Poly
	period        float64
}

// Gain returns the family of 1 + k·open = 0 with negative feedback: denominator + k·numerator.
// The zeros and the poles of open are not cancelled: what they have in common is a fixed root.
//
// open is rational. Dead time of a function of z is whole periods and becomes poles at z = 0;
// that of a function of s gives infinitely many roots and is a [*tf.UnsupportedError]. An
// invalid open gives its own error.
func Gain(open tf.Function) (Family, error) {
	if err := open.Err(); err != nil {
		return Family{}, err
	}
	fixed, period := open.Denominator(), open.Period()
	if dead := open.DeadTime(); dead != 0 {
		if period == 0 {
			return Family{}, &tf.UnsupportedError{Call: "locus.Gain", What: "dead time in s, which gives infinitely many roots; tf.Loop.StableGains and spec answer with dead time"}
		}
		periods := math.Round(dead / period)
		if periods > poly.MaxDegree {
			return Family{}, &poly.ArgumentError{Call: "locus.Gain", Argument: "open", Reason: "dead time of more than " + strconv.Itoa(poly.MaxDegree) + " periods"}
		}
		shift := make([]float64, int(periods)+1)
		shift[0] = 1
		fixed = fixed.Mul(poly.New(shift...))
	}
	f, err := Parameter(fixed, open.Numerator())
	if err != nil {
		return Family{}, err
	}
	f.period = period
	return f, nil
}

// Parameter returns the family fixed + k·scaled, for any parameter k that enters linearly. The
// degree of scaled may be the higher one; either polynomial may be constant or zero, but not
// both zero. The error is a [*poly.ArgumentError].
func Parameter(fixed, scaled poly.Poly) (Family, error) {
	const call = "locus.Parameter"
	if err := fixed.Err(); err != nil {
		return Family{}, err
	}
	if err := scaled.Err(); err != nil {
		return Family{}, err
	}
	if fixed.Degree() < 0 && scaled.Degree() < 0 {
		return Family{}, &poly.ArgumentError{Call: call, Argument: "scaled", Reason: "both polynomials are zero, so that every number is a root"}
	}
	if n := max(fixed.Degree(), scaled.Degree()); n > poly.MaxDegree {
		return Family{}, &poly.ArgumentError{Call: call, Argument: "fixed, scaled", Reason: "degree " + strconv.Itoa(n) + "; at most " + strconv.Itoa(poly.MaxDegree)}
	}
	return Family{fixed: fixed, scaled: scaled}, nil
}

// Fixed returns the polynomial that stands without k: the open loop's denominator.
func (f Family) Fixed() poly.Poly { return f.fixed }

// Scaled returns the polynomial that is multiplied by k: the open loop's numerator.
func (f Family) Scaled() poly.Poly { return f.scaled }

// Period returns the sampling period of a family in z, in seconds; 0 for one in s.
func (f Family) Period() float64 { return f.period }

// valid returns an error for the zero Family.
func (f Family) valid(call string) error {
	if f.fixed.Degree() < 0 && f.scaled.Degree() < 0 {
		return &poly.ArgumentError{Call: call, Argument: "f", Reason: "the zero Family is no family; make one with Gain or Parameter"}
	}
	return nil
}

// At returns the polynomial fixed + k·scaled, exactly. A k that is not finite makes it invalid.
func (f Family) At(k float64) poly.Poly { return f.fixed.Add(f.scaled.Scale(k)) }

// PolesAt returns the roots at a finite gain k, fixed ones included, with the guarantee of
// [poly.Root] for the exact polynomial fixed + k·scaled: a double root is one if k is exactly
// its gain, and only then. Where the degree drops, the roots at infinity are not listed.
//
// The error is a [*poly.ArgumentError] for a k that is not finite, or at which the polynomial is
// zero, and a [*poly.RangeError] for a root outside the range of float64. For many gains in a row
// there is [Workspace].
func (f Family) PolesAt(k float64) ([]poly.Root, error) {
	p, err := f.checkedAt("locus.Family.PolesAt", k)
	if err != nil {
		return nil, err
	}
	return p.Roots()
}

// checkedAt returns the polynomial at gain k, which has roots to be found.
func (f Family) checkedAt(call string, k float64) (poly.Poly, error) {
	if err := f.valid(call); err != nil {
		return poly.Poly{}, err
	}
	if !finite(k) {
		return poly.Poly{}, &poly.ArgumentError{Call: call, Argument: "k", Reason: "the gain is not finite"}
	}
	p := f.At(k)
	if p.Degree() < 0 {
		return poly.Poly{}, &poly.ArgumentError{Call: call, Argument: "k", Reason: "at this gain the polynomial is zero, so that every number is a root"}
	}
	return p, nil
}

// GainAt returns the gain at which a root is nearest to s in the sense that |fixed + k·scaled|
// is smallest there, k = -Re(A·conj B)/|B|² with A = fixed(s) and B = scaled(s), and by how
// much s misses the locus: the angle of -A/B, in radians, folded to (-π/2, π/2]. On the locus
// of positive or negative k it is 0. At a root of B, where the gain is infinite, k is +Inf or
// -Inf and miss 0; at a common root of both, which belongs to every gain, both are 0. The
// zero Family and an s that is not finite give NaN.
func (f Family) GainAt(s complex128) (k, miss float64) {
	a, b := f.fixed.AtComplex(s), f.scaled.AtComplex(s)
	if f.valid("") != nil || cmplx.IsNaN(a) || cmplx.IsNaN(b) {
		return math.NaN(), math.NaN()
	}
	if b == 0 {
		if a == 0 {
			return 0, 0
		}
		return math.Copysign(math.Inf(1), -real(a)), 0
	}
	q := quotient(a, b)
	return -real(q), math.Atan2(fold(-imag(q), -real(q)))
}

// fold returns the point, or its opposite, in the half-plane of angles (-π/2, π/2], as the
// arguments of Atan2.
func fold(y, x float64) (float64, float64) {
	if x < 0 || x == 0 && y < 0 {
		x, y = -x, -y
	}
	return y + 0, x + 0 // no negative zeros
}

// quotient returns a/b with both parts accurate in relation to |a/b|, without overflow on the
// way; b is not zero.
func quotient(a, b complex128) complex128 {
	if imag(a) == 0 && imag(b) == 0 {
		return complex(real(a)/real(b), 0)
	}
	_, ea := math.Frexp(max(math.Abs(real(a)), math.Abs(imag(a))))
	_, eb := math.Frexp(max(math.Abs(real(b)), math.Abs(imag(b))))
	ar, ai := math.Ldexp(real(a), -ea), math.Ldexp(imag(a), -ea)
	br, bi := math.Ldexp(real(b), -eb), math.Ldexp(imag(b), -eb)
	d := br*br + bi*bi
	return complex(math.Ldexp((ar*br+ai*bi)/d, ea-eb), math.Ldexp((ai*br-ar*bi)/d, ea-eb))
}

// Deficiency returns the angle, in radians in (-π, π], that a compensator in series must add at
// s to bring s onto the locus of positive k: the angle of -A/B with A = fixed(s) and
// B = scaled(s). It is 0 on that locus and at roots of A or B.
func (f Family) Deficiency(s complex128) float64 {
	a, b := f.fixed.AtComplex(s), f.scaled.AtComplex(s)
	if f.valid("") != nil || cmplx.IsNaN(a) || cmplx.IsNaN(b) {
		return math.NaN()
	}
	if a == 0 || b == 0 {
		return 0
	}
	q := quotient(a, b)
	return math.Atan2(-imag(q)+0, -real(q))
}

// ExactPoly returns p for exact arithmetic.
func exactOf(p poly.Poly) exact.Poly { return exact.New(p.Integers()) }

// A reduced family is fixed + k·scaled divided by what the two have in common.
type reduced struct {
	a, b, common exact.Poly // common is primitive; a and b are coprime
}

func (f Family) reduced() reduced {
	a, b := exactOf(f.fixed), exactOf(f.scaled)
	g := exact.GCD(a, b)
	if g.Degree() < 1 {
		return reduced{a, b, exact.FromFloats(1)}
	}
	return reduced{over(a, g), over(b, g), g}
}

// over returns p/q for a primitive q that divides p.
func over(p, q exact.Poly) exact.Poly {
	r, ok := p.Divide(q)
	if !ok {
		panic("locus: no divisor") // Gauss's lemma: the quotient has dyadic coefficients
	}
	return r
}

// degree returns the number of moving roots, those at infinity included.
func (r reduced) degree() int { return max(r.a.Degree(), r.b.Degree()) }

// at returns the moving part at gain k.
func (r reduced) at(k exact.Dyadic) exact.Poly { return r.a.Add(r.b.Scale(k)) }
