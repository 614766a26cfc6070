package locus

import (
	"context"
	"math"
	"math/cmplx"
	"sort"

	"github.com/polewright/polewright/poly"
)

// A tracker walks all roots of a family through the gains, upwards. All gains and places are
// in the coordinates of its plane.
type tracker struct {
	family       Family // without common factors
	poles, zeros []poly.Root
	plane, home  *plane // the one in use, and the one with all gains counted from 0
	pencil       *pencil
	pairs        []float64
	ctx          context.Context
	budget       int // steps left
	spent        int
	from         float64 // where the walk starts
	end          float64 // where the walk ends
	last         float64 // the same, counted from 0
	κ            float64 // where it is
	reach        float64 // the proven discs of rows hold up to κ + reach
	rows         []row
	spare        []row
	worst        float64 // see certify
	limiting     int

	accuracy float64 // of the polylines, see LineAccuracy

	chains   []chain
	branches []threads
	vertices []*cell // ahead, ascending gain
	asked    bool    // whether BreakPoints was asked for them
	endCells []*cell // about κ = ±∞; nil if not needed
}

// A chain is the way of one root, or of one conjugate pair, between two vertices.
type chain struct {
	plane         *plane // whose gains it counts in
	real          bool
	owner, mirror int // the branches that run along it and along its mirror image; -1 if none
	from, upto    float64
	head, tail    tip
	knots         []knot
}

// A tip says how a chain begins or ends in a cell.
type tip struct {
	cell   *cell // nil if not in a cell
	sector int
}

// A knot is one step of a chain: the disc about x + jy of the given radius holds this root
// and no other for all gains in [from, upto].
type knot struct {
	κ, from, upto float64
	x, y, radius  float64
	zx, zy        float64 // a better approximation at κ
	vx, vy        float64 // dx/dκ
}

// threads are the chains that make up a branch, in order.
type threads struct{ parts []part }

type part struct {
	chain  int
	mirror bool
}

// newTracker prepares for a family without common factors, of which not both polynomials are
// constant, with the roots of both.
func newTracker(f Family, poles, zeros []poly.Root, s *traceSettings) *tracker {
	t := &tracker{family: f, poles: poles, zeros: zeros, plane: newPlane(f.fixed, f.scaled), ctx: s.ctx, budget: s.steps}
	if t.budget <= 0 {
		t.budget = defaultSteps
	}
	if t.accuracy = s.accuracy; !(t.accuracy >= 1e-7 && t.accuracy <= 0.1) {
		t.accuracy = 2e-4
	}
	t.home = t.plane
	t.pencil = newPencil(t.plane)
	return t
}

// newBranch adds a branch.
func (t *tracker) newBranch() int {
	t.branches = append(t.branches, threads{})
	return len(t.branches) - 1
}

// newChain adds a chain with its owners.
func (t *tracker) newChain(real bool, owner, mirror int, from float64, head tip) int {
	id := len(t.chains)
	t.chains = append(t.chains, chain{plane: t.plane, real: real, owner: owner, mirror: mirror, from: from, upto: from, head: head, knots: make([]knot, 0, 24)})
	if owner >= 0 {
		t.branches[owner].parts = append(t.branches[owner].parts, part{id, false})
	}
	if mirror >= 0 {
		t.branches[mirror].parts = append(t.branches[mirror].parts, part{id, true})
	}
	return id
}

// fail makes the error of a walk that cannot go on.
func (t *tracker) fail(reason string) error {
	s := complex(math.NaN(), math.NaN())
	if t.limiting >= 0 && t.limiting < len(t.rows) {
		s = t.plane.fromX(complex(t.rows[t.limiting].x, t.rows[t.limiting].y))
	}
	return &UnresolvedError{Call: "locus.Family.Trace", Gain: t.plane.fromK(t.κ), S: s, Reason: reason}
}

// spend counts a step.
func (t *tracker) spend() error {
	t.spent++
	if t.spent > t.budget {
		return t.fail("the limit on the number of steps is reached")
	}
	if t.spent%16 == 1 && t.ctx != nil {
		if err := t.ctx.Err(); err != nil {
			return err
		}
	}
	return nil
}

// walk goes from t.κ, where t.rows are proven, to t.end.
func (t *tracker) walk() error {
	stalled := 0
	for t.κ < t.end {
		if err := t.spend(); err != nil {
			return err
		}
		if err := t.scale(); err != nil {
			return err
		}
		t.look()
		limit := t.end
		if v := t.nextVertex(); v != nil && v.gain <= t.end+v.slack {
			crossed, upto, err := t.cross(v)
			if err != nil {
				return err
			}
			if crossed {
				stalled = 0
				continue
			}
			limit = min(limit, upto)
		}
		before := t.κ
		to := min(t.κ+t.reach, limit)
		if to-t.κ > t.reach { // the sum was rounded up
			to = math.Nextafter(to, math.Inf(-1))
		}
		if !t.stepTowards(to) {
			if !t.ask() {
				return t.fail("the branches come closer than the arithmetic can part")
			}
			continue
		}
		// Towards a meeting off the real axis steps shrink without end.
		if t.κ-before < 1e-3*max(math.Abs(t.κ+t.plane.origin), math.Abs(before)) && t.reach < 0.5*(t.κ-before) {
			if stalled++; stalled > 3 {
				t.ask()
			}
		} else {
			stalled = 0
		}
	}
	return nil
}

// scale changes to gains counted from here where steps come near the last digits of the gain,
// and back where they are long again.
func (t *tracker) scale() error {
	if t.plane.origin == 0 {
		if t.reach < 0x1p-20*math.Abs(t.κ) {
			t.ask()
		}
		if t.reach < 0x1p-38*math.Abs(t.κ) {
			return t.recount(t.κ)
		}
		return nil
	}
	if origin := math.Abs(t.plane.origin); t.reach > 0x1p-30*origin {
		// A gain that float64 can hold both ways.
		at := t.plane.origin + (t.κ + 0.5*t.reach)
		to := at - t.plane.origin
		if to > t.κ && to-t.κ <= t.reach && to < t.end {
			if v := t.nextVertex(); v != nil && v.gain <= to+v.width {
				return nil // not before that vertex
			}
			if t.step(to) {
				return t.recount(0)
			}
		}
	}
	return nil
}

// recount continues in a plane with another origin of gains.
func (t *tracker) recount(origin float64) error {
	old := t.plane.origin
	if old != 0 && origin != 0 {
		return nil
	}
	now := t.κ + old // exact
	t.plane = t.home
	if origin != 0 {
		t.plane = t.home.from(origin)
	}
	t.pencil = newPencil(t.plane)
	t.end = t.last - origin
	for i, v := range t.vertices {
		moved := *v
		gain := double{v.gain, v.gainLow}.plusFloat(old).plusFloat(-origin)
		moved.gain, moved.gainLow = gain.h, gain.l
		moved.slack += 4 * doubleRoundoff * math.Abs(old+origin)
		t.vertices[i] = &moved
	}
	t.κ = now - origin
	t.pencil.set(t.κ)
	rows := append(t.spare[:0], t.rows...)
	for i := range rows {
		r := &rows[i]
		if !t.correct(r, r.near) {
			return t.fail("the branches come closer than the arithmetic can part")
		}
	}
	t.spare = rows
	reach := t.certify(rows, nil)
	if reach == 0 {
		return t.fail("the branches come closer than the arithmetic can part")
	}
	for i := range rows {
		r, q := &rows[i], &t.rows[i]
		// Both discs hold one root at this very gain.
		if !(math.Hypot(r.x-q.x, r.y-q.y)+r.settled() < q.radius) {
			return t.fail("the branches come closer than the arithmetic can part")
		}
		c := &t.chains[r.chain]
		r.chain = t.newChain(c.real, c.owner, c.mirror, t.κ, tip{})
	}
	t.sharpen(rows)
	t.commit(t.κ, reach, rows)
	return nil
}

// stepTowards steps to the given gain or, where that cannot be proved, less far.
func (t *tracker) stepTowards(to float64) bool {
	for range 30 {
		if !(to > t.κ) {
			return false
		}
		if t.step(to) {
			return true
		}
		to = t.κ + (to-t.κ)/4
	}
	return false
}

// step goes to a gain within reach.
func (t *tracker) step(to float64) bool {
	t.pencil.set(to)
	next := t.spare[:0]
	for i := range t.rows {
		old := &t.rows[i]
		next = append(next, row{chain: old.chain})
		r := &next[i]
		r.x, r.y = t.predict(old, to)
		if !t.correct(r, old.near) || math.Hypot(r.x-old.x, r.y-old.y) >= old.radius {
			t.spare = next
			return false
		}
	}
	t.spare = next
	reach := t.certify(next, nil)
	if reach == 0 {
		return false
	}
	for i := range next {
		old, r := &t.rows[i], &next[i]
		if !(math.Hypot(r.x-old.x, r.y-old.y)+r.settled() < old.radius) {
			return false
		}
	}
	t.sharpen(next)
	t.extend(to)
	t.commit(to, reach, next)
	return true
}

// sharpen improves the places of proven rows that a correction has not yet made good: its error
// is about its square over the separation, and that of rounding.
func (t *tracker) sharpen(rows []row) {
	for i := range rows {
		r := &rows[i]
		step := math.Abs(r.zx-r.x) + math.Abs(r.zy-r.y)
		noise := r.v.errF / (math.Abs(r.v.dRe) + math.Abs(r.v.dIm))
		if step <= 1e-6*r.near && noise <= 1e-9*r.near {
			continue
		}
		better := row{x: r.zx, y: r.zy}
		for range 3 {
			t.pencil.at(better.x, better.y, &better.v)
			t.plane.precisely(better.x, better.y, t.pencil.κ, &better.v)
			dx, dy, ok := better.v.newton()
			if r.y == 0 {
				dy = 0
			}
			better.x, better.y = better.x+dx, better.y+dy
			if !ok || !(math.Hypot(better.x-r.x, better.y-r.y) < r.radius) {
				break
			}
			r.zx, r.zy = better.x, better.y
			if math.Abs(dx)+math.Abs(dy) <= 1e-9*r.near {
				break
			}
		}
	}
}

// extend lets the last knots hold up to a gain.
func (t *tracker) extend(to float64) {
	for i := range t.rows {
		c := &t.chains[t.rows[i].chain]
		if n := len(c.knots); n > 0 {
			c.knots[n-1].upto = to
		}
	}
}

// commit makes rows those of the walk.
func (t *tracker) commit(κ, reach float64, rows []row) {
	for i := range rows {
		r := &rows[i]
		r.vx, r.vy = r.v.velocity()
		c := &t.chains[r.chain]
		c.upto = κ
		c.knots = append(c.knots, knot{κ: κ, from: κ, upto: κ, x: r.x, y: r.y, radius: r.radius, zx: r.zx, zy: r.zy, vx: r.vx, vy: r.vy})
	}
	t.spare, t.rows = t.rows, rows
	t.κ, t.reach = κ, reach
}

// predict extrapolates a row by Hermite's cubic through its last two knots.
func (t *tracker) predict(r *row, to float64) (x, y float64) {
	d := to - t.κ
	x, y = r.zx+r.vx*d, r.zy+r.vy*d
	c := &t.chains[r.chain]
	if n := len(c.knots); n >= 2 {
		p := &c.knots[n-2]
		h := t.κ - p.κ
		if h > 0 && d <= 4*h {
			x += hermiteRest(r.zx, r.vx, p.zx, p.vx, d, h)
			y += hermiteRest(r.zy, r.vy, p.zy, p.vy, d, h)
		}
	}
	if r.y == 0 {
		return x, 0
	}
	if !(y > 0) {
		return r.zx + r.vx*d, r.zy / 2
	}
	return x, y
}

// hermiteRest is what the cubic through z, v at the newer and p, q at the older of two gains a
// distance h apart adds to z + v·d, a distance d beyond the newer one.
func hermiteRest(z, v, p, q, d, h float64) float64 {
	slope := (z - p) / h
	return d * d * ((v-slope)/h + (v-2*slope+q)/(h*h)*(d+h))
}

// correct improves a row by Newton's method until the rest is small beside the separation.
func (t *tracker) correct(r *row, near float64) bool {
	if math.IsInf(near, 1) { // it is the only one
		near = math.Hypot(r.x, r.y) + minNormal
	}
	precise := false
	for range 10 {
		t.pencil.at(r.x, r.y, &r.v)
		// Where rounding hides the separation, twice the precision shows it.
		if d := math.Abs(r.v.dRe) + math.Abs(r.v.dIm); precise || !(r.v.errF*float64(t.plane.n) <= 1e-3*near*d) || r.v.modulusB > 1.25*(math.Abs(r.v.bRe)+math.Abs(r.v.bIm)) {
			precise = true
			t.plane.precisely(r.x, r.y, t.pencil.κ, &r.v)
		}
		dx, dy, ok := r.v.newton()
		if !ok {
			return false
		}
		r.zx, r.zy = r.x+dx, r.y+dy
		if r.y == 0 {
			r.zy = 0
		}
		size := math.Abs(dx) + math.Abs(dy)
		if size <= 1e-6*near || size <= 4*unitRoundoff*(math.Abs(r.x)+r.y) || size*(math.Abs(r.v.dRe)+math.Abs(r.v.dIm)) <= r.v.errF {
			return r.y == 0 || r.zy > 0
		}
		if size > near {
			return false
		}
		r.x, r.y = r.zx, r.zy
		if r.y < 0 {
			return false
		}
	}
	return false
}

// nextVertex returns the vertex ahead with the smallest gain, nil if none is known.
func (t *tracker) nextVertex() *cell {
	for len(t.vertices) > 0 && !t.vertices[0].ahead(t.κ) {
		t.vertices = t.vertices[1:]
	}
	if len(t.vertices) == 0 {
		return nil
	}
	return t.vertices[0]
}

// addVertex enters a cell into the list, unless it is there.
func (t *tracker) addVertex(c *cell) {
	for _, v := range t.vertices {
		if v.atInfinity == c.atInfinity && math.Abs(v.gain-c.gain) <= 4*(v.slack+c.slack) && cmplx.Abs(v.centre-c.centre) <= 0.1*min(v.radius, c.radius) {
			return
		}
	}
	i := sort.Search(len(t.vertices), func(i int) bool { return c.before(t.vertices[i]) })
	t.vertices = append(t.vertices, nil)
	copy(t.vertices[i+1:], t.vertices[i:])
	t.vertices[i] = c
}

// look searches for break points of order 2 on the real axis where rows that limit the step are
// about to meet others.
func (t *tracker) look() {
	if t.κ+t.reach >= t.end {
		return
	}
	t.pencil.set(t.κ)
	for i := range t.rows {
		r := &t.rows[i]
		if r.step > 3*t.reach {
			continue
		}
		if r.y > 0 {
			if 2*r.y < 3*r.near {
				t.lookAt(r.x, r.y)
			}
			continue
		}
		best, other := math.Inf(1), -1
		for j := range t.rows {
			if j == i {
				continue
			}
			if d := math.Hypot(t.rows[j].x-r.x, t.rows[j].y); d < best {
				best, other = d, j
			}
		}
		if other < 0 {
			continue
		}
		if q := &t.rows[other]; q.y > 0 {
			t.lookAt(q.x, q.y)
		} else if q.step > r.step || other > i {
			t.lookAt((r.x+q.x)/2, math.Abs(r.x-q.x)/2)
		}
	}
}

// lookAt searches within a few times size of a real x.
func (t *tracker) lookAt(x0, size float64) {
	p := t.plane
	for _, v := range t.vertices {
		if !v.atInfinity && imag(v.centre) == 0 && math.Abs(real(v.centre)-x0) <= size {
			return
		}
	}
	// With F at the present gain in place of a nothing changes but that less cancels.
	f, b := t.pencil.f, p.b
	x := x0
	for range 12 {
		var y, y1, y2, z, z1, z2 float64
		for i := p.n; i >= 0; i-- {
			y2 = float64(y2*x) + y1
			y1 = float64(y1*x) + y
			y = float64(y*x) + f[i]
			z2 = float64(z2*x) + z1
			z1 = float64(z1*x) + z
			z = float64(z*x) + b[i]
		}
		w := float64(y1*z) - float64(y*z1)
		d := 2 * (float64(y2*z) - float64(y*z2))
		step := w / d
		if !(math.Abs(step) <= 4*size) {
			return
		}
		x -= step
		if math.Abs(x-x0) > 4*size {
			return
		}
		if math.Abs(step) <= 4*unitRoundoff*math.Abs(x) || math.Abs(step) <= 1e-9*min(size, math.Abs(x)) {
			ahead := -y / z
			noise := 1e-13 * math.Abs(t.κ+p.origin)
			κ := t.κ + ahead
			if !(ahead >= -noise) || ahead > 8*t.reach+noise || κ > t.end+noise {
				return
			}
			for _, v := range t.vertices {
				if !v.atInfinity && math.Abs(v.gain-κ) <= 0.1*v.width && math.Abs(real(v.centre)-x) <= 0.1*v.radius {
					return
				}
			}
			x, ok := p.preciseCritical(x, size)
			if !ok {
				return
			}
			if c := p.vertexCell(complex(x, 0), 2, -1); c != nil && c.ahead(t.κ) {
				t.addVertex(c)
			}
			return
		}
	}
}

// ask takes all break points ahead from the family; false if that was done before.
func (t *tracker) ask() bool {
	if t.asked {
		return false
	}
	t.asked = true
	points, err := t.family.BreakPoints()
	if err != nil {
		return false
	}
	for _, point := range points {
		κ := t.plane.toK(point.Gain)
		if slack := 1e-13 * math.Abs(t.plane.origin); imag(point.S) < 0 || κ < t.κ-slack || κ > t.end+slack {
			continue
		}
		x := t.plane.toX(point.S)
		errX := 8 * unitRoundoff * cmplx.Abs(x)
		if imag(x) == 0 && point.Order == 2 {
			errX = -1
		}
		if c := t.plane.vertexCell(x, point.Order, errX); c != nil && c.ahead(t.κ) {
			t.addVertex(c)
		}
	}
	return true
}
