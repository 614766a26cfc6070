package spec

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/polewright/polewright/internal/baseline"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// A plant of order four, never seen before: an integrator, a lag and a pair, drawn over two
// decades.
type benchPlant struct {
	num, den []float64
	most     float64 // end of stability
}

func benchPlants(n int) []benchPlant {
	r := rand.New(rand.NewPCG(7, 4))
	out := make([]benchPlant, 0, n)
	for len(out) < n {
		a, w, z := math.Exp(4.6*r.Float64()-2.3), math.Exp(4.6*r.Float64()-2.3), 0.3+r.Float64()
		// s(s + a)(s² + 2zws + w²)
		den := []float64{1, a + 2*z*w, w*w + 2*z*w*a, w * w * a, 0}
		p := benchPlant{num: []float64{w * w * a}, den: den}
		// Routh: den[1]·den[2]·den[3] = den[3]² + k·num·den[1]².
		p.most = (den[1]*den[2]*den[3] - den[3]*den[3]) / (den[1] * den[1]) / p.num[0]
		if p.most > 0 {
			out = append(out, p)
		}
	}
	return out
}

func (p benchPlant) loop() tf.Loop {
	g, err := tf.New(poly.New(p.num...), poly.New(p.den...))
	if err != nil {
		panic(err)
	}
	return tf.Loop{Plant: g}
}

// sheet scales with the plant: the integrator's own time at half the end of stability.
func (p benchPlant) sheet() Sheet {
	t := 1 / p.most
	return Sheet{OvershootAtMost(0.25), SettlesWithin(20*t, 0.02), RisesWithin(8 * t), GainMarginAtLeast(2)}
}

// closed returns the closed loop at gain k, as a user would write it.
func (p benchPlant) closed(k float64) (num, den []float64) {
	den = append([]float64{}, p.den...)
	den[4] += k * p.num[0]
	return []float64{k * p.num[0]}, den
}

// sweep is the plain way: simulate at 1000 gains, 1000 steps each, and scan.
func (p benchPlant) sweep(gains int) (lo, hi float64, met int) {
	t := 20 / p.most
	for i := 1; i <= gains; i++ {
		k := p.most * float64(i) / float64(gains+1)
		if p.simulate(k, t) && 2*k <= p.most {
			if met == 0 {
				lo = k
			}
			hi = k
			met++
		}
	}
	return lo, hi, met
}

func (p benchPlant) simulate(k, t float64) bool {
	num, den := p.closed(k)
	dt := 2 * t / 1000
	y := baseline.StepSamples(num, den, dt, 1000)
	overshoot, rise, settling := baseline.StepScan(y, dt, 1, 0.02)
	return overshoot <= 0.25 && rise <= 0.4*t && settling <= t
}

// Bar: the sweep takes at least 30 times as long.
func BenchmarkWindows(b *testing.B) {
	plants := benchPlants(256)
	ctx := context.Background()
	b.Run("method=windows", func(b *testing.B) {
		i := 0
		for b.Loop() {
			p := plants[i%len(plants)]
			i++
			if _, err := p.sheet().Windows(ctx, []tf.Loop{p.loop()}); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("method=sweep", func(b *testing.B) {
		i := 0
		for b.Loop() {
			plants[i%len(plants)].sweep(1000)
			i++
		}
	})
}

// Bar: one simulation and scan takes at least 4 times as long, and 10⁴ checks a second.
func BenchmarkCheck(b *testing.B) {
	plants := benchPlants(256)
	ctx := context.Background()
	b.Run("method=check", func(b *testing.B) {
		i := 0
		for b.Loop() {
			p := plants[i%len(plants)]
			i++
			if _, err := p.sheet().Check(ctx, p.loop().WithGain(0.4*p.most)); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("method=simulate", func(b *testing.B) {
		i := 0
		for b.Loop() {
			p := plants[i%len(plants)]
			i++
			p.simulate(0.4*p.most, 20/p.most)
		}
	})
}

// The windows of the benchmark agree with the sweep.
func TestWindowsAgreeWithSweep(t *testing.T) {
	for i, p := range benchPlants(12) {
		g, err := p.sheet().Windows(t.Context(), []tf.Loop{p.loop()})
		if err != nil {
			t.Fatal(err)
		}
		lo, hi, met := p.sweep(200)
		if met == 0 {
			continue
		}
		step := p.most / 201
		for _, k := range []float64{lo, hi} {
			if _, ok := g.Find(k); !ok && !g.Contains(k+0.2*step) && !g.Contains(k-0.2*step) {
				t.Errorf("plant %d: the sweep accepts k = %g; windows %s", i, k, g)
			}
		}
	}
}
