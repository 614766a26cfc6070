// Package baseline holds the plain ways of doing the library's jobs that a user would
// write by hand on gonum. Benchmarks measure against them; nothing else imports them.
package baseline

import "gonum.org/v1/gonum/mat"

// CompanionRoots returns the eigenvalues of the companion matrix of the polynomial with
// the given coefficients, highest power first, the first not zero.
func CompanionRoots(coefficients []float64) []complex128 {
	n := len(coefficients) - 1
	if n < 1 {
		return nil
	}
	m := mat.NewDense(n, n, nil)
	for j := 0; j < n; j++ {
		m.Set(0, j, -coefficients[j+1]/coefficients[0])
	}
	for i := 1; i < n; i++ {
		m.Set(i, i-1, 1)
	}
	var e mat.Eigen
	if !e.Factorize(m, mat.EigenNone) {
		return nil
	}
	return e.Values(nil)
}
