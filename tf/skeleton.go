// Package tf holds transfer functions and loops.
package tf

import (
	"errors"

	"github.com/polewright/polewright/poly"
)

var errSkeleton = errors.New("tf: skeleton")

type Function struct {
	numerator, denominator poly.Poly
}
type Option func(*settings)
type settings struct{}

// UnsupportedError says that a combination is not supported yet. Packages above use it too.
type UnsupportedError struct{ Call, What string }

func (e *UnsupportedError) Error() string { return e.Call + ": not supported yet: " + e.What }

func New(numerator, denominator poly.Poly) (Function, error) { return Function{}, errSkeleton }
func FromRoots(gain float64, zeros, poles []complex128) (Function, error) {
	return Function{}, errSkeleton
}
func Parse(text string) (Function, error)                         { return Function{}, errSkeleton }
func MustParse(text string) Function                              { return Function{} }
func (g Function) Numerator() poly.Poly                           { return g.numerator }
func (g Function) Denominator() poly.Poly                         { return g.denominator }
func (g Function) Zeros() ([]poly.Root, error)                    { return nil, errSkeleton }
func (g Function) Poles() ([]poly.Root, error)                    { return nil, errSkeleton }
func (g Function) At(s complex128) complex128                     { return 0 }
func (g Function) DeadTime() float64                              { return 0 }
func (g Function) WithDeadTime(seconds float64) (Function, error) { return g, errSkeleton }
func (g Function) Period() float64                                { return 0 }
func (g Function) WithPeriod(seconds float64) (Function, error)   { return g, errSkeleton }
func (g Function) Series(h Function) (Function, error)            { return g, errSkeleton }
func (g Function) Parallel(h Function) (Function, error)          { return g, errSkeleton }

// Err returns the error that came with an invalid Function, nil for a valid one.
func (g Function) Err() error { return nil }
func (g Function) Sample(period float64, how Method, opt ...Option) (Function, error) {
	return g, errSkeleton
}

type Method int

const (
	ZeroOrderHold Method = iota
	RampInvariant
	FirstOrderHold
	Trapezoidal
	MatchedRoots
)

type Loop struct {
	Prefilter, Controller, Plant, Sensor Function
	Hold                                 Method
	ComputationDelay                     float64
	Limits                               Limits
}
type Limits struct{ Amplitude, Rate float64 }

func (l Loop) WithGain(k float64) Loop           { return l }
func (l Loop) Open() (Function, error)           { return Function{}, errSkeleton }
func (l Loop) Closed() (Function, error)         { return Function{}, errSkeleton }
func (l Loop) Path(from, to Point) (Path, error) { return Path{}, errSkeleton }

type Point int

const (
	Reference Point = iota
	LoadDisturbance
	OutputDisturbance
	Noise
	Output
	Error
	Effort
)

type Path struct{}

func (p Path) At(s complex128) complex128 { return 0 }

func DampingRatio(pole complex128) float64     { return 0 }
func NaturalFrequency(pole complex128) float64 { return 0 }
