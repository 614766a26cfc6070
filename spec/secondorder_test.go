package spec

import (
	"errors"
	"math"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/poly"
)

type secondFile struct {
	Cases []struct {
		ID                string
		Zeta              refdata.Decimal
		Figures           map[string]refdata.Decimal
		RelativeCondition map[string]refdata.Decimal `json:"relative_condition"`
	}
	Inverse []struct {
		ID        string
		Overshoot refdata.Decimal `json:"overshoot_percent"`
		Zeta      refdata.Decimal
		Beta      refdata.Decimal `json:"beta_rad"`
	}
	Jumps []struct {
		ID       string
		Band     refdata.Decimal `json:"band_percent"`
		Extremum int
		Zeta     refdata.Decimal
		Below    refdata.Decimal `json:"settle_just_below"`
		Above    refdata.Decimal `json:"settle_just_above"`
	} `json:"settling_jumps"`
}

// Source: testdata/second.json. A figure may be off by a few roundings of its own and by
// the rounding of the damping to float64, which the file's relative_condition tells.
func TestSecondOrderReference(t *testing.T) {
	var file secondFile
	refdata.Read(t, "testdata/second.json", &file)
	for _, c := range file.Cases {
		for _, w := range []float64{1, 0.0625, 1024} { // powers of two scale exactly
			q := SecondOrder{Damping: c.Zeta.Float(t), NaturalFrequency: w}
			figures := map[string]float64{
				"overshoot":          q.Overshoot(),
				"peak_time":          q.PeakTime() * w,
				"rise_0_100":         q.FullRiseTime() * w,
				"t10":                timeToLevel(q.Damping, 0.1),
				"t90":                timeToLevel(q.Damping, 0.9),
				"rise_10_90":         q.RiseTime() * w,
				"settling_2_percent": q.SettlingTime(0.02) * w,
				"settling_5_percent": q.SettlingTime(0.05) * w,
				"resonant_peak":      q.ResonantPeak(),
				"resonant_frequency": q.ResonantFrequency() / w,
				"bandwidth_3db":      q.Bandwidth() / w,
				"gain_crossover":     q.GainCrossover() / w,
				"phase_margin_rad":   q.PhaseMargin(),
			}
			for name, got := range figures {
				want, ok := c.Figures[name]
				if !ok || want == "" {
					if !math.IsNaN(got) && ok {
						t.Errorf("%s: ω = %g: %s = %.17g, want NaN", c.ID, w, name, got)
					}
					continue
				}
				allowed := 2e-15
				if k := c.RelativeCondition[name].Float(t); !math.IsNaN(k) {
					allowed += 2e-16 * k
				} else {
					allowed = 1e-14
				}
				if off := refdata.Off(t, got, want); off > allowed {
					t.Errorf("%s: ω = %g: %s = %.17g, want %s: off by %.2g, allowed %.2g", c.ID, w, name, got, want, off, allowed)
				}
			}
			for name, band := range map[string]float64{"settling_2_percent_half_cycles": 0.02, "settling_5_percent_half_cycles": 0.05} {
				if want := c.Figures[name]; want != "" && float64(q.HalfCycles(band)) != want.Float(t) {
					t.Errorf("%s: half cycles outside %g: %d, want %s", c.ID, band, q.HalfCycles(band), want)
				}
			}
		}
	}
	for _, c := range file.Inverse {
		zeta, err := DampingForOvershoot(c.Overshoot.Float(t) / 100)
		if err != nil || refdata.Off(t, zeta, c.Zeta) > 1e-15 {
			t.Errorf("%s: DampingForOvershoot = %.17g, %v, want %s", c.ID, zeta, err, c.Zeta)
		}
		beta, err := DampingAngle(zeta)
		if err != nil || refdata.Off(t, beta, c.Beta) > 2e-15 {
			t.Errorf("%s: DampingAngle = %.17g, %v, want %s", c.ID, beta, err, c.Beta)
		}
	}
	for _, c := range file.Jumps {
		zeta, below, above, err := SettlingJump(c.Band.Float(t)/100, c.Extremum)
		if err != nil || refdata.Off(t, zeta, c.Zeta) > 1e-15 || refdata.Off(t, below, c.Below) > 1e-15 || refdata.Off(t, above, c.Above) > 2e-15 {
			t.Errorf("%s: SettlingJump = %.17g, %.17g, %.17g, %v, want %s, %s, %s", c.ID, zeta, below, above, err, c.Zeta, c.Below, c.Above)
		}
		// On the two sides of the jump, a few ulps away, the figure itself jumps.
		q := SecondOrder{zeta * (1 - 1e-9), 1}
		if off := refdata.Off(t, q.SettlingTime(c.Band.Float(t)/100), c.Below); off > 1e-3 {
			t.Errorf("%s: just below: %.17g, want near %s", c.ID, q.SettlingTime(c.Band.Float(t)/100), c.Below)
		}
		q.Damping = zeta * (1 + 1e-9)
		if off := refdata.Off(t, q.SettlingTime(c.Band.Float(t)/100), c.Above); off > 1e-3 {
			t.Errorf("%s: just above: %.17g, want near %s", c.ID, q.SettlingTime(c.Band.Float(t)/100), c.Above)
		}
	}
}

// The settling time is the last entry: the response is at the edge there, and inside the
// band at every later time; the rise and delay times are where the response has the level.
func TestSecondOrderFiguresLieOnTheResponse(t *testing.T) {
	for _, zeta := range []float64{1e-3, 0.01, 0.1, 0.3, 0.7, 0.9, 0.99999, 1 - 1e-12, 1, 1 + 1e-12, 1.0001, 1.5, 4, 100, 1e6, 1e9} {
		for _, w := range []float64{1e-5, 1, 1e9} {
			q := SecondOrder{zeta, w}
			for _, band := range []float64{0.001, 0.02, 0.05, 0.3} {
				ts := q.SettlingTime(band)
				if miss := math.Abs(math.Abs(1-q.At(ts)) - band); miss > 1e-12 {
					t.Errorf("%+v: |e| at SettlingTime(%g) = %g is off the band by %g", q, band, ts, miss)
				}
				for i := 1; i <= 2000; i++ {
					if e := math.Abs(1 - q.At(ts*(1+float64(i)*1e-3))); e > band*(1+1e-12) {
						t.Errorf("%+v: outside the band %g again after SettlingTime: |e| = %g", q, band, e)
						break
					}
				}
			}
			if miss := math.Abs(q.At(q.DelayTime()) - 0.5); miss > 1e-13 {
				t.Errorf("%+v: at the delay time the response misses 1/2 by %g", q, miss)
			}
			if !math.IsNaN(q.PeakTime()) {
				if miss := math.Abs(q.At(q.PeakTime()) - 1 - q.Overshoot()); miss > 1e-13 {
					t.Errorf("%+v: at the peak time the response misses the peak by %g", q, miss)
				}
			}
			p := q.Poles()
			if product := real(p[0]*p[1]) / (w * w); math.Abs(product-1) > 1e-14 {
				t.Errorf("%+v: product of the poles over ω² is %.17g", q, product)
			}
		}
	}
}

func TestSecondOrderInverse(t *testing.T) {
	near := func(what string, got, want float64, err error) {
		t.Helper()
		if err != nil || math.Abs(got-want) > 1e-12*math.Abs(want) {
			t.Errorf("%s: %.17g, %v, want %.17g", what, got, err, want)
		}
	}
	for _, zeta := range []float64{1e-6, 0.05, 0.3, 0.5, 0.7} {
		q := SecondOrder{zeta, 3}
		got, err := DampingForOvershoot(q.Overshoot())
		if zeta > 1e-5 {
			near("DampingForOvershoot", got, zeta, err)
		}
		got, err = DampingForResonantPeak(q.ResonantPeak())
		near("DampingForResonantPeak", got, zeta, err)
		got, err = DampingForPhaseMargin(q.PhaseMargin())
		near("DampingForPhaseMargin", got, zeta, err)
		radius, angle := q.Polar()
		got, err = DampingForAngle(angle)
		if zeta > 1e-5 {
			near("DampingForAngle", got, zeta, err)
		}
		near("Polar", radius, 3, nil)
		got, err = NaturalFrequencyForPeakTime(zeta, q.PeakTime())
		near("NaturalFrequencyForPeakTime", got, 3, err)
		got, err = NaturalFrequencyForRiseTime(zeta, q.RiseTime())
		near("NaturalFrequencyForRiseTime", got, 3, err)
		got, err = NaturalFrequencyForSettlingTime(zeta, q.SettlingTime(0.02), 0.02)
		near("NaturalFrequencyForSettlingTime", got, 3, err)
		got, err = NaturalFrequencyForBandwidth(zeta, q.Bandwidth())
		near("NaturalFrequencyForBandwidth", got, 3, err)
		back, err := SecondOrderFromPole(q.Poles()[1])
		near("SecondOrderFromPole", back.Damping, zeta, err)
	}
	q := SecondOrder{2.5, 7}
	p := q.Poles()
	back, err := SecondOrderFromRealPoles(real(p[0]), real(p[1]))
	near("SecondOrderFromRealPoles", back.Damping, 2.5, err)
	near("SecondOrderFromRealPoles", back.NaturalFrequency, 7, err)
	back, err = SecondOrderFromPeak(SecondOrder{0.4, 2}.Overshoot(), SecondOrder{0.4, 2}.PeakTime())
	near("SecondOrderFromPeak", back.Damping, 0.4, err)
	near("SecondOrderFromPeak", back.NaturalFrequency, 2, err)
}

// Handbook values (from memory, common practice): 15 % overshoot asks for a damping ratio
// just over 0.5, at about 1 rad off the axis; 1/√2 overshoots by 4.3 %.
func TestSecondOrderHandbook(t *testing.T) {
	zeta, err := DampingForOvershoot(0.15)
	if err != nil || zeta < 0.51 || zeta > 0.52 {
		t.Errorf("DampingForOvershoot(0.15) = %g, %v", zeta, err)
	}
	if angle, err := DampingAngle(zeta); err != nil || angle < 1 || angle > 1.05 {
		t.Errorf("DampingAngle(%g) = %g, %v", zeta, angle, err)
	}
	for _, w := range []float64{1e-3, 1, 1e6} {
		if got := (SecondOrder{math.Sqrt2 / 2, w}).Overshoot(); math.Abs(got-0.0432) > 5e-5 {
			t.Errorf("overshoot at 1/√2 and ω = %g: %g", w, got)
		}
	}
}

func TestSecondOrderBadArguments(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for name, f := range map[string]func() error{
		"negative overshoot": func() error { _, err := DampingForOvershoot(-0.1); return err },
		"overshoot of one":   func() error { _, err := DampingForOvershoot(1); return err },
		"NaN overshoot":      func() error { _, err := DampingForOvershoot(nan); return err },
		"angle above one":    func() error { _, err := DampingAngle(1.01); return err },
		"NaN damping":        func() error { _, err := DampingAngle(nan); return err },
		"peak below one":     func() error { _, err := DampingForResonantPeak(0.9); return err },
		"margin of zero":     func() error { _, err := DampingForPhaseMargin(0); return err },
		"pole on the right":  func() error { _, err := SecondOrderFromPole(1 + 1i); return err },
		"infinite pole":      func() error { _, err := SecondOrderFromPole(complex(-inf, 0)); return err },
		"peak overdamped":    func() error { _, err := NaturalFrequencyForPeakTime(1.5, 1); return err },
		"band of one":        func() error { _, err := NaturalFrequencyForSettlingTime(0.5, 1, 1); return err },
		"jump of extremum 0": func() error { _, _, _, err := SettlingJump(0.02, 0); return err },
	} {
		var argument *poly.ArgumentError
		if err := f(); !errors.As(err, &argument) {
			t.Errorf("%s: %v, want a *poly.ArgumentError", name, err)
		}
	}
	for _, q := range []SecondOrder{{}, {-1, 1}, {1, -1}, {nan, 1}, {1, nan}, {inf, 1}, {0.5, inf}} {
		if got := q.Overshoot() + q.PeakTime() + q.RiseTime() + q.SettlingTime(0.02) + q.Bandwidth(); !math.IsNaN(got) {
			t.Errorf("%+v: figures are not NaN", q)
		}
	}
}
