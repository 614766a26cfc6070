package timeresp

import (
	"context"
	"errors"
	"math"

	"github.com/polewright/polewright/internal/hybrid"
	"github.com/polewright/polewright/tf"
)

// runCharacteristic follows a loop with static blocks.
func runCharacteristic(ctx context.Context, call string, loop hybrid.Loop, inputs runInputs, s *runSettings, until float64) (recordSource, error) {
	result, err := hybrid.Integrate(ctx, loop, inputs.sources(), hybrid.Characteristics{Actuator: s.actuator, Sensor: s.sensor}, until, s.progress)
	if errors.Is(err, hybrid.ErrCharacteristic) {
		return nil, &tf.UnsupportedError{Call: call, What: "a characteristic together with dead time, a limited rate, a controller in z, or direct parts all round the loop"}
	}
	if err != nil {
		return nil, err
	}
	return integratedSource{result}, nil
}

// integratedSource tells the signals of a loop that was integrated numerically.
type integratedSource struct{ result *hybrid.Integrated }

func (s integratedSource) reader() signalReader { return integratedReader(s) }

func (s integratedSource) segments() int { return s.result.Segments() }

func (s integratedSource) switches() []LimitChange { return nil }

type integratedReader struct{ result *hybrid.Integrated }

func (d integratedReader) at(signal hybrid.Signal, t float64) float64 { return d.result.At(signal, t) }

func (d integratedReader) span(i int) (from, to float64) { return d.result.Span(i) }

// places is into how many parts a step of the integration is cut to look for sign changes.
const places = 16

func (d integratedReader) crossings(signal hybrid.Signal, i int, level float64, found []float64) []float64 {
	from, to := d.span(i)
	// The value at the very end belongs to the next step, which may begin with a jump.
	to = math.Nextafter(to, from)
	value := func(t float64) float64 { return d.at(signal, t) - level }
	a, fa := from, value(from)
	for k := 1; k <= places; k++ {
		b := from + (to-from)*float64(k)/places
		fb := value(b)
		if fa*fb < 0 {
			found = append(found, bisect(value, a, b, fa))
		}
		a, fa = b, fb
	}
	return found
}

func (d integratedReader) turns(signal hybrid.Signal, i int, found []float64) []float64 {
	from, to := d.span(i)
	to = math.Nextafter(to, from)
	var t, y [places + 1]float64
	for k := range t {
		t[k] = from + (to-from)*float64(k)/places
		y[k] = d.at(signal, t[k])
	}
	for k := 1; k < places; k++ {
		if up, down := y[k] >= y[k-1] && y[k] > y[k+1], y[k] <= y[k-1] && y[k] < y[k+1]; up || down {
			sign := 1.0
			if down {
				sign = -1
			}
			found = append(found, highest(func(t float64) float64 { return sign * d.at(signal, t) }, t[k-1], t[k+1]))
		}
	}
	return found
}

// bisect narrows a sign change of f in [a, b], fa = f(a).
func bisect(f func(float64) float64, a, b, fa float64) float64 {
	for range 200 {
		m := a + (b-a)/2
		if m == a || m == b {
			break
		}
		if v := f(m); v == 0 {
			return m
		} else if (v > 0) == (fa > 0) {
			a = m
		} else {
			b = m
		}
	}
	return b
}

// highest returns where f, with one maximum in [a, b], is highest: golden section.
func highest(f func(float64) float64, a, b float64) float64 {
	const golden = 0.6180339887498949
	c, e := b-golden*(b-a), a+golden*(b-a)
	fc, fe := f(c), f(e)
	for range 60 {
		if fc > fe {
			b, e, fe = e, c, fc
			c = b - golden*(b-a)
			fc = f(c)
		} else {
			a, c, fc = c, e, fe
			e = a + golden*(b-a)
			fe = f(e)
		}
	}
	return a + (b-a)/2
}
