package locus

import (
	"math"
	"math/cmplx"

	"github.com/polewright/polewright/poly"
)

// A Frame is a rectangle of the plane, rad/s in the s-plane: the part that a picture shows.
type Frame struct{ ReLo, ReHi, ImLo, ImHi float64 }

// Diagonal returns the length of the diagonal.
func (f Frame) Diagonal() float64 { return math.Hypot(f.ReHi-f.ReLo, f.ImHi-f.ImLo) }

// reach returns the distance of the farthest corner from the origin.
func (f Frame) reach() float64 {
	return math.Hypot(max(math.Abs(f.ReLo), math.Abs(f.ReHi)), max(math.Abs(f.ImLo), math.Abs(f.ImHi)))
}

// clip returns the part of the segment from p to q that is in the frame, as shares of it; it is
// false if there is none.
func (f Frame) clip(p, q complex128) (from, to float64, ok bool) {
	from, to = 0, 1
	// inside keeps the shares t with start + t·way ≥ 0.
	inside := func(start, way float64) {
		switch {
		case way > 0:
			from = max(from, -start/way)
		case way < 0:
			to = min(to, -start/way)
		case start < 0:
			to = -1
		}
	}
	d := q - p
	inside(real(p)-f.ReLo, real(d))
	inside(f.ReHi-real(p), -real(d))
	inside(imag(p)-f.ImLo, imag(d))
	inside(f.ImHi-imag(p), -imag(d))
	return from, to, from < to
}

// Contains tells whether s is in the frame, its border included.
func (f Frame) Contains(s complex128) bool {
	return real(s) >= f.ReLo && real(s) <= f.ReHi && imag(s) >= f.ImLo && imag(s) <= f.ImHi
}

// A Mark is a pole or a zero in a picture: to be drawn as a cross or a circle, with its
// multiplicity beside it if that is not 1.
type Mark struct {
	S            complex128
	Multiplicity int
}

// Marks are points in the form that plotting packages take, as [Branch] is.
type Marks []Mark

// Len returns the number of marks.
func (m Marks) Len() int { return len(m) }

// XY returns mark i: its real and imaginary part. It panics if i is not in [0, Len).
func (m Marks) XY(i int) (re, im float64) { return real(m[i].S), imag(m[i].S) }

// A Line is a straight or broken line in the form that plotting packages take.
type Line []complex128

// Len returns the number of points.
func (l Line) Len() int { return len(l) }

// XY returns point i: its real and imaginary part. It panics if i is not in [0, Len).
func (l Line) XY(i int) (re, im float64) { return real(l[i]), imag(l[i]) }

// An Arrow is an arrowhead on a branch that points to where it goes while the gain grows.
type Arrow struct {
	S         complex128
	Direction float64 // rad in (-π, π], counter-clockwise from the positive real axis
	Gain      float64 // there, interpolated
	Branch    int     // index into Locus.Branches
}

// Frame returns a good drawing window: poles, zeros, the break points and axis crossings (in z:
// the unit circle) within the traced gains and the centroid of the asymptotes are in view, with a
// margin, and no side is shorter than half of the other.
func (l *Locus) Frame() Frame { return l.frame }

// Poles returns the roots of the polynomial without the gain, where branches begin at gain 0;
// those that both polynomials have in common, which never move, are among them.
func (l *Locus) Poles() Marks { return l.poles }

// Zeros returns the roots of the polynomial that is multiplied by the gain, where branches end at
// infinite gain; common ones are among them.
func (l *Locus) Zeros() Marks { return l.zeros }

// Asymptotes returns the asymptotes of the traced gains, each as a line from the centroid to the
// border of the frame. There are none where both polynomials have the same degree.
func (l *Locus) Asymptotes() []Line {
	var lines []Line
	draw := func(sign Sign) {
		a := l.family.Asymptotes(sign)
		for _, angle := range a.Angles {
			sin, cos := math.Sincos(angle)
			if math.Abs(sin) < 1e-15 {
				sin = 0
			}
			if math.Abs(cos) < 1e-15 {
				cos = 0
			}
			length := l.frame.beyond(a.Centroid, cos, sin)
			lines = append(lines, Line{complex(a.Centroid, 0), complex(a.Centroid+length*cos, length*sin)})
		}
	}
	if l.hi > 0 {
		draw(Positive)
	}
	if l.lo < 0 {
		draw(Negative)
	}
	return lines
}

// beyond returns how far it is from a real point inside to the border in a direction.
func (f Frame) beyond(re, cos, sin float64) float64 {
	length := math.Inf(1)
	limit := func(distance, speed float64) {
		if speed > 0 {
			length = min(length, distance/speed)
		}
	}
	limit(f.ReHi-re, cos)
	limit(re-f.ReLo, -cos)
	limit(f.ImHi, sin)
	limit(-f.ImLo, -sin)
	return max(length, 0)
}

// Arrows returns arrowheads of growing gain, so many on each branch, at equal distances along
// what is in the frame of it.
func (l *Locus) Arrows(each int) []Arrow {
	var arrows []Arrow
	for i, b := range l.Branches {
		arrows = append(arrows, b.arrows(l.frame, i, each)...)
	}
	return arrows
}

func (b Branch) arrows(frame Frame, index, each int) []Arrow {
	total := 0.0
	for i := 1; i < len(b.points); i++ {
		p, q := b.points[i-1].s, b.points[i].s
		if from, to, ok := frame.clip(p, q); ok {
			total += cmplx.Abs(q-p) * (to - from)
		}
	}
	var arrows []Arrow
	passed := 0.0
	for i := 1; i < len(b.points); i++ {
		p, q := b.points[i-1].s, b.points[i].s
		from, to, ok := frame.clip(p, q)
		if !ok {
			continue
		}
		length := cmplx.Abs(q - p)
		passed += length * (to - from)
		for len(arrows) < each {
			over := passed - total*(float64(len(arrows))+0.5)/float64(each)
			if over < 0 {
				break
			}
			t := to - over/length
			gain := b.points[i-1].gain
			if up := b.points[i].gain; !math.IsInf(up-gain, 0) {
				gain += t * (up - gain)
			}
			arrows = append(arrows, Arrow{S: p + complex(t, 0)*(q-p), Direction: cmplx.Phase(q - p), Gain: gain, Branch: index})
		}
	}
	return arrows
}

// marksOf returns the distinct roots of p with their multiplicities.
func marksOf(roots []poly.Root) Marks {
	m := make(Marks, len(roots))
	for i, r := range roots {
		m[i] = Mark{r.Value, r.Multiplicity}
	}
	return m
}

// A box is the smallest rectangle about what was put into it.
type box struct{ Frame }

func newBox() box {
	inf := math.Inf(1)
	return box{Frame{inf, -inf, inf, -inf}}
}

func (b *box) put(s complex128) {
	if cmplx.IsNaN(s) || cmplx.IsInf(s) {
		return
	}
	b.ReLo, b.ReHi = min(b.ReLo, real(s)), max(b.ReHi, real(s))
	b.ImLo, b.ImHi = min(b.ImLo, imag(s)), max(b.ImHi, imag(s))
}

// centroid returns where the asymptotes meet, if there are any.
func (l *Locus) centroid() (float64, bool) {
	n, m := l.family.fixed.Degree(), l.family.scaled.Degree()
	if n == m || n < 0 || m < 0 {
		return 0, false
	}
	sum := 0.0
	for _, mark := range l.poles {
		sum += real(mark.S) * float64(mark.Multiplicity)
	}
	for _, mark := range l.zeros {
		sum -= real(mark.S) * float64(mark.Multiplicity)
	}
	return sum / float64(n-m), true
}

// makeFrame finds the drawing window of a traced locus.
func (l *Locus) makeFrame() {
	b := newBox()
	for _, marks := range []Marks{l.poles, l.zeros} {
		for _, m := range marks {
			b.put(m.S)
		}
	}
	for _, s := range l.meetings {
		b.put(s)
		b.put(cmplx.Conj(s))
	}
	if l.family.period > 0 {
		for _, s := range []complex128{1, -1, 1i, -1i} {
			b.put(s)
		}
	} else {
		for i := range l.Branches {
			points := l.Branches[i].points
			for j := 1; j < len(points); j++ {
				p, q := points[j-1].s, points[j].s
				if real(p) < 0 && real(q) >= 0 || real(p) > 0 && real(q) <= 0 {
					b.put(p + (q-p)*complex(real(p)/(real(p)-real(q)), 0))
				}
			}
		}
	}
	if centroid, ok := l.centroid(); ok {
		b.put(complex(centroid, 0))
	}
	if !(b.ReLo <= b.ReHi) {
		for i := range l.Branches {
			for _, p := range l.Branches[i].points {
				b.put(p.s)
			}
		}
	}
	if !(b.ReLo <= b.ReHi) {
		b.put(0)
	}
	f := b.Frame
	width, height := f.ReHi-f.ReLo, f.ImHi-f.ImLo
	size := max(width, height)
	if size == 0 {
		if size = math.Abs(f.ReLo); size == 0 {
			size = 1
		}
	}
	grow := func(lo, hi *float64) {
		extra := 0.15 * size
		if have := *hi - *lo; have < 0.5*size {
			extra += (0.5*size - have) / 2
		}
		*lo -= extra
		*hi += extra
	}
	grow(&f.ReLo, &f.ReHi)
	grow(&f.ImLo, &f.ImHi)
	l.frame = f
}
