package ode

import (
	"math"
	"testing"
)

// TestTableau853 checks the coefficients against conditions that they must meet whatever
// their source: row sums, quadrature up to order 8, and the two embedded error estimators,
// which vanish on polynomials of their order.
func TestTableau853(t *testing.T) {
	for i, row := range a853 {
		var sum, size float64
		for _, a := range row {
			sum += a
			size += math.Abs(a)
		}
		if math.Abs(sum-c853[i]) > 4*unitRoundoff*(1+size) { // rounding of the coefficients and of the sum
			t.Errorf("row %d sums to %.17g, want %.17g", i, sum, c853[i])
		}
	}
	for order := 1; order <= 8; order++ {
		var sum, five, three float64
		for j := 0; j < stages853; j++ {
			power := math.Pow(c853[j], float64(order-1))
			sum += a853[stages853][j] * power
			five += e853of5[j] * power
			three += (a853[stages853][j] - b853of3[j]) * power
		}
		if want := 1 / float64(order); math.Abs(sum-want) > 1e-14 {
			t.Errorf("quadrature of order %d: %.17g, want %.17g", order, sum, want)
		}
		if order <= 5 && math.Abs(five) > 1e-14 {
			t.Errorf("the estimator of order 5 gives %g on a polynomial of degree %d, want 0", five, order-1)
		}
		if order <= 3 && math.Abs(three) > 1e-14 {
			t.Errorf("the estimator of order 3 gives %g on a polynomial of degree %d, want 0", three, order-1)
		}
	}
}

// TestTableauRadau checks the simplifying assumptions C(3) and B(5) of Radau IIA.
func TestTableauRadau(t *testing.T) {
	for q := 1; q <= 5; q++ {
		var sum float64
		for j := range cRadau {
			sum += aRadau[2][j] * math.Pow(cRadau[j], float64(q-1))
		}
		if math.Abs(sum-1/float64(q)) > 1e-15 {
			t.Errorf("B(%d): %.17g, want %.17g", q, sum, 1/float64(q))
		}
	}
	for i := range cRadau {
		for q := 1; q <= 3; q++ {
			var sum float64
			for j := range cRadau {
				sum += aRadau[i][j] * math.Pow(cRadau[j], float64(q-1))
			}
			if want := math.Pow(cRadau[i], float64(q)) / float64(q); math.Abs(sum-want) > 1e-15 {
				t.Errorf("C(%d), stage %d: %.17g, want %.17g", q, i, sum, want)
			}
		}
	}
}

func oscillator(_ float64, y, dydt []float64) { dydt[0], dydt[1] = y[1], -y[0] }

func TestHarmonicOscillator(t *testing.T) {
	for _, method := range []Method{Automatic, Explicit, Implicit} {
		for _, tolerance := range []float64{1e-6, 1e-9, 1e-12} {
			if method == Implicit && tolerance < 1e-9 {
				continue // order 5 needs very many steps
			}
			g, err := New(oscillator, 0, []float64{0, 1}, Options{RelTol: tolerance, Method: method})
			if err != nil {
				t.Fatal(err)
			}
			var worstDense float64
			y := make([]float64, 2)
			for g.Time() < 20 {
				if err := g.Step(20); err != nil {
					t.Fatal(err)
				}
				for i := 0; i <= 10; i++ {
					at := g.Since() + (g.Time()-g.Since())*float64(i)/10
					g.At(at, y)
					worstDense = math.Max(worstDense, math.Abs(y[0]-math.Sin(at)))
				}
			}
			miss := math.Abs(g.State()[0] - math.Sin(20))
			// An error per step of size tolerance may add up over the time of integration.
			if miss > 100*tolerance || worstDense > 100*tolerance {
				t.Errorf("method %v, tolerance %g: off by %.2g at the end and %.2g between", method, tolerance, miss, worstDense)
			}
			t.Logf("method %v, tolerance %g: off by %.2g at the end, %.2g between; %+v", method, tolerance, miss, worstDense, g.Work())
		}
	}
}

// TestOrder halves the step and looks at the error: the order is what the book says.
func TestOrder(t *testing.T) {
	miss := func(method Method, h float64) float64 {
		g, err := New(oscillator, 0, []float64{0, 1}, Options{RelTol: 1e3, FirstStep: h, MaxStep: h, Method: method})
		if err != nil {
			t.Fatal(err)
		}
		if err := g.To(4); err != nil {
			t.Fatal(err)
		}
		return math.Hypot(g.State()[0]-math.Sin(4), g.State()[1]-math.Cos(4))
	}
	for _, tt := range []struct {
		method Method
		h      float64
		order  float64
	}{{Explicit, 0.5, 8}, {Implicit, 0.1, 5}} {
		order := math.Log2(miss(tt.method, tt.h) / miss(tt.method, tt.h/2))
		if order < tt.order-0.3 {
			t.Errorf("method %v: measured order %.2f, want about %g", tt.method, order, tt.order)
		}
	}
}

// TestVanDerPol: u″ = μ(1-u²)u′ - u with μ = 1000 from (2, 0). The reference at t = 2000 is
// from the test set of stiff problems, E. Hairer, G. Wanner, Solving Ordinary Differential
// Equations II, section IV.10, y(2) of the scaled problem (from memory):
// 0.1706167732170483e1, -0.8928097010247975e-3 in the variables scaled with ε = 1e-6.
func TestVanDerPol(t *testing.T) {
	const epsilon = 1e-6
	f := func(_ float64, y, dydt []float64) {
		dydt[0] = y[1]
		dydt[1] = ((1-y[0]*y[0])*y[1] - y[0]) / epsilon
	}
	g, err := New(f, 0, []float64{2, 0}, Options{RelTol: 1e-8, AbsTol: 1e-10})
	if err != nil {
		t.Fatal(err)
	}
	if err := g.To(2); err != nil {
		t.Fatal(err)
	}
	if got, want := g.State()[0], 1.706167732170483; math.Abs(got-want) > 1e-6 {
		t.Errorf("y(2) = %.12g, want %.12g", got, want)
	}
	if g.Work().Stiff == 0 {
		t.Errorf("the stiffness was not noticed: %+v", g.Work())
	}
	t.Logf("work: %+v", g.Work())
}

func TestLocate(t *testing.T) {
	g, err := New(oscillator, 0, []float64{0, 1}, Options{RelTol: 1e-12})
	if err != nil {
		t.Fatal(err)
	}
	crossings := 0
	for g.Time() < 30 {
		if err := g.Step(30); err != nil {
			t.Fatal(err)
		}
		found, err := g.Locate(func(_ float64, y []float64) float64 { return y[0] - 0.5 })
		if err != nil {
			t.Fatal(err)
		}
		if !found {
			continue
		}
		turn := math.Floor(float64(crossings) / 2)
		want := 2*math.Pi*turn + math.Pi/6
		if crossings%2 == 1 {
			want = 2*math.Pi*turn + 5*math.Pi/6
		}
		if math.Abs(g.Time()-want) > 1e-11 {
			t.Errorf("crossing %d at %.15g, want %.15g", crossings, g.Time(), want)
		}
		crossings++
	}
	if crossings != 10 {
		t.Errorf("%d crossings, want 10", crossings)
	}
}

func TestNewRefuses(t *testing.T) {
	for name, call := range map[string]func() error{
		"empty state":        func() error { _, err := New(oscillator, 0, nil, Options{}); return err },
		"negative tolerance": func() error { _, err := New(oscillator, 0, []float64{1, 2}, Options{RelTol: -1}); return err },
		"infinite step":      func() error { _, err := New(oscillator, 0, []float64{1, 2}, Options{MaxStep: math.Inf(1)}); return err },
		"state not finite":   func() error { _, err := New(oscillator, 0, []float64{1, math.NaN()}, Options{}); return err },
	} {
		if call() == nil {
			t.Errorf("%s: no error", name)
		}
	}
}

// TestBlowUp: y′ = y² from 1 is infinite at t = 1; the integration must say so and not hang.
func TestBlowUp(t *testing.T) {
	for _, method := range []Method{Automatic, Implicit} {
		g, err := New(func(_ float64, y, dydt []float64) { dydt[0] = y[0] * y[0] }, 0, []float64{1}, Options{Method: method})
		if err != nil {
			t.Fatal(err)
		}
		if err := g.To(2); err == nil {
			t.Errorf("method %v: reached t = 2 with y = %g; the solution ends at t = 1", method, g.State()[0])
		}
	}
}
