package tf

import "github.com/polewright/polewright/poly"

// sample replaces plant and sensor of a sampled-data loop by what stands between the hold
// and the sampler.
func (l Loop) sample(call string, p *plan) error {
	return &UnsupportedError{Call: call, What: "sampled-data loops"}
}

// jointPath is plan.path where plant and sensor were sampled as one.
func (p plan) jointPath(from, to Point) Path { return Path{} }

// loadPath fills the path of a load that is held over each period.
func (p plan) loadPath(path Path, to Point) Path {
	path.forward = poly.Poly{}
	return path
}
