package tf

import "errors"

// Method is a way from continuous time to samples.
type Method int

const (
	ZeroOrderHold  Method = iota // the input is held over each period
	RampInvariant                // the input runs straight from sample to sample: exact for ramps, not causal as a hold
	FirstOrderHold               // the input goes on with the slope of the last two samples
	Trapezoidal                  // s = (2/period)·(z-1)/(z+1)
	MatchedRoots                 // poles and zeros through exp(s·period)
)

var errSkeleton = errors.New("tf: skeleton")

func (g Function) Sample(period float64, how Method, opt ...Option) (Function, error) {
	return g, errSkeleton
}
