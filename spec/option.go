package spec

import (
	"github.com/polewright/polewright/tf"
)

// An Option adjusts a call of this package; the zero number of options is the tested
// default. Options that a call has no use for are ignored by it.
type Option func(*settings)

type settings struct {
	vary        variation
	fixedPart   tf.Function
	scaledPart  tf.Function
	negative    bool
	band        float64
	preference  preference
	wanted      float64
	available   []float64
	inUse       float64
	hasInUse    bool
	workers     int
	evaluations int
}

func newSettings(opt []Option) *settings {
	s := &settings{evaluations: 20000, band: 0.02}
	for _, o := range opt {
		if o != nil {
			o(s)
		}
	}
	return s
}

// NegativeGains makes [Sheet.Windows] and [Sheet.Design] look at k < 0 instead of k > 0.
func NegativeGains() Option { return func(s *settings) { s.negative = true } }

// VaryController makes the gain k multiply a part of the controller: the controller is
// fixed + k·scaled, and the Controller of the loop is not looked at. A proportional gain with
// the integral gain fixed is VaryController(tf.MustParse("0.4 / s"), tf.MustParse("1")).
// Dead time and period of the two parts must be equal.
func VaryController(fixed, scaled tf.Function) Option {
	return func(s *settings) { s.vary, s.fixedPart, s.scaledPart = controllerPart, fixed, scaled }
}

// VarySensor makes the gain k multiply the sensor instead of the controller.
func VarySensor() Option { return func(s *settings) { s.vary = sensorGain } }

// Evaluations limits how many closed loops the search between two critical gains looks at
// before it stops proving and reports what it may have missed; 0 means the default, 20000.
func Evaluations(most int) Option {
	return func(s *settings) {
		if most > 0 {
			s.evaluations = most
		}
	}
}
