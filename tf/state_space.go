package tf

import (
	"fmt"
	"math"
	"math/big"

	"github.com/polewright/polewright/poly"
	"gonum.org/v1/gonum/mat"
)

// StateSpace is a state realisation with one input and one output: ẋ = Ax + Bu, y = Cx + Du,
// or x(k+1) = Ax(k) + Bu(k). The matrices are nil where there is no state.
type StateSpace struct {
	A        *mat.Dense // n by n
	B        *mat.Dense // n by 1
	C        *mat.Dense // 1 by n
	D        float64
	Period   float64 // s; 0 in continuous time
	DeadTime float64 // s, at the input; of a function of s only

	// Gramian is the diagonal of the controllability and of the observability Gramian, which are
	// equal in a balanced realisation: descending, the Hankel singular values of the function. It
	// is nil if the realisation is not balanced.
	Gramian []float64
}

// FromStateMatrices returns c·(sI - a)⁻¹·b + d, a function of s, with a n by n, b n by 1, c 1 by n
// and d 1 by 1 or nil for 0. Its polynomials are exact, so that nothing cancels: a mode that
// cannot be controlled or observed is a common root. The error is a [*poly.ArgumentError] for other
// dimensions, for an entry that is not finite, and for n above 100.
//
// By the algorithm of Leverrier and Faddeev, in integers: F. R. Gantmacher, The Theory of
// Matrices, vol. 1, Chelsea 1959, chapter IV, § 5.
func FromStateMatrices(a, b, c, d mat.Matrix) (Function, error) {
	const call = "tf.FromStateMatrices"
	const most = 100
	n, columns := a.Dims()
	if n != columns || n > most {
		return invalid(badArgument(call, "a", "is %d by %d; expected a square matrix, at most %d by %d", n, columns, most, most))
	}
	direct := 0.0
	for _, m := range []struct {
		name          string
		m             mat.Matrix
		rows, columns int
	}{{"a", a, n, n}, {"b", b, n, 1}, {"c", c, 1, n}, {"d", d, 1, 1}} {
		if m.m == nil && m.name == "d" {
			continue
		}
		if r, k := m.m.Dims(); r != m.rows || k != m.columns {
			return invalid(badArgument(call, m.name, "is %d by %d; expected %d by %d", r, k, m.rows, m.columns))
		}
		for i := range m.rows {
			for j := range m.columns {
				if x := m.m.At(i, j); math.IsNaN(x) || math.IsInf(x, 0) {
					return invalid(badArgument(call, fmt.Sprintf("%s(%d, %d)", m.name, i, j), "%v is not finite", x))
				}
			}
		}
	}
	if d != nil {
		direct = d.At(0, 0)
	}
	ai, ea := integerMatrix(a)
	bi, eb := integerMatrix(b)
	ci, ec := integerMatrix(c)
	// adj(xI - ai) = Σ mₖ·xⁿ⁻ᵏ; the coefficient of sⁿ⁻ᵏ has the factor 2^(ea·k).
	denominator, numerator := make([]*big.Int, n+1), make([]*big.Int, n)
	denominator[n] = big.NewInt(1)
	m := identity(n)
	for k := 1; k <= n; k++ {
		numerator[n-k] = times(times(ci, m), bi)[0][0]
		am := times(ai, m)
		trace := new(big.Int)
		for i := range n {
			trace.Add(trace, am[i][i])
		}
		lead := trace.Quo(trace, big.NewInt(int64(-k))) // leaves no remainder
		denominator[n-k] = lead
		for i := range n {
			am[i][i].Add(am[i][i], lead)
		}
		m = am
	}
	den := unscaled(denominator, n, ea)
	num := unscaled(numerator, n-1, ea).Mul(poly.FromIntegers([]*big.Int{big.NewInt(1)}, eb+ec))
	return New(num.Add(den.Scale(direct)), den)
}

// unscaled returns Σ c[i]·2^(e·(top-i))·sⁱ.
func unscaled(c []*big.Int, top, e int) poly.Poly {
	common := min(e*top, 0)
	for i, x := range c {
		x.Lsh(x, uint(e*(top-i)-common))
	}
	return poly.FromIntegers(c, common)
}

// integerMatrix returns m = 2^e·integers, exactly.
func integerMatrix(m mat.Matrix) (integers [][]*big.Int, e int) {
	rows, columns := m.Dims()
	e = math.MaxInt
	parts := make([][]*big.Float, rows)
	for i := range parts {
		for j := range columns {
			x := big.NewFloat(m.At(i, j))
			parts[i] = append(parts[i], x)
			if x.Sign() != 0 {
				e = min(e, leadExponent(x)-int(x.MinPrec()))
			}
		}
	}
	if e == math.MaxInt {
		e = 0
	}
	integers = make([][]*big.Int, rows)
	for i := range integers {
		for _, x := range parts[i] {
			n, _ := x.SetMantExp(x, -e).Int(nil)
			integers[i] = append(integers[i], n)
		}
	}
	return integers, e
}

func identity(n int) [][]*big.Int {
	m := make([][]*big.Int, n)
	for i := range m {
		for j := range n {
			x := new(big.Int)
			if i == j {
				x.SetInt64(1)
			}
			m[i] = append(m[i], x)
		}
	}
	return m
}

func times(a, b [][]*big.Int) [][]*big.Int {
	c := make([][]*big.Int, len(a))
	t := new(big.Int)
	for i := range c {
		for j := range b[0] {
			s := new(big.Int)
			for k := range b {
				s.Add(s, t.Mul(a[i][k], b[k][j]))
			}
			c[i] = append(c[i], s)
		}
	}
	return c
}

// Function returns the function of the realisation, exactly, dead time and period included.
func (x StateSpace) Function() (Function, error) {
	var g Function
	var err error
	if x.A == nil {
		g, err = Constant(x.D)
	} else {
		g, err = FromStateMatrices(x.A, x.B, x.C, mat.NewDense(1, 1, []float64{x.D}))
	}
	if err != nil {
		return invalid(err)
	}
	if x.Period != 0 {
		return g.WithPeriod(x.Period)
	}
	return g.WithDeadTime(x.DeadTime)
}

// maxBalanced is the highest order that is balanced by its Gramians.
const maxBalanced = 20

// StateSpace returns a realisation of a proper function, with as many states as poles. If the function
// is stable, of order up to 20 and has no common factors, it is balanced: both Gramians are the
// same diagonal matrix, worked out in many digits and rounded once. Otherwise it is the
// controllable canonical form in a time scale that makes its entries moderate. The dead time of
// a function of z becomes states.
//
// Source: B. C. Moore, Principal component analysis in linear systems, IEEE Transactions on
// Automatic Control 26 (1981) 17–32.
//
// The error is a [*poly.ArgumentError] for an improper function, and a [*poly.RangeError] for an
// entry beyond the range of float64.
func (g Function) StateSpace() (StateSpace, error) {
	const call = "tf.Function.StateSpace"
	if g.err != nil {
		return StateSpace{}, g.err
	}
	result := StateSpace{Period: g.period, DeadTime: g.delay.near}
	g, err := g.atNoDelay()
	if err != nil {
		return StateSpace{}, err
	}
	if !g.isProper() {
		return StateSpace{}, badArgument(call, "g", "degree %d over %d is improper", g.numerator.Degree(), g.denominator.Degree())
	}
	n := g.denominator.Degree()
	result.D = coefficientRatio(g.numerator, n, g.denominator, n)
	if math.IsInf(result.D, 0) {
		return StateSpace{}, &poly.RangeError{Call: call, Reason: "an entry is beyond the range of float64"}
	}
	if n == 0 {
		return result, nil
	}
	outside, err := notInside(g.denominator, g.period)
	if err != nil {
		return StateSpace{}, err
	}
	precision := uint(256 + 64*n)
	form := g.canonical(precision)
	if n <= maxBalanced && !outside {
		common, err := g.numerator.CommonFactor(g.denominator, 0)
		if err != nil {
			return StateSpace{}, err
		}
		if g.numerator.Degree() >= 0 && common.Degree() == 0 {
			if balanced, ok := form.balanced(g.period > 0); ok {
				form = balanced
			}
		}
	}
	if !form.fill(&result, g.period > 0) {
		return StateSpace{}, &poly.RangeError{Call: call, Reason: "an entry is beyond the range of float64"}
	}
	return result, nil
}
