package spec

import (
	"context"
	"math"
	"math/rand/v2"
	"os"
	"strconv"
	"testing"
	"time"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// randomLoop draws a loop of order 2 to 8: real poles and pairs over two decades, an
// integrator in half of them, sometimes a zero, a lead or an integrating controller, a lag
// in the sensor.
func randomLoop(r *rand.Rand) tf.Loop {
	log := func(lo, hi float64) float64 { return math.Pow(10, lo+(hi-lo)*r.Float64()) }
	order := 2 + r.IntN(7)
	den := poly.New(1)
	if r.IntN(2) == 0 {
		den = poly.New(1, 0)
		order--
	}
	for order > 0 {
		w := log(-1, 1)
		if order > 1 && r.IntN(2) == 0 {
			z := []float64{0.05, 0.2, 0.6, 1.1}[r.IntN(4)]
			den = den.Mul(poly.New(1, 2*z*w, w*w))
			order -= 2
			continue
		}
		den = den.Mul(poly.New(1, w))
		order--
	}
	scale := den.Coefficient(0)
	if scale == 0 {
		scale = den.Coefficient(1)
	}
	num := poly.New(scale)
	if den.Degree() > 2 && r.IntN(3) == 0 {
		num = poly.New(scale*[]float64{-0.2, 0.7}[r.IntN(2)]*log(-0.5, 0.5), scale)
	}
	loop := tf.Loop{}
	loop.Plant, _ = tf.New(num, den)
	switch r.IntN(4) {
	case 0:
		loop.Controller, _ = tf.New(poly.New(1, log(-1, 0.5)), poly.New(1, log(0, 1.5)))
	case 1:
		loop.Controller, _ = tf.New(poly.New(1, log(-1, 0)), poly.New(1, 0))
	}
	if r.IntN(4) == 0 {
		w := log(0, 2)
		loop.Sensor, _ = tf.New(poly.New(w), poly.New(1, w))
	}
	return loop
}

// randomSheet draws one to four requirements with limits near what the loop reaches.
func randomSheet(ctx context.Context, r *rand.Rand, l tf.Loop) Sheet {
	e, err := NewEvidence(l)
	if err != nil {
		return nil
	}
	if v, err := e.Stable(); err != nil || v != poly.Holds {
		return nil
	}
	var s Sheet
	pool := []Requirement{
		OvershootAtMost(0), UndershootAtMost(0), RisesWithin(1), PeaksWithin(1), SettlesWithin(1, 0.02), SettlesWithin(1, 0.05),
		StepErrorAtMost(0), EffortAtMost(1), GainMarginAtLeast(1), PhaseMarginAtLeast(0), DelayMarginAtLeast(0), SensitivityPeakAtMost(1),
		ComplementaryPeakAtMost(1), DampingAtLeast(0.5), LoadPeakAtMost(1), LoadRecoversWithin(1, 0.1), NoiseAmplificationAtMost(1),
	}
	r.Shuffle(len(pool), func(i, j int) { pool[i], pool[j] = pool[j], pool[i] })
	for _, q := range pool[:1+r.IntN(4)] {
		f, err := q.Judge(ctx, e)
		if err != nil || math.IsNaN(f.Reached) || math.IsInf(f.Reached, 0) {
			continue
		}
		l := *q.(*limited)
		l.limit = f.Reached * (0.8 + 0.8*r.Float64())
		if l.kind.side == atLeast {
			l.limit = f.Reached * (0.6 + 0.6*r.Float64())
		}
		if l.limit < 1e-3 {
			l.limit = 0.1
		}
		if l.Validate() == nil {
			s = append(s, &l)
		}
	}
	return s
}

// Membership in a window equals a check of the gain, on random loops of order up to eight,
// except within 1e-9 of an end and where a slack is within 1e-9 of nothing. The two ways
// share the loop and nothing else: bounds and margins on the fast sums here, the proven
// figures of timeresp and the margins of tf there. POLEWRIGHT_RANDOM sets the number of loops.
func TestWindowsAgreeWithCheck(t *testing.T) {
	loops := 25
	if n, err := strconv.Atoi(os.Getenv("POLEWRIGHT_RANDOM")); err == nil {
		loops = n
	}
	r := rand.New(rand.NewPCG(11, 23))
	triples, found, slowest := 0, 0, time.Duration(0)
	widest := 0.0
	for n := 0; n < loops; n++ {
		loop := randomLoop(r)
		k0 := math.Pow(10, 3*r.Float64()-2)
		sheet := randomSheet(t.Context(), r, loop.WithGain(k0))
		if len(sheet) == 0 {
			continue
		}
		start := time.Now()
		g, err := sheet.Windows(t.Context(), []tf.Loop{loop})
		took := time.Since(start)
		if took > slowest {
			slowest = took
		}
		if took > 2*time.Second {
			t.Logf("loop %d: %v, %d evaluations, missed below %.2g\n%sC = %v, G = %v, H = %v", n, took, g.Evaluations, g.MissedBelow, sheet, loop.Controller, loop.Plant, loop.Sensor)
		}
		if err != nil {
			t.Errorf("loop %d: %v", n, err)
			continue
		}
		widest = math.Max(widest, g.MissedBelow)
		if g.MissedBelow > 1e-4 && !g.Estimated {
			t.Logf("loop %d: missed below %.2g after %d evaluations\n%sC = %v, G = %v, H = %v\n%s", n, g.MissedBelow, g.Evaluations, sheet, loop.Controller, loop.Plant, loop.Sensor, g)
		}
		found += len(g.Windows)
		gains := []float64{k0}
		for range 20 {
			gains = append(gains, k0*math.Pow(10, 2*r.Float64()-1))
		}
		for _, w := range g.Windows {
			for _, e := range []float64{w.Lo.Gain, w.Hi.Gain} {
				if e > 0 && !math.IsInf(e, 1) {
					gains = append(gains, e*(1-1e-8), e*(1+1e-8))
				}
			}
		}
	gains:
		for _, k := range gains {
			for _, w := range g.Windows {
				for _, e := range []float64{w.Lo.Gain, w.Hi.Gain} {
					if math.Abs(k-e) < 1e-9*k {
						continue gains
					}
				}
			}
			c, err := sheet.Check(t.Context(), loop.WithGain(k))
			if err != nil {
				t.Errorf("loop %d, k = %.17g: %v", n, k, err)
				continue
			}
			triples++
			if c.Met() == g.Contains(k) {
				continue
			}
			worst := math.Inf(1)
			for _, f := range c.Findings {
				worst = math.Min(worst, f.Slack)
			}
			if c.Stable == poly.Holds && math.Abs(worst) < 1e-9 {
				continue
			}
			t.Errorf("loop %d, k = %.17g: the check says %v, the windows do not\n%s%s%sC = %v, G = %v, H = %v", n, k, c.Met(), sheet, g, c, loop.Controller, loop.Plant, loop.Sensor)
		}
	}
	t.Logf("%d triples, %d windows, slowest %v, missed below at most %.2g", triples, found, slowest, widest)
}
