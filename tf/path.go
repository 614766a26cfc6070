package tf

import (
	"fmt"
	"math"
	"math/cmplx"

	"github.com/polewright/polewright/poly"
)

// Point names a signal of a [Loop].
type Point int

// The first four are inputs of the loop, the last three are what they act upon.
const (
	Reference         Point = iota // before the prefilter
	LoadDisturbance                // added to the effort at the input of the plant; of a sampled-data loop: held over each period
	OutputDisturbance              // added at the output of the plant
	Noise                          // added to what the sensor delivers
	Output                         // of the plant, with the output disturbance
	Error                          // at the input of the controller: prefiltered reference less the measured output
	Effort                         // of the controller, before the load disturbance
)

var pointNames = [...]string{"reference", "load disturbance", "output disturbance", "noise", "output", "error", "effort"}

// String returns the name in words.
func (p Point) String() string {
	if p < 0 || int(p) >= len(pointNames) {
		return fmt.Sprintf("Point(%d)", int(p))
	}
	return pointNames[p]
}

// Path is the closed-loop function from one signal of a loop to another, dead time included.
// The zero value has the value NaN.
type Path struct {
	from, to Point
	outer    poly.Poly // what stands outside the loop in the denominator: the prefilter's
	forward  poly.Poly // numerator, with the blocks that the path does not pass multiplied in
	delay    deadTime  // of the way from one signal to the other
	fixed    poly.Poly // characteristic: fixed + scaled·exp(-s·around)
	scaled   poly.Poly
	around   deadTime
	whole    poly.Poly // outer·(fixed + scaled), where no dead time lies around the loop
	period   float64
	made     bool
}

// finished returns the path with what At would otherwise compute at every call.
func (p Path) finished() Path {
	if p.around.zero() || p.scaled.Degree() < 0 {
		p.around = deadTime{}
		p.whole = p.outer.Mul(p.fixed.Add(p.scaled))
	}
	return p
}

// Path returns the function from an input of the loop (Reference, LoadDisturbance,
// OutputDisturbance, Noise) to a signal in it (Output, Error, Effort). Nothing cancels. The
// error is that of [Loop.Open], a [*poly.ArgumentError] for other points, or an
// [*UnsupportedError] for an output disturbance in front of a sensor in s of a sampled-data
// loop, which no function of z describes.
func (l Loop) Path(from, to Point) (Path, error) { return l.path("tf.Loop.Path", from, to) }

func (l Loop) path(call string, from, to Point) (Path, error) {
	if from < Reference || from > Noise {
		return Path{}, badArgument(call, "from", "%v is no input of the loop", from)
	}
	if to < Output || to > Effort {
		return Path{}, badArgument(call, "to", "%v is no signal that the loop acts upon", to)
	}
	p, err := l.plan(call)
	if err != nil {
		return Path{}, err
	}
	if p.joint {
		if from == OutputDisturbance {
			return Path{}, &UnsupportedError{Call: call, What: "an output disturbance in front of a sensor in s, sampled"}
		}
		return p.jointPath(from, to).finished(), nil
	}
	return p.path(from, to).finished(), nil
}

// path for blocks in one variable. Letters: n and d numerator and denominator; f prefilter,
// c controller, p plant, h sensor. Everything stands over the characteristic
// polynomial dc·dp·dh + nc·np·nh.
func (p plan) path(from, to Point) Path {
	nf, df := p.prefilter.numerator, p.prefilter.denominator
	nc, dc := p.controller.numerator, p.controller.denominator
	np, dp := p.forward.numerator, p.forward.denominator
	nh, dh := p.sensor.numerator, p.sensor.denominator
	tc, tp, th := p.controller.delay, p.forward.delay, p.sensor.delay

	path := Path{from: from, to: to, outer: one, period: p.period, around: p.loopDelay(), made: true}
	path.fixed, path.scaled = p.characteristic()
	var forward poly.Poly
	switch from {
	case Reference:
		switch to {
		case Output:
			forward, path.delay = productOf(nc, np, dh), tc.plus(tp)
		case Error:
			forward = productOf(dc, dp, dh)
		case Effort:
			forward, path.delay = productOf(nc, dp, dh), tc
		}
		forward, path.outer, path.delay = forward.Mul(nf), df, path.delay.plus(p.prefilter.delay)
	case LoadDisturbance:
		if p.load.made {
			return p.loadPath(path, to)
		}
		switch to {
		case Output:
			forward, path.delay = productOf(np, dc, dh), tp
		case Error:
			forward, path.delay = productOf(np, nh, dc).Scale(-1), tp.plus(th)
		case Effort:
			forward, path.delay = productOf(nc, np, nh).Scale(-1), path.around
		}
	case OutputDisturbance:
		switch to {
		case Output:
			forward = productOf(dc, dp, dh)
		case Error:
			forward, path.delay = productOf(nh, dc, dp).Scale(-1), th
		case Effort:
			forward, path.delay = productOf(nc, nh, dp).Scale(-1), tc.plus(th)
		}
	case Noise:
		switch to {
		case Output:
			forward, path.delay = productOf(nc, np, dh).Scale(-1), tc.plus(tp)
		case Error:
			forward = productOf(dc, dp, dh).Scale(-1)
		case Effort:
			forward, path.delay = productOf(nc, dp, dh).Scale(-1), tc
		}
	}
	path.forward = forward
	return path
}

// Sensitivity returns 1/(1 + L), L being the open loop: what is left of a disturbance at the
// output.
func (l Loop) Sensitivity() (Path, error) {
	return l.ofLoop("tf.Loop.Sensitivity", func(p plan, path *Path) { path.forward = path.fixed })
}

// ComplementarySensitivity returns L/(1 + L), with Sensitivity adding up to 1.
func (l Loop) ComplementarySensitivity() (Path, error) {
	return l.ofLoop("tf.Loop.ComplementarySensitivity", func(p plan, path *Path) {
		path.forward, path.delay = path.scaled, path.around
	})
}

func (l Loop) ofLoop(call string, fill func(p plan, path *Path)) (Path, error) {
	p, err := l.plan(call)
	if err != nil {
		return Path{}, err
	}
	path := Path{from: OutputDisturbance, to: Output, outer: one, period: p.period, around: p.loopDelay(), made: true}
	path.fixed, path.scaled = p.characteristic()
	fill(p, &path)
	return path.finished(), nil
}

// LoadSensitivity returns plant/(1 + L), from a disturbance at the plant's input to the
// output: the path from LoadDisturbance to Output.
func (l Loop) LoadSensitivity() (Path, error) {
	return l.path("tf.Loop.LoadSensitivity", LoadDisturbance, Output)
}

// NoiseSensitivity returns controller/(1 + L), from noise to the effort, the sign of the
// feedback left out.
func (l Loop) NoiseSensitivity() (Path, error) {
	p, err := l.path("tf.Loop.NoiseSensitivity", Noise, Effort)
	p.forward = p.forward.Scale(-1)
	return p, err
}

// From returns the signal where the path begins.
func (p Path) From() Point { return p.from }

// To returns the signal where the path ends.
func (p Path) To() Point { return p.to }

// Period returns the sampling period in seconds, 0 in continuous time.
func (p Path) Period() float64 { return p.period }

// At returns the value at s (of a loop in z: at z), dead time exact. It is cmplx.Inf at a
// pole, and NaN for the zero Path and where s is not finite. Where dead time lies in the loop, the
// error is about 1e-15 of the larger of 1 and |L| against |1 + L|.
func (p Path) At(s complex128) complex128 {
	if !p.made || cmplx.IsNaN(s) || cmplx.IsInf(s) {
		return cmplx.NaN()
	}
	if p.around.zero() {
		y := ratio(p.forward, p.whole, s)
		if y == 0 {
			return 0
		}
		return finiteOrInf(y * p.delay.factor(s))
	}
	// forward/(outer·fixed) / (1 + L), or forward/(outer·scaled) / (1/L + 1) where L is large.
	loop := ratio(p.scaled, p.fixed, s) * p.around.factor(s)
	if cmplx.Abs(loop) <= 1 {
		y := ratio(p.forward, p.outer.Mul(p.fixed), s)
		if y == 0 {
			return 0
		}
		return finiteOrInf(y * p.delay.factor(s) / (1 + loop))
	}
	y := ratio(p.forward, p.outer.Mul(p.scaled), s)
	if y == 0 {
		return 0
	}
	inverse := ratio(p.fixed, p.scaled, s) * p.around.ahead(s)
	return finiteOrInf(y * differenceFactor(p.delay, p.around, s) / (1 + inverse))
}

// ahead returns exp(s·d).
func (d deadTime) ahead(s complex128) complex128 { return d.factor(-s) }

// differenceFactor returns exp(-s·(a - b)), without an overflow on the way.
func differenceFactor(a, b deadTime, s complex128) complex128 {
	if a.equal(b) {
		return 1
	}
	d := a.rat()
	d = ratOf(0).Sub(d, b.rat())
	if d.Sign() > 0 {
		return deadTimeOf(d).factor(s)
	}
	return deadTimeOf(d.Neg(d)).ahead(s)
}

// Function returns the path as a function, nothing cancelled. The error is an
// [*IrrationalError] if the loop has dead time in s; dead time on the way from one signal to
// the other, outside the loop, is no obstacle.
func (p Path) Function() (Function, error) { return p.function("tf.Path.Function") }

func (p Path) function(call string) (Function, error) {
	if !p.made {
		return invalid(badArgument(call, "p", "the zero Path leads nowhere"))
	}
	if !p.around.zero() {
		return invalid(&IrrationalError{Call: call, DeadTime: p.around.near})
	}
	if p.whole.Degree() < 0 {
		return invalid(badArgument(call, "loop", "has the value -1 everywhere: no signal satisfies it"))
	}
	return Function{numerator: p.forward, denominator: p.whole, delay: p.delay, period: p.period, made: true}, nil
}

// Parts returns what the path is made of: its value is
//
//	forward·exp(-s·delay) / (outer·(fixed + scaled·exp(-s·around)))
//
// with nothing cancelled. Delays are in seconds and 0 for a loop in z; outer is the
// denominator of the prefilter where the path begins at the reference, otherwise 1.
func (p Path) Parts() (forward poly.Poly, delay float64, outer, fixed, scaled poly.Poly, around float64) {
	if !p.made {
		bad := poly.New(math.NaN())
		return bad, math.NaN(), bad, bad, bad, math.NaN()
	}
	return p.forward, p.delay.near, p.outer, p.fixed, p.scaled, p.around.near
}
