// Package locus follows one-parameter families of characteristic polynomials.
package locus

import (
	"errors"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

var errSkeleton = errors.New("locus: skeleton")

type Family struct{ fixed, scaled poly.Poly }
type Option func(*settings)
type settings struct{ trace traceSettings }
type Sign int

const (
	Positive Sign = 1
	Negative Sign = -1
)

type Asymptotes struct {
	Centroid float64
	Angles   []float64
}

func Gain(open tf.Function) (Family, error)                { return Family{}, errSkeleton }
func Parameter(fixed, scaled poly.Poly) (Family, error)    { return Family{}, errSkeleton }
func (f Family) PolesAt(k float64) ([]poly.Root, error)    { return nil, errSkeleton }
func (f Family) GainAt(s complex128) (k, miss float64)     { return 0, 0 }
func (f Family) Deficiency(s complex128) float64           { return 0 }
func (f Family) Asymptotes(sign Sign) Asymptotes           { return Asymptotes{} }
func (f Family) BreakPoints() ([]BreakPoint, error)        { return nil, errSkeleton }
func (f Family) Departures(sign Sign) ([]Departure, error) { return nil, errSkeleton }
func (f Family) Arrivals(sign Sign) ([]Departure, error)   { return nil, errSkeleton }
func (f Family) Crossings(r Region) ([]Crossing, error)    { return nil, errSkeleton }
func (f Family) Windows(r Region) ([]Window, error)        { return nil, errSkeleton }

type BreakPoint struct {
	S     complex128
	Gain  float64
	Order int
}
type Departure struct {
	From         complex128
	Multiplicity int
	Angles       []float64
}
type Crossing struct {
	S     complex128
	Gain  float64
	Touch poly.Verdict
}
type Window struct{ Lo, Hi float64 }
type Region interface {
	Contains(s complex128) bool
	Boundary() []Curve
}
type Curve struct{}

func LeftOf(sigma float64) Region               { return nil }
func Damped(zeta float64) Region                { return nil }
func Within(radius float64) Region              { return nil }
func Beyond(radius float64) Region              { return nil }
func All(r ...Region) Region                    { return nil }
func OnSamples(r Region, period float64) Region { return nil }

type BoundaryOnLocusError struct{}

func (e *BoundaryOnLocusError) Error() string { return "locus: the whole boundary is on the locus" }
