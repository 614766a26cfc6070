package tf

import "errors"

var errSkeleton = errors.New("tf: skeleton")

func Parse(text string) (Function, error) { return Function{}, errSkeleton }
func MustParse(text string) Function      { return Function{} }
func (g Function) Sample(period float64, how Method, opt ...Option) (Function, error) {
	return g, errSkeleton
}
