package spec

import (
	"context"
	"fmt"
	"math"
	"strings"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// A Resemblance says whether a closed loop behaves like the standard second-order system
// that its dominant poles describe: the verdict on the second-order map for this loop.
type Resemblance struct {
	// Verdict is Holds if overshoot, rise and settling of the true loop are within a tenth of
	// those predicted (overshoot: or within 0.02), Fails if not, Undecided for an unstable loop.
	Verdict poly.Verdict

	Dominant    [2]complex128 // the two closed-loop poles that the prediction rests on, rad/s
	SecondOrder SecondOrder   // the standard system with these poles
	Weight      float64       // their share of the step response: their residues over all, by magnitude
	ThirdPole   float64       // decay of the next pole over decay of the pair; +Inf if there is none. Above 5 counts as far (common practice)
	NearestZero float64       // distance from the pair to the nearest closed-loop zero over the natural frequency; +Inf if there is none
	DeadTime    float64       // dead time to the output times the natural frequency, rad

	Predicted, Actual Prediction
	Sentence          string // the verdict in plain words
}

// A Prediction holds the figures that are compared. Times in s; NaN where a figure does not
// exist.
type Prediction struct {
	Overshoot, PeakTime, RiseTime, SettlingTime float64 // SettlingTime into a band of 0.02
}

// Resembles measures how much the closed loop behaves like second order. The loop has to be
// rational: a *[tf.UnsupportedError] otherwise.
func Resembles(ctx context.Context, l tf.Loop) (Resemblance, error) {
	e, err := NewEvidence(l)
	if err != nil {
		return Resemblance{}, err
	}
	if err := ctx.Err(); err != nil {
		return Resemblance{}, err
	}
	return e.resembles()
}

func (e *Evidence) resembles() (Resemblance, error) {
	nan := math.NaN()
	r := Resemblance{
		Weight: nan, ThirdPole: inf, NearestZero: inf,
		Predicted: Prediction{nan, nan, nan, nan}, Actual: Prediction{nan, nan, nan, nan},
	}
	stable, err := e.Stable()
	if err != nil {
		return r, err
	}
	if stable != poly.Holds {
		r.Sentence = "The closed loop is not stable; no response to compare."
		return r, nil
	}
	s, err := e.trajectory(toOutput, 1e-6)
	if err != nil {
		return r, err
	}
	f, err := e.Figures(0.02)
	if err != nil {
		return r, err
	}
	if q, why, err := e.hasFinal(); err != nil {
		return r, err
	} else if q == nil || s == nil || len(s.wr) == 0 {
		r.Sentence = "Damping ratio and natural frequency say nothing of this loop: " + why + "."
		if q != nil {
			r.Sentence = "The closed loop has no dynamics."
		}
		r.Verdict = poly.Fails
		return r, nil
	}
	r.Actual = Prediction{f.Overshoot, f.PeakTime, f.RiseTime, f.SettlingTime}

	// The dominant pair: the complex pair or the two real poles with the largest share, where
	// shares weigh by how long they last. A pole that a zero hides does not count.
	total := 0.0
	for _, w := range s.size {
		total += w
	}
	best, second := -1, -1
	importance := func(i int) float64 { return s.size[i] / -s.modes.re[i] }
	for i := range s.size {
		switch {
		case best < 0 || importance(i) > importance(best):
			best, second = i, best
		case second < 0 || importance(i) > importance(second):
			second = i
		}
	}
	slow := s.modes.re[best]
	var reasons []string
	pair := s.modes.im[best] != 0
	switch {
	case pair:
		p := complex(s.modes.re[best], s.modes.im[best])
		r.Dominant = [2]complex128{p, complex(real(p), -imag(p))}
		if r.SecondOrder, err = SecondOrderFromPole(p); err != nil {
			return r, err
		}
		r.Weight = s.size[best] / total
		second = -1
	case second >= 0 && s.modes.im[second] == 0:
		p, q := s.modes.re[best], s.modes.re[second]
		r.Dominant = [2]complex128{complex(p, 0), complex(q, 0)}
		if r.SecondOrder, err = SecondOrderFromRealPoles(p, q); err != nil {
			return r, err
		}
		r.Weight = (s.size[best] + s.size[second]) / total
		slow = math.Max(p, q)
	default:
		// A real pole that stands alone, or leads a pair: first order at heart.
		p := s.modes.re[best]
		r.Dominant = [2]complex128{complex(p, 0), complex(p, 0)}
		r.Weight = s.size[best] / total
		r.SecondOrder = SecondOrder{Damping: 1, NaturalFrequency: -p}
		if second >= 0 {
			reasons = append(reasons, fmt.Sprintf("a real pole at %.4g rad/s leads it, and the damping ratio %.3g of the pair at %s says little",
				p, tf.DampingRatio(complex(s.modes.re[second], s.modes.im[second])), formatPole(complex(s.modes.re[second], s.modes.im[second]))))
		}
		second = -1
	}
	for i := range s.size {
		if i == best || i == second || s.size[i] < 1e-6*total {
			continue
		}
		r.ThirdPole = math.Min(r.ThirdPole, s.modes.re[i]/slow)
	}
	zeros, err := e.m.output().at(1).Roots()
	if err == nil {
		for _, z := range zeros {
			for _, p := range r.Dominant {
				d := z.Value - p
				r.NearestZero = math.Min(r.NearestZero, math.Hypot(real(d), imag(d))/r.SecondOrder.NaturalFrequency)
			}
		}
	}
	r.DeadTime = e.m.forward * r.SecondOrder.NaturalFrequency
	q := r.SecondOrder
	r.Predicted = Prediction{q.Overshoot(), q.PeakTime(), q.RiseTime(), q.SettlingTime(0.02)}

	var off []string
	tenth := func(a, b float64) bool { return math.Abs(a-b) <= 0.1*math.Max(math.Abs(a), math.Abs(b)) }
	if math.Abs(r.Predicted.Overshoot-r.Actual.Overshoot) > math.Max(0.02, 0.1*r.Actual.Overshoot) {
		off = append(off, fmt.Sprintf("overshoot %.3g instead of %.3g", r.Actual.Overshoot, r.Predicted.Overshoot))
	}
	if !tenth(r.Predicted.RiseTime, r.Actual.RiseTime) {
		off = append(off, fmt.Sprintf("rise time %.3g s instead of %.3g s", r.Actual.RiseTime, r.Predicted.RiseTime))
	}
	if !tenth(r.Predicted.SettlingTime, r.Actual.SettlingTime) {
		off = append(off, fmt.Sprintf("settling time %.3g s instead of %.3g s", r.Actual.SettlingTime, r.Predicted.SettlingTime))
	}
	if r.NearestZero < 3 {
		reasons = append(reasons, fmt.Sprintf("a zero stands %.2g natural frequencies from the pair", r.NearestZero))
	}
	if r.ThirdPole < 5 {
		reasons = append(reasons, fmt.Sprintf("another pole decays only %.2g times as fast as the pair", r.ThirdPole))
	}
	if r.DeadTime > 0.1 {
		reasons = append(reasons, fmt.Sprintf("the dead time is %.2g rad of the natural frequency", r.DeadTime))
	}
	if r.Weight < 0.8 {
		reasons = append(reasons, fmt.Sprintf("the pair carries only %.0f %% of the response", 100*r.Weight))
	}
	if len(off) == 0 {
		r.Verdict = poly.Holds
		r.Sentence = fmt.Sprintf("The loop behaves like a second-order system with damping ratio %.3g and natural frequency %.4g rad/s.", q.Damping, q.NaturalFrequency)
		return r, nil
	}
	r.Verdict = poly.Fails
	r.Sentence = "The loop does not behave like second order: " + strings.Join(off, ", ")
	if len(reasons) > 0 {
		r.Sentence += "; " + strings.Join(reasons, ", ")
	}
	r.Sentence += "."
	return r, nil
}
