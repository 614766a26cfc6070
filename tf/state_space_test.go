package tf

import (
	"math"
	"math/cmplx"
	"testing"

	"github.com/polewright/polewright/poly"
	"gonum.org/v1/gonum/mat"
)

func TestFromStateMatrices(t *testing.T) {
	a := mat.NewDense(2, 2, []float64{0, 1, -2, -3})
	b := mat.NewDense(2, 1, []float64{0, 1})
	c := mat.NewDense(1, 2, []float64{5, 0.5})
	g, err := FromStateMatrices(a, b, c, nil)
	if err != nil || !g.Numerator().Equal(poly.New(0.5, 5)) || !g.Denominator().Equal(poly.New(1, 3, 2)) {
		t.Errorf("got %v, %v", g, err)
	}
	g, err = FromStateMatrices(a, b, c, mat.NewDense(1, 1, []float64{2}))
	if err != nil || !g.Numerator().Equal(poly.New(2, 6.5, 9)) {
		t.Errorf("with d = 2: %v, %v", g, err)
	}
	// An uncontrollable unstable mode stays in sight.
	g, err = FromStateMatrices(mat.NewDense(2, 2, []float64{1, 0, 0, -1}), mat.NewDense(2, 1, []float64{0, 1}), mat.NewDense(1, 2, []float64{1, 1}), nil)
	if err != nil || !g.Denominator().Equal(poly.New(1, 0, -1)) || !g.Numerator().Equal(poly.New(1, -1)) {
		t.Errorf("uncontrollable: %v, %v", g, err)
	}
	// Entries of very different size, exactly: 1e-200·1e200 must not become 1 by rounding.
	x, y := 1e-200, 1e200
	g, err = FromStateMatrices(mat.NewDense(2, 2, []float64{0, x, y, 0}), b, c, nil)
	if err != nil || !g.Denominator().Equal(poly.New(1, 0, 0).Sub(poly.New(x).Scale(y))) {
		t.Errorf("far apart: %v, %v", g, err)
	}
	for _, bad := range []func() (Function, error){
		func() (Function, error) { return FromStateMatrices(mat.NewDense(1, 2, nil), b, c, nil) },
		func() (Function, error) { return FromStateMatrices(a, c, c, nil) },
		func() (Function, error) { return FromStateMatrices(a, b, b, nil) },
		func() (Function, error) { return FromStateMatrices(a, b, c, a) },
		func() (Function, error) {
			return FromStateMatrices(mat.NewDense(2, 2, []float64{0, math.NaN(), 0, 0}), b, c, nil)
		},
	} {
		if g, err := bad(); err == nil {
			t.Errorf("bad matrices are taken: %v", g)
		}
	}
}

func TestStateSpaceIsBalanced(t *testing.T) {
	for _, tt := range []struct {
		text     string
		balanced bool
	}{
		{"1 / (s + 1)", true},
		{"(s + 3) / ((s + 1) (s + 2))", true},
		{"2 (s + 1) / (s^2 + 0.2 s + 4)", true},
		{"(3 s^2 + s + 1) / (s^2 + s + 5)", true},
		{"1 / (s + 1)^5", true},
		{"0.5 exp(-30 s) / ((600 s + 1) (7200 s + 1) (86400 s + 1))", true},
		{"1 / ((1e-9 s + 1) (2e-9 s + 1) (1e-6 s + 1))", true},
		{"(z + 0.5) / ((z - 0.9) (z - 0.8)), period 0.1", true},
		{"1 / (z - 0.5), period 1, dead time 2", true},
		{"1 / s", false},
		{"1 / (s - 1)", false},
		{"(s + 1) / ((s + 1) (s + 2))", false},
		{"3", false},
	} {
		g := MustParse(tt.text)
		x, err := g.StateSpace()
		if err != nil {
			t.Errorf("%s: %v", tt.text, err)
			continue
		}
		if (x.Gramian != nil) != tt.balanced {
			t.Errorf("%s: Gramian %v", tt.text, x.Gramian)
		}
		h, err := x.Function()
		if err != nil {
			t.Errorf("%s: %v", tt.text, err)
			continue
		}
		points := []complex128{0.3i, 1e-5i, 1e8i}
		if g.Period() > 0 {
			points = []complex128{1, -1, 0.6 + 0.8i}
		}
		for _, s := range points {
			got, want := h.At(s), g.At(s)
			bar := 1e-14 * cmplx.Abs(want)
			if x.Gramian != nil { // what rounded entries can promise: small beside the peak of |g|
				bar = 1e-14 * x.Gramian[0]
			}
			if cmplx.Abs(got-want) > bar {
				t.Errorf("%s: at %v %v, want %v", tt.text, s, got, want)
			}
		}
		if x.Gramian == nil {
			continue
		}
		// A·Σ + Σ·Aᵀ + B·Bᵀ = 0 and Aᵀ·Σ + Σ·A + Cᵀ·C = 0, in z A·Σ·Aᵀ - Σ + B·Bᵀ = 0 and so on.
		n := len(x.Gramian)
		gramian := mat.NewDiagDense(n, x.Gramian)
		for what, m := range map[string][2]mat.Matrix{"controllability": {x.A, x.B}, "observability": {x.A.T(), x.C.T()}} {
			var left, right, sum mat.Dense
			left.Mul(m[0], gramian)
			right.Mul(m[1], m[1].T())
			if x.Period > 0 {
				left.Mul(&left, m[0].T())
				sum.Sub(&left, gramian)
			} else {
				sum.Add(&left, left.T())
			}
			sum.Add(&sum, &right)
			for i := range n {
				for j := range n {
					size := math.Abs(left.At(i, j)) + math.Abs(left.At(j, i)) + math.Abs(right.At(i, j))
					if miss := math.Abs(sum.At(i, j)); miss > 1e-12*size {
						t.Errorf("%s: %s Gramian is not diagonal: off by %.3g of %.3g at %d, %d", tt.text, what, miss, size, i, j)
					}
				}
			}
		}
	}
	// Hankel singular values by hand, from both Gramians of the canonical form:
	x, err := MustParse("1 / ((s + 1) (s + 2))").StateSpace()
	if err != nil {
		t.Fatal(err)
	}
	// P = [[1/12, 0], [0, 1/6]], Q = [[11/12, 1/4], [1/4, 1/12]]: σ² are the eigenvalues of PQ.
	a, b := 1.0/12*11/12+1.0/6/12, 1.0/12*1.0/6*(11.0/12*1/12-1.0/16)
	for i, sign := range []float64{1, -1} {
		want := math.Sqrt((a + sign*math.Sqrt(a*a-4*b)) / 2)
		if math.Abs(x.Gramian[i]-want) > 1e-14 {
			t.Errorf("Hankel singular value %d = %v, want %v", i, x.Gramian[i], want)
		}
	}
	if _, err := MustParse("s").StateSpace(); err == nil {
		t.Error("an improper function has a realisation")
	}
}
