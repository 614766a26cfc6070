package tf

import (
	"math"
	"math/big"

	"gonum.org/v1/gonum/mat"
)

// bigMatrix is a matrix of numbers of any precision, by rows.
type bigMatrix [][]*big.Float

func newBigMatrix(rows, columns int, precision uint) bigMatrix {
	m := make(bigMatrix, rows)
	for i := range m {
		for range columns {
			m[i] = append(m[i], bigNumber(precision))
		}
	}
	return m
}

func (a bigMatrix) times(b bigMatrix, precision uint) bigMatrix {
	c := newBigMatrix(len(a), len(b[0]), precision)
	t := bigNumber(precision)
	for i := range c {
		for j := range c[i] {
			for k := range b {
				c[i][j].Add(c[i][j], t.Mul(a[i][k], b[k][j]))
			}
		}
	}
	return c
}

func (a bigMatrix) transposed() bigMatrix {
	t := make(bigMatrix, len(a[0]))
	for j := range t {
		for i := range a {
			t[j] = append(t[j], a[i][j])
		}
	}
	return t
}

// bigRealisation is a realisation of the function in the variable s/2^scale.
type bigRealisation struct {
	a, b, c   bigMatrix
	scale     int // 0 in z
	gramian   []*big.Float
	precision uint
}

// canonical returns the controllable canonical form.
func (g Function) canonical(precision uint) bigRealisation {
	n := g.denominator.Degree()
	scale := 0
	if g.period == 0 {
		scale = rootExponent(g.denominator)
	}
	d := scaledCoefficients(g.denominator, scale, precision)
	u := scaledCoefficients(g.numerator, scale, precision)
	for len(u) < n+1 {
		u = append(u, bigNumber(precision))
	}
	f := bigRealisation{
		a: newBigMatrix(n, n, precision), b: newBigMatrix(n, 1, precision), c: newBigMatrix(1, n, precision),
		scale: scale, precision: precision,
	}
	direct := bigNumber(precision).Quo(u[n], d[n])
	t := bigNumber(precision)
	for i := range n {
		if i+1 < n {
			f.a[i][i+1].SetInt64(1)
		}
		f.a[n-1][i].Neg(t.Quo(d[i], d[n]))
		f.c[0][i].Sub(u[i], t.Mul(direct, d[i]))
		f.c[0][i].Quo(f.c[0][i], d[n])
	}
	f.b[n-1][0].SetInt64(1)
	return f
}

// gramianOf solves a·p + p·aᵀ + w = 0, in z p = a·p·aᵀ + w, for symmetric p: a linear system for
// its upper triangle.
func gramianOf(a, w bigMatrix, discrete bool, precision uint) (bigMatrix, bool) {
	n := len(a)
	index := make([][]int, n)
	count := 0
	for i := range index {
		index[i] = make([]int, n)
	}
	for i := range n {
		for j := i; j < n; j++ {
			index[i][j], index[j][i] = count, count
			count++
		}
	}
	rows := make([][]*big.Float, count)
	t := bigNumber(precision)
	for i := range n {
		for j := i; j < n; j++ {
			row := make([]*big.Float, count+1)
			for k := range row {
				row[k] = bigNumber(precision)
			}
			add := func(k, l int, x *big.Float) { row[index[k][l]].Add(row[index[k][l]], x) }
			if discrete {
				for k := range n {
					for l := range n {
						add(k, l, t.Mul(a[i][k], a[j][l]))
					}
				}
				add(i, j, t.SetInt64(-1))
			} else {
				for k := range n {
					add(k, j, a[i][k])
					add(i, k, a[j][k])
				}
			}
			row[count].Neg(w[i][j])
			rows[index[i][j]] = row
		}
	}
	x, ok := solve(rows, precision)
	if !ok {
		return nil, false
	}
	p := newBigMatrix(n, n, precision)
	for i := range n {
		for j := range n {
			p[i][j].Set(x[index[i][j]])
		}
	}
	return p, true
}

// balanced returns the balanced form of a stable and minimal one: with p = l·lᵀ and
// lᵀ·q·l = u·σ²·uᵀ the transformation is l·u·σ^(-1/2).
func (f bigRealisation) balanced(discrete bool) (bigRealisation, bool) {
	n, precision := len(f.a), f.precision
	p, ok := gramianOf(f.a, f.b.times(f.b.transposed(), precision), discrete, precision)
	if !ok {
		return f, false
	}
	q, ok := gramianOf(f.a.transposed(), f.c.transposed().times(f.c, precision), discrete, precision)
	if !ok {
		return f, false
	}
	l, ok := cholesky(p, precision)
	if !ok {
		return f, false
	}
	squares, u := symmetricEigen(l.transposed().times(q, precision).times(l, precision), precision)
	inverse := lowerInverse(l, precision)
	to, from := l.times(u, precision), u.transposed().times(inverse, precision)
	f.gramian = make([]*big.Float, n)
	for i, x := range squares {
		if x.Sign() <= 0 {
			return f, false
		}
		f.gramian[i] = bigNumber(precision).Sqrt(x)
		root := bigNumber(precision).Sqrt(f.gramian[i])
		for j := range n {
			to[j][i].Quo(to[j][i], root)
			from[i][j].Mul(from[i][j], root)
		}
	}
	f.a = from.times(f.a, precision).times(to, precision)
	f.b = from.times(f.b, precision)
	f.c = f.c.times(to, precision)
	return f, true
}

// cholesky returns the lower triangular l with l·lᵀ = p; not ok if p is not positive definite.
func cholesky(p bigMatrix, precision uint) (bigMatrix, bool) {
	n := len(p)
	l := newBigMatrix(n, n, precision)
	t := bigNumber(precision)
	for j := range n {
		for i := j; i < n; i++ {
			s := bigNumber(precision).Set(p[i][j])
			for k := range j {
				s.Sub(s, t.Mul(l[i][k], l[j][k]))
			}
			if i == j {
				if s.Sign() <= 0 {
					return nil, false
				}
				l[j][j].Sqrt(s)
			} else {
				l[i][j].Quo(s, l[j][j])
			}
		}
	}
	return l, true
}

// lowerInverse returns the inverse of a lower triangular matrix.
func lowerInverse(l bigMatrix, precision uint) bigMatrix {
	n := len(l)
	x := newBigMatrix(n, n, precision)
	t := bigNumber(precision)
	for j := range n {
		for i := j; i < n; i++ {
			s := bigNumber(precision)
			if i == j {
				s.SetInt64(1)
			}
			for k := j; k < i; k++ {
				s.Sub(s, t.Mul(l[i][k], x[k][j]))
			}
			x[i][j].Quo(s, l[i][i])
		}
	}
	return x
}

// symmetricEigen returns the eigenvalues of a symmetric matrix, descending, and the
// eigenvectors as columns, by Jacobi's method.
func symmetricEigen(m bigMatrix, precision uint) ([]*big.Float, bigMatrix) {
	n := len(m)
	u := newBigMatrix(n, n, precision)
	for i := range n {
		u[i][i].SetInt64(1)
	}
	number := func() *big.Float { return bigNumber(precision) }
	unit := number().SetInt64(1)
	for range 100 { // convergence is quadratic: about ten sweeps
		rotated := false
		for p := range n {
			for q := p + 1; q < n; q++ {
				off := m[p][q]
				if off.Sign() == 0 {
					continue
				}
				// Small beside the geometric mean of the diagonal, so that small eigenvalues keep their digits.
				if m[p][p].Sign() > 0 && m[q][q].Sign() > 0 && 2*leadExponent(off) < leadExponent(m[p][p])+leadExponent(m[q][q])-2*int(precision)+40 {
					continue
				}
				rotated = true
				// t = sign(θ)/(|θ| + √(θ²+1)), θ = (m_qq - m_pp)/(2·m_pq)
				theta := number().Sub(m[q][q], m[p][p])
				theta.Quo(theta, number().Add(off, off))
				t := number().Add(number().Mul(theta, theta), unit)
				t.Sqrt(t)
				t.Add(t, number().Abs(theta))
				t.Quo(unit, t)
				if theta.Sign() < 0 {
					t.Neg(t)
				}
				c := number().Add(number().Mul(t, t), unit)
				c.Quo(unit, c.Sqrt(c))
				s := number().Mul(t, c)
				rotate := func(x, y *big.Float) {
					a := number().Sub(number().Mul(c, x), number().Mul(s, y))
					b := number().Add(number().Mul(s, x), number().Mul(c, y))
					x.Set(a)
					y.Set(b)
				}
				for k := range n {
					rotate(m[k][p], m[k][q])
				}
				for k := range n {
					rotate(m[p][k], m[q][k])
				}
				for k := range n {
					rotate(u[k][p], u[k][q])
				}
				m[p][q].SetInt64(0)
				m[q][p].SetInt64(0)
			}
		}
		if !rotated {
			break
		}
	}
	values := make([]*big.Float, n)
	for i := range n {
		values[i] = m[i][i]
	}
	for i := range n { // descending
		for j := i; j > 0 && values[j].Cmp(values[j-1]) > 0; j-- {
			values[j], values[j-1] = values[j-1], values[j]
			for k := range n {
				u[k][j], u[k][j-1] = u[k][j-1], u[k][j]
			}
		}
	}
	return values, u
}

// fill rounds the realisation into x, back in seconds: a by 2^scale, b and c by the root of that.
func (f bigRealisation) fill(x *StateSpace, discrete bool) bool {
	n := len(f.a)
	root := bigNumber(f.precision).SetInt64(1)
	root.SetMantExp(root, f.scale)
	root.Sqrt(root)
	ok := true
	dense := func(m bigMatrix, factor func(y *big.Float) *big.Float) *mat.Dense {
		d := mat.NewDense(len(m), len(m[0]), nil)
		for i := range m {
			for j, y := range m[i] {
				v, _ := factor(y).Float64()
				ok = ok && !math.IsInf(v, 0)
				d.Set(i, j, v+0)
			}
		}
		return d
	}
	byRoot := func(y *big.Float) *big.Float { return bigNumber(f.precision).Mul(y, root) }
	x.A = dense(f.a, func(y *big.Float) *big.Float { return new(big.Float).SetMantExp(y, f.scale) })
	x.B, x.C = dense(f.b, byRoot), dense(f.c, byRoot)
	if f.gramian != nil {
		x.Gramian = make([]float64, n)
		for i, y := range f.gramian {
			x.Gramian[i], _ = y.Float64()
		}
	}
	return ok
}
