package timeresp

import (
	"math"
	"testing"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

func mustStep(t testing.TB, text string) *Response {
	t.Helper()
	g, err := tf.Parse(text)
	if err != nil {
		t.Fatal(err)
	}
	r, err := Step(g)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func near(t *testing.T, what string, got, want, relative float64) {
	t.Helper()
	if !(math.Abs(got-want) <= relative*math.Abs(want)) {
		t.Errorf("%s = %v, want %v", what, got, want)
	}
}

func TestIntegralsOfFirstOrder(t *testing.T) {
	// e = -e^(-t/T): by hand ∫|e| = T, ∫e² = T/2, ∫t|e| = T², ∫te² = T²/4.
	for _, lag := range []float64{1e-9, 1, 3.7, 1e5} {
		g, err := tf.New(poly.New(1), poly.New(lag, 1))
		if err != nil {
			t.Fatal(err)
		}
		r, err := Step(g)
		if err != nil {
			t.Fatal(err)
		}
		got, err := r.Integrals()
		if err != nil {
			t.Fatal(err)
		}
		near(t, "Absolute", got.Absolute, lag, 1e-12)
		near(t, "Square", got.Square, lag/2, 1e-12)
		near(t, "TimeAbsolute", got.TimeAbsolute, lag*lag, 1e-12)
		near(t, "TimeSquare", got.TimeSquare, lag*lag/4, 1e-12)
		near(t, "Variation", got.Variation, 1, 1e-12)
	}
}

func TestIntegralsOfSecondOrder(t *testing.T) {
	// For 1/(s² + 2ζs + 1): ∫e² = (1 + 4ζ²)/(4ζ) (Parseval; G. C. Newton, L. A. Gould and
	// J. F. Kaiser, Analytical Design of Linear Feedback Controls, Wiley 1957, appendix E: from
	// memory). Both extrema follow the decrement exp(-πζ/√(1-ζ²)) =: d, so that the way travelled is
	// (1 + d) + (d + d²) + … = (1 + d)/(1 - d).
	for _, zeta := range []float64{0.05, 0.3, 0.5, 0.9} {
		g, err := tf.New(poly.New(1), poly.New(1, 2*zeta, 1))
		if err != nil {
			t.Fatal(err)
		}
		r, err := Step(g)
		if err != nil {
			t.Fatal(err)
		}
		got, err := r.Integrals()
		if err != nil {
			t.Fatal(err)
		}
		near(t, "Square", got.Square, (1+4*zeta*zeta)/(4*zeta), 1e-12)
		d := math.Exp(-math.Pi * zeta / math.Sqrt(1-zeta*zeta))
		near(t, "Variation", got.Variation, (1+d)/(1-d), 1e-11)
	}
}

// TestIntegralsBySampling compares with the trapezoidal rule on many samples.
func TestIntegralsBySampling(t *testing.T) {
	for _, text := range []string{
		"1 / (s^2 + s + 1)",
		"(1 - 0.5 s) / (s + 1)^3",
		"4 (s + 0.2) / ((s + 0.1) (s^2 + 0.4 s + 8)) exp(-0.3 s)",
		"(10 s + 1) / (s + 1)",
		"2 s / (s + 1)^3",
	} {
		r := mustStep(t, text)
		got, err := r.Integrals()
		if err != nil {
			t.Fatal(err)
		}
		const n = 400_000
		span := 30.0
		if r.arcs[0].from > 0 {
			span = 250
		}
		step := span / n
		out := make([]float64, n+1)
		r.Sample(out, 0, step)
		var want Integrals
		want.Variation = math.Abs(out[0])
		for i, y := range out {
			e := y - r.Final()
			g := step
			if i == 0 || i == n {
				g /= 2
			}
			at := float64(i) * step
			want.Absolute += g * math.Abs(e)
			want.Square += g * e * e
			want.TimeAbsolute += g * at * math.Abs(e)
			want.TimeSquare += g * at * e * e
			if i > 0 {
				want.Variation += math.Abs(y - out[i-1])
			}
		}
		near(t, text+": Absolute", got.Absolute, want.Absolute, 1e-5)
		near(t, text+": Square", got.Square, want.Square, 1e-5)
		near(t, text+": TimeAbsolute", got.TimeAbsolute, want.TimeAbsolute, 1e-5)
		near(t, text+": TimeSquare", got.TimeSquare, want.TimeSquare, 1e-5)
		near(t, text+": Variation", got.Variation, want.Variation, 1e-5)
	}
}
