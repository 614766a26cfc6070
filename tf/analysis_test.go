package tf

import (
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/polewright/polewright/poly"
)

func TestCancel(t *testing.T) {
	for _, tt := range []struct {
		text, want string
		removed    int
	}{
		{"(s^2 + 3 s + 2) / (s^2 + 4 s + 3)", "(s + 2) / (s + 3)", 1},
		{"(s + 1) (s + 2) / ((s + 1)^2 (s + 3))", "(s + 2) / ((s + 1) (s + 3))", 1},
		{"(s^2 + s + 1)^2 / ((s^2 + s + 1) (s - 4))", "(s^2 + s + 1) / (s - 4)", 2},
		{"(s + 1.0000000000000002) / (s + 1)", "(s + 1.0000000000000002) / (s + 1)", 0},
		{"exp(-2 s) s / s", "exp(-2 s)", 1},
		{"0 / (s + 1)", "0", 1},
		{"(3 s + 1) (s + 5) / ((3 s + 1) (s^2 + 7))", "(s + 5) / (s^2 + 7)", 1},
	} {
		g := MustParse(tt.text)
		h, removed, err := g.Cancel()
		if err != nil {
			t.Errorf("%s: %v", tt.text, err)
			continue
		}
		n := 0
		for _, r := range removed {
			n += r.Multiplicity
		}
		want := MustParse(tt.want)
		cross := h.Numerator().Mul(want.Denominator()).Equal(want.Numerator().Mul(h.Denominator()))
		if !cross || h.Denominator().Degree() != want.Denominator().Degree() || n != tt.removed || !h.delay.equal(g.delay) {
			t.Errorf("%s without common factors = %s, removed %v; want %s, %d removed", tt.text, h, removed, tt.want, tt.removed)
		}
	}
	g := MustParse("(s + 1.001) ((s + 0.1)^2 + 5^2) / ((s + 1) ((s + 0.1)^2 + 5.001^2) (s + 1.002))")
	h, removed, err := g.CancelWithin(0.01)
	if err != nil || h.Denominator().Degree() != 1 || h.Numerator().Degree() != 0 || len(removed) != 3 {
		t.Errorf("CancelWithin: %s, %v, %v", h, removed, err)
	}
	if removed[0].Zero == removed[0].Pole {
		t.Errorf("removed %v: the report does not tell what was nearly equal", removed)
	}
	if _, _, err := g.CancelWithin(-1); err == nil {
		t.Error("a tolerance of -1 is taken")
	}
}

func TestInternalStability(t *testing.T) {
	for _, tt := range []struct {
		name string
		loop Loop
		want poly.Verdict
		says []string
	}{
		{"plain", Loop{Plant: MustParse("1 / (s + 1)")}, poly.Holds, nil},
		{"no crossover, unstable", Loop{Plant: MustParse("0.5 / (s - 1)")}, poly.Fails, nil},
		{"unstable pole cancelled by the controller", Loop{Controller: MustParse("(s - 1) / (s + 2)"), Plant: MustParse("1 / ((s - 1) (s + 3))")},
			poly.Fails, []string{"pole of the plant at (1+0i) hidden by a zero of the controller"}},
		{"integrator cancelled by the plant", Loop{Controller: MustParse("1 / s"), Plant: MustParse("s / (s + 1)")},
			poly.Fails, []string{"pole of the controller at (0+0i) hidden by a zero of the plant"}},
		{"hidden within the plant", Loop{Plant: MustParse("(s^2 + 1) / ((s^2 + 1) (s + 1))")},
			poly.Fails, []string{"hidden by a zero of the plant"}},
		{"nearly cancelled", Loop{Controller: MustParse("(s - 1.0000000000000002) / (s + 2)"), Plant: MustParse("1 / ((s - 1) (s + 3))")}, poly.Fails, nil},
		{"stable cancellation", Loop{Controller: MustParse("(s + 1) / s"), Plant: MustParse("1 / (s + 1)")}, poly.Holds, nil},
		{"prefilter", Loop{Prefilter: MustParse("1 / (s - 1)"), Plant: MustParse("1 / (s + 1)")}, poly.Fails, nil},
		{"dead time", Loop{Controller: MustParse("3"), Plant: MustParse("exp(-s) / (s + 1)")}, poly.Fails, nil},
		{"dead time, slow", Loop{Controller: MustParse("0.5"), Plant: MustParse("exp(-s) / (s + 1)")}, poly.Holds, nil},
		{"in z", Loop{Controller: MustParse("(z - 2) / (z - 1), period 1"), Plant: MustParse("0.1 / (z - 2), period 1")},
			poly.Fails, []string{"pole of the plant at (2+0i) hidden by a zero of the controller"}},
		{"sampled data", Loop{Controller: MustParse("1, period 0.5"), Plant: MustParse("1 / (s (s + 1))")}, poly.Holds, nil},
	} {
		s, err := tt.loop.InternalStability()
		if err != nil {
			t.Errorf("%s: %v", tt.name, err)
			continue
		}
		if s.Stable != tt.want {
			t.Errorf("%s: %v, want %v", tt.name, s, tt.want)
		}
		if (len(tt.says) == 0) != (len(s.Hidden) == 0) {
			t.Errorf("%s: hidden %v, want %v", tt.name, s.Hidden, tt.says)
		}
		for _, want := range tt.says {
			if !strings.Contains(s.String(), want) {
				t.Errorf("%s: %q does not say %q", tt.name, s, want)
			}
		}
	}
}

func TestErrorConstants(t *testing.T) {
	inf := math.Inf(1)
	for _, tt := range []struct {
		name string
		loop Loop
		want ErrorConstants
	}{
		// Textbook values: K = lim s^type·L.
		{"type 0", Loop{Plant: MustParse("10 / ((s + 1) (s + 2))")}, ErrorConstants{0, 5, 0, 0, 1.0 / 6, inf, inf}},
		{"type 1", Loop{Plant: MustParse("10 / (s (s + 4))")}, ErrorConstants{1, inf, 2.5, 0, 0, 0.4, inf}},
		{"type 2", Loop{Plant: MustParse("8 (s + 1) / (s^2 (s + 4))")}, ErrorConstants{2, inf, inf, 2, 0, 0, 0.5}},
		{"type 1 in z", Loop{Plant: MustParse("0.05 / (z - 1), period 0.1")}, ErrorConstants{1, inf, 0.5, 0, 0, 2, inf}},
		{"type 1 with dead time", Loop{Plant: MustParse("0.5 exp(-s) / s")}, ErrorConstants{1, inf, 0.5, 0, 0, 2, inf}},
		{"differentiating", Loop{Plant: MustParse("s / (s + 4)")}, ErrorConstants{-1, 0, 0, 0, 1, inf, inf}},
		// The output settles at 1/(1 + 1/2)·... of a sensor of gain 2: y = 5/(1 + 10).
		{"sensor of gain 2", Loop{Plant: MustParse("5 / (s + 1)"), Sensor: MustParse("2")}, ErrorConstants{0, 10, 0, 0, 1 - 5.0/11, inf, inf}},
		// A prefilter that makes up for a lag: 1 - F·4/(s² + s + 4), F = 1 + s/4, has no term in s.
		{"prefilter", Loop{Prefilter: MustParse("1 + 0.25 s"), Plant: MustParse("4 / (s (s + 1))")}, ErrorConstants{1, inf, 4, 0, 0, 0, 0.25}},
	} {
		got, err := tt.loop.ErrorConstants()
		if err != nil {
			t.Errorf("%s: %v", tt.name, err)
			continue
		}
		same := got.Type == tt.want.Type
		for _, p := range [][2]float64{{got.Position, tt.want.Position}, {got.Velocity, tt.want.Velocity}, {got.Acceleration, tt.want.Acceleration},
			{got.StepError, tt.want.StepError}, {got.RampError, tt.want.RampError}, {got.ParabolaError, tt.want.ParabolaError}} {
			same = same && (p[0] == p[1] || math.Abs(p[0]-p[1]) <= 4e-16*math.Abs(p[1]))
		}
		if !same {
			t.Errorf("%s: %+v, want %+v", tt.name, got, tt.want)
		}
	}
	c, err := Loop{Plant: MustParse("0.5 / (s - 1)")}.ErrorConstants()
	var unstable *NotStableError
	if !errors.As(err, &unstable) || !math.IsNaN(c.StepError) || c.Position != -0.5 {
		t.Errorf("unstable: %+v, %v; want constants without errors", c, err)
	}
}
