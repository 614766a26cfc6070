package tf

import (
	"math"
	"math/cmplx"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/poly"
)

type sampledCase struct {
	ID, Kind, Title        string
	Numerator, Denominator []refdata.Decimal
	Delay, Period          refdata.Decimal
	MatchFrequency         refdata.Decimal   `json:"match_frequency"`
	ZerosAtMinusOne        *int              `json:"zeros_at_minus_one"`
	NumeratorZ             []refdata.Decimal `json:"numerator_z"`
	DenominatorZ           []refdata.Decimal `json:"denominator_z"`
}

func readSampled(t testing.TB) (file struct {
	Cases []sampledCase
	Loops []sampledLoopCase
}) {
	refdata.Read(t, "testdata/sampled.json", &file)
	return file
}

func functionOf(t testing.TB, num, den []refdata.Decimal, delay refdata.Decimal) Function {
	t.Helper()
	g, err := New(poly.New(refdata.Floats(t, num)...), poly.New(refdata.Floats(t, den)...))
	if err != nil {
		t.Fatal(err)
	}
	if delay != "" {
		if g, err = g.WithDeadTime(delay.Float(t)); err != nil {
			t.Fatal(err)
		}
	}
	return g
}

// samePolynomial compares coefficients, highest power first, each to a relative bar.
func samePolynomial(t *testing.T, id, what string, got poly.Poly, want []refdata.Decimal, bar float64) {
	t.Helper()
	for len(want) > 1 && want[0].Float(t) == 0 {
		want = want[1:]
	}
	if got.Degree() != len(want)-1 {
		t.Errorf("%s: %s %v has degree %d, want %d", id, what, got, got.Degree(), len(want)-1)
		return
	}
	for i, w := range want {
		if c := got.Coefficient(len(want) - 1 - i); refdata.Off(t, c, w) > bar {
			t.Errorf("%s: %s coefficient %d = %v, want %v", id, what, i, c, w)
		}
	}
}

// The bar for reference cases is 1e-10; these are exact numbers rounded once.
func TestSampledReference(t *testing.T) {
	methods := map[string]Method{
		"zero_order_hold": ZeroOrderHold, "ramp_invariant": RampInvariant, "trapezoidal": Trapezoidal, "matched_roots": MatchedRoots,
	}
	for _, c := range readSampled(t).Cases {
		how, ok := methods[c.Kind]
		if !ok {
			t.Fatalf("%s: kind %q", c.ID, c.Kind)
		}
		g := functionOf(t, c.Numerator, c.Denominator, c.Delay)
		var opt []Option
		if c.MatchFrequency != "" {
			opt = append(opt, MatchFrequency(c.MatchFrequency.Float(t)))
		}
		if c.ZerosAtMinusOne != nil {
			excess := g.Denominator().Degree() - g.Numerator().Degree()
			opt = append(opt, ZerosAtInfinity(excess-*c.ZerosAtMinusOne))
		}
		h, err := g.Sample(c.Period.Float(t), how, opt...)
		if err != nil {
			t.Errorf("%s: %v", c.ID, err)
			continue
		}
		samePolynomial(t, c.ID, "numerator", h.Numerator(), c.NumeratorZ, 1e-15)
		samePolynomial(t, c.ID, "denominator", h.Denominator(), c.DenominatorZ, 1e-15)
	}
}

type sampledLoopCase struct {
	ID                    string
	PlantNumerator        []refdata.Decimal `json:"plant_numerator"`
	PlantDenominator      []refdata.Decimal `json:"plant_denominator"`
	Delay, Period         refdata.Decimal
	ControllerNumerator   []refdata.Decimal `json:"controller_numerator"`
	ControllerDenominator []refdata.Decimal `json:"controller_denominator"`
	PlantNumeratorZ       []refdata.Decimal `json:"plant_numerator_z"`
	PlantDenominatorZ     []refdata.Decimal `json:"plant_denominator_z"`
	ClosedLoopDenominator []refdata.Decimal `json:"closed_loop_denominator"`
	SpectralRadius        refdata.Decimal   `json:"spectral_radius"`
	Stable                bool
	YSamples              []refdata.Decimal `json:"y_samples"`
	USamples              []refdata.Decimal `json:"u_samples"`
}

func TestSampledLoopReference(t *testing.T) {
	for _, c := range readSampled(t).Loops {
		controller := functionOf(t, c.ControllerNumerator, c.ControllerDenominator, "")
		controller, err := controller.WithPeriod(c.Period.Float(t))
		if err != nil {
			t.Fatal(err)
		}
		l := Loop{Controller: controller, Plant: functionOf(t, c.PlantNumerator, c.PlantDenominator, c.Delay)}
		plant, err := l.Plant.Sample(c.Period.Float(t), ZeroOrderHold)
		if err != nil {
			t.Fatal(err)
		}
		samePolynomial(t, c.ID, "plant numerator", plant.Numerator(), c.PlantNumeratorZ, 1e-15)
		samePolynomial(t, c.ID, "plant denominator", plant.Denominator(), c.PlantDenominatorZ, 1e-15)
		closed, err := l.Closed()
		if err != nil {
			t.Errorf("%s: %v", c.ID, err)
			continue
		}
		samePolynomial(t, c.ID, "closed loop", closed.Denominator(), c.ClosedLoopDenominator, 1e-14)
		poles, err := closed.Poles()
		if err != nil {
			t.Fatal(err)
		}
		radius := 0.0
		for _, p := range poles {
			radius = max(radius, math.Hypot(real(p.Value), imag(p.Value)))
		}
		if refdata.Off(t, radius, c.SpectralRadius) > 1e-12 {
			t.Errorf("%s: spectral radius %v, want %v", c.ID, radius, c.SpectralRadius)
		}
		for to, want := range map[Point][]refdata.Decimal{Output: c.YSamples, Effort: c.USamples} {
			path, err := l.Path(Reference, to)
			if err != nil {
				t.Fatal(err)
			}
			h, err := path.Function()
			if err != nil {
				t.Fatal(err)
			}
			got := stepSamples(h, len(want))
			scale := 0.0
			for i, w := range want {
				scale = max(scale, math.Abs(w.Float(t)))
				if refdata.Miss(t, got[i], w) > 1e-10*scale {
					t.Errorf("%s: %v at sample %d = %v, want %v", c.ID, to, i, got[i], w)
				}
			}
		}
		m, err := l.Margins()
		if err != nil {
			t.Fatal(err)
		}
		if (m.Stable == poly.Holds) != c.Stable {
			t.Errorf("%s: stable %v, want %v", c.ID, m.Stable, c.Stable)
		}
	}
}

// stepSamples runs the difference equation of a function of z on a unit step.
func stepSamples(g Function, n int) []float64 {
	return difference(g, func(int) float64 { return 1 }, n)
}

// Towards s = 0 matched roots agree with the function they stand for, poles and zeros at 0
// included; with a frequency to match, in magnitude there.
func TestMatchedRootsGain(t *testing.T) {
	const period = 0.1
	for _, text := range []string{"(2 s + 1) / s", "3 / (s^2 (s + 2))", "s / (s + 1)", "-4 (s - 3) / ((s + 1)^2 + 25)", "exp(-0.3 s) / (s + 1)"} {
		g := MustParse(text)
		h, err := g.Sample(period, MatchedRoots)
		if err != nil {
			t.Errorf("%s: %v", text, err)
			continue
		}
		s := 1e-7i
		if got, want := h.At(cmplx.Exp(s*period)), g.At(s); cmplx.Abs(got-want) > 1e-6*cmplx.Abs(want) {
			t.Errorf("%s: near 0 %v, want %v", text, got, want)
		}
		if h, err = g.Sample(period, MatchedRoots, MatchFrequency(2)); err != nil {
			t.Errorf("%s: %v", text, err)
			continue
		}
		if got, want := cmplx.Abs(h.At(cmplx.Exp(2i*period))), cmplx.Abs(g.At(2i)); math.Abs(got-want) > 1e-14*want {
			t.Errorf("%s: magnitude at 2 rad/s %v, want %v", text, got, want)
		}
	}
	if _, err := MustParse("s^2 / (s + 1)").Sample(period, MatchedRoots); err == nil {
		t.Error("an improper function is matched")
	}
	if _, err := MustParse("exp(-0.25 s) / (s + 1)").Sample(period, Trapezoidal); err == nil {
		t.Error("2.5 periods of dead time pass the trapezoidal rule")
	}
	for _, opt := range []Option{MatchFrequency(0), MatchFrequency(math.Pi / period), ZerosAtInfinity(2)} {
		if _, err := MustParse("1 / (s + 1)").Sample(period, MatchedRoots, opt); err == nil {
			t.Error("an option out of range is taken")
		}
	}
}

// A period of 2³⁰⁰ time constants takes more doublings than there are bits at first.
func TestSampleAtAnEndlessPeriod(t *testing.T) {
	g := MustParse("1 / ((s + 1) (s^2 + s + 3) (s + 0x1p-1000))")
	for _, period := range []float64{0x1p300} {
		for how := ZeroOrderHold; how <= FirstOrderHold; how++ {
			h, err := g.Sample(period, how)
			if err != nil {
				continue // said, and not a panic
			}
			if got, want := h.At(1), g.At(0); cmplx.Abs(got-want) > 1e-13*cmplx.Abs(want) {
				t.Errorf("period %v, %v: static gain %v, want %v", period, how, got, want)
			}
		}
	}
}
