package tf

import (
	"fmt"
	"math"
	"math/cmplx"
	"strconv"
	"strings"
	"testing"

	"github.com/polewright/polewright/poly"
)

func functionOfLaw(t testing.TB, law Law) Function {
	t.Helper()
	g, err := law.Function()
	if err != nil {
		t.Fatalf("%v: %v", law, err)
	}
	return g
}

// samePrinted compares coefficients with printed decimals: ours is rounded to as many.
func samePrinted(t *testing.T, name string, p poly.Poly, scale float64, printed string) {
	t.Helper()
	fields := strings.Fields(printed)
	if p.Degree() != len(fields)-1 {
		t.Errorf("%s: degree %d, want %d", name, p.Degree(), len(fields)-1)
		return
	}
	for i, want := range fields {
		decimals := 0
		if j := strings.IndexByte(want, '.'); j >= 0 {
			decimals = len(want) - j - 1
		}
		if got := strconv.FormatFloat(p.Coefficient(len(fields)-1-i)/scale, 'f', decimals, 64); got != want {
			t.Errorf("%s: coefficient %d = %s, want %s", name, i, got, want)
		}
	}
}

// Source: Butterworth polynomials as printed in handbooks of filter design, such as
// L. Weinberg, Network Analysis and Synthesis, McGraw-Hill 1962, table 11-4 (from memory).
func TestButterworthTable(t *testing.T) {
	for i, printed := range []string{
		"1 1",
		"1 1.4142136 1",
		"1 2.0000000 2.0000000 1",
		"1 2.6131259 3.4142136 2.6131259 1",
		"1 3.2360680 5.2360680 5.2360680 3.2360680 1",
		"1 3.8637033 7.4641016 9.1416202 7.4641016 3.8637033 1",
		"1 4.4939592 10.0978347 14.5917939 14.5917939 10.0978347 4.4939592 1",
		"1 5.1258309 13.1370712 21.8461510 25.6883559 21.8461510 13.1370712 5.1258309 1",
	} {
		name := fmt.Sprintf("order %d", i+1)
		g := functionOfLaw(t, Butterworth{Order: i + 1, Cutoff: 1})
		samePrinted(t, name, g.Denominator(), 1, printed)
		h := functionOfLaw(t, Butterworth{Order: i + 1, Cutoff: 3e-4})
		if got := cmplx.Abs(h.At(3e-4i)); math.Abs(got-math.Sqrt2/2) > 1e-15 {
			t.Errorf("%s: magnitude at the cutoff %v, want 1/√2", name, got)
		}
		if got := h.At(0); got != 1 {
			t.Errorf("%s: static gain %v, want 1", name, got)
		}
	}
}

// Source: reverse Bessel polynomials, sequence A001498 of The On-Line Encyclopedia of
// Integer Sequences, and W. E. Thomson 1949 (from memory).
func TestBesselTable(t *testing.T) {
	for i, want := range [][]float64{
		{1, 1},
		{1, 3, 3},
		{1, 6, 15, 15},
		{1, 10, 45, 105, 105},
		{1, 15, 105, 420, 945, 945},
		{1, 21, 210, 1260, 4725, 10395, 10395},
		{1, 28, 378, 3150, 17325, 62370, 135135, 135135},
	} {
		g := functionOfLaw(t, Bessel{Order: i + 1, Delay: 1})
		if !g.Denominator().Equal(poly.New(want...)) || !g.Numerator().Equal(poly.New(want[len(want)-1])) {
			t.Errorf("order %d: %v, want %v", i+1, g, want)
		}
	}
	// Cutoff times delay for 1/√2, as printed in filter handbooks (from memory): 1, 1.3617,
	// 1.7557, 2.1139, 2.4274, 2.7034.
	for i, want := range []string{"1.0000", "1.3617", "1.7557", "2.1139", "2.4274", "2.7034"} {
		b, err := BesselByCutoff(i+1, 250)
		if err != nil {
			t.Fatal(err)
		}
		if got := strconv.FormatFloat(b.Delay*250, 'f', 4, 64); got != want {
			t.Errorf("order %d: cutoff·delay = %s, want %s", i+1, got, want)
		}
		g := functionOfLaw(t, b)
		if got := cmplx.Abs(g.At(250i)); math.Abs(got-math.Sqrt2/2) > 1e-14 {
			t.Errorf("order %d: magnitude at the cutoff %v, want 1/√2", i+1, got)
		}
	}
}

// Source: D. Graham, R. C. Lathrop 1953, as reprinted in R. C. Dorf, R. H. Bishop, Modern Control
// Systems, table 5.6 (from memory).
func TestITAETable(t *testing.T) {
	for i, printed := range []string{
		"1 1", "1 1.4 1", "1 1.75 2.15 1", "1 2.1 3.4 2.7 1", "1 2.8 5.0 5.5 3.4 1", "1 3.25 6.60 8.60 7.45 3.95 1",
	} {
		g := functionOfLaw(t, ITAE{Order: i + 1, Frequency: 1})
		samePrinted(t, fmt.Sprintf("order %d", i+1), g.Denominator(), 1, printed)
		h := functionOfLaw(t, ITAE{Order: i + 1, Frequency: 40})
		if got := h.At(0); got != 1 {
			t.Errorf("order %d: static gain %v, want 1", i+1, got)
		}
		if got, want := h.At(complex(12, 28)), g.At(complex(0.3, 0.7)); cmplx.Abs(got-want) > 1e-14 {
			t.Errorf("order %d: scaled to 40 rad/s %v, want %v", i+1, got, want)
		}
	}
}

// Source: Padé table of the exponential function (C. Brezinski, History of Continued
// Fractions and Padé Approximants, Springer 1991, from memory).
func TestDeadTimeApproximationTable(t *testing.T) {
	for _, tt := range []struct {
		m, n     int
		num, den []float64
	}{
		{0, 1, []float64{1}, []float64{1, 1}},
		{1, 1, []float64{-1, 2}, []float64{1, 2}},
		{1, 2, []float64{-2, 6}, []float64{1, 4, 6}},
		{2, 2, []float64{1, -6, 12}, []float64{1, 6, 12}},
		{2, 3, []float64{3, -24, 60}, []float64{1, 9, 36, 60}},
		{3, 3, []float64{-1, 12, -60, 120}, []float64{1, 12, 60, 120}},
		{4, 4, []float64{1, -20, 180, -840, 1680}, []float64{1, 20, 180, 840, 1680}},
	} {
		g, err := DeadTimeApproximation(1, tt.m, tt.n)
		if err != nil {
			t.Fatal(err)
		}
		if !g.Numerator().Mul(poly.New(tt.den...)).Equal(g.Denominator().Mul(poly.New(tt.num...))) {
			t.Errorf("degrees %d, %d: %v, want %v / %v", tt.m, tt.n, g, tt.num, tt.den)
		}
	}
	g, err := DeadTimeApproximation(0.02, 5, 6)
	if err != nil {
		t.Fatal(err)
	}
	s := 10 + 30i
	if got, want := g.At(s), cmplx.Exp(-0.02*s); cmplx.Abs(got-want) > 1e-12 {
		t.Errorf("degrees 5, 6 at %v = %v, want %v", s, got, want)
	}
}

func TestControllers(t *testing.T) {
	s := 0.3 + 2i
	for _, tt := range []struct {
		law  Law
		want complex128
		says string
	}{
		{P{2}, 2, "gain 2"},
		{PI{2, 0.5}, 2 * (1 + 1/(0.5*s)), "integral time 0.5 s"},
		{PD{2, 0.3, 0.05}, 2 * (1 + 0.3*s/(0.05*s+1)), "derivative time 0.3 s"},
		{PID{2, 0.5, 0.3, 0.05}, 2 * (1 + 1/(0.5*s) + 0.3*s/(0.05*s+1)), "filter time 0.05 s"},
		{PID{2, 0.5, 0.3, 0}, 2 * (1 + 1/(0.5*s) + 0.3*s), "filter time 0 s"},
		{PID{2, math.Inf(1), 0.3, 0.05}, 2 * (1 + 0.3*s/(0.05*s+1)), "integral time +Inf"},
		{PID{2, 0.5, 0, 0.05}, 2 * (1 + 1/(0.5*s)), "ideal"},
		{ParallelPID{2, 3, 0.4, 0.05}, 2 + 3/s + 0.4*s/(0.05*s+1), "integral 3 1/s"},
		{ParallelPID{2, 0, 0.4, 0.05}, 2 + 0.4*s/(0.05*s+1), "parallel"},
		{ParallelPID{0, 3, 0, 0.05}, 3 / s, "parallel"},
		{PID{2, 0.5, 0.3, 0.05}.Parallel(), 2 * (1 + 1/(0.5*s) + 0.3*s/(0.05*s+1)), "parallel"},
		{Lead{3, 2, 8}, 3 * (s/2 + 1) / (s/8 + 1), "zero at -2"},
		{Lag{3, 10, 0.5}, 3 * (s + 0.5) / (s + 0.05), "ratio 10"},
		{Notch{5, 0.01, 0.5}, (s*s + 0.1*s + 25) / (s*s + 5*s + 25), "frequency 5"},
		{Butterworth{2, 3}, 9 / (s*s + 3*complex(math.Sqrt2, 0)*s + 9), "cutoff 3"},
		{Bessel{2, 0.5}, 3 / (0.25*s*s + 1.5*s + 3), "delay 0.5"},
		{ITAE{2, 3}, 9 / (s*s + 4.2*s + 9), "order 2"},
	} {
		g := functionOfLaw(t, tt.law)
		if got := g.At(s); cmplx.Abs(got-tt.want) > 1e-14*cmplx.Abs(tt.want) {
			t.Errorf("%v at %v = %v, want %v", tt.law, s, got, tt.want)
		}
		if !strings.Contains(tt.law.String(), tt.says) {
			t.Errorf("%q does not say %q", tt.law, tt.says)
		}
	}
	for _, law := range []Law{
		P{math.NaN()}, PI{1, 0}, PI{1, -1}, PD{1, -1, 0}, PID{1, 0, 1, 1}, PID{math.Inf(1), 1, 1, 1}, ParallelPID{1, 1, 1, -1}, Lead{1, 2, 2}, Lead{1, 0, 2},
		Lag{1, 1, 2}, Lag{1, 2, 0}, Notch{0, 1, 1}, Notch{1, 1, 0}, Butterworth{0, 1}, Butterworth{61, 1}, Bessel{2, 0}, ITAE{7, 1}, ITAE{2, math.Inf(1)},
	} {
		if g, err := law.Function(); err == nil {
			t.Errorf("%v makes %v", law, g)
		}
	}
	if c, err := (ParallelPID{2, 4, 0.6, 0.05}).Ideal(); err != nil || c != (PID{2, 0.5, 0.3, 0.05}) {
		t.Errorf("ideal form = %v, %v", c, err)
	}
	if _, err := (ParallelPID{0, 4, 0, 0}).Ideal(); err == nil {
		t.Error("an I controller has an ideal form")
	}
	// PD and PID with equal parameters leave no hidden poles behind.
	g := functionOfLaw(t, ParallelPID{Proportional: 2, Derivative: 1})
	if g.Denominator().Degree() != 0 {
		t.Errorf("unfiltered PD = %v", g)
	}
}

func TestLeadByPhase(t *testing.T) {
	c, err := LeadByPhase(math.Pi/4, 10)
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(c.MaximumPhase()-math.Pi/4) > 1e-15 || math.Abs(c.Frequency()-10) > 1e-14 {
		t.Errorf("%v, want 45° at 10 rad/s", c)
	}
	g := functionOfLaw(t, c)
	if got := cmplx.Phase(g.At(10i)); math.Abs(got-math.Pi/4) > 1e-15 {
		t.Errorf("phase %v, want π/4", got)
	}
	for _, d := range []float64{-0.1, 0.1} {
		if cmplx.Phase(g.At(complex(0, 10+d))) >= math.Pi/4 {
			t.Errorf("the phase is larger at %v", 10+d)
		}
	}
	for _, phase := range []float64{0, -1, math.Pi / 2, math.NaN()} {
		if c, err := LeadByPhase(phase, 10); err == nil {
			t.Errorf("LeadByPhase(%v) = %v", phase, c)
		}
	}
}

func TestConstructors(t *testing.T) {
	for _, tt := range []struct {
		text string
		make func() (Function, error)
	}{
		{"2 / (0.5 s + 1)", func() (Function, error) { return FirstOrder(2, 0.5) }},
		{"12 / (s^2 + 2 s + 4)", func() (Function, error) { return SecondOrder(3, 0.5, 2) }},
		{"3 / s", func() (Function, error) { return Integrator(3) }},
		{"exp(-0.25 s)", func() (Function, error) { return DeadTime(0.25) }},
		{"7", func() (Function, error) { return Constant(7) }},
		{"(s + 2) / (s^2 + 3)", func() (Function, error) { return FromCoefficients([]float64{1, 2}, []float64{1, 0, 3}) }},
	} {
		g, err := tt.make()
		if err != nil || !g.Equal(MustParse(tt.text)) {
			t.Errorf("got %v, %v; want %s", g, err, tt.text)
		}
	}
	for name, make := range map[string]func() (Function, error){
		"FirstOrder":  func() (Function, error) { return FirstOrder(math.NaN(), 1) },
		"SecondOrder": func() (Function, error) { return SecondOrder(1, 1, 0) },
		"Integrator":  func() (Function, error) { return Integrator(math.Inf(1)) },
		"DeadTime":    func() (Function, error) { return DeadTime(-1) },
		"Constant":    func() (Function, error) { return Constant(math.NaN()) },
	} {
		if g, err := make(); err == nil || g.Err() != err {
			t.Errorf("%s takes a bad argument", name)
		}
	}
}
