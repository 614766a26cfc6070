package tf_test

import (
	"errors"
	"fmt"
	"log"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// The phase margin of a position drive, read by hand: for L = 4/(s(s+1)), |L| = 1 at
// ω² = (√65 - 1)/2, and the phase margin is atan(1/ω).
func ExampleLoop_Margins() {
	loop := tf.Loop{
		Controller: tf.MustParse("4"),
		Plant:      tf.MustParse("1 / (s (s + 1))"),
	}
	m, err := loop.Margins()
	if err != nil {
		log.Fatal(err)
	}
	c := m.GainCrossovers[0]
	fmt.Printf("stable: %v\n", m.Stable)
	fmt.Printf("phase margin %.2f° at %.4f rad/s\n", c.Margin*180/math.Pi, c.Frequency)
	fmt.Printf("dead time of %.4f s more would destabilise\n", m.Delay)
	fmt.Printf("sensitivity peak %.4f at %.4f rad/s\n", m.SensitivityPeak, m.SensitivityPeakAt)
	// Output:
	// stable: holds
	// phase margin 28.02° at 1.8791 rad/s
	// dead time of 0.2603 s more would destabilise
	// sensitivity peak 2.2832 at 2.1094 rad/s
}

// A loop without any crossover and with finite sensitivity can still be unstable.
func ExampleMargins_unstable() {
	loop := tf.Loop{Plant: tf.MustParse("0.5 / (s - 1)")}
	m, err := loop.Margins()
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("stable: %v, crossovers: %d, delay margin %v, phase margin %v\n", m.Stable, len(m.GainCrossovers), m.Delay, m.PhaseMargin)
	fmt.Printf("a gain %v times as large would be on the boundary\n", m.GainIncrease)
	// Output:
	// stable: fails, crossovers: 0, delay margin 0, phase margin NaN
	// a gain 2 times as large would be on the boundary
}

// The phase of a resonance with dead time, without a turn lost: far above the resonance it is
// -π less the turns of the dead time.
func ExampleFrequencyResponse() {
	g := tf.MustParse("exp(-0.5 s) / (s^2 + 0.002 s + 1)")
	r, err := g.FrequencyResponse()
	if err != nil {
		log.Fatal(err)
	}
	for _, w := range []float64{0.9, 1, 1.1, 100} {
		fmt.Printf("ω = %5.1f: |g| = %.4g, phase %.4f rad, group delay %.4g s\n", w, r.Magnitude(w), r.Phase(w), r.GroupDelay(w))
	}
	// Output:
	// ω =   0.9: |g| = 5.263, phase -0.4595 rad, group delay 0.6003 s
	// ω =   1.0: |g| = 500, phase -2.0708 rad, group delay 1000 s
	// ω =   1.1: |g| = 4.762, phase -3.6811 rad, group delay 0.6002 s
	// ω = 100.0: |g| = 0.0001, phase -53.1416 rad, group delay 0.5 s
}

// A plant known only from a frequency sweep.
func ExampleMeasuredResponse() {
	var frequencies []float64
	var values []complex128
	g := tf.MustParse("6 / (s + 1)^3") // stands for the machine
	for w := 0.1; w < 20; w *= 1.02 {
		frequencies = append(frequencies, w)
		values = append(values, g.AtFrequency(w))
	}
	measured, err := tf.NewMeasuredResponse(frequencies, values)
	if err != nil {
		log.Fatal(err)
	}
	m := measured.Margins()
	fmt.Printf("gain margin %.3f at %.3f rad/s, phase margin %.2f°\n", m.PhaseCrossovers[0].Margin, m.PhaseCrossovers[0].Frequency, m.GainCrossovers[0].Margin*180/math.Pi)
	// Output: gain margin 1.333 at 1.732 rad/s, phase margin 10.17°
}

func ExampleFunction_Bandwidth() {
	// A first-order element falls to 1/√2 at its corner.
	w, err := tf.MustParse("5 / (0.25 s + 1)").Bandwidth()
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(w, "rad/s")
	// Output: 4 rad/s
}

// The standard second-order element has the resonant peak 1/(2ζ√(1-ζ²)) at ω√(1-2ζ²) and the
// bandwidth ω√(1-2ζ²+√(4ζ⁴-4ζ²+2)) (K. Ogata, Modern Control Engineering, 5th ed., chapter 7,
// from memory).
func TestSecondOrderFigures(t *testing.T) {
	for _, scale := range []float64{1, 1e-9, 1e9, 3e5} {
		for _, zeta := range []float64{1e-6, 1e-3, 0.1, 0.3, 0.5, 0.7, 0.8, 1, 3} {
			g, err := tf.New(poly.New(scale*scale), poly.New(1, 2*zeta*scale, scale*scale))
			if err != nil {
				t.Fatal(err)
			}
			p, err := g.Resonance()
			if err != nil {
				t.Fatal(err)
			}
			want, at := 1.0, 0.0
			if zeta < math.Sqrt(0.5) {
				want, at = 1/(2*zeta*math.Sqrt(1-zeta*zeta)), scale*math.Sqrt(1-2*zeta*zeta)
			}
			// The coefficient 2ζω is rounded, so that the peak is that of a slightly other ζ.
			if math.Abs(p.Magnitude-want) > 1e-12*want || math.Abs(p.Frequency-at) > 1e-12*scale {
				t.Errorf("ζ = %v, ω = %v: resonance %v, want %v at %v", zeta, scale, p, want, at)
			}
			w, err := g.Bandwidth()
			if err != nil {
				t.Fatal(err)
			}
			z := zeta * zeta
			// 1-2ζ²+√(…) cancels for large ζ: 1/(2ζ²-1+√(…)) is the same.
			wb := scale / math.Sqrt(2*z-1+math.Sqrt(4*z*z-4*z+2))
			if math.Abs(w-wb) > 1e-12*wb {
				t.Errorf("ζ = %v, ω = %v: bandwidth %v, want %v", zeta, scale, w, wb)
			}
		}
	}
}

// The continuous phase equals the value's angle modulo 2π, and its slope is the group delay.
func TestPhaseIsContinuous(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 5))
	for range 60 {
		l := draw(t, r, r.IntN(3) == 0, false)
		fr, err := l.f.FrequencyResponse()
		if err != nil {
			t.Fatal(err)
		}
		grid := l.frequencies(0)
		last := math.NaN()
		for i, w := range grid {
			phase := fr.Phase(w)
			y := l.atFrequency(w)
			if cmplx.IsInf(y) || cmplx.IsNaN(y) || y == 0 || math.IsNaN(phase) {
				last = math.NaN()
				continue
			}
			if d := math.Remainder(phase-cmplx.Phase(y), 2*math.Pi); math.Abs(d) > 1e-6 {
				t.Errorf("%v: phase %v at %v, where arg is %v", l, phase, w, cmplx.Phase(y))
			}
			if i > 0 && !math.IsNaN(last) {
				// By the trapezoidal rule; only where the delay changes little.
				a, b := fr.GroupDelay(grid[i-1]), fr.GroupDelay(w)
				if math.Abs(a-b) < 0.1*math.Abs(a+b) {
					if d := last - (a+b)/2*(w-grid[i-1]) - phase; math.Abs(d) > 0.02+0.1*math.Abs(phase-last) {
						t.Errorf("%v: phase goes from %v to %v between %v and %v, by the group delay it misses %v", l, last, phase, grid[i-1], w, d)
					}
				}
			}
			last = phase
		}
	}
}

func TestPhaseStartsAndEnds(t *testing.T) {
	tests := []struct {
		text       string
		start, end float64 // in quarter turns
	}{
		{"1 / s", -1, -1},
		{"1 / (s^2 (s + 1))", -2, -3},
		{"-2 / (s + 1)", -2, -3},
		{"(s - 1) / (s + 1)", -2, -4}, // the gain at zero frequency is -1
		{"(1 - s) / (s + 1)", 0, -2},
		{"1 / (s - 1)", -2, -1},
		{"s / (s + 1)", 1, 0},
		{"(s^2 + 0.1 s + 1) / (s^2 - 0.1 s + 1)", 0, 4},
		{"(s^2 + 4) / (s + 1)^2", 0, 0}, // up by π at the zero on the axis, down by π in all
		{"1 / (s^2 + 4)", 0, -2},
	}
	for _, test := range tests {
		r, err := tf.MustParse(test.text).FrequencyResponse()
		if err != nil {
			t.Fatal(err)
		}
		for _, end := range []struct{ w, want float64 }{{1e-9, test.start}, {1e9, test.end}} {
			if got := r.Phase(end.w) / (math.Pi / 2); math.Abs(got-end.want) > 1e-6 {
				t.Errorf("%s: phase of %v quarter turns at %v, want %v", test.text, got, end.w, end.want)
			}
		}
	}
}

func TestMeasuredResponseRefuses(t *testing.T) {
	one := []complex128{1, 1}
	tests := []struct {
		name        string
		frequencies []float64
		values      []complex128
		argument    string
	}{
		{"lengths", []float64{1, 2, 3}, one, "values"},
		{"too few", []float64{1}, one[:1], "frequencies"},
		{"zero", []float64{0, 1}, one, "frequencies[0]"},
		{"descending", []float64{2, 1}, one, "frequencies[1]"},
		{"NaN", []float64{1, math.NaN()}, one, "frequencies[1]"},
		{"infinite value", []float64{1, 2}, []complex128{1, cmplx.Inf()}, "values[1]"},
		{"zero value", []float64{1, 2}, []complex128{0, 1}, "values[0]"},
	}
	for _, test := range tests {
		_, err := tf.NewMeasuredResponse(test.frequencies, test.values)
		var bad *poly.ArgumentError
		if !errors.As(err, &bad) || bad.Argument != test.argument {
			t.Errorf("%s: error %v, want one about %s", test.name, err, test.argument)
		}
	}
}

// On a dense measurement the margins tend to those of the function.
func TestMeasuredMargins(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 9))
	for range 25 {
		l := draw(t, r, false, r.IntN(2) == 0)
		want, err := (tf.Loop{Plant: l.f}).Margins()
		if err != nil {
			continue
		}
		grid := l.frequencies(100 / max(l.dead, 1e-300))
		values := make([]complex128, 0, len(grid))
		ok := true
		for _, w := range grid {
			y := l.atFrequency(w)
			ok = ok && y != 0 && !cmplx.IsNaN(y) && !cmplx.IsInf(y)
			values = append(values, y)
		}
		if !ok {
			continue
		}
		measured, err := tf.NewMeasuredResponse(grid, values)
		if err != nil {
			t.Fatal(err)
		}
		got := measured.Margins()
		for _, c := range want.GainCrossovers {
			if c.Frequency < got.From || c.Frequency > got.To {
				continue
			}
			best := math.Inf(1)
			for _, d := range got.GainCrossovers {
				best = min(best, math.Abs(d.Frequency-c.Frequency)/c.Frequency)
			}
			// Two crossings between neighbours cannot be seen.
			if best > 1e-3 && len(got.GainCrossovers) >= len(want.GainCrossovers) {
				t.Errorf("%v: gain crossover %v not among %v", l, c, got.GainCrossovers)
			}
		}
	}
}

// The bandwidth of closed loops with dead time, against a dense evaluation.
func TestBandwidthWithDeadTime(t *testing.T) {
	for _, test := range []struct{ controller, plant string }{
		{"1", "exp(-0.2 s) / (s (s + 1))"},
		{"0.4 (s + 0.5)/s", "exp(-1.5 s)/(2 s + 1)"},
		{"3", "exp(-0.001 s) / (s^2 + 0.02 s + 1)"},
		{"2e-6", "exp(-2e5 s)/s"},
		{"0.3", "1e9 exp(-2e-10 s)/(s + 1e8)"},
	} {
		l := tf.Loop{Controller: tf.MustParse(test.controller), Plant: tf.MustParse(test.plant)}
		p, err := l.ComplementarySensitivity()
		if err != nil {
			t.Fatal(err)
		}
		w, err := p.Bandwidth()
		if err != nil {
			t.Errorf("%v: %v", test, err)
			continue
		}
		level := cmplx.Abs(p.At(0)) / math.Sqrt2
		if got := cmplx.Abs(p.At(complex(0, w))); math.Abs(got-level) > 1e-10*level {
			t.Errorf("%v: magnitude %v at the bandwidth %v, want %v", test, got, w, level)
		}
		for k := range 20000 {
			if x := w * (float64(k) + 0.5) / 20000; cmplx.Abs(p.At(complex(0, x))) < level*(1-1e-12) {
				t.Errorf("%v: below the level at %v already, bandwidth %v", test, x, w)
				break
			}
		}
	}
	// |S| of a loop without integrator rises to 1 and never falls to 1/√2 of its value at zero.
	s, err := (tf.Loop{Plant: tf.MustParse("0.5 exp(-0.1 s)/(s+1)")}).Sensitivity()
	if err != nil {
		t.Fatal(err)
	}
	if w, err := s.Bandwidth(); err != nil || !math.IsInf(w, 1) {
		t.Errorf("bandwidth %v of a path that never falls, %v", w, err)
	}
	// Without dead time the same code path must agree with the exact roots: a vanishing dead time.
	a, err := (tf.Loop{Plant: tf.MustParse("4/(s(s+1))")}).ComplementarySensitivity()
	if err != nil {
		t.Fatal(err)
	}
	b, err := (tf.Loop{Plant: tf.MustParse("4 exp(-1e-14 s)/(s(s+1))")}).ComplementarySensitivity()
	if err != nil {
		t.Fatal(err)
	}
	x, err := a.Bandwidth()
	if err != nil {
		t.Fatal(err)
	}
	y, err := b.Bandwidth()
	if err != nil || math.Abs(x-y) > 1e-12*x {
		t.Errorf("bandwidth %v, with a vanishing dead time %v, %v", x, y, err)
	}
}
