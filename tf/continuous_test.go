package tf

import (
	"math"
	"math/cmplx"
	"testing"
)

// What was sampled comes back.
func TestContinuousUndoesSample(t *testing.T) {
	for _, text := range []string{
		"1 / (s + 1)", "2 / s", "1 / s^3", "1 / (s (s + 1))", "4 / (s^2 + 0.4 s + 4)", "1000 / (s^2 + 1001 s + 1000)", "1 / (s^4 + 4 s^3 + 6 s^2 + 4 s + 1)",
		"(2 s + 1) / (s + 1)", "(s^2 + 0.02 s + 4) / (s^3 + 0.04 s^2 + 9 s)", "(1 - s) / (s^2 + 2 s + 1)", "s / (s + 2)", "3", "0.25 exp(-0.5 s) / (s + 0.5)", "1 / (s - 0.5)",
	} {
		g := MustParse(text)
		for _, period := range []float64{0x1p-10, 0.1, 0.5} {
			for how := ZeroOrderHold; how <= MatchedRoots; how++ {
				if math.Mod(g.DeadTime(), period) != 0 || g.DeadTime() > 100*period {
					continue
				}
				h, err := g.Sample(period, how)
				if err != nil {
					t.Errorf("%s, %v s, %v: %v", text, period, how, err)
					continue
				}
				if how == Trapezoidal && g.DeadTime() > 0 { // powers of z are a rational function there
					continue
				}
				back, err := h.Continuous(how)
				if err != nil {
					t.Errorf("%s, %v s, %v: %s does not come back: %v", text, period, how, h, err)
					continue
				}
				want, err := g.monic(200).Rounded()
				if err != nil || !back.Equal(want) {
					t.Errorf("%s, %v s, %v: comes back as %s, want %s", text, period, how, back, want)
				}
			}
		}
	}
}

func TestContinuousWhereItIsNotDefined(t *testing.T) {
	for _, tt := range []struct {
		text string
		how  Method
	}{
		{"1 / (z + 0.5), period 1", ZeroOrderHold},
		{"1 / (z + 0.5), period 1", MatchedRoots},
		{"z^2 / (z - 0.5), period 1", ZeroOrderHold},
		{"1 / (z + 1), period 1", Trapezoidal},
		{"1 / (z - 0.5), period 1", FirstOrderHold},
		{"1 / (z - 0.5), period 1", RampInvariant},
		{"1 / (s + 1)", ZeroOrderHold},
	} {
		g := MustParse(tt.text)
		h, err := g.Continuous(tt.how)
		if err != nil {
			continue
		}
		back, err := h.Sample(1, tt.how)
		if err != nil || cmplx.Abs(back.At(0.3i)-g.At(0.3i)) > 1e-12 {
			t.Errorf("%s, %v: %s, which samples to %s, %v", tt.text, tt.how, h, back, err)
		}
	}
}

func TestContinuousReference(t *testing.T) {
	for _, c := range readSampled(t).Cases {
		if c.Kind != "trapezoidal" {
			continue
		}
		g := functionOf(t, c.NumeratorZ, c.DenominatorZ, "")
		g, err := g.WithPeriod(c.Period.Float(t))
		if err != nil {
			t.Fatal(err)
		}
		h, err := g.Continuous(Trapezoidal, MatchFrequency(c.MatchFrequency.Float(t)))
		if err != nil {
			t.Errorf("%s: %v", c.ID, err)
			continue
		}
		want := functionOf(t, c.Numerator, c.Denominator, "")
		for _, s := range []complex128{1i, 2 + 3i, 20} {
			if got, want := h.At(s), want.At(s); cmplx.Abs(got-want) > 1e-12*cmplx.Abs(want) {
				t.Errorf("%s: at %v %v, want %v", c.ID, s, got, want)
			}
		}
	}
}
