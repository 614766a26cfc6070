package tf

import (
	"encoding/json"
	"math"
	"math/cmplx"
	"math/rand"
	"os"
	"strconv"
	"testing"
	"time"
)

// Whatever a function is, a call returns, in bounded time, with an answer or an error.
// POLEWRIGHT_RANDOM_CALLS sets how many functions are tried.
func TestNoCallPanicsOrHangs(t *testing.T) {
	n := 8
	if s := os.Getenv("POLEWRIGHT_RANDOM_CALLS"); s != "" {
		var err error
		if n, err = strconv.Atoi(s); err != nil {
			t.Fatal(err)
		}
	}
	r := rand.New(rand.NewSource(3))
	inf := math.Inf(1)
	for range n {
		g, h := randomFunction(r), randomFunction(r)
		period := math.Ldexp(1+r.Float64(), r.Intn(40)-20)
		if r.Intn(8) == 0 {
			period = math.Ldexp(1, r.Intn(2000)-1000)
		}
		if c, err := h.WithPeriod(0); err == nil {
			h = c
		}
		calls := map[string]func(){
			"At": func() {
				for _, s := range []complex128{0, 1, 1i, complex(inf, 0), complex(0, inf), cmplx.NaN(), 1e300, 1e-300i, complex(math.MaxFloat64, math.MaxFloat64), 5e-324} {
					g.At(s)
				}
			},
			"Zeros":            func() { g.Zeros() },
			"Poles":            func() { g.Poles() },
			"Cancel":           func() { g.Cancel() },
			"CancelWithin":     func() { g.CancelWithin(1e-3) },
			"PartialFractions": func() { g.PartialFractions() },
			"Sections":         func() { g.Sections() },
			"StateSpace":       func() { g.StateSpace() },
			"Rounded":          func() { g.Rounded() },
			"JSON":             func() { json.Marshal(g) },
			"Feedback":         func() { g.Feedback(h) },
			"Inverse":          func() { g.Inverse() },
			"PoleOffsets":      func() { g.PoleOffsets() },
			"Loop": func() {
				l := Loop{Controller: h, Plant: g, Sensor: h, ComputationDelay: 0}
				l.Open()
				l.Closed()
				l.InternalStability()
				l.ErrorConstants()
				if p, err := l.Path(Reference, Output); err == nil {
					p.At(1i)
					p.Function()
				}
			},
		}
		for how := ZeroOrderHold; how <= MatchedRoots; how++ {
			calls["Sample "+how.String()] = func() { g.Sample(period, how) }
			calls["Continuous "+how.String()] = func() { g.Continuous(how) }
		}
		for name, call := range calls {
			start := time.Now()
			call()
			if d := time.Since(start); d > 20*time.Second {
				t.Errorf("%s of %v, period %v, took %v", name, g, period, d)
			}
		}
	}
}
