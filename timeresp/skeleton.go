package timeresp

import (
	"context"
	"errors"

	"github.com/polewright/polewright/tf"
)

var errSkeleton = errors.New("timeresp: skeleton")

type Record struct{}

func Run(ctx context.Context, l tf.Loop, in Input, opt ...Option) (*Record, error) {
	return nil, errSkeleton
}
