package exact

import (
	"math"
	"testing"
)

// FuzzFilters sets the counts in float64 against exact arithmetic.
func FuzzFilters(f *testing.F) {
	f.Add([]byte{1, 6, 11, 6}, int16(0), 0.5)
	f.Add([]byte{1, 1, 2, 2, 3}, int16(-3), 1.0)
	f.Add([]byte{1, 0, 2, 0, 1, 0, 0}, int16(40), 0.70710678)
	f.Fuzz(func(t *testing.T, data []byte, spread int16, x float64) {
		if len(data) < 2 || len(data) > 12 || math.IsNaN(x) || math.IsInf(x, 0) || math.Abs(x) < 1e-30 || math.Abs(x) > 1e30 {
			return
		}
		c := make([]Dyadic, len(data))
		for i, b := range data {
			c[i] = Float(float64(int8(b)) / 3).Mul(PowerOfTwo(int(spread%64) * (i * i % 7)))
		}
		p := FromDyadics(c...)
		if p.Degree() < 1 {
			return
		}
		zeta, radius := Float(math.Abs(math.Mod(x, 1))), Float(math.Abs(x))
		var g filtered
		g.fromPoly(p)
		if got, ok := g.leftOf(boundedOf(Float(x))); ok && got != leftOf(p, Float(x)) {
			t.Fatalf("left of %v: %+v, exactly %+v", x, got, leftOf(p, Float(x)))
		}
		g.fromPoly(p)
		if got, ok := g.inDisc(boundedOf(radius)); ok && got != inDisc(p, radius) {
			t.Fatalf("in the disc of %v: %+v, exactly %+v", radius.Float64(), got, inDisc(p, radius))
		}
		if z := zeta.Float64(); z < 1e-30 {
			return
		}
		g.fromPoly(p)
		if got, ok := g.inSector(boundedOf(zeta)); ok && got != inSector(p, zeta) {
			t.Fatalf("in the sector of %v: %+v, exactly %+v", zeta.Float64(), got, inSector(p, zeta))
		}
	})
}
