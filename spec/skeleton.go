package spec

import (
	"errors"

	"github.com/polewright/polewright/locus"
)

var errSkeleton = errors.New("spec: skeleton")

func (s Sheet) Map(opt ...Option) (Map, error) { return Map{}, errSkeleton }

type Map struct {
	AllPoles, DominantPair locus.Region
	Assumptions            []string
}
