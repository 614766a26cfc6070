package locus_test

import (
	"errors"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"
	"time"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
)

func TestOnSamplesContains(t *testing.T) {
	const period = 0.1
	rng := rand.New(rand.NewPCG(3, 4))
	for _, r := range []locus.Region{locus.LeftOf(-1), locus.Damped(0.4), locus.Within(20), locus.Within(50), locus.Beyond(3), locus.Strip(10),
		locus.All(locus.LeftOf(-1), locus.Damped(0.4))} {
		image := locus.OnSamples(r, period)
		for range 1000 {
			s := complex(rng.NormFloat64()*15, (rng.Float64()*2-1)*math.Pi/period)
			if got, want := image.Contains(cmplx.Exp(s*period)), r.Contains(s); got != want {
				// Rounding may decide otherwise on the boundary only.
				if near := r.Contains(s*(1+1e-9)) == want && r.Contains(s*(1-1e-9)) == want; near {
					t.Errorf("%#v: s = %v in the image: %v, want %v", r, s, got, want)
				}
			}
		}
	}
}

func TestOnSamplesWindows(t *testing.T) {
	const period = 0.05
	// Plant e^-1… : (z+0.9)/((z-1)(z-0.8)), a double integrator with lead, and a delay.
	families := map[string]locus.Family{
		"servo":             family(t, poly.New(1, -1.8, 0.8), poly.New(0.02, 0.018)),
		"double integrator": family(t, poly.New(1, -2, 1).Mul(poly.New(1, -0.5)), poly.New(1, 1).Mul(poly.New(1, -0.95))),
		"delay":             family(t, poly.New(1, -0.9, 0, 0), poly.New(0.1)),
		"fast sampling":     family(t, poly.New(1, -1).Mul(poly.New(1, -0.9999)).Mul(poly.New(1, -0.9995)).Mul(poly.New(1, -0.998)), poly.New(1e-12, 1e-12)),
		"biproper":          family(t, poly.New(1, -0.5, 0.2), poly.New(1, 0.3, 0.1)),
	}
	if testing.Short() {
		delete(families, "delay")
		delete(families, "biproper")
		delete(families, "double integrator")
	}
	for name, f := range families {
		for _, r := range []locus.Region{locus.LeftOf(0), locus.LeftOf(-2), locus.Damped(0.5), locus.Damped(0.1), locus.Within(30), locus.Within(100), locus.Beyond(1), locus.Strip(12), locus.Strip(40), locus.Strip(100),
			locus.All(locus.Damped(0.5), locus.LeftOf(-0.5))} {
			image := locus.OnSamples(r, period)
			start := time.Now()
			windows, err := f.Windows(image)
			if err != nil {
				t.Errorf("%s, %#v: %v", name, r, err)
				continue
			}
			if d := time.Since(start); d > time.Second {
				t.Logf("%s, %#v: %v", name, r, d)
			}
			checkWindows(t, name, f, image, windows)
		}
	}
}

// checkWindows compares with the roots beside the ends and between them.
func checkWindows(t *testing.T, name string, f locus.Family, r locus.Region, windows []locus.Window) {
	t.Helper()
	rng := rand.New(rand.NewPCG(8, 9))
	var gains []float64
	for _, w := range windows {
		for _, end := range []float64{w.Lo, w.Hi} {
			if !math.IsInf(end, 0) {
				h := 1e-6 * (math.Abs(end) + 1e-9)
				gains = append(gains, end-h, end+h)
			}
		}
	}
	for range 40 {
		gains = append(gains, math.Ldexp(rng.Float64()*2-1, rng.IntN(24)-14))
	}
	for _, k := range gains {
		want, clear := inside(t, f, r, k)
		if !clear {
			continue
		}
		got := false
		for _, w := range windows {
			got = got || w.Lo < k && k < w.Hi
		}
		if got != want {
			t.Errorf("%s, %T: k = %v in %v: %v, roots say %v", name, r, k, windows, got, want)
			return
		}
	}
}

// The spiral of ζ = 1/2: for z² - 2·Re z₀·z + |z₀|² with z₀ on it the gain is known.
func TestOnSamplesSpiralEnd(t *testing.T) {
	zeta := 0.5
	lambda := complex(-zeta, math.Sqrt(1-zeta*zeta))
	z := cmplx.Exp(lambda * 0.7)
	// A = (z-1)(z-c) with a scaled B = b0: product of roots = c + k·b0, sum = 1 + c.
	c := 2*real(z) - 1
	f := family(t, poly.New(1, -1-c, c), poly.New(1))
	want := real(z)*real(z) + imag(z)*imag(z) - c
	got, err := f.Windows(locus.OnSamples(locus.Damped(zeta), 0.01))
	if err != nil || len(got) != 1 || got[0].Lo != 0 || math.Abs(got[0].Hi-want) > 1e-13 {
		t.Errorf("%v, %v; want (0, %v)", got, err, want)
	}
	crossings, err := f.Crossings(locus.OnSamples(locus.Damped(zeta), 0.01))
	if err != nil || len(crossings) < 2 {
		t.Errorf("%v, %v", crossings, err)
	}
}

func TestOnSamplesInvalid(t *testing.T) {
	f := family(t, poly.New(1, -0.5), poly.New(1))
	for _, r := range []locus.Region{locus.OnSamples(nil, 1), locus.OnSamples(locus.LeftOf(0), 0), locus.OnSamples(locus.LeftOf(0), -1),
		locus.OnSamples(locus.LeftOf(0), math.NaN()), locus.OnSamples(locus.Damped(3), 1), locus.OnSamples(locus.OnSamples(locus.LeftOf(0), 1), 1)} {
		var bad *poly.ArgumentError
		if _, err := f.Windows(r); !errors.As(err, &bad) {
			t.Errorf("%#v: %v", r, err)
		}
	}
}
