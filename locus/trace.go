package locus

import (
	"fmt"
	"math"
	"sort"

	"github.com/polewright/polewright/poly"
)

// A Locus is what [Family.Trace] returns: the branches of a family over an interval of gains,
// and what a picture of them needs.
type Locus struct {
	Branches []Branch

	family       Family
	lo, hi       float64
	poles, zeros Marks
	meetings     []complex128 // break points that branches pass through, Im ≥ 0
	frame        Frame
}

// Trace follows all roots of the family while the gain goes from lo to hi, which may be -Inf
// and +Inf; zero may lie between them. Every root of every gain in [lo, hi] is on exactly one
// branch, but for those that never move: factors common to both polynomials are fixed roots
// and no branches.
//
// Guarantee: that a branch is the same root all along is proven, not guessed from distances.
// Each step covers an interval of gains with one disc about each root that provably holds
// this root and no other all the time.
//
// Break points, and multiple roots at gain zero, are points of the branches that meet there,
// reached exactly. Around a point where m of them meet, the rays on which they come and those on
// which they go alternate, π/m apart; each turns to the next ray, counter-clockwise for Im s ≥ 0 and
// clockwise below: on the real axis the branch that came from the right goes on upwards. A branch that passes through infinity, which happens at
// the gain where the leading coefficient vanishes, ends there and another begins. For lo = -Inf
// and hi = +Inf branches begin and end at the roots of the polynomial that the gain multiplies,
// with a gain of ±Inf there, or lead towards infinity; those are drawn as far as several times the
// size of the figure, while [Branch.At] answers for every finite gain.
//
// Points stand where the shape needs them: every true point of a branch is within 5e-4 of the
// diagonal of [Locus.Frame] of the polyline.
//
// The branches are sorted by the gain at which they begin, and then by their first point: real
// part, imaginary part.
//
// The error is a [*poly.ArgumentError] for a gain that is NaN or an empty interval and for a
// family that is invalid, a [*poly.RangeError] for roots outside the range of float64, an
// [*UnresolvedError] where the proof fails within the arithmetic (twice that of float64, gains
// counted from where it matters: three different roots within some 1e-9 of their size, and five
// within 1e-6, are near its end) or the limit on the number of steps, and the error of the
// context given by [Interrupted].
//
// Sources: the discs are those of K. Weierstrass and W. Börsch-Supan, see certify; for the
// tracking of paths with proof C. Beltrán and A. Leykin, Robust certified numerical homotopy
// tracking, Found. Comput. Math. 13 (2013) 253–295.
func (f Family) Trace(lo, hi float64, opt ...Option) (*Locus, error) {
	const call = "locus.Family.Trace"
	var s settings
	for _, o := range opt {
		o(&s)
	}
	switch {
	case math.IsNaN(lo) || math.IsInf(lo, 1):
		return nil, &poly.ArgumentError{Call: call, Argument: "lo", Reason: fmt.Sprintf("is %v; a gain below +Inf is needed", lo)}
	case math.IsNaN(hi) || math.IsInf(hi, -1):
		return nil, &poly.ArgumentError{Call: call, Argument: "hi", Reason: fmt.Sprintf("is %v; a gain above -Inf is needed", hi)}
	case lo > hi:
		return nil, &poly.ArgumentError{Call: call, Argument: "hi", Reason: fmt.Sprintf("is %v and must not be below lo, %v", hi, lo)}
	}
	for _, p := range []poly.Poly{f.fixed, f.scaled} {
		if err := p.Err(); err != nil {
			return nil, err
		}
	}
	if err := f.valid(call); err != nil {
		return nil, err
	}
	l := &Locus{family: f, lo: lo, hi: hi}
	poles, err := rootsOf(f.fixed)
	if err != nil {
		return nil, err
	}
	zeros, err := rootsOf(f.scaled)
	if err != nil {
		return nil, err
	}
	l.poles, l.zeros = marksOf(poles), marksOf(zeros)
	moving := f
	if !coprime(f, poles) {
		r := f.reduced()
		moving = Family{fixed: poly.FromIntegers(r.a.Integers()), scaled: poly.FromIntegers(r.b.Integers()), period: f.period}
		if poles, err = rootsOf(moving.fixed); err != nil {
			return nil, err
		}
		if zeros, err = rootsOf(moving.scaled); err != nil {
			return nil, err
		}
	}
	if moving.fixed.Degree() >= 1 || moving.scaled.Degree() >= 1 {
		t := newTracker(moving, poles, zeros, &s.trace)
		if err := t.trace(lo, hi); err != nil {
			return nil, err
		}
		t.draw(l)
	} else {
		l.makeFrame()
	}
	return l, nil
}

// rootsOf returns the roots of p, none if it is constant or zero.
func rootsOf(p poly.Poly) ([]poly.Root, error) {
	if p.Degree() < 1 {
		return nil, nil
	}
	return p.Roots()
}

// trace fills in chains and branches.
func (t *tracker) trace(lo, hi float64) error {
	p := t.plane
	first, last := p.toK(lo), p.toK(hi)
	t.from, t.end = first, last
	if math.Max(-first, last) > farGain {
		limit, err := t.findEnds()
		if err != nil {
			return err
		}
		t.from, t.end = max(first, -limit), min(last, limit)
		if t.end < t.from { // the whole interval is beyond
			if first > 0 {
				t.from, t.end = first, first
			} else {
				t.from, t.end = last, last
			}
		}
	}
	t.last = t.end
	if err := t.foresee(); err != nil {
		return err
	}
	if err := t.begin(); err != nil {
		return err
	}
	if first < t.from {
		tips, ok := t.tips()
		if !ok {
			return t.fail("the ends of the branches at infinite gain cannot be told apart")
		}
		for i := range t.rows {
			c := &t.chains[t.rows[i].chain]
			c.head, c.from = tips[i], first
		}
	}
	if err := t.walk(); err != nil {
		return err
	}
	if last > t.end {
		tips, ok := t.tips()
		if !ok {
			return t.fail("the ends of the branches at infinite gain cannot be told apart")
		}
		for i := range t.rows {
			c := &t.chains[t.rows[i].chain]
			c.tail, c.upto = tips[i], last
		}
	}
	return nil
}

// foresee enters the vertices that are no break points: multiple roots at gain zero, and roots
// that pass through infinity.
func (t *tracker) foresee() error {
	p := t.plane
	if p.dropAt > t.from && p.dropAt <= t.end {
		c := p.dropCell()
		if c == nil {
			return t.fail("the roots near infinity cannot be told from the others")
		}
		t.addVertex(c)
	}
	if t.from < 0 && t.end >= 0 {
		for _, pole := range t.poles {
			x := p.toX(pole.Value)
			if pole.Multiplicity == 1 || imag(x) < 0 {
				continue
			}
			if pole.Distinct > 1 {
				return t.fail("different roots at gain 0 are closer than float64 can part")
			}
			c := p.multipleCell(x, 0, pole.Multiplicity, math.Ldexp(pole.Radius, -p.stretch))
			if c == nil {
				return t.fail("a multiple root at gain 0 cannot be told from its neighbours")
			}
			t.addVertex(c)
		}
	}
	return nil
}

// draw places the points of all branches and finds the frame.
func (t *tracker) draw(l *Locus) {
	t.plane = t.home
	for i := range t.chains {
		if v := t.chains[i].head.cell; v != nil && !v.atInfinity && !v.reciprocal {
			l.meetings = append(l.meetings, t.plane.fromX(v.centre))
		}
	}
	size := t.size()
	look := view{tolerance: t.accuracy * size, longest: 0.06 * size, far: 8 * size}
	// Seldom the frame turns out much smaller or larger than poles and zeros let expect.
	for range 4 {
		t.place(l, look)
		l.makeFrame()
		diagonal := math.Ldexp(l.frame.Diagonal(), -t.plane.stretch)
		reach := math.Ldexp(l.frame.reach(), -t.plane.stretch)
		fine := max(min(size, diagonal), diagonal/30)
		next := view{tolerance: t.accuracy * fine, longest: 0.06 * max(fine, 0.5*diagonal), far: max(8*fine, 1.5*reach)}
		if look.tolerance <= 1.5*next.tolerance && look.longest <= 2*next.longest && look.longest >= 0.1*next.longest && look.far >= 0.8*next.far && look.far <= 30*next.far {
			break
		}
		look = next
	}
}

// A view tells how finely points are placed, in the plane.
type view struct {
	tolerance float64 // the farthest that the curve may be from the polyline
	longest   float64 // the longest piece of line in view
	far       float64 // what is farther from the origin is out of view
}

// place places the points of all branches.
func (t *tracker) place(l *Locus, look view) {
	points := make([][]point, len(t.chains))
	s := shaper{tracker: t, view: look}
	for i := range t.chains {
		points[i] = s.points(&t.chains[i])
	}
	l.Branches = make([]Branch, len(t.branches))
	for i, b := range t.branches {
		l.Branches[i] = t.branch(b, points)
	}
	sort.SliceStable(l.Branches, func(i, j int) bool { return l.Branches[i].before(&l.Branches[j]) })
}

// size returns the extent of poles and zeros in the plane, or if there is only one place of
// them, its distance from the origin.
func (t *tracker) size() float64 {
	b := newBox()
	for _, roots := range [][]poly.Root{t.poles, t.zeros} {
		for _, r := range roots {
			b.put(t.plane.toX(r.Value))
		}
	}
	for _, d := range []float64{b.Diagonal(), b.reach()} {
		if d > 0 && !math.IsInf(d, 0) {
			return d
		}
	}
	return 1
}
