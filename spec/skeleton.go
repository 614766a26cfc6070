// Package spec turns a requirement sheet into gains.
package spec

import (
	"context"
	"errors"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

var errSkeleton = errors.New("spec: skeleton")

type Option func(*settings)
type settings struct{}
type Sheet []Requirement
type Requirement interface {
	Name() string
	Judge(ctx context.Context, e *Evidence) (Finding, error)
}
type Evidence struct{}
type Finding struct {
	Verdict                   poly.Verdict
	Quantity, Unit            string
	Reached, Limit, Slack, At float64
}

func OvershootAtMost(fraction float64) Requirement         { return nil }
func UndershootAtMost(fraction float64) Requirement        { return nil }
func RisesWithin(seconds float64) Requirement              { return nil }
func PeaksWithin(seconds float64) Requirement              { return nil }
func SettlesWithin(seconds, band float64) Requirement      { return nil }
func StepErrorAtMost(fraction float64) Requirement         { return nil }
func RampErrorAtMost(seconds float64) Requirement          { return nil }
func EffortAtMost(limit float64) Requirement               { return nil }
func GainMarginAtLeast(ratio float64) Requirement          { return nil }
func GainReductionMarginAtLeast(ratio float64) Requirement { return nil }
func PhaseMarginAtLeast(radians float64) Requirement       { return nil }
func DelayMarginAtLeast(seconds float64) Requirement       { return nil }
func SensitivityPeakAtMost(ratio float64) Requirement      { return nil }
func DampingAtLeast(zeta float64) Requirement              { return nil }
func PolesIn(r locus.Region) Requirement                   { return nil }
func (s Sheet) Validate() error                            { return errSkeleton }
func (s Sheet) Map(opt ...Option) (Map, error)             { return Map{}, errSkeleton }
func (s Sheet) Check(ctx context.Context, l tf.Loop, opt ...Option) (Report, error) {
	return Report{}, errSkeleton
}
func (s Sheet) Windows(ctx context.Context, loops []tf.Loop, opt ...Option) (Gains, error) {
	return Gains{}, errSkeleton
}
func (s Sheet) Design(ctx context.Context, loops []tf.Loop, opt ...Option) (Design, error) {
	return Design{}, errSkeleton
}

type Map struct {
	AllPoles, DominantPair locus.Region
	Assumptions            []string
}
type Report struct{}
type Design struct{}
type Gains struct {
	Windows     []GainWindow
	MissedBelow float64
}
type GainWindow struct{ Lo, Hi End }
type End struct {
	Gain   float64
	Closed bool
	Proven bool
	By     []Cause
}
type Cause struct{}
