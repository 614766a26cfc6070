package timeresp

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// randomStable returns a stable function with zeros anywhere, leaning to the hard: light
// modes, close poles, repeated poles, wide spreads.
func randomStable(t testing.TB, rng *rand.Rand) tf.Function {
	var poles, zeros []complex128
	order := 1 + rng.IntN(7)
	scale := math.Exp(rng.NormFloat64() * 3)
	for len(poles) < order {
		w := scale * math.Exp(rng.NormFloat64()*1.2)
		switch rng.IntN(5) {
		case 0, 1:
			poles = append(poles, complex(-w, 0))
		case 2:
			if len(poles) > 0 {
				p := poles[rng.IntN(len(poles))]
				if rng.IntN(2) == 0 {
					p *= complex(1+math.Exp(-20*rng.Float64()), 0)
				}
				poles = append(poles, p)
				if imag(p) != 0 {
					poles = append(poles, complex(real(p), -imag(p)))
				}
			}
		default:
			zeta := math.Pow(rng.Float64(), 2)*0.95 + 0.01
			p := complex(-zeta*w, w*math.Sqrt(1-zeta*zeta))
			poles = append(poles, p, complex(real(p), -imag(p)))
		}
	}
	for range rng.IntN(len(poles) + 1) {
		zeros = append(zeros, complex(scale*rng.NormFloat64()*2, 0))
	}
	gain := 1.0
	for _, p := range poles {
		gain *= math.Hypot(real(p), imag(p))
	}
	for _, z := range zeros {
		gain /= math.Abs(real(z))
	}
	g, err := tf.FromRoots(gain, zeros, poles)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

// checkAgainstSamples compares figures with what a dense scan of the samples shows: the scan
// can miss, but only to one side.
func checkAgainstSamples(t *testing.T, r *Response, what string) {
	t.Helper()
	const n = 20_000
	f, err := r.Figures(0.02)
	if err != nil {
		t.Errorf("%s: %v", what, err)
		return
	}
	start := r.arcs[0].from
	last := r.arcs[len(r.arcs)-1].from
	span := last + (r.Span()-last)*1.7
	if f.SettlingTime > span {
		span = f.SettlingTime * 1.2
	}
	step := (span - start) / n
	out := make([]float64, n+1)
	r.Sample(out, start, step)
	most, least, settled := math.Inf(-1), math.Inf(1), 0.0
	reach10, reach90 := math.NaN(), math.NaN()
	for i, y := range out {
		u := y / f.Final
		at := start + float64(i)*step
		most, least = math.Max(most, u), math.Min(least, u)
		if math.IsNaN(reach10) && u >= 0.1 {
			reach10 = at
		}
		if math.IsNaN(reach90) && u >= 0.9 {
			reach90 = at
		}
		if math.Abs(u-1) > 0.02 {
			settled = at + step
		}
	}
	over := math.Max(0, most-1)
	// A sample misses an extremum by at most the change over one step.
	change := 0.0
	for i := range out[1:] {
		change = math.Max(change, math.Abs(out[i+1]-out[i])/math.Abs(f.Final))
	}
	if over > f.Overshoot+2e-9 || over < f.Overshoot-change-2e-9 {
		t.Errorf("%s: overshoot %v, samples show %v", what, f.Overshoot, over)
	}
	if under := math.Max(0, -least); under > f.Undershoot+2e-9 || under < f.Undershoot-change-2e-9 {
		t.Errorf("%s: undershoot %v, samples show %v", what, f.Undershoot, under)
	}
	if f.SettlingTime < settled-2*step-1e-9*settled {
		t.Errorf("%s: settling time %v, but a sample at %v is outside", what, f.SettlingTime, settled-step)
	}
	if f.SettlingTime > start {
		if u := r.At(f.SettlingTime) / f.Final; math.Abs(math.Abs(u-1)-0.02) > 1e-7 && !jumpsAt(r, f.SettlingTime) {
			t.Errorf("%s: at the settling time %v the response is at %v of its final value", what, f.SettlingTime, u)
		}
	}
	if !(f.Reach10 <= reach10+1e-9*reach10) {
		t.Errorf("%s: 10 %% reached at %v, samples show %v", what, f.Reach10, reach10)
	}
	if !(f.Reach90 <= reach90+1e-9*reach90) {
		t.Errorf("%s: 90 %% reached at %v, samples show %v", what, f.Reach90, reach90)
	}
	if !math.IsNaN(f.PeakTime) {
		near(t, what+": value at PeakTime", r.At(f.PeakTime), f.PeakValue, 1e-8)
	}
}

// jumpsAt reports whether the response jumps at about t.
func jumpsAt(r *Response, t float64) bool {
	return math.Abs(r.At(t*(1-1e-9))-r.At(t*(1+1e-9))) > 1e-4*math.Abs(r.final)
}

func TestFiguresOfRandomFunctions(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	for i := range 150 {
		g := randomStable(t, rng)
		r, err := Step(g)
		if err != nil {
			t.Errorf("%v: %v", g, err)
			continue
		}
		checkAgainstSamples(t, r, g.String())
		if i%10 == 0 && t.Failed() {
			return
		}
	}
}

func TestFiguresOfRandomLoopsWithDeadTime(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	checked := 0
	for range 40 {
		g := randomStable(t, rng)
		if g.Numerator().Degree() >= g.Denominator().Degree() {
			continue
		}
		poles, err := g.Poles()
		if err != nil {
			t.Fatal(err)
		}
		slowest := math.Inf(1)
		for _, p := range poles {
			slowest = math.Min(slowest, -real(p.Value))
		}
		plant, err := g.WithDeadTime((0.1 + rng.Float64()) / slowest)
		if err != nil {
			t.Fatal(err)
		}
		controller, err := tf.New(poly.New(0.3*rng.Float64()), poly.New(1))
		if err != nil {
			t.Fatal(err)
		}
		r, err := StepOf(tf.Loop{Controller: controller, Plant: plant})
		if err != nil {
			t.Logf("%v: %v", plant, err)
			continue
		}
		if math.IsNaN(r.Final()) {
			continue
		}
		checked++
		checkAgainstSamples(t, r, plant.String())
	}
	if checked < 10 {
		t.Errorf("only %d loops were checked", checked)
	}
}

func TestResponsesAreLinear(t *testing.T) {
	l := tf.Loop{Plant: tf.MustParse("2 (s + 3) / (s (s + 1) (s + 4))"), Controller: tf.MustParse("1.5")}
	delayed := l
	delayed.Plant, _ = l.Plant.WithDeadTime(0.25)
	a := PiecewiseInput(Piece{0, []float64{1}}, Piece{1, []float64{-0.5, 1}}, Piece{3, nil})
	b := SineInput(0.7, 2, 0.4).Delay(0.5)
	for _, l := range []tf.Loop{l, delayed} {
		of := func(in Input) *Response {
			r, err := Of(context.Background(), l, tf.Reference, tf.Effort, in)
			if err != nil {
				t.Fatal(err)
			}
			return r
		}
		both, first, second := of(a.Scale(2).Plus(b.Scale(-3))), of(a), of(b)
		for at := 0.0; at < 12; at += 0.0937 {
			got, want := both.At(at), 2*first.At(at)-3*second.At(at)
			if math.Abs(got-want) > 1e-12*(1+math.Abs(want)) {
				t.Fatalf("y(%v) = %v, want %v", at, got, want)
			}
		}
	}
}

// TestImpulseIsDerivativeOfStep checks d/dt step = impulse and d/dt ramp = step through
// divided differences of high order.
func TestImpulseIsDerivativeOfStep(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	for range 30 {
		g := randomStable(t, rng)
		var r [3]*Response
		for i, f := range []func(tf.Function, ...Option) (*Response, error){Impulse, Step, Ramp} {
			var err error
			if r[i], err = f(g); err != nil {
				t.Fatal(err)
			}
		}
		w := r[0].arcs[0].signal.rate()
		for i := range 2 {
			for _, tau := range []float64{0.3, 2, 7, 30} {
				at, h := tau/w, 0.02/w
				y := func(k float64) float64 { return r[i+1].At(at + k*h) }
				// Fornberg's weights of order eight.
				d := (4.0/5*(y(1)-y(-1)) - 1.0/5*(y(2)-y(-2)) + 4.0/105*(y(3)-y(-3)) - 1.0/280*(y(4)-y(-4))) / h
				size := 0.0
				for k := 0.0; k <= tau+1; k += 0.25 {
					size = math.Max(size, math.Max(math.Abs(r[i].At(k/w)), math.Abs(r[i+1].At(k/w)*w)))
				}
				if got := r[i].At(at); math.Abs(got-d) > 1e-9*size {
					t.Errorf("%v: response %d at %v is %v, the derivative of the next %v", g, i, at, got, d)
				}
			}
		}
	}
}
