package spec

import (
	"context"
	"math"
)

// The search for windows of a predicate of the gain. It knows nothing of loops: it is given
// a way to look at one gain and a way to prove something of all gains between two.

// A look is what the search knows of one gain.
type look struct {
	k      float64
	met    bool
	margin float64 // continuous where it can be; ≥ 0 where met; -Inf where it says nothing
	data   any

	unknown bool // not met for want of an answer
}

// A survey describes a search between two gains.
type survey struct {
	at func(k float64) (*look, error)
	// prove reports whether all gains between a and b meet the sheet, or none does.
	prove func(a, b *look) (all, none bool)
	// floor returns the width below which an undecided cell between a and b is left alone.
	floor  func(a, b float64) float64
	budget int // looks; a search that exceeds it stops proving and reports wider cells
}

// A cell is a stretch between two neighbouring gains that were looked at.
type cell struct {
	a, b   *look
	proven bool // all gains in it have the verdict of a, which is that of b
}

// halve returns a gain between a and b: the geometric mean over long stretches.
func halve(a, b float64) float64 {
	if a > 0 && b > 2*a {
		return math.Sqrt(a) * math.Sqrt(b)
	}
	return a + (b-a)/2
}

// cells covers [a, b] with cells that are proven, or narrower than the floor.
func (s *survey) cells(ctx context.Context, a, b *look) ([]cell, error) {
	var out []cell
	type pending struct{ a, b *look }
	stack := []pending{{a, b}}
	for len(stack) > 0 {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		p := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		if p.a.met == p.b.met {
			if all, none := s.prove(p.a, p.b); all && p.a.met || none && !p.a.met {
				out = append(out, cell{p.a, p.b, true})
				continue
			}
		}
		mid := halve(p.a.k, p.b.k)
		if p.b.k-p.a.k <= s.floor(p.a.k, p.b.k) || !(mid > p.a.k && mid < p.b.k) || s.budget <= 0 {
			out = append(out, cell{p.a, p.b, false})
			continue
		}
		s.budget--
		m, err := s.at(mid)
		if err != nil {
			return nil, err
		}
		stack = append(stack, pending{m, p.b}, pending{p.a, m})
	}
	return out, nil
}

// An edge is a gain at which the verdict changes: the last gain that meets the sheet, and
// the nearest that does not.
type edge struct{ met, not *look }

// edgeBetween locates a change of verdict between a and b to rounding.
func (s *survey) edgeBetween(a, b *look) (edge, error) {
	met, not := a, b
	if !a.met {
		met, not = b, a
	}
	// Chandrupatla's method on the margin: inverse quadratic interpolation where it is safe,
	// bisection otherwise. T. R. Chandrupatla, A new hybrid quadratic/bisection algorithm for
	// finding the zero of a nonlinear function without using derivatives, Advances in
	// Engineering Software 28 (1997) 145–149.
	x1, x2 := met, not // x1 is the newest
	var x3 *look
	t := 0.5
	for i := range 200 {
		k := x1.k + t*(x2.k-x1.k)
		if i == 0 || !between(k, x1.k, x2.k) {
			k = x1.k + (x2.k-x1.k)/2
		}
		if i > 60 {
			k = met.k + (not.k-met.k)/2
		}
		if k == met.k || k == not.k {
			break
		}
		n, err := s.at(k)
		if err != nil {
			return edge{}, err
		}
		if n.met {
			met = n
		} else {
			not = n
		}
		if n.met == x1.met {
			x3, x1 = x1, n
		} else {
			x3, x2, x1 = x2, x1, n
		}
		best := x1
		if math.Abs(x2.margin) < math.Abs(x1.margin) {
			best = x2
		}
		tolerance := 2e-16 * math.Abs(best.k)
		width := math.Abs(x2.k - x1.k)
		limit := tolerance / width
		if n.margin == 0 && n.met { // the end itself; what ends the run shows right beside it
			beside := n.k * (1 + 1e-14)
			if not.k < n.k {
				beside = n.k * (1 - 1e-14)
			}
			if between(beside, n.k, not.k) {
				b, err := s.at(beside)
				if err != nil {
					return edge{}, err
				}
				if !b.met {
					not = b
				}
			}
			break
		}
		if limit >= 0.5 {
			break
		}
		f1, f2, f3 := x1.margin, x2.margin, x3.margin
		t = 0.5
		if finite(f1) && finite(f2) && finite(f3) && f3 != f1 && f3 != f2 {
			xi := (x1.k - x2.k) / (x3.k - x2.k)
			phi := (f1 - f2) / (f3 - f2)
			if phi*phi < xi && (1-phi)*(1-phi) < 1-xi {
				t = f1/(f2-f1)*f3/(f2-f3) + (x3.k-x1.k)/(x2.k-x1.k)*f1/(f3-f1)*f2/(f3-f2)
			}
		}
		t = math.Min(math.Max(t, 2*limit), 1-2*limit)
	}
	return edge{met, not}, nil
}

func between(k, a, b float64) bool { return k > math.Min(a, b) && k < math.Max(a, b) }

func finite(x float64) bool { return !math.IsInf(x, 0) && !math.IsNaN(x) }

// A stretch is a maximal run of gains that meet the sheet: nil edges mean that it reaches
// the first or the last gain looked at.
type stretch struct{ lo, hi *edge }

// stretches turns cells, in order, into the runs that meet the sheet, and returns the
// widest cell that was left undecided, by the measure of relative.
func (s *survey) stretches(cells []cell, relative func(a, b float64) float64) ([]stretch, float64, error) {
	var out []stretch
	missed := 0.0
	var open *stretch
	begin := func(e *edge) { open = &stretch{lo: e} }
	if len(cells) > 0 && cells[0].a.met {
		begin(nil)
	}
	change := func(a, b *look) error {
		e, err := s.edgeBetween(a, b)
		if err != nil {
			return err
		}
		if a.met {
			open.hi = &e
			out = append(out, *open)
			open = nil
		} else {
			begin(&e)
		}
		return nil
	}
	for _, c := range cells {
		if c.proven {
			continue
		}
		missed = math.Max(missed, relative(c.a.k, c.b.k))
		if c.a.met != c.b.met {
			if err := change(c.a, c.b); err != nil {
				return nil, 0, err
			}
			continue
		}
		hidden, err := s.hidden(c.a, c.b)
		if err != nil {
			return nil, 0, err
		}
		if hidden != nil {
			if err := change(c.a, hidden); err != nil {
				return nil, 0, err
			}
			if err := change(hidden, c.b); err != nil {
				return nil, 0, err
			}
		}
	}
	if open != nil {
		out = append(out, *open)
	}
	return out, missed, nil
}

// hidden looks between two gains of the same verdict for one of the other, where the
// margin comes nearest to its limit. A touch is none.
func (s *survey) hidden(a, b *look) (*look, error) {
	if !finite(a.margin) || !finite(b.margin) {
		return nil, nil
	}
	// Towards the limit: down where both are met, up where neither is.
	sign := 1.0
	if !a.met {
		sign = -1
	}
	lo, hi := a.k, b.k
	for range 12 {
		k1, k2 := lo+(hi-lo)*0.382, lo+(hi-lo)*0.618
		if !(k1 > lo && k2 > k1 && hi > k2) {
			break
		}
		l1, err := s.at(k1)
		if err != nil {
			return nil, err
		}
		l2, err := s.at(k2)
		if err != nil {
			return nil, err
		}
		for _, l := range [2]*look{l1, l2} {
			if l.met != a.met && math.Abs(l.margin) > rounding {
				return l, nil
			}
		}
		best := math.Min(sign*l1.margin, sign*l2.margin)
		if best >= math.Min(sign*a.margin, sign*b.margin) {
			break // nearest to the limit at an end
		}
		if sign*l1.margin < sign*l2.margin {
			hi = k2
		} else {
			lo = k1
		}
	}
	return nil, nil
}
