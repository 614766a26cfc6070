package timeresp

import (
	"fmt"
	"math"

	"github.com/polewright/polewright/internal/hybrid"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// A Record holds every signal of a loop that [Run] has followed, from t = 0 to
// [Record.Until]. It never changes; goroutines may share one. The zero value knows nothing:
// every signal is NaN.
type Record struct {
	loop   tf.Loop
	until  float64
	inputs runInputs
	source recordSource
}

// recordSource is a way of knowing the signals.
type recordSource interface {
	reader() signalReader
	switches() []LimitChange
	segments() int
}

// signalReader reads signals; it may keep what it read last and is not shared.
type signalReader interface {
	at(signal hybrid.Signal, t float64) float64
	// span returns where segment i begins and ends.
	span(i int) (from, to float64)
	// crossings appends where in segment i the signal passes the level, turns where it turns.
	crossings(signal hybrid.Signal, i int, level float64, found []float64) []float64
	turns(signal hybrid.Signal, i int, found []float64) []float64
}

// A LimitChange is an instant at which the actuator reaches or leaves its limit.
type LimitChange struct {
	Time     float64 // s
	From, To int     // 0 within the limits, ±1 at the amplitude limit, ±2 at the limit of the rate, by the sign of the effort or its slope
}

// Until returns the time up to which the record goes, in seconds.
func (r *Record) Until() float64 { return r.until }

// LimitChanges returns when the actuator reaches and leaves its limit, ascending. Of a
// loop with a characteristic none are told.
func (r *Record) LimitChanges() []LimitChange {
	if r.source == nil {
		return nil
	}
	return r.source.switches()
}

// signalOf gives the signal of the machinery for a point of the loop.
func signalOf(p tf.Point) (hybrid.Signal, bool) {
	switch p {
	case tf.Reference:
		return hybrid.Reference, true
	case tf.LoadDisturbance:
		return hybrid.Load, true
	case tf.OutputDisturbance:
		return hybrid.Disturbance, true
	case tf.Noise:
		return hybrid.Noise, true
	case tf.Output:
		return hybrid.Output, true
	case tf.Error:
		return hybrid.Error, true
	case tf.Effort:
		return hybrid.Effort, true
	}
	return 0, false
}

// At returns a signal at time t, in seconds: at a jump the value just after it, NaN outside
// [0, Until] and for a point that does not exist. The effort is what the actuator gives,
// within its limits. To read much, use [Record.Reader].
func (r *Record) At(p tf.Point, t float64) float64 { return r.Reader().At(p, t) }

// Demand returns what the controller asks of the actuator at time t, in seconds: the
// effort without the limit.
func (r *Record) Demand(t float64) float64 { return r.Reader().Demand(t) }

// A Reader reads a record; reading in order of time is cheap. It is not safe for concurrent
// use: each goroutine takes its own.
type Reader struct {
	until float64
	from  signalReader
}

// Reader returns a new reader of the record.
func (r *Record) Reader() *Reader {
	if r.source == nil {
		return &Reader{}
	}
	return &Reader{r.until, r.source.reader()}
}

// At is [Record.At].
func (d *Reader) At(p tf.Point, t float64) float64 {
	signal, ok := signalOf(p)
	if !ok {
		return math.NaN()
	}
	return d.at(signal, t)
}

// Demand is [Record.Demand].
func (d *Reader) Demand(t float64) float64 { return d.at(hybrid.Demand, t) }

func (d *Reader) at(signal hybrid.Signal, t float64) float64 {
	if d.from == nil || !(t >= 0 && t <= d.until) {
		return math.NaN()
	}
	return d.from.at(signal, t)
}

// Sample writes a signal at the given times, in seconds, into values and returns it; values
// is made longer if need be.
func (r *Record) Sample(p tf.Point, times, values []float64) []float64 {
	values = append(values[:0], times...)
	d := r.Reader()
	for i, t := range times {
		values[i] = d.At(p, t)
	}
	return values
}

// Resample returns a signal at 0, period, 2·period, … up to the end of the record. The
// period is in seconds; at most ten million values are made.
func (r *Record) Resample(p tf.Point, period float64) (Series, error) {
	const call = "timeresp.Record.Resample"
	if _, ok := signalOf(p); !ok {
		return Series{}, &poly.ArgumentError{Call: call, Argument: "p", Reason: "is no point of a loop"}
	}
	if !(period > 0) || math.IsInf(period, 0) {
		return Series{}, &poly.ArgumentError{Call: call, Argument: "period", Reason: fmt.Sprintf("%g; want a finite number above 0", period)}
	}
	count := math.Floor(r.until/period*(1+1e-12)) + 1
	if count > 1e7 {
		return Series{}, &poly.ArgumentError{Call: call, Argument: "period", Reason: fmt.Sprintf("%g; that makes %.3g values", period, count)}
	}
	s := Series{Times: make([]float64, int(count))}
	for i := range s.Times {
		s.Times[i] = math.Min(float64(i)*period, r.until)
	}
	s.Values = r.Sample(p, s.Times, nil)
	return s, nil
}

// Compare holds a log, such as one of the hardware, against a signal of the record, at the
// times of the log within the record. The error says where a log is not usable.
func (r *Record) Compare(p tf.Point, log Series) (Difference, error) {
	if err := log.check("timeresp.Record.Compare", "log"); err != nil {
		return Difference{}, err
	}
	inside := Series{}
	for i, t := range log.Times {
		if t >= 0 && t <= r.until {
			inside.Times, inside.Values = append(inside.Times, t), append(inside.Values, log.Values[i])
		}
	}
	if len(inside.Times) == 0 {
		return Difference{}, &poly.ArgumentError{Call: "timeresp.Record.Compare", Argument: "log", Reason: "no time lies within the record"}
	}
	return Series{Times: inside.Times, Values: r.Sample(p, inside.Times, nil)}.Compare(inside)
}

// Figures returns the figures of merit of the output over the time recorded, found by
// root-finding on its series. Final is the value at which the linear loop would rest, the
// inputs staying as they are at the end; what happens after the record is not seen. With no
// such value the error is a [*NoFinalValueError] and every figure NaN. A settling time that lies beyond the
// record is NaN.
func (r *Record) Figures(band float64) (Figures, error) {
	const call = "timeresp.Record.Figures"
	if !(band > 0 && band < 1) {
		return noFigures(), &poly.ArgumentError{Call: call, Argument: "band", Reason: fmt.Sprintf("%g; want a fraction between 0 and 1", band)}
	}
	final, ok := r.final()
	if !ok || r.source == nil {
		return noFigures(), &NoFinalValueError{Call: call}
	}
	return recordFigures(r.source, final, band), nil
}

// final returns the value at which the linear loop rests with the inputs of the end.
func (r *Record) final() (float64, bool) {
	m, err := r.loop.Margins()
	if err != nil || m.Stable != poly.Holds {
		return 0, false
	}
	rest := complex(0, 0)
	if r.loop.SamplingPeriod() > 0 {
		rest = 1
	}
	var sum float64
	for i, in := range r.inputs {
		level, constant := in.level()
		if !constant {
			return 0, false
		}
		if level == 0 {
			continue
		}
		path, err := r.loop.Path(tf.Point(i), tf.Output)
		if err != nil {
			return 0, false
		}
		sum += level * real(path.At(rest))
	}
	return sum, !math.IsNaN(sum - sum)
}

// level returns the value at which the input stays in the end, if it does.
func (in Input) level() (value float64, constant bool) {
	for _, t := range in.terms {
		if !math.IsInf(t.to, 1) {
			continue
		}
		if t.amplitude != 0 {
			return 0, false
		}
		for k, c := range t.polynomial {
			if k > 0 && c != 0 {
				return 0, false
			}
			if k == 0 {
				value += c
			}
		}
	}
	return value, true
}
