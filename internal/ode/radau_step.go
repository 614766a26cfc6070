package ode

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// Radau IIA with three stages: E. Hairer, G. Wanner, Solving Ordinary Differential
// Equations II, 2nd ed., Springer 1996, section IV.5, Table 5.6, and for the iteration
// and the error estimate section IV.8.
var (
	root6 = math.Sqrt(6)
	cbrt3 = math.Cbrt(3)

	cRadau = [3]float64{(4 - root6) / 10, (4 + root6) / 10, 1}
	aRadau = [3][3]float64{
		{(88 - 7*root6) / 360, (296 - 169*root6) / 1800, (-2 + 3*root6) / 225},
		{(296 + 169*root6) / 1800, (88 + 7*root6) / 360, (-2 - 3*root6) / 225},
		{(16 - root6) / 36, (16 + root6) / 36, 1.0 / 9},
	}
	eRadau = [3]float64{(-13 - 7*root6) / 3, (-13 + 7*root6) / 3, -1.0 / 3}
	// muRadau is the real eigenvalue of the inverse of aRadau.
	muRadau = 3 + cbrt3*cbrt3 - cbrt3
)

// implicit is the working storage of the implicit method.
type implicit struct {
	n            int
	jacobian     []float64
	jacobianNorm float64 // row-sum norm
	jacobianAt   float64 // time for which the Jacobian was formed
	known        bool    // the Jacobian is formed
	hFactored    float64 // step for which the matrices are factored; 0 if none
	big          *mat.Dense
	bigLU        mat.LU
	small        *mat.Dense
	smallLU      mat.LU
	z, dz, rhs   []float64 // 3n: increments of the stages
	f            [3][]float64
	y, dydt      []float64
	errv, work   []float64
	before       float64 // size of the error of the last accepted step, 0 if none
	hBefore      float64
}

func newImplicit(n int) *implicit {
	m := &implicit{n: n}
	m.jacobian = make([]float64, n*n)
	m.big, m.small = mat.NewDense(3*n, 3*n, nil), mat.NewDense(n, n, nil)
	m.z, m.dz, m.rhs = make([]float64, 3*n), make([]float64, 3*n), make([]float64, 3*n)
	for i := range m.f {
		m.f[i] = make([]float64, n)
	}
	m.y, m.dydt = make([]float64, n), make([]float64, n)
	m.errv, m.work = make([]float64, n), make([]float64, n)
	return m
}

func (m *implicit) forget() { m.known, m.hFactored, m.before = false, 0, 0 }

// formJacobian evaluates ∂f/∂y at the present state, by forward differences if need be.
func (m *implicit) formJacobian(g *Integrator) {
	g.work.Jacobians++
	n := m.n
	if g.o.Jacobian != nil {
		g.o.Jacobian(g.t, g.y, m.jacobian)
	} else {
		copy(m.y, g.y)
		for j := 0; j < n; j++ {
			scale := math.Max(math.Abs(g.y[j]), g.o.AbsTol/g.o.RelTol*1e-3)
			delta := math.Sqrt(unitRoundoff) * math.Max(scale, math.SmallestNonzeroFloat64*1e30)
			at := g.y[j] + delta
			m.y[j] = at
			g.evaluate(g.t, m.y, m.dydt)
			for i := 0; i < n; i++ {
				m.jacobian[i*n+j] = (m.dydt[i] - g.dydt[i]) / (at - g.y[j])
			}
			m.y[j] = g.y[j]
		}
	}
	m.jacobianNorm = 0
	for i := 0; i < n; i++ {
		var row float64
		for _, v := range m.jacobian[i*n : (i+1)*n] {
			row += math.Abs(v)
		}
		m.jacobianNorm = math.Max(m.jacobianNorm, row)
	}
	m.known, m.jacobianAt, m.hFactored = true, g.t, 0
}

func (m *implicit) factor(g *Integrator, h float64) {
	if m.hFactored == h {
		return
	}
	g.work.Factorizations++
	n := m.n
	for a := 0; a < 3; a++ {
		for b := 0; b < 3; b++ {
			for i := 0; i < n; i++ {
				for j := 0; j < n; j++ {
					v := -h * aRadau[a][b] * m.jacobian[i*n+j]
					if a == b && i == j {
						v++
					}
					m.big.Set(a*n+i, b*n+j, v)
				}
			}
		}
	}
	for i := 0; i < n; i++ {
		for j := 0; j < n; j++ {
			v := -m.jacobian[i*n+j]
			if i == j {
				v += muRadau / h
			}
			m.small.Set(i, j, v)
		}
	}
	m.bigLU.Factorize(m.big)
	m.smallLU.Factorize(m.small)
	m.hFactored = h
}

func solve(lu *mat.LU, x, rhs []float64) bool {
	err := lu.SolveVecTo(mat.NewVecDense(len(x), x), false, mat.NewVecDense(len(rhs), rhs))
	if err != nil {
		if c, ok := err.(mat.Condition); !ok || math.IsInf(float64(c), 1) {
			return false
		}
	}
	return finite(x)
}

func (m *implicit) try(g *Integrator, end float64) (accepted bool, factor float64, err error) {
	h := end - g.t
	fresh := false
	if !m.known || m.jacobianAt != g.t && m.before == 0 {
		m.formJacobian(g)
		fresh = true
	}
	for {
		m.factor(g, h)
		iterations, ok := m.iterate(g, h)
		if ok {
			accepted, factor = m.judge(g, end, h, iterations)
			if !accepted && !fresh && m.jacobianAt != g.t {
				m.formJacobian(g)
			}
			return accepted, factor, nil
		}
		if fresh || m.jacobianAt == g.t {
			if math.Abs(h) < 1e3*unitRoundoff*math.Max(math.Abs(g.t), math.SmallestNonzeroFloat64*1e20) {
				return false, 0, ErrNotFinite
			}
			return false, 0.5, nil
		}
		m.formJacobian(g)
		fresh = true
	}
}

const newtonLimit = 10

// iterate solves the equations of the stages by simplified Newton steps.
func (m *implicit) iterate(g *Integrator, h float64) (iterations int, ok bool) {
	n := m.n
	if g.dense.coefficients != nil && g.dense.To == g.t && m.hBefore != 0 {
		for a := 0; a < 3; a++ {
			at := g.t + cRadau[a]*h
			for i := 0; i < n; i++ {
				m.z[a*n+i] = g.dense.Component(i, at) - g.y[i]
			}
		}
	} else {
		clear(m.z)
	}
	tolerance := math.Max(10*unitRoundoff/g.o.RelTol, math.Min(0.03, math.Sqrt(g.o.RelTol)))
	before := 0.0
	for k := 1; k <= newtonLimit; k++ {
		for a := 0; a < 3; a++ {
			for i := 0; i < n; i++ {
				m.y[i] = g.y[i] + m.z[a*n+i]
			}
			g.evaluate(g.t+cRadau[a]*h, m.y, m.f[a])
			if !finite(m.f[a]) {
				return k, false
			}
		}
		for a := 0; a < 3; a++ {
			for i := 0; i < n; i++ {
				sum := aRadau[a][0]*m.f[0][i] + aRadau[a][1]*m.f[1][i] + aRadau[a][2]*m.f[2][i]
				m.rhs[a*n+i] = h*sum - m.z[a*n+i]
			}
		}
		if !solve(&m.bigLU, m.dz, m.rhs) {
			return k, false
		}
		var size float64
		for a := 0; a < 3; a++ {
			s := g.norm(m.dz[a*n:(a+1)*n], g.y, g.y)
			size += s * s
		}
		size = math.Sqrt(size / 3)
		rate := 0.0
		if before > 0 {
			rate = size / before
			if rate >= 1 || math.Pow(rate, float64(newtonLimit-k))/(1-rate)*size > tolerance {
				return k, false
			}
		}
		for i, d := range m.dz {
			m.z[i] += d
		}
		if size == 0 || before > 0 && rate/(1-rate)*size < tolerance {
			return k, true
		}
		before = size
	}
	return newtonLimit, false
}

// judge estimates the error and accepts the step or not.
func (m *implicit) judge(g *Integrator, end, h float64, iterations int) (accepted bool, factor float64) {
	n := m.n
	for i := 0; i < n; i++ {
		m.y[i] = g.y[i] + m.z[2*n+i]
		m.work[i] = (eRadau[0]*m.z[i] + eRadau[1]*m.z[n+i] + eRadau[2]*m.z[2*n+i]) / h
		m.rhs[i] = g.dydt[i] + m.work[i]
	}
	if !solve(&m.smallLU, m.errv, m.rhs[:n]) {
		return false, 0.5
	}
	size := g.norm(m.errv, g.y, m.y)
	if size > 1 && (m.before == 0 || g.work.Rejected > 0) {
		// The estimate of a first or repeated step is filtered once more: section IV.8, (8.20).
		for i := 0; i < n; i++ {
			m.dydt[i] = g.y[i] + m.errv[i]
		}
		g.evaluate(g.t, m.dydt, m.f[0])
		for i := 0; i < n; i++ {
			m.rhs[i] = m.f[0][i] + m.work[i]
		}
		if finite(m.f[0]) && solve(&m.smallLU, m.errv, m.rhs[:n]) {
			size = g.norm(m.errv, g.y, m.y)
		}
	}
	safety := 0.9 * (2*newtonLimit + 1) / (2*newtonLimit + float64(iterations))
	factor = 8
	if size > 0 {
		factor = safety * math.Pow(size, -0.25)
		if m.before > 0 && m.hBefore != 0 { // predictive control: section IV.8, (8.25)
			factor = math.Min(factor, factor*math.Abs(h/m.hBefore)*math.Pow(m.before/size, 0.25))
		}
	}
	factor = math.Min(8, math.Max(0.2, factor))
	if !(size <= 1) && !g.unseen {
		return false, math.Min(factor, 0.9)
	}
	g.evaluate(end, m.y, m.dydt)
	if !finite(m.dydt) {
		return false, 0.5
	}
	m.before, m.hBefore = math.Max(size, 1e-2), h
	m.keepDense(g, end)
	g.accept(end, m.y, m.dydt)
	if iterations > 3 || factor > 1.2 {
		m.known = iterations <= 3 && m.known
	} else {
		factor = 1 // the factored matrices serve again
	}
	return true, factor
}

// keepDense keeps the polynomial of collocation, of degree 3 in θ.
func (m *implicit) keepDense(g *Integrator, end float64) {
	n := m.n
	d := &g.dense
	d.set(g.t, end, g.y, 3, false)
	c1, c2 := cRadau[0], cRadau[1]
	for i := 0; i < n; i++ {
		// Newton's form through (0, 0), (c1, z1), (c2, z2), (1, z3), turned into powers of θ.
		z1, z2, z3 := m.z[i], m.z[n+i], m.z[2*n+i]
		d01 := z1 / c1
		d12 := (z2 - z1) / (c2 - c1)
		d23 := (z3 - z2) / (1 - c2)
		d012 := (d12 - d01) / c2
		d123 := (d23 - d12) / (1 - c1)
		third := d123 - d012
		d.coefficients[i] = d01 - d012*c1 + third*c1*c2
		d.coefficients[n+i] = d012 - third*(c1+c2)
		d.coefficients[2*n+i] = third
	}
}
