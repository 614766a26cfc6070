package tf

import (
	"errors"
	"math"
	"math/cmplx"
	"testing"

	"github.com/polewright/polewright/poly"
)

func ratioOf(t testing.TB, num, den []float64) Function {
	t.Helper()
	g, err := New(poly.New(num...), poly.New(den...))
	if err != nil {
		t.Fatal(err)
	}
	return g
}

func TestZeroFunctionIsAWire(t *testing.T) {
	var g Function
	if got := g.At(3 + 4i); got != 1 {
		t.Errorf("At = %v, want 1", got)
	}
	if !g.Numerator().Equal(poly.New(1)) || !g.Denominator().Equal(poly.New(1)) {
		t.Errorf("wire = %v/%v, want 1/1", g.Numerator(), g.Denominator())
	}
	h := ratioOf(t, []float64{2}, []float64{1, 3})
	s, err := g.Series(h)
	if err != nil || !s.Equal(h) {
		t.Errorf("wire·h = %v, %v", s, err)
	}
	if zeros, err := g.Zeros(); err != nil || len(zeros) != 0 {
		t.Errorf("Zeros = %v, %v", zeros, err)
	}
}

func TestInvalidFunctionReturnsItsError(t *testing.T) {
	bad, err := New(poly.New(1), poly.New())
	var argument *poly.ArgumentError
	if !errors.As(err, &argument) || argument.Argument != "denominator" {
		t.Fatalf("error = %v, want an ArgumentError of the denominator", err)
	}
	if v := bad.At(1); !cmplx.IsNaN(v) {
		t.Errorf("At = %v, want NaN", v)
	}
	if !math.IsNaN(bad.DeadTime()) || !math.IsNaN(bad.Period()) {
		t.Error("DeadTime and Period of an invalid function are not NaN")
	}
	var wire Function
	for name, use := range map[string]func() error{
		"Zeros":        func() error { _, err := bad.Zeros(); return err },
		"Poles":        func() error { _, err := bad.Poles(); return err },
		"WithDeadTime": func() error { _, err := bad.WithDeadTime(1); return err },
		"WithPeriod":   func() error { _, err := bad.WithPeriod(1); return err },
		"Series":       func() error { _, err := wire.Series(bad); return err },
		"Parallel":     func() error { _, err := bad.Parallel(wire); return err },
		"Minus":        func() error { _, err := wire.Minus(bad); return err },
		"Feedback":     func() error { _, err := wire.Feedback(bad); return err },
		"Inverse":      func() error { _, err := bad.Inverse(); return err },
		"Scale":        func() error { _, err := bad.Scale(2); return err },
		"Rational":     func() error { _, err := bad.Rational(); return err },
		"Open":         func() error { _, err := Loop{Plant: bad}.Open(); return err },
		"Closed":       func() error { _, err := Loop{Plant: wire, Sensor: bad}.Closed(); return err },
		"Path":         func() error { _, err := Loop{Plant: bad}.Path(Reference, Output); return err },
		"Margins":      func() error { _, err := Loop{Plant: bad}.Margins(); return err },
		"WithGain":     func() error { _, err := Loop{Plant: wire, Controller: bad}.WithGain(2).Open(); return err },
	} {
		if got := use(); got != err {
			t.Errorf("%s: error %v, want %v", name, got, err)
		}
	}
	if _, err := New(bad.Numerator(), one); err == nil {
		t.Error("New takes the numerator of an invalid function")
	}
}

func TestRootsAreKept(t *testing.T) {
	// -0.1 ± 0.2i are no roots of the polynomial with rounded coefficients: only kept ones agree.
	g, err := FromRoots(3, []complex128{-0.1}, []complex128{-0.1 + 0.2i, -0.1 - 0.2i, 0})
	if err != nil {
		t.Fatal(err)
	}
	h, err := FromRoots(0.3, nil, []complex128{-0.7})
	if err != nil {
		t.Fatal(err)
	}
	l, err := g.Series(h)
	if err != nil {
		t.Fatal(err)
	}
	l, err = l.Scale(0.1)
	if err != nil {
		t.Fatal(err)
	}
	poles, err := l.Poles()
	if err != nil {
		t.Fatal(err)
	}
	want := []complex128{-0.7, -0.1 - 0.2i, -0.1 + 0.2i, 0}
	for i, p := range poles {
		if p.Value != want[i] || p.Radius != 0 {
			t.Errorf("pole %d = %v ± %v, want %v as given", i, p.Value, p.Radius, want[i])
		}
	}
	closed, err := h.Feedback(g)
	if err != nil {
		t.Fatal(err)
	}
	zeros, err := closed.Zeros() // the poles of the feedback
	if err != nil || len(zeros) != 3 || zeros[0].Value != -0.1-0.2i || zeros[0].Radius != 0 {
		t.Errorf("zeros behind feedback = %v, %v; want the poles of the feedback as given", zeros, err)
	}
	if _, err := FromRoots(1, []complex128{1i}, nil); err == nil {
		t.Error("FromRoots takes a zero without its conjugate")
	}
	if g, err := FromRoots(0, nil, []complex128{-1}); err != nil || g.At(3) != 0 {
		t.Errorf("gain 0: %v, %v", g, err)
	}
}

func TestDeadTimesAddExactly(t *testing.T) {
	g := ratioOf(t, []float64{1}, []float64{1})
	a, _ := g.WithDeadTime(0.1)
	b, _ := g.WithDeadTime(0.2)
	c, err := a.Series(b)
	if err != nil {
		t.Fatal(err)
	}
	d, _ := c.Series(a)
	e, _ := a.Series(a)
	f, _ := e.Series(b)
	if !d.Equal(f) {
		t.Error("0.1 + 0.2 + 0.1 and 0.1 + 0.1 + 0.2 differ")
	}
	// exp(-jωτ), τ the exact sum of the float64s 0.1 and 0.2, ω = 1e9: by mpmath with 60
	// digits. The rounded product ωτ alone would be wrong by 6e-8, the rounded τ by as much.
	want := complex(0.89821712711909382725, 0.43955203622542990134)
	if got := c.At(1e9i); cmplx.Abs(got-want) > 1e-14 {
		t.Errorf("at 1e9 rad/s: %v, want %v", got, want)
	}
	if _, err := a.Parallel(b); err == nil {
		t.Error("parallel branches with dead times 0.1 and 0.2 are no rational function")
	}
}

func TestAtFarOut(t *testing.T) {
	g := ratioOf(t, []float64{1, 2, 0, 0}, []float64{2, 1, 1, 1})
	if got := g.At(1e200i); cmplx.Abs(got-0.5) > 1e-15 {
		t.Errorf("biproper at 1e200i = %v, want 0.5", got)
	}
	if got := g.At(cmplx.Inf()); got != 0.5 {
		t.Errorf("biproper at infinity = %v, want 0.5", got)
	}
	h := ratioOf(t, []float64{1e300}, []float64{1e-300, 0})
	if got := h.At(1e305); math.Abs(real(got)/1e295-1) > 1e-15 {
		t.Errorf("1e600/s at 1e305 = %v, want 1e295", got)
	}
	c := ratioOf(t, []float64{1, 3, 2}, []float64{1, 1})
	if got := c.At(-1); got != 1 {
		t.Errorf("(s+1)(s+2)/(s+1) at -1 = %v, want the limit 1", got)
	}
	if got := c.At(-1e-320); cmplx.Abs(got-2) > 1e-15 {
		t.Errorf("at a denormal = %v, want 2", got)
	}
	if got := c.Numerator(); !got.Equal(poly.New(1, 3, 2)) {
		t.Errorf("a common factor went: %v", got)
	}
	q := ratioOf(t, []float64{1}, []float64{1, 0})
	if got := q.At(0); !cmplx.IsInf(got) {
		t.Errorf("1/s at 0 = %v, want infinity", got)
	}
	if got := q.At(5e-324i); !cmplx.IsInf(got) {
		t.Errorf("1/s at the smallest number = %v, want infinity", got)
	}
}

func TestLoopAlgebra(t *testing.T) {
	l := Loop{
		Prefilter:  ratioOf(t, []float64{1}, []float64{1, 4}),
		Controller: ratioOf(t, []float64{2, 1}, []float64{1, 0}),
		Plant:      ratioOf(t, []float64{3}, []float64{1, 1, 5}),
		Sensor:     ratioOf(t, []float64{1}, []float64{1, 10}),
	}.WithGain(0.25)
	s := 0.3 + 1.7i
	f, c, p, h := l.Prefilter.At(s), l.Controller.At(s), l.Plant.At(s), l.Sensor.At(s)
	S := 1 / (1 + c*p*h)
	for _, tt := range []struct {
		from, to Point
		want     complex128
	}{
		{Reference, Output, f * c * p * S},
		{Reference, Error, f * S},
		{Reference, Effort, f * c * S},
		{LoadDisturbance, Output, p * S},
		{LoadDisturbance, Error, -p * h * S},
		{LoadDisturbance, Effort, -c * p * h * S},
		{OutputDisturbance, Output, S},
		{OutputDisturbance, Error, -h * S},
		{OutputDisturbance, Effort, -c * h * S},
		{Noise, Output, -c * p * S},
		{Noise, Error, -S},
		{Noise, Effort, -c * S},
	} {
		path, err := l.Path(tt.from, tt.to)
		if err != nil {
			t.Fatal(err)
		}
		if got := path.At(s); cmplx.Abs(got-tt.want) > 1e-14*cmplx.Abs(tt.want) {
			t.Errorf("%v to %v at %v = %v, want %v", tt.from, tt.to, s, got, tt.want)
		}
		g, err := path.Function()
		if err != nil {
			t.Fatal(err)
		}
		if got := g.At(s); cmplx.Abs(got-tt.want) > 1e-14*cmplx.Abs(tt.want) {
			t.Errorf("function %v to %v at %v = %v, want %v", tt.from, tt.to, s, got, tt.want)
		}
	}
	for name, tt := range map[string]struct {
		call func() (Path, error)
		want complex128
	}{
		"Sensitivity":              {l.Sensitivity, S},
		"ComplementarySensitivity": {l.ComplementarySensitivity, c * p * h * S},
		"LoadSensitivity":          {l.LoadSensitivity, p * S},
		"NoiseSensitivity":         {l.NoiseSensitivity, c * S},
	} {
		path, err := tt.call()
		if err != nil {
			t.Fatal(err)
		}
		if got := path.At(s); cmplx.Abs(got-tt.want) > 1e-14*cmplx.Abs(tt.want) {
			t.Errorf("%s at %v = %v, want %v", name, s, got, tt.want)
		}
	}
	if _, err := l.Path(Output, Reference); err == nil {
		t.Error("a path against the arrows is taken")
	}
	fixed, scaled, err := l.Characteristic()
	if err != nil || fixed.Degree() != 4 || scaled.Degree() != 1 {
		t.Errorf("Characteristic = %v, %v, %v", fixed, scaled, err)
	}
	// The same with dead time in three blocks.
	l.Plant, _ = l.Plant.WithDeadTime(0.3)
	l.Controller, _ = l.Controller.WithDeadTime(0.05)
	l.Sensor, _ = l.Sensor.WithDeadTime(0.2)
	for _, s := range []complex128{0.3 + 1.7i, -40 + 1i, 2i, 500i, -400 + 1i} {
		f, c, p, h := l.Prefilter.At(s), l.Controller.At(s), l.Plant.At(s), l.Sensor.At(s)
		want := f * c * p / (1 + c*p*h)
		path, err := l.Path(Reference, Output)
		if err != nil {
			t.Fatal(err)
		}
		if got := path.At(s); !(cmplx.Abs(got-want) <= 1e-13*cmplx.Abs(want)) {
			t.Errorf("with dead time at %v = %v, want %v", s, got, want)
		}
	}
	var irrational *IrrationalError
	if _, err := l.Closed(); !errors.As(err, &irrational) {
		t.Errorf("Closed with dead time in the loop: error %v, want an IrrationalError", err)
	}
	if _, err := (Loop{}).Open(); err == nil {
		t.Error("a loop without a plant is taken")
	}
	if _, err := l.WithGain(math.NaN()).Open(); err == nil {
		t.Error("a gain of NaN is taken")
	}
	if _, err := (Loop{Plant: ratioOf(t, []float64{-1}, []float64{1})}).Closed(); err == nil {
		t.Error("a loop of value -1 everywhere is taken")
	}
}

func TestLoopOfZ(t *testing.T) {
	plant, _ := ratioOf(t, []float64{0.5}, []float64{1, -1}).WithPeriod(0.01)
	plant, err := plant.WithDeadTime(0.03)
	if err != nil {
		t.Fatal(err)
	}
	if got := plant.DeadTime(); got != 0.03 {
		t.Errorf("DeadTime = %v, want 0.03", got)
	}
	open, err := Loop{Plant: plant}.Open()
	if err != nil {
		t.Fatal(err)
	}
	if open.Denominator().Degree() != 4 || open.DeadTime() != 0 || open.Period() != 0.01 {
		t.Errorf("open loop: degree %d, dead time %v; want the periods in the denominator", open.Denominator().Degree(), open.DeadTime())
	}
	z := 0.6 + 0.3i
	if got, want := plant.At(z), 0.5/(z-1)/(z*z*z); cmplx.Abs(got-want) > 1e-14 {
		t.Errorf("At = %v, want %v", got, want)
	}
	closed, err := Loop{Plant: plant}.Closed()
	if err != nil {
		t.Fatal(err)
	}
	if got, want := closed.At(z), plant.At(z)/(1+plant.At(z)); cmplx.Abs(got-want) > 1e-14 {
		t.Errorf("closed At = %v, want %v", got, want)
	}
	other, _ := ratioOf(t, []float64{1}, []float64{1, -1}).WithPeriod(0.02)
	var period *PeriodError
	if _, err := plant.Series(other); !errors.As(err, &period) {
		t.Errorf("periods 0.01 and 0.02: error %v, want a PeriodError", err)
	}
	if _, err := plant.WithDeadTime(0.025); err == nil {
		t.Error("a dead time of 2.5 periods is taken")
	}
	if _, err := plant.Series(ratioOf(t, []float64{3}, []float64{2})); err != nil {
		t.Errorf("a constant does not join a period: %v", err)
	}
}

func TestDampingRatio(t *testing.T) {
	for _, tt := range []struct{ pole complex128 }{{-3 + 4i}, {-3e-320 + 4e-320i}, {-3e307 - 4e307i}} {
		if got := DampingRatio(tt.pole); math.Abs(got-0.6) > 1e-4 {
			t.Errorf("DampingRatio(%v) = %v, want 0.6", tt.pole, got)
		}
	}
	if got := DampingRatio(-2); got != 1 {
		t.Errorf("DampingRatio(-2) = %v, want 1", got)
	}
	if got := DampingRatio(2); got != -1 {
		t.Errorf("DampingRatio(2) = %v, want -1", got)
	}
	if got := NaturalFrequency(-3 + 4i); got != 5 {
		t.Errorf("NaturalFrequency = %v, want 5", got)
	}
	if got := DampingRatio(0); !math.IsNaN(got) {
		t.Errorf("DampingRatio(0) = %v, want NaN", got)
	}
	// log(1+δ)/T of a pole that moved by 1e-9·(-3+4i), by mpmath with 40 digits.
	p := ContinuousPoleFromOffset(complex(-3e-9, 4e-9), 1e-9)
	if want := complex(-2.999999996499999754, 4.000000012000000015); cmplx.Abs(p-want) > 1e-15*5 {
		t.Errorf("pole = %v, want %v", p, want)
	}
}
