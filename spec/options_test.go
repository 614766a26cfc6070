package spec

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

func sameWindows(a, b []GainWindow, tolerance float64) bool {
	if len(a) != len(b) {
		return false
	}
	near := func(x, y float64) bool { return x == y || math.Abs(x-y) <= tolerance*math.Abs(y) }
	for i := range a {
		if !near(a[i].Lo.Gain, b[i].Lo.Gain) || !near(a[i].Hi.Gain, b[i].Hi.Gain) {
			return false
		}
	}
	return true
}

// A plant of the other sign: the windows for k < 0 are the mirror image.
func TestNegativeGains(t *testing.T) {
	sheet := Sheet{OvershootAtMost(0.2), SettlesWithin(2, 0.02), RisesWithin(1)}
	plus := tf.Loop{Plant: mustFunction(t, []float64{1}, []float64{1, 4, 0})}
	minus := tf.Loop{Plant: mustFunction(t, []float64{-1}, []float64{1, 4, 0})}
	a, err := sheet.Windows(t.Context(), []tf.Loop{plus})
	if err != nil {
		t.Fatal(err)
	}
	b, err := sheet.Windows(t.Context(), []tf.Loop{minus}, NegativeGains())
	if err != nil {
		t.Fatal(err)
	}
	if len(b.Windows) != len(a.Windows) {
		t.Fatalf("%s and %s", a, b)
	}
	for i, w := range b.Windows {
		v := a.Windows[len(a.Windows)-1-i]
		if w.Lo.Gain != -v.Hi.Gain || w.Hi.Gain != -v.Lo.Gain || w.Lo.By[0] != v.Hi.By[0] {
			t.Errorf("window %d: %v, want the mirror image of %v", i, w, v)
		}
	}
	// No k > 0 works: Design notices that k < 0 does.
	d, err := sheet.Design(t.Context(), []tf.Loop{minus})
	if err != nil {
		t.Fatal(err)
	}
	if d.Feasible || d.OtherSign == nil || len(d.OtherSign.Windows) != 3 || !strings.Contains(d.Reason, "stable") {
		t.Errorf("%s", d)
	}
	d, err = sheet.Design(t.Context(), []tf.Loop{minus}, NegativeGains(), InUse(-10))
	if err != nil {
		t.Fatal(err)
	}
	if !d.Feasible || !(d.Gain < 0) || !d.Reports[0].Met() || !d.InUse.Place.Inside || !d.Gains.Contains(d.Gain) {
		t.Errorf("%s", d)
	}
}

// The gain in the sensor: y = G/(1 + kGH). Its final value falls with k; here 4/(s² + 4s + 4k)
// has damping 1/√k whatever the scale.
func TestVarySensor(t *testing.T) {
	loop := tf.Loop{Plant: mustFunction(t, []float64{4}, []float64{1, 4, 0})}
	g, err := Sheet{OvershootAtMost(0.2)}.Windows(t.Context(), []tf.Loop{loop}, VarySensor())
	if err != nil {
		t.Fatal(err)
	}
	zeta, _ := DampingForOvershoot(0.2)
	if want := 1 / (zeta * zeta); len(g.Windows) != 1 || math.Abs(g.Windows[0].Hi.Gain-want) > 1e-10*want {
		t.Errorf("%s, want an end at %.12g", g, want)
	}
	// |1 - y(∞)| = |1 - 1/k| ≤ 0.25.
	if g, err = (Sheet{StepErrorAtMost(0.25)}).Windows(t.Context(), []tf.Loop{loop}, VarySensor()); err != nil {
		t.Fatal(err)
	}
	if len(g.Windows) != 1 || math.Abs(g.Windows[0].Lo.Gain-0.8) > 1e-14 || math.Abs(g.Windows[0].Hi.Gain-4.0/3) > 1e-14 {
		t.Errorf("%s, want [0.8, 1.333]", g)
	}
	// The error vanishes at k = 1 alone: a window of a single gain.
	if g, err = (Sheet{StepErrorAtMost(0), OvershootAtMost(0.5)}).Windows(t.Context(), []tf.Loop{loop}, VarySensor()); err != nil {
		t.Fatal(err)
	}
	if len(g.Windows) != 1 || g.Windows[0].Lo.Gain != 1 || g.Windows[0].Hi.Gain != 1 || !g.Contains(1) {
		t.Errorf("%s, want k = 1", g)
	}
}

// The proportional gain with the integral gain fixed: every window is confirmed by checks of
// loops written out.
func TestVaryController(t *testing.T) {
	plant := mustFunction(t, []float64{1}, []float64{1, 3, 2})
	integral := mustFunction(t, []float64{0.8}, []float64{1, 0})
	one := mustFunction(t, []float64{1}, []float64{1})
	sheet := Sheet{OvershootAtMost(0.1), SettlesWithin(6, 0.02), EffortAtMost(6), SensitivityPeakAtMost(1.7), GainMarginAtLeast(3), DampingAtLeast(0.4)}
	g, err := sheet.Windows(t.Context(), []tf.Loop{{Plant: plant}}, VaryController(integral, one))
	if err != nil {
		t.Fatal(err)
	}
	if len(g.Windows) == 0 || g.MissedBelow > 1e-4 {
		t.Fatalf("%s, missed below %g", g, g.MissedBelow)
	}
	loop := func(k float64) tf.Loop {
		return tf.Loop{Plant: plant, Controller: mustFunction(t, []float64{k, 0.8}, []float64{1, 0})}
	}
	for _, w := range g.Windows {
		for _, e := range []struct {
			k   float64
			met bool
		}{{w.Lo.Gain * (1 - 1e-8), false}, {w.Lo.Gain * (1 + 1e-8), true}, {w.Hi.Gain * (1 - 1e-8), true}, {w.Hi.Gain * (1 + 1e-8), false}} {
			r, err := sheet.Check(t.Context(), loop(e.k))
			if err != nil {
				t.Fatal(err)
			}
			if e.k > 0 && r.Met() != e.met {
				t.Errorf("k = %.17g: met is %v in %s:\n%s", e.k, r.Met(), g, r)
			}
		}
	}
	d, err := sheet.Design(t.Context(), []tf.Loop{{Plant: plant}}, VaryController(integral, one))
	if err != nil || !d.Feasible || !d.Reports[0].Met() {
		t.Errorf("%v: %s", err, d)
	}
}

// The windows of several variants are those gains that every one of them accepts.
func TestWindowsOfVariants(t *testing.T) {
	sheet := Sheet{OvershootAtMost(0.4), SettlesWithin(15, 0.05)}
	var loops []tf.Loop
	joint := []GainWindow{{Hi: End{Gain: math.Inf(1)}}}
	for _, a := range []float64{3, 4, 5} {
		l := tf.Loop{Plant: mustFunction(t, []float64{1}, []float64{1, 6, a, 0})}
		loops = append(loops, l)
		g, err := sheet.Windows(t.Context(), []tf.Loop{l})
		if err != nil {
			t.Fatal(err)
		}
		joint = intersect(joint, g.Windows)
	}
	g, err := sheet.Windows(t.Context(), loops)
	if err != nil {
		t.Fatal(err)
	}
	if len(joint) == 0 || !sameWindows(g.Windows, joint, 1e-11) {
		t.Errorf("%s, want %s", g, Gains{Windows: joint})
	}
	for i, w := range g.Windows {
		if w.Hi.By[0].Loop != joint[i].Hi.By[0].Loop {
			t.Errorf("window %d ends by loop %d, want %d", i, w.Hi.By[0].Loop, joint[i].Hi.By[0].Loop)
		}
	}
}

// The empty sheet asks for stability: the widely published k/(s(s+1)(s+2)) is stable for
// 0 < k < 6.
func TestEmptySheet(t *testing.T) {
	loop := tf.Loop{Plant: mustFunction(t, []float64{1}, []float64{1, 3, 2, 0})}
	g, err := Sheet{}.Windows(t.Context(), []tf.Loop{loop})
	if err != nil {
		t.Fatal(err)
	}
	if len(g.Windows) != 1 || g.Windows[0].Lo.Gain != 0 || math.Abs(g.Windows[0].Hi.Gain-6) > 1e-14 || g.Windows[0].Hi.Closed || g.Windows[0].Hi.By[0].Kind != Stability || g.MissedBelow != 0 {
		t.Errorf("%+v", g)
	}
	r, err := Sheet{}.Check(t.Context(), loop.WithGain(6.1))
	if err != nil || r.Met() || r.Stable != poly.Fails {
		t.Errorf("k = 6.1: %v, %v", r, err)
	}
	// At damping 0.5 the published gain is 28/27: s = -1/3 ± j/√3 (the line of 0.5 meets the
	// locus where s = r·e^(±j2π/3), r = 2/3).
	if g, err = (Sheet{DampingAtLeast(0.5)}).Windows(t.Context(), []tf.Loop{loop}); err != nil {
		t.Fatal(err)
	}
	if want := 28.0 / 27; len(g.Windows) != 1 || math.Abs(g.Windows[0].Hi.Gain-want) > 1e-12 || !g.Windows[0].Hi.Closed {
		t.Errorf("%s, want an end at %.15g", g, want)
	}
	// All poles real up to the break point, k = 2√3/9.
	if g, err = (Sheet{DampingAtLeast(1)}).Windows(t.Context(), []tf.Loop{loop}); err != nil {
		t.Fatal(err)
	}
	if want := 2 * math.Sqrt(3) / 9; len(g.Windows) != 1 || math.Abs(g.Windows[0].Hi.Gain-want) > 1e-12 {
		t.Errorf("%s, want an end at %.15g", g, want)
	}
	// A region of the caller's own, and a gain margin of 2 beside it.
	if g, err = (Sheet{PolesIn(locus.LeftOf(-0.1)), GainMarginAtLeast(2)}).Windows(t.Context(), []tf.Loop{loop}); err != nil {
		t.Fatal(err)
	}
	// (s - 0.1) shifted: k = 0.171 at s = -0.1; the pair crosses Re s = -0.1 at k = 3.528... by Routh.
	if len(g.Windows) != 1 || math.Abs(g.Windows[0].Lo.Gain-0.171) > 1e-12 || math.Abs(g.Windows[0].Hi.Gain-3) > 1e-12 {
		t.Errorf("%s, want [0.171, 3]", g)
	}
}

// Preferences of Design: lowest effort takes the low end, nearest takes the wanted gain
// where it lies inside, available gains are chosen from.
func TestDesignPreferences(t *testing.T) {
	loop := []tf.Loop{{Plant: mustFunction(t, []float64{1}, []float64{1, 4, 0})}}
	sheet := Sheet{OvershootAtMost(0.2), SettlesWithin(2, 0.02), RisesWithin(1)}
	get := func(o ...Option) Design {
		t.Helper()
		d, err := sheet.Design(t.Context(), loop, o...)
		if err != nil {
			t.Fatal(err)
		}
		return d
	}
	if d := get(LowestEffort()); math.Abs(d.Gain-6.1771747311171527) > 1e-6 {
		t.Errorf("lowest effort: %g", d.Gain)
	}
	if d := get(NearestTo(12)); d.Gain != 12 {
		t.Errorf("nearest to 12: %g", d.Gain)
	}
	if d := get(NearestTo(8)); math.Abs(d.Gain-9.0343086986324269) > 1e-8 {
		t.Errorf("nearest to 8: %g", d.Gain)
	}
	if d := get(Available(1, 2, 5, 10, 20, 50)); d.Gain != 10 {
		t.Errorf("available: %g", d.Gain)
	}
	if d := get(Available(1, 2, 5)); d.Feasible || !strings.Contains(d.Reason, "available") {
		t.Errorf("available: %v %q", d.Gain, d.Reason)
	}
	// The default does not stand on the jump of the settling time, and beats a sample of gains
	// that do not either.
	d := get()
	for _, k := range []float64{6.3, 9.5, 11, 13, 17, 19} {
		r, err := sheet.Check(t.Context(), loop[0].WithGain(k))
		if err != nil {
			t.Fatal(err)
		}
		if s := r.Findings[r.Binding].Slack; s > d.Slack+1e-9 {
			t.Errorf("gain %g has slack %g, the recommended %g has %g", k, s, d.Gain, d.Slack)
		}
	}
	if r, err := sheet.Check(t.Context(), loop[0].WithGain(d.Gain*1.01)); err != nil || r.Findings[r.Binding].Slack < 0.5*d.Slack {
		t.Errorf("one per cent beside the recommended gain %g: %s", d.Gain, r)
	}
	// Slack without bound: only the rise is asked for.
	d, err := Sheet{RisesWithin(1)}.Design(t.Context(), loop)
	if err != nil || !d.Feasible || !d.Unbounded {
		t.Errorf("%v: %s", err, d)
	}
}

// Bad loops and combinations that are not supported: typed errors, no panic.
func TestBadLoops(t *testing.T) {
	good := mustFunction(t, []float64{1}, []float64{1, 4, 0})
	nan, errNaN := tf.New(poly.New(math.NaN()), poly.New(1, 1))
	if errNaN == nil {
		t.Fatal("tf.New takes NaN")
	}
	sheet := Sheet{OvershootAtMost(0.2), PhaseMarginAtLeast(0.5)}
	sampled, err := good.WithPeriod(0.1)
	if err != nil {
		t.Fatal(err)
	}
	for name, l := range map[string]tf.Loop{
		"no plant":             {},
		"invalid plant":        {Plant: nan},
		"invalid controller":   {Plant: good, Controller: nan},
		"gain not finite":      tf.Loop{Plant: good}.WithGain(math.Inf(1)),
		"sampling period":      {Plant: sampled},
		"limits of the effort": {Plant: good, Limits: tf.Limits{Amplitude: 0.1}},
	} {
		if r, err := sheet.Check(t.Context(), l); err == nil {
			t.Errorf("%s: Check says %s", name, r)
		}
		if g, err := sheet.Windows(t.Context(), []tf.Loop{l}); err == nil {
			t.Errorf("%s: Windows says %s", name, g)
		}
		if d, err := sheet.Design(t.Context(), []tf.Loop{l}); err == nil {
			t.Errorf("%s: Design says %s", name, d)
		}
	}
	var argument *poly.ArgumentError
	if _, err := sheet.Windows(t.Context(), nil); !errors.As(err, &argument) {
		t.Errorf("no loops: %v", err)
	}
	var unsupported *tf.UnsupportedError
	if _, err := sheet.Check(t.Context(), tf.Loop{Plant: sampled}); !errors.As(err, &unsupported) {
		t.Errorf("sampling period: %v", err)
	}
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	if _, err := sheet.Check(ctx, tf.Loop{Plant: good}); !errors.Is(err, context.Canceled) {
		t.Errorf("Check after the end of the context: %v", err)
	}
	if _, err := sheet.Windows(ctx, []tf.Loop{{Plant: good}}); !errors.Is(err, context.Canceled) {
		t.Errorf("Windows after the end of the context: %v", err)
	}
	// A loop with no final value but zero: requirements that need one are not met and say why.
	washout := tf.Loop{Plant: mustFunction(t, []float64{1, 0}, []float64{1, 2, 1})}
	r, err := Sheet{OvershootAtMost(0.5), SettlesWithin(100, 0.5)}.Check(t.Context(), washout)
	if err != nil || r.Met() || !strings.Contains(r.Findings[0].Reason, "zero") {
		t.Errorf("%v: %s", err, r)
	}
	if g, err := (Sheet{OvershootAtMost(0.5)}).Windows(t.Context(), []tf.Loop{washout}); err != nil || len(g.Windows) != 0 {
		t.Errorf("%v: %s", err, g)
	}
	// A hidden unstable mode: cancelled on paper, not in the machine.
	hidden := tf.Loop{Controller: mustFunction(t, []float64{1, -1}, []float64{1, 3}), Plant: mustFunction(t, []float64{1}, []float64{1, -1})}
	if r, err := (Sheet{}).Check(t.Context(), hidden); err != nil || r.Stable != poly.Fails {
		t.Errorf("%v: %s", err, r)
	}
	if g, err := (Sheet{}).Windows(t.Context(), []tf.Loop{hidden}); err != nil || len(g.Windows) != 0 {
		t.Errorf("%v: %s", err, g)
	}
}

// Figures of the further requirements on loops that can be solved by hand: G = 1/(s+1),
// k = 3, so that T = 3/(s+4), u = 3(s+1)/(s+4), y to load = 1/(s+4).
func TestFurtherRequirements(t *testing.T) {
	loop := tf.Loop{Plant: mustFunction(t, []float64{1}, []float64{1, 1})}.WithGain(3)
	for _, c := range []struct {
		r    Requirement
		want float64
	}{
		{StepErrorAtMost(1), 0.25}, {EffortAtMost(4), 3}, {EffortForStepAtMost(2, 9), 6}, {LoadPeakAtMost(1), 0.25},
		{AbsoluteErrorIntegralAtMost(1), 0.75 / 4}, {SquaredErrorIntegralAtMost(1), 0.75 * 0.75 / 8},
		{TimeWeightedAbsoluteErrorIntegralAtMost(1), 0.75 / 16}, {TimeWeightedSquaredErrorIntegralAtMost(1), 0.75 * 0.75 / 64},
		{BandwidthBetween(1, 10), 4}, {NoiseAmplificationAtMost(5), 3}, {RisesWithin(1), math.Log(9) / 4}, {SettlesWithin(2, 0.02), math.Log(50) / 4},
		{ComplementaryPeakAtMost(1), 0.75}, {SensitivityPeakAtMost(2), 1},
	} {
		r, err := Sheet{c.r}.Check(t.Context(), loop)
		if err != nil {
			t.Errorf("%s: %v", c.r.Name(), err)
			continue
		}
		if got := r.Findings[0].Reached; math.Abs(got-c.want) > 1e-12*c.want || !r.Met() {
			t.Errorf("%s: %.17g, want %.17g:\n%s", c.r.Name(), got, c.want, r)
		}
	}
	// Ramp: 2/(s(s+1)) has velocity constant 2; its output follows a ramp half a second behind.
	r, err := Sheet{RampErrorAtMost(0.5), ParabolaErrorAtMost(9)}.Check(t.Context(), tf.Loop{Plant: mustFunction(t, []float64{2}, []float64{1, 1, 0})})
	if err != nil || r.Findings[0].Reached != 0.5 || r.Findings[0].Verdict != poly.Holds || !math.IsInf(r.Findings[1].Reached, 1) || r.Findings[1].Verdict != poly.Fails {
		t.Errorf("%v: %s", err, r)
	}
	// Recovery: y to load is (1 - e^-4t)/4, beyond 0.3 never, and its steady value above 0.2.
	r, err = Sheet{LoadRecoversWithin(1, 0.3), LoadRecoversWithin(1, 0.2)}.Check(t.Context(), loop)
	if err != nil || r.Findings[0].Reached != 0 || r.Findings[1].Verdict != poly.Fails || !math.IsNaN(r.Findings[1].Reached) {
		t.Errorf("%v: %s", err, r)
	}
	// With an integrating controller it comes back: C = (s+1)/s makes it s/((s+1)²) / s.
	pi := tf.Loop{Controller: mustFunction(t, []float64{1, 1}, []float64{1, 0}), Plant: mustFunction(t, []float64{1}, []float64{1, 1})}
	if r, err = (Sheet{LoadRecoversWithin(10, 0.1)}).Check(t.Context(), pi); err != nil {
		t.Fatal(err)
	}
	// y = t·e^-t: 0.1 for the last time at 3.577152063957297.
	if got := r.Findings[0].Reached; math.Abs(got-3.577152063957297) > 1e-9 {
		t.Errorf("recovery after %.17g s", got)
	}
}

// A sheet that speaks of damping for a loop where that means little gets told so; ends that
// nothing was found for are marked.
func TestDesignWarns(t *testing.T) {
	slow := []tf.Loop{{Plant: mustFunction(t, []float64{20}, []float64{1, 2.5, 27, 13})}}
	d, err := Sheet{DampingAtLeast(0.1), RisesWithin(2)}.Design(t.Context(), slow)
	if err != nil {
		t.Fatal(err)
	}
	if !d.Feasible || len(d.Warnings) != 1 || !strings.Contains(d.Warnings[0], "damping ratio") || !strings.Contains(d.String(), d.Warnings[0]) {
		t.Errorf("%s", d)
	}
	g, err := Sheet{RisesWithin(1)}.Windows(t.Context(), []tf.Loop{{Plant: mustFunction(t, []float64{1}, []float64{1, 4, 0})}})
	if err != nil {
		t.Fatal(err)
	}
	if e := g.Windows[0].Hi; !math.IsInf(e.Gain, 1) || e.Proven || len(e.By) != 0 || math.IsInf(g.SearchedTo, 1) {
		t.Errorf("unbounded by search: %+v, searched to %g", e, g.SearchedTo)
	}
	if g, err = (Sheet{PhaseMarginAtLeast(0.5)}).Windows(t.Context(), []tf.Loop{{Plant: mustFunction(t, []float64{1}, []float64{1, 1})}}); err != nil {
		t.Fatal(err)
	}
	if e := g.Windows[0].Hi; !math.IsInf(e.Gain, 1) || !e.Proven {
		t.Errorf("unbounded by proof: %+v", e)
	}
}
