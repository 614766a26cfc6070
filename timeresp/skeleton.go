// Package timeresp computes time responses.
package timeresp

import (
	"context"
	"errors"

	"github.com/polewright/polewright/tf"
)

var errSkeleton = errors.New("timeresp: skeleton")

type Option func(*settings)
type settings struct{}
type Response struct{}
type Record struct{}
type Input struct{}

func Step(g tf.Function, opt ...Option) (*Response, error)    { return nil, errSkeleton }
func Impulse(g tf.Function, opt ...Option) (*Response, error) { return nil, errSkeleton }
func Ramp(g tf.Function, opt ...Option) (*Response, error)    { return nil, errSkeleton }
func StepOf(l tf.Loop, opt ...Option) (*Response, error)      { return nil, errSkeleton }
func Of(ctx context.Context, l tf.Loop, from, to tf.Point, in Input, opt ...Option) (*Response, error) {
	return nil, errSkeleton
}
func Run(ctx context.Context, l tf.Loop, in Input, opt ...Option) (*Record, error) {
	return nil, errSkeleton
}
func (r *Response) At(t float64) float64                  { return 0 }
func (r *Response) Figures(band float64) (Figures, error) { return Figures{}, errSkeleton }

type Figures struct {
	Final, Overshoot, Undershoot, PeakTime, RiseTime, SettlingTime float64
}
