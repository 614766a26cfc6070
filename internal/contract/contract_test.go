// Package contract holds the settled names of the API as assignments: a changed
// signature does not compile.
package contract

import (
	"context"
	"testing"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/spec"
	"github.com/polewright/polewright/tf"
	"github.com/polewright/polewright/timeresp"
)

type (
	pp  = poly.Poly
	fn  = tf.Function
	ctx = context.Context
)

var (
	_ func(...float64) pp                                             = poly.New
	_ func(float64, ...complex128) (pp, error)                        = poly.FromRoots
	_ func(pp) int                                                    = pp.Degree
	_ func(pp, int) float64                                           = pp.Coefficient
	_ func(pp, float64) float64                                       = pp.At
	_ func(pp, complex128) complex128                                 = pp.AtComplex
	_ func(pp, pp) pp                                                 = pp.Add
	_ func(pp, pp) pp                                                 = pp.Sub
	_ func(pp, pp) pp                                                 = pp.Mul
	_ func(pp, float64) pp                                            = pp.Scale
	_ func(pp) pp                                                     = pp.Derivative
	_ func(pp, pp) bool                                               = pp.Equal
	_ func(pp, ...poly.Option) ([]poly.Root, error)                   = pp.Roots
	_ func(pp, float64, float64, ...poly.Option) ([]poly.Root, error) = pp.RealRoots

	_       = poly.Root{Value: 1i, Radius: 0, HalfRe: 0, HalfIm: 0, Multiplicity: 1, Distinct: 1}
	_       = [...]poly.Verdict{poly.Undecided, poly.Holds, poly.Fails}
	_ error = (*poly.RangeError)(nil)

	_ func(pp, pp) (fn, error)                               = tf.New
	_ func(float64, []complex128, []complex128) (fn, error)  = tf.FromRoots
	_ func(string) (fn, error)                               = tf.Parse
	_ func(string) fn                                        = tf.MustParse
	_ func(fn) pp                                            = fn.Numerator
	_ func(fn) pp                                            = fn.Denominator
	_ func(fn) ([]poly.Root, error)                          = fn.Zeros
	_ func(fn) ([]poly.Root, error)                          = fn.Poles
	_ func(fn, complex128) complex128                        = fn.At
	_ func(fn) float64                                       = fn.DeadTime
	_ func(fn, float64) (fn, error)                          = fn.WithDeadTime
	_ func(fn) float64                                       = fn.Period
	_ func(fn, float64) (fn, error)                          = fn.WithPeriod
	_ func(fn, fn) (fn, error)                               = fn.Series
	_ func(fn, fn) (fn, error)                               = fn.Parallel
	_ func(fn, float64, tf.Method, ...tf.Option) (fn, error) = fn.Sample

	_ = [...]tf.Method{tf.ZeroOrderHold, tf.RampInvariant, tf.FirstOrderHold, tf.Trapezoidal, tf.MatchedRoots}
	_ = tf.Loop{Prefilter: fn{}, Controller: fn{}, Plant: fn{}, Sensor: fn{}, Hold: tf.ZeroOrderHold, ComputationDelay: 0, Limits: tf.Limits{Amplitude: 0, Rate: 0}}

	_ func(tf.Loop, float64) tf.Loop                     = tf.Loop.WithGain
	_ func(tf.Loop) (fn, error)                          = tf.Loop.Open
	_ func(tf.Loop) (fn, error)                          = tf.Loop.Closed
	_ func(tf.Loop, tf.Point, tf.Point) (tf.Path, error) = tf.Loop.Path
	_ func(tf.Loop, ...tf.Option) (tf.Margins, error)    = tf.Loop.Margins
	_                                                    = [...]tf.Point{tf.Reference, tf.LoadDisturbance, tf.OutputDisturbance, tf.Noise, tf.Output, tf.Error, tf.Effort}
	_ func(tf.Path, complex128) complex128               = tf.Path.At
	_                                                    = tf.Margins{GainCrossovers: []tf.Crossover{{Frequency: 1, Margin: 1}}, PhaseCrossovers: nil, CompleteTo: 0, Delay: 0,
		SensitivityPeak: 0, SensitivityPeakAt: 0, Stable: poly.Holds}
	_ func(complex128) float64 = tf.DampingRatio
	_ func(complex128) float64 = tf.NaturalFrequency

	_ func(fn) (locus.Family, error)                                              = locus.Gain
	_ func(pp, pp) (locus.Family, error)                                          = locus.Parameter
	_ func(locus.Family, float64) ([]poly.Root, error)                            = locus.Family.PolesAt
	_ func(locus.Family, complex128) (float64, float64)                           = locus.Family.GainAt
	_ func(locus.Family, complex128) float64                                      = locus.Family.Deficiency
	_ func(locus.Family, locus.Sign) locus.Asymptotes                             = locus.Family.Asymptotes
	_ func(locus.Family) ([]locus.BreakPoint, error)                              = locus.Family.BreakPoints
	_ func(locus.Family, locus.Sign) ([]locus.Departure, error)                   = locus.Family.Departures
	_ func(locus.Family, locus.Sign) ([]locus.Departure, error)                   = locus.Family.Arrivals
	_ func(locus.Family, locus.Region) ([]locus.Crossing, error)                  = locus.Family.Crossings
	_ func(locus.Family, locus.Region) ([]locus.Window, error)                    = locus.Family.Windows
	_ func(locus.Family, float64, float64, ...locus.Option) (*locus.Locus, error) = locus.Family.Trace

	_                                          = [...]locus.Sign{locus.Positive, locus.Negative}
	_                                          = locus.Asymptotes{Centroid: 0, Angles: nil}
	_                                          = locus.BreakPoint{S: 0, Gain: 0, Order: 2}
	_                                          = locus.Departure{From: 0, Multiplicity: 1, Angles: nil}
	_                                          = locus.Crossing{S: 0, Gain: 0, Touch: poly.Undecided}
	_                                          = locus.Window{Lo: 0, Hi: 0}
	_ func(float64) locus.Region               = locus.LeftOf
	_ func(float64) locus.Region               = locus.Damped
	_ func(float64) locus.Region               = locus.Within
	_ func(float64) locus.Region               = locus.Beyond
	_ func(...locus.Region) locus.Region       = locus.All
	_ func(locus.Region, float64) locus.Region = locus.OnSamples
	_ interface {
		Contains(complex128) bool
		Boundary() []locus.Curve
	} = locus.Region(nil)
	_ error                                          = (*locus.BoundaryOnLocusError)(nil)
	_ []locus.Branch                                 = locus.Locus{}.Branches
	_ func(locus.Branch) int                         = locus.Branch.Len
	_ func(locus.Branch, int) (float64, float64)     = locus.Branch.XY
	_ func(locus.Branch, int) float64                = locus.Branch.GainAt
	_ func(locus.Branch, float64) (complex128, bool) = locus.Branch.At

	_ func(fn, ...timeresp.Option) (*timeresp.Response, error)                                               = timeresp.Step
	_ func(fn, ...timeresp.Option) (*timeresp.Response, error)                                               = timeresp.Impulse
	_ func(fn, ...timeresp.Option) (*timeresp.Response, error)                                               = timeresp.Ramp
	_ func(tf.Loop, ...timeresp.Option) (*timeresp.Response, error)                                          = timeresp.StepOf
	_ func(ctx, tf.Loop, tf.Point, tf.Point, timeresp.Input, ...timeresp.Option) (*timeresp.Response, error) = timeresp.Of
	_ func(ctx, tf.Loop, timeresp.Input, ...timeresp.Option) (*timeresp.Record, error)                       = timeresp.Run
	_ func(*timeresp.Response, float64) float64                                                              = (*timeresp.Response).At
	_ func(*timeresp.Response, float64) (timeresp.Figures, error)                                            = (*timeresp.Response).Figures
	_                                                                                                        = timeresp.Figures{Final: 0, Overshoot: 0, Undershoot: 0, PeakTime: 0, RiseTime: 0, SettlingTime: 0}

	_ []spec.Requirement = spec.Sheet{}
	_ interface {
		Name() string
		Judge(context.Context, *spec.Evidence) (spec.Finding, error)
	} = spec.Requirement(nil)
	_ = spec.Finding{Verdict: poly.Holds, Quantity: "", Unit: "", Reached: 0, Limit: 0, Slack: 0, At: 0}
	_ = []func(float64) spec.Requirement{spec.OvershootAtMost, spec.UndershootAtMost, spec.RisesWithin, spec.PeaksWithin,
		spec.StepErrorAtMost, spec.RampErrorAtMost, spec.EffortAtMost, spec.GainMarginAtLeast, spec.GainReductionMarginAtLeast,
		spec.PhaseMarginAtLeast, spec.DelayMarginAtLeast, spec.SensitivityPeakAtMost, spec.DampingAtLeast}
	_ func(float64, float64) spec.Requirement                               = spec.SettlesWithin
	_ func(locus.Region) spec.Requirement                                   = spec.PolesIn
	_ func(spec.Sheet) error                                                = spec.Sheet.Validate
	_ func(spec.Sheet, ...spec.Option) (spec.Map, error)                    = spec.Sheet.Map
	_ func(spec.Sheet, ctx, tf.Loop, ...spec.Option) (spec.Report, error)   = spec.Sheet.Check
	_ func(spec.Sheet, ctx, []tf.Loop, ...spec.Option) (spec.Gains, error)  = spec.Sheet.Windows
	_ func(spec.Sheet, ctx, []tf.Loop, ...spec.Option) (spec.Design, error) = spec.Sheet.Design
	_                                                                       = spec.Map{AllPoles: nil, DominantPair: nil, Assumptions: nil}
	_                                                                       = spec.Gains{Windows: []spec.GainWindow{{Lo: spec.End{}, Hi: spec.End{Gain: 0, Closed: true, Proven: true, By: []spec.Cause{}}}}, MissedBelow: 0}
	_                                                                       = spec.SecondOrder{Damping: 0, NaturalFrequency: 0}
	_ func(spec.SecondOrder) float64                                        = spec.SecondOrder.Overshoot
	_ func(float64) (float64, error)                                        = spec.DampingForOvershoot
	_ func(float64) (float64, error)                                        = spec.DampingAngle
)

// TestContract is there so that the package counts as tested: the checks are made by the compiler.
func TestContract(t *testing.T) {
	var p poly.Poly
	if p.Degree() != -1 {
		t.Errorf("the zero Poly has degree %d, want -1", p.Degree())
	}
}
