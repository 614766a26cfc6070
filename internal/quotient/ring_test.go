package quotient

import (
	"math"
	"math/big"
	"testing"
)

const precision = 300

func numbers(x ...float64) []*big.Float {
	list := make([]*big.Float, len(x))
	for i, v := range x {
		list[i] = new(big.Float).SetPrec(precision).SetFloat64(v)
	}
	return list
}

func close(t *testing.T, what string, got *big.Float, want float64) {
	t.Helper()
	if x, _ := got.Float64(); math.Abs(x-want) > 4e-16*math.Abs(want) {
		t.Errorf("%s = %v, want %v", what, x, want)
	}
}

func TestExpMinusOne(t *testing.T) {
	for _, dt := range []float64{1e-12, 0.3, 1, 40, -2} {
		// Modulo x + 0.75: the number exp(-0.75 t) - 1.
		w := New(precision, numbers(0.75)).ExpMinusOne(numbers(dt)[0])
		close(t, "lag", w[0], math.Expm1(-0.75*dt))
		// Modulo x³ the series stops.
		w = New(precision, numbers(0, 0, 0)).ExpMinusOne(numbers(dt)[0])
		for i, want := range []float64{0, dt, dt * dt / 2} {
			close(t, "triple integrator", w[i], want)
		}
		// Modulo x² + 1: cos t - 1 + x·sin t.
		w = New(precision, numbers(1, 0)).ExpMinusOne(numbers(dt)[0])
		half := math.Sin(dt / 2)
		close(t, "oscillator, cosine", w[0], -2*half*half)
		close(t, "oscillator, sine", w[1], math.Sin(dt))
	}
}

func TestCharacteristic(t *testing.T) {
	// Roots of x³ - 6x² + 11x - 6 are 1, 2, 3; of x² + 1 they take the values 2, 5, 10:
	// (y-2)(y-5)(y-10) = y³ - 17y² + 80y - 100.
	r := New(precision, numbers(-6, 11, -6))
	x2 := r.Mul(numbers(0, 1, 0), numbers(0, 1, 0))
	c := r.Characteristic(r.Add(x2, r.One()))
	for i, want := range []float64{-100, 80, -17, 1} {
		close(t, "coefficient", c[i], want)
	}
	// The sum of residues of (x² + x)/modulus is the leading coefficient, 1.
	close(t, "lead", r.Lead(numbers(0, 1, 1)), 1)
	// x³ is 6x² - 11x + 6 there.
	for i, want := range []float64{6, -11, 6} {
		close(t, "x³", r.Reduce(numbers(0, 0, 0, 1))[i], want)
	}
}
