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
type Record struct{}
type Input struct{}

func StepOf(l tf.Loop, opt ...Option) (*Response, error) { return nil, errSkeleton }
func Of(ctx context.Context, l tf.Loop, from, to tf.Point, in Input, opt ...Option) (*Response, error) {
	return nil, errSkeleton
}
func Run(ctx context.Context, l tf.Loop, in Input, opt ...Option) (*Record, error) {
	return nil, errSkeleton
}
