package tf

import (
	"math"
	"math/cmplx"
	"slices"
)

// A FrequencyPoint is one point of a picture of a frequency response.
type FrequencyPoint struct {
	Frequency float64    // rad/s
	Value     complex128 // g
	Phase     float64    // rad, continuous, see [FrequencyResponse.Phase]
}

// A FrequencyCurve is a piece of a frequency response between poles and zeros on the boundary
// of stability, as points that a line may join: ascending in frequency, all finite. Its parts
// [FrequencyCurve.Magnitude], Phases and Polar have the methods Len and XY of what gonum/plot calls
// an XYer.
type FrequencyCurve struct{ Points []FrequencyPoint }

// An XYList is a list of points in a plane.
type XYList struct{ x, y []float64 }

// Len returns the number of points.
func (l XYList) Len() int { return len(l.x) }

// XY returns point i, both coordinates finite. It panics if i is no point.
func (l XYList) XY(i int) (x, y float64) { return l.x[i], l.y[i] }

func (c FrequencyCurve) list(xy func(p FrequencyPoint) (x, y float64)) XYList {
	l := XYList{make([]float64, len(c.Points)), make([]float64, len(c.Points))}
	for i, p := range c.Points {
		l.x[i], l.y[i] = xy(p)
	}
	return l
}

// Magnitude returns frequency and |g|, for two logarithmic axes.
func (c FrequencyCurve) Magnitude() XYList {
	return c.list(func(p FrequencyPoint) (x, y float64) { return p.Frequency, cmplx.Abs(p.Value) })
}

// Decibels returns frequency and 20·log10|g|, for a logarithmic frequency axis.
func (c FrequencyCurve) Decibels() XYList {
	return c.list(func(p FrequencyPoint) (x, y float64) { return p.Frequency, 20 * math.Log10(cmplx.Abs(p.Value)) })
}

// Phases returns frequency and phase, rad, for a logarithmic frequency axis.
func (c FrequencyCurve) Phases() XYList {
	return c.list(func(p FrequencyPoint) (x, y float64) { return p.Frequency, p.Phase })
}

// Polar returns real and imaginary part of g.
func (c FrequencyCurve) Polar() XYList {
	return c.list(func(p FrequencyPoint) (x, y float64) { return real(p.Value), imag(p.Value) })
}

const (
	// pictureTolerance is the largest distance of the curve from the line that joins its points, as
	// a fraction of the picture's height.
	pictureTolerance = 5e-4
	// mostPoints bounds a curve.
	mostPoints = 50000
	// axisGap is how near, relatively, a curve comes to a pole or a zero on the boundary.
	axisGap = 1e-6
)

// Window returns the frequencies between which everything happens that a picture should show: a
// decade beyond the smallest and the largest zero, pole and gain crossover, at most to half the
// sampling frequency. Without any it is one decade about 1 rad/s, or about the dead time's inverse.
func (r *FrequencyResponse) Window() (lo, hi float64) {
	if r.a == nil {
		return math.NaN(), math.NaN()
	}
	lo, hi = math.Inf(1), 0
	mark := func(w float64) {
		if w > 0 && !math.IsInf(w, 1) {
			lo, hi = min(lo, w), max(hi, w)
		}
	}
	for _, w := range r.features() {
		mark(w)
	}
	own := *r.a // with working memory of its own: goroutines may share r
	own.memory = slab{}
	if list, err := own.gainCrossovers(); err == nil {
		for _, c := range list {
			mark(c.Frequency)
		}
	}
	if d := r.a.deadTime; d > 0 {
		mark(1 / d)
	}
	last := r.a.lastFrequency()
	if hi == 0 {
		lo = 1
		if r.a.period != 0 {
			lo = last / 10
		}
		hi = lo
	}
	return lo / 10, min(hi*10, last)
}

// features returns the natural frequencies of zeros and poles, rad/s.
func (r *FrequencyResponse) features() (list []float64) {
	for _, roots := range [...][]axisPlace{r.zeros, r.poles} {
		for _, s := range roots {
			list = append(list, r.a.frequencyAt(math.Hypot(s.re, s.im)*r.a.unit))
		}
	}
	slices.Sort(list)
	return slices.Compact(list)
}

// breaks returns where a curve from lo to hi must be split (gaps: roots on the boundary) and where
// it must have a point (marks: beside each root, at distances that suit its damping).
func (r *FrequencyResponse) breaks(lo, hi float64) (gaps, marks []float64) {
	for _, roots := range [...][]axisPlace{r.zeros, r.poles} {
		for _, s := range roots {
			if s.im < 0 {
				continue
			}
			size := math.Hypot(s.re, s.im)
			if s.re == 0 {
				gaps = append(gaps, r.a.frequencyAt(size*r.a.unit))
				continue
			}
			for _, v := range [...]float64{size, s.im, s.im - math.Abs(s.re), s.im + math.Abs(s.re)} {
				if v > 0 {
					marks = append(marks, r.a.frequencyAt(v*r.a.unit))
				}
			}
		}
	}
	inside := func(list []float64) []float64 {
		slices.Sort(list)
		list = slices.Compact(list)
		return slices.DeleteFunc(list, func(w float64) bool { return !(w > lo && w < hi) })
	}
	return inside(gaps), inside(marks)
}

// Curve returns the response from lo to hi, rad/s, for pictures of magnitude and phase over the
// frequency: points stand where the shape needs them, so that a line through them is within
// 1/2000 of the height of the picture of the curve, however sharp a resonance is. A pole or
// a zero on the boundary parts it. lo or hi 0 takes that end from [FrequencyResponse.Window]. The
// error is a [*poly.ArgumentError] if the range is empty, negative or, in z, goes beyond half the
// sampling frequency.
func (r *FrequencyResponse) Curve(lo, hi float64) ([]FrequencyCurve, error) {
	lo, hi, err := r.pictureRange("tf.FrequencyResponse.Curve", lo, hi)
	if err != nil {
		return nil, err
	}
	// The heights of the pictures, from the places where something happens.
	minLog, maxLog, minPhase, maxPhase := math.Inf(1), math.Inf(-1), math.Inf(1), math.Inf(-1)
	gaps, marks := r.breaks(lo, hi)
	for _, w := range append(append([]float64{lo, hi}, marks...), gaps...) {
		for _, side := range [...]float64{1 - 0.01, 1, 1 + 0.01} {
			p, ok := r.point(w * side)
			if !ok {
				continue
			}
			l := math.Log(cmplx.Abs(p.Value))
			minLog, maxLog = min(minLog, l), max(maxLog, l)
			minPhase, maxPhase = min(minPhase, p.Phase), max(maxPhase, p.Phase)
		}
	}
	heightLog, heightPhase := max(maxLog-minLog, 1), max(maxPhase-minPhase, 1)
	apart := func(a, m, b FrequencyPoint, t float64) bool {
		miss := func(x, y, z, height float64) bool {
			return math.Abs(x+(z-x)*t-y) > pictureTolerance*height
		}
		size := func(p FrequencyPoint) float64 { return math.Log(cmplx.Abs(p.Value)) }
		return miss(size(a), size(m), size(b), heightLog) || miss(a.Phase, m.Phase, b.Phase, heightPhase)
	}
	return r.trace(lo, hi, gaps, marks, apart), nil
}

// PolarCurve returns the response from lo to hi, rad/s, for a picture of g in the complex plane
// that shows |g| up to radius: a line through the points is within 1/2000 of the picture's
// height of the curve. Parts beyond the radius are left out, which splits the curve. lo or hi 0
// takes that end from [FrequencyResponse.Window], radius 0 is 2, so that the critical point -1 is
// seen. Errors are those of [FrequencyResponse.Curve].
func (r *FrequencyResponse) PolarCurve(lo, hi, radius float64) ([]FrequencyCurve, error) {
	const call = "tf.FrequencyResponse.PolarCurve"
	lo, hi, err := r.pictureRange(call, lo, hi)
	if err != nil {
		return nil, err
	}
	if radius == 0 {
		radius = 2
	}
	if !(radius > 0) || math.IsInf(radius, 1) {
		return nil, badArgument(call, "radius", "%v is not a positive finite number", radius)
	}
	gaps, marks := r.breaks(lo, hi)
	apart := func(a, m, b FrequencyPoint, t float64) bool {
		if cmplx.Abs(a.Value) > radius && cmplx.Abs(m.Value) > radius && cmplx.Abs(b.Value) > radius {
			return cmplx.Abs(b.Value-a.Value) > 0.5*cmplx.Abs(m.Value) // not shown, but must not be jumped over
		}
		return distanceToChord(m.Value, a.Value, b.Value) > pictureTolerance*2*radius || cmplx.Abs(b.Value-a.Value) > radius/4
	}
	var out []FrequencyCurve
	for _, c := range r.trace(lo, hi, gaps, marks, apart) {
		var part []FrequencyPoint
		flush := func() {
			if len(part) > 1 {
				out = append(out, FrequencyCurve{part})
			}
			part = nil
		}
		for _, p := range c.Points {
			if cmplx.Abs(p.Value) > radius {
				flush()
				continue
			}
			part = append(part, p)
		}
		flush()
	}
	return out, nil
}

// distanceToChord returns the distance of m from the segment from a to b.
func distanceToChord(m, a, b complex128) float64 {
	d := b - a
	l := real(d)*real(d) + imag(d)*imag(d)
	if l == 0 {
		return cmplx.Abs(m - a)
	}
	t := (real(m-a)*real(d) + imag(m-a)*imag(d)) / l
	return cmplx.Abs(m - a - complex(min(max(t, 0), 1), 0)*d)
}

func (r *FrequencyResponse) pictureRange(call string, lo, hi float64) (float64, float64, error) {
	if r.a == nil {
		return 0, 0, badArgument(call, "r", "is the zero value; Function.FrequencyResponse makes one")
	}
	first, last := r.Window()
	if lo == 0 {
		lo = first
	}
	if hi == 0 {
		hi = max(last, lo)
	}
	switch {
	case !(lo > 0) || math.IsInf(lo, 1):
		return 0, 0, badArgument(call, "lo", "%v is not a positive finite frequency", lo)
	case !(hi > lo) || math.IsInf(hi, 1):
		return 0, 0, badArgument(call, "hi", "%v is not a finite frequency above %v", hi, lo)
	case !r.inRange(hi):
		return 0, 0, badArgument(call, "hi", "%v is above half the sampling frequency %v", hi, r.a.lastFrequency())
	}
	return lo, hi, nil
}

// point returns the point at w; it is not ok at a pole or a zero.
func (r *FrequencyResponse) point(w float64) (FrequencyPoint, bool) {
	y := r.At(w)
	phase := r.Phase(w)
	ok := y != 0 && !cmplx.IsInf(y) && !cmplx.IsNaN(y) && !math.IsNaN(phase)
	return FrequencyPoint{w, y, phase}, ok
}

// trace places points from lo to hi. A piece is halved, in the logarithm of the frequency, until
// at a quarter, the middle and three quarters of it the curve is not apart from the line.
func (r *FrequencyResponse) trace(lo, hi float64, gaps, marks []float64, apart func(a, m, b FrequencyPoint, t float64) bool) []FrequencyCurve {
	var out []FrequencyCurve
	total := 0
	var refine func(points []FrequencyPoint, a, b FrequencyPoint, depth int) []FrequencyPoint
	refine = func(points []FrequencyPoint, a, b FrequencyPoint, depth int) []FrequencyPoint {
		if depth > 0 && total < mostPoints {
			ratio := math.Log(b.Frequency / a.Frequency)
			split := false
			for _, t := range [...]float64{0.5, 0.25, 0.75} {
				m, ok := r.point(a.Frequency * math.Exp(t*ratio))
				if ok && m.Frequency > a.Frequency && m.Frequency < b.Frequency && apart(a, m, b, t) {
					split = true
					break
				}
			}
			if split {
				if m, ok := r.point(a.Frequency * math.Exp(0.5*ratio)); ok && m.Frequency > a.Frequency && m.Frequency < b.Frequency {
					points = refine(points, a, m, depth-1)
					return refine(points, m, b, depth-1)
				}
			}
		}
		total++
		return append(points, b)
	}
	ends := append(append([]float64{lo}, gaps...), hi)
	for i := 1; i < len(ends); i++ {
		from, to := ends[i-1], ends[i]
		if i > 1 {
			from *= 1 + axisGap
		}
		if i < len(ends)-1 {
			to *= 1 - axisGap
		}
		if !(from < to) {
			continue
		}
		stops := []float64{from}
		for _, w := range marks {
			if w > from && w < to {
				stops = append(stops, w)
			}
		}
		stops = append(stops, to)
		var points []FrequencyPoint
		for _, w := range stops {
			p, ok := r.point(w)
			switch {
			case !ok:
			case len(points) == 0:
				points = append(points, p)
			default:
				points = refine(points, points[len(points)-1], p, 48)
			}
		}
		if len(points) > 1 {
			out = append(out, FrequencyCurve{points})
		}
	}
	return out
}
