package poly

// Coefficients returns all coefficients, highest power first, each as [Poly.Coefficient] rounds
// it. The zero polynomial has none. The caller owns the result.
func (p Poly) Coefficients() []float64 {
	c := make([]float64, len(p.c))
	for i, x := range p.c {
		c[len(c)-1-i] = x
	}
	return c
}
