package locus

import (
	"math"
	"math/cmplx"
	"slices"
)

// cross takes the walk through a vertex, with all others so near in gain that they belong to
// the same step. If that is not yet possible it says up to which gain to step first.
//
// One step covers the gains from entry to exit on both sides of the vertex: the members of
// its cells by the cells, the other rows by discs about their places at the vertex.
func (t *tracker) cross(v *cell) (crossed bool, upto float64, err error) {
	if v.gain-v.width > t.κ+t.reach {
		return false, v.gain - 0.9*v.width, nil
	}
	group := t.group(v)
	centre := v.gain
	half := math.Inf(1)
	for _, c := range group {
		half = min(half, c.width-math.Abs(c.gain-centre))
	}
	members := t.members(group)
	if members == nil {
		return false, v.gain - 0.5*(v.gain-t.κ), nil
	}
	rest := make([]row, 0, len(t.rows))
	t.pencil.set(centre)
	for i := range t.rows {
		if members[i] >= 0 {
			continue
		}
		old := &t.rows[i]
		r := row{chain: old.chain}
		r.x, r.y = t.predict(old, centre)
		if !t.correct(&r, old.near) {
			return false, v.gain - 0.25*(v.gain-t.κ), nil
		}
		rest = append(rest, r)
	}
	reach := half
	if len(rest) > 0 {
		limiting := t.limiting
		reach = t.certify(rest, obstacles(group))
		t.limiting = limiting
	}
	if reach == 0 {
		return false, v.gain - 0.25*(v.gain-t.κ), nil
	}
	half = 0.98 * min(half, reach)
	entry := centre - half
	if entry > t.κ+t.reach {
		return false, entry, nil
	}
	if entry > t.κ {
		// The row of the step to the entry and the crossing itself are proved by each other.
		if !t.step(entry) {
			return false, t.κ + (entry-t.κ)/2, nil
		}
		members = t.members(group)
		if members == nil {
			return false, v.gain - 0.5*(v.gain-t.κ), nil
		}
	}
	sectors, ok := t.enter(group, members, rest)
	if !ok {
		return false, v.gain - 0.25*(v.gain-t.κ), nil
	}
	exit := min(centre+half, t.end)
	if err := t.leave(group, members, sectors, rest, centre, exit); err != nil {
		return false, 0, err
	}
	return true, 0, nil
}

// group returns the vertices that one step has to cross together with v.
func (t *tracker) group(v *cell) []*cell {
	group := []*cell{v}
	for _, c := range t.vertices {
		if c != v && c.gain-v.gain <= 0.25*min(v.width, c.width) {
			group = append(group, c)
		}
	}
	return group
}

func obstacles(group []*cell) []obstacle {
	o := make([]obstacle, len(group))
	for i, c := range group {
		o[i] = obstacle{x: real(c.centre), y: imag(c.centre), radius: c.radius, order: c.order, outside: c.atInfinity, lead: c.bound}
	}
	return o
}

// members tells for each row the cell of the group that it belongs to, -1 if to none: the
// nearest ones. It is nil if they do not make up the orders.
func (t *tracker) members(group []*cell) []int {
	m := make([]int, len(t.rows))
	for i := range m {
		m[i] = -1
	}
	for g, c := range group {
		for need := c.order; need > 0; {
			best, pick := math.Inf(1), -1
			for i := range t.rows {
				if m[i] >= 0 {
					continue
				}
				if d := cmplx.Abs(c.local(complex(t.rows[i].x, t.rows[i].y))); d < best {
					best, pick = d, i
				}
			}
			if pick < 0 {
				return nil
			}
			m[pick] = g
			need--
			if t.rows[pick].y > 0 && imag(c.centre) == 0 {
				need--
			}
			if need < 0 {
				return nil
			}
		}
	}
	return m
}

// enter proves that the rows are where the crossing needs them: the rest in its discs, the
// members one in each sector of its cell. It returns the sectors.
func (t *tracker) enter(group []*cell, members []int, rest []row) ([]int, bool) {
	sectors := make([]int, len(t.rows))
	j := 0
	taken := make([]map[int]bool, len(group))
	for i := range t.rows {
		r := &t.rows[i]
		if members[i] < 0 {
			q := &rest[j]
			j++
			if !(math.Hypot(r.x-q.x, r.y-q.y)+r.settled() < q.radius) {
				return nil, false
			}
			continue
		}
		g := members[i]
		c := group[g]
		l, ok := c.place(r, t.κ)
		if !ok {
			return nil, false
		}
		sectors[i] = l
		if taken[g] == nil {
			taken[g] = map[int]bool{}
		}
		taken[g][l] = true
		if r.y > 0 && imag(c.centre) == 0 {
			l, ok := c.sector(cmplx.Conj(c.local(complex(r.x, r.y))), c.offset(t.κ))
			if !ok {
				return nil, false
			}
			taken[g][l] = true
		}
	}
	for g, c := range group {
		if len(taken[g]) != c.order {
			return nil, false
		}
	}
	return sectors, true
}

// place proves in which sector of the cell the root of a settled row lies.
func (c *cell) place(r *row, κ float64) (int, bool) {
	offset := c.offset(κ)
	if !(math.Abs(offset) <= c.width && math.Abs(offset) >= 32*c.slack) {
		return 0, false
	}
	h := c.local(complex(r.x, r.y))
	size := cmplx.Abs(h)
	settled := r.settled()
	if c.atInfinity {
		// |1/x - 1/z| ≤ |x - z|/(|x|·|z|)
		settled *= size * size * 1.1
	}
	if !(size+settled < c.radius) {
		return 0, false
	}
	if c.order == 1 {
		return 0, true // it is the only root there
	}
	if !(settled*float64(c.order) < 0.1*size) {
		return 0, false
	}
	return c.sector(h, offset)
}

// leave ends the chains of the members, begins new ones by the turning rule, and makes the
// step at the exit.
func (t *tracker) leave(group []*cell, members, sectors []int, rest []row, centre, exit float64) error {
	j := 0
	for i := range t.rows {
		r := &t.rows[i]
		c := &t.chains[r.chain]
		if members[i] < 0 {
			q := &rest[j]
			j++
			if n := len(c.knots); n > 0 {
				c.knots[n-1].upto = t.κ
			}
			q.vx, q.vy = q.v.velocity()
			c.knots = append(c.knots, knot{κ: centre, from: t.κ, upto: exit, x: q.x, y: q.y, radius: q.radius, zx: q.zx, zy: q.zy, vx: q.vx, vy: q.vy})
			c.upto = exit
			continue
		}
		v := group[members[i]]
		if n := len(c.knots); n > 0 {
			c.knots[n-1].upto = t.κ
		}
		c.tail = tip{v, sectors[i]}
		c.upto = v.gain
	}
	next := make([]row, 0, len(t.rows)+2)
	next = append(next, rest...)
	for g, v := range group {
		starts := v.atInfinity || !slices.Contains(members, g)
		if exit <= v.gain && !(starts && t.from == t.end) {
			continue // the walk ends at the vertex
		}
		heirs := t.turn(v, g, members, sectors)
		for l := range v.order {
			if imag(v.centre) == 0 && !v.realSector(l, +1) && !v.upper(l, +1) {
				continue // the mirror image of another
			}
			r := row{chain: t.newChain(v.realSector(l, +1), heirs[l][0], heirs[l][1], v.gain, tip{v, l})}
			if exit <= v.gain {
				continue // a single gain: the branches are this point
			}
			h, ok := v.solve(l, v.offset(exit))
			if !ok {
				return t.fail("a branch that leaves a break point cannot be computed")
			}
			x := v.point(h)
			r.x, r.y = real(x), imag(x)
			r.zx, r.zy = r.x, r.y
			c := &t.chains[r.chain]
			c.upto = exit
			next = append(next, r)
		}
	}
	if exit <= centre {
		t.κ, t.rows = exit, t.rows[:0]
		return nil
	}
	for len(t.vertices) > 0 {
		passed := false
		for _, v := range group {
			if t.vertices[0] == v {
				passed = true
			}
		}
		if !passed {
			break
		}
		t.vertices = t.vertices[1:]
	}
	return t.arrive(group, next, len(rest), centre, exit)
}

// arrive makes the step at the exit of a crossing: the first rows were proven by discs at the
// centre, the others by cells.
func (t *tracker) arrive(group []*cell, next []row, rest int, centre, exit float64) error {
	t.pencil.set(exit)
	discs := make([]row, rest)
	copy(discs, next[:rest])
	ok := true
	for i := range next {
		r := &next[i]
		var near float64
		if i < rest {
			d := exit - centre
			near = r.near
			r.x, r.y = r.zx+r.vx*d, r.zy+r.vy*d
			if discs[i].y == 0 {
				r.y = 0
			}
		} else {
			head := t.chains[r.chain].head
			near = 0.5 * cmplx.Abs(head.cell.local(complex(r.x, r.y)))
			if head.cell.atInfinity {
				near = 0.5 * cmplx.Abs(complex(r.x, r.y))
			}
		}
		ok = ok && t.correct(r, near)
	}
	var reach float64
	if ok {
		reach = t.certify(next, nil)
	}
	ok = ok && reach > 0
	for i := range next {
		if !ok {
			break
		}
		r := &next[i]
		if i < rest {
			q := &discs[i]
			ok = math.Hypot(r.x-q.x, r.y-q.y)+r.settled() < q.radius
			continue
		}
		head := t.chains[r.chain].head
		var l int
		l, ok = head.cell.place(r, exit)
		ok = ok && l == head.sector
	}
	if !ok {
		if exit >= t.end {
			t.κ, t.rows = exit, t.rows[:0]
			return nil
		}
		t.κ = exit
		return t.fail("the branches that leave a break point cannot be told apart")
	}
	t.sharpen(next)
	t.commit(exit, reach, next)
	return nil
}

// turn applies the rule by which branches go on through a vertex: rays on which roots come and
// rays on which they go alternate around it, π/m apart, and each branch goes on along the next
// ray counter-clockwise for Im s ≥ 0. It returns for each outgoing sector the branch that takes it and, if the
// sector has a mirror image, the one that takes that. Branches through infinity end, others
// begin; so they do where the walk starts.
func (t *tracker) turn(v *cell, g int, members, sectors []int) [][2]int {
	heirs := make([][2]int, v.order)
	onAxis := imag(v.centre) == 0
	for l := range heirs {
		heirs[l] = [2]int{-1, -1}
	}
	// assign gives the outgoing direction with the given angle to a branch.
	assign := func(angle float64, branch int, mirror bool) {
		l := v.nearestSector(angle, +1)
		if onAxis && !v.realSector(l, +1) && !v.upper(l, +1) {
			l = v.nearestSector(-angle, +1)
			mirror = !mirror
		}
		if mirror {
			heirs[l][1] = branch
		} else {
			heirs[l][0] = branch
		}
	}
	if !v.atInfinity && slices.Contains(members, g) {
		step := math.Pi / float64(v.order)
		for i, m := range members {
			if m != g {
				continue
			}
			c := &t.chains[t.rows[i].chain]
			in := v.angle(sectors[i], -1)
			assign(in+step, c.owner, false)
			switch {
			case c.mirror < 0:
			case onAxis:
				assign(-in+step, c.mirror, false)
			default:
				assign(in+step, c.mirror, true)
			}
		}
		return heirs
	}
	for l := range heirs {
		switch {
		case v.realSector(l, +1):
			heirs[l][0] = t.newBranch()
		case imag(v.centre) > 0 || v.upper(l, +1):
			heirs[l][0], heirs[l][1] = t.newBranch(), t.newBranch()
		}
	}
	return heirs
}
