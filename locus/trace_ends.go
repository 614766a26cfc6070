package locus

import (
	"math"
	"math/cmplx"

	"github.com/polewright/polewright/poly"
)

// farGain is where, in gains of the plane, the neighbourhood of κ = ±∞ is worth looking at.
const farGain = 0x1p20

// begin places the rows at the start of the walk.
func (t *tracker) begin() error {
	p := t.plane
	t.κ, t.limiting = t.from, -1
	if t.from == 0 {
		return t.beginAt(t.family.fixed, t.poles)
	}
	// In float64 first; the discs are proven for the exact family. Multiple roots at this
	// gain, or one at infinity, show only in the exact one.
	t.pencil.set(t.from)
	if roots, err := byPower(t.pencil.f).Roots(); err == nil && len(roots) == p.n {
		if t.beginSimple(roots) {
			return nil
		}
	}
	at := t.family.At(p.fromK(t.from))
	roots, err := rootsOf(at)
	if err != nil {
		return err
	}
	return t.beginAt(at, roots)
}

// beginSimple is begin with approximate simple roots x of the plane. It is false if they do not
// turn out to be that.
func (t *tracker) beginSimple(roots []poly.Root) bool {
	rows := make([]row, 0, len(roots))
	for i, root := range roots {
		x := root.Value
		if imag(x) < 0 {
			continue
		}
		r := row{x: real(x), y: imag(x)}
		near := math.Inf(1)
		for j, other := range roots {
			if j != i {
				near = min(near, cmplx.Abs(x-other.Value))
			}
		}
		if math.IsInf(near, 1) {
			near = cmplx.Abs(x) + 1
		}
		if !t.correct(&r, near) {
			return false
		}
		rows = append(rows, r)
	}
	reach := t.certify(rows, nil)
	if reach == 0 {
		return false
	}
	t.sharpen(rows)
	t.name(rows)
	t.commit(t.from, reach, rows)
	return true
}

// name gives each row a chain and each root a branch.
func (t *tracker) name(rows []row) {
	for i := range rows {
		r := &rows[i]
		owner, mirror := t.newBranch(), -1
		if r.y > 0 {
			// the lower one comes first, as in the order of roots
			owner, mirror = t.newBranch(), owner
		}
		r.chain = t.newChain(r.y == 0, owner, mirror, t.from, tip{})
	}
}

// beginAt places the rows at the roots of the exact polynomial at the first gain.
func (t *tracker) beginAt(at poly.Poly, roots []poly.Root) error {
	p := t.plane
	t.pencil.set(t.from)
	var rows []row
	var group []*cell
	for _, root := range roots {
		x := p.toX(root.Value)
		if imag(x) < 0 {
			continue
		}
		if root.Distinct > 1 {
			return t.fail("different roots at the first gain are closer than float64 can part")
		}
		if root.Multiplicity > 1 {
			c := p.multipleCell(x, t.from, root.Multiplicity, math.Ldexp(root.Radius, -p.stretch))
			if c == nil {
				return t.fail("a multiple root at the first gain cannot be told from its neighbours")
			}
			group = append(group, c)
			continue
		}
		rows = append(rows, row{x: real(x), y: imag(x), chain: -1})
	}
	if at.Degree() < p.n {
		c := p.dropCell()
		if c == nil {
			return t.fail("the roots near infinity cannot be told from the others")
		}
		c.gain, c.gainLow, c.slack = t.from, 0, 0
		group = append(group, c)
	}
	for i := range rows {
		r := &rows[i]
		near := math.Inf(1)
		for j := range rows {
			if j != i {
				near = min(near, math.Hypot(r.x-rows[j].x, r.y-rows[j].y))
			}
		}
		if r.y > 0 {
			near = min(near, 2*r.y)
		}
		for _, c := range group {
			if !c.atInfinity {
				near = min(near, cmplx.Abs(c.local(complex(r.x, r.y))))
			}
		}
		if math.IsInf(near, 1) {
			near = math.Hypot(r.x, r.y) + 1
		}
		if !t.correct(r, near) {
			return t.fail("a root at the first gain cannot be improved")
		}
	}
	reach := math.Inf(1)
	if len(rows) > 0 {
		reach = t.certify(rows, obstacles(group))
		if reach == 0 {
			return t.fail("the roots at the first gain cannot be told apart")
		}
	}
	t.name(rows)
	if len(group) == 0 {
		t.commit(t.from, reach, rows)
		return nil
	}
	for _, c := range group {
		reach = min(reach, c.width)
	}
	t.rows = rows
	members := make([]int, len(rows))
	for i := range members {
		members[i] = -1
	}
	exit := min(t.from+0.98*reach, t.end)
	return t.leave(group, members, nil, rows, t.from, exit)
}

// findEnds makes the cells about κ = ±∞ and returns the gain of the plane beyond which they
// explain all roots.
func (t *tracker) findEnds() (float64, error) {
	p := t.plane
	width := math.Inf(1)
	add := func(c *cell) error {
		if c == nil {
			return t.fail("the ends of the branches at infinite gain cannot be told apart")
		}
		t.endCells = append(t.endCells, c)
		width = min(width, c.width)
		return nil
	}
	for _, z := range t.zeros {
		x := p.toX(z.Value)
		if imag(x) < 0 {
			continue
		}
		if z.Distinct > 1 {
			return 0, t.fail("different zeros are closer than float64 can part")
		}
		if err := add(p.endCell(x, z.Multiplicity, math.Ldexp(z.Radius, -p.stretch))); err != nil {
			return 0, err
		}
	}
	if p.escaping > 0 {
		if err := add(p.escapeCell()); err != nil {
			return 0, err
		}
	}
	// Off the border, and where the members are well within their discs.
	return max(2/width, 1), nil
}

// tips matches the rows with the end cells, one for each.
func (t *tracker) tips() ([]tip, bool) {
	// The rows may be much nearer to their ends than to each other.
	t.pencil.set(t.κ)
	before := append([]row(nil), t.rows...)
	for range 2 {
		for i := range t.rows {
			r := &t.rows[i]
			r.x, r.y = r.zx, r.zy
			if !t.correct(r, r.near) {
				return nil, false
			}
		}
	}
	if t.certify(t.rows, nil) == 0 {
		return nil, false
	}
	for i := range t.rows {
		r, q := &t.rows[i], &before[i]
		if !(math.Hypot(r.x-q.x, r.y-q.y)+r.settled() < q.radius) {
			return nil, false
		}
	}
	tips := make([]tip, len(t.rows))
	count := make(map[tip]bool)
	for i := range t.rows {
		r := &t.rows[i]
		for _, c := range t.endCells {
			l, ok := c.place(r, t.κ)
			if !ok {
				continue
			}
			if count[tip{c, l}] {
				return nil, false
			}
			tips[i] = tip{c, l}
			count[tips[i]] = true
			break
		}
		if tips[i].cell == nil {
			return nil, false
		}
	}
	return tips, true
}
