package spec

import (
	"context"

	"github.com/polewright/polewright/tf"
)

type preference int

func (s Sheet) Design(ctx context.Context, loops []tf.Loop, opt ...Option) (Design, error) {
	return Design{}, errSkeleton
}

// Design is the answer of [Sheet.Design].
type Design struct{}
