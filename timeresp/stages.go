package timeresp

import (
	"cmp"
	"math"
	"math/big"
	"math/cmplx"
	"slices"

	"github.com/polewright/polewright/tf"
)

// Poles that are close together, compared with one over the time that has passed, have
// shares in the signal that are far larger than their sum. A stage therefore adds clusters
// of them in long arithmetic and holds the sum, divided by e^(cτ) with c the middle of the
// cluster, as a chain of Taylor polynomials. The longer the time, the smaller the clusters
// need to be: the next stage has smaller ones, until each mode can stand for itself.

// A stage is the signal from start up to the next stage. Its modes count s = τ - start.
type stage struct {
	modal
	start  float64
	length float64 // +Inf for the last stage
	chains []chain
	final  float64 // the limit of the signal, for the spread
	tail   float64 // bound on |y - limit| after this stage
}

// A chain is Re(e^(cs)·Σ q[k]·((s - i·h)/h)^k) on its i-th piece.
type chain struct {
	re, im, reLo, imLo float64 // c
	h                  float64
	q                  []complex128 // earlyTerms for each piece
	limit              float64      // the part of the limit of the signal that is in this chain
	size               []float64    // bound on |share - limit| from the start of piece i to the end of the stage
}

const (
	stagePieces = 16 // of the chain with the shortest
	maxStages   = 400
	deadBits    = 64 // a mode below 2^-64 of the largest value so far is left out
)

// A longMode is a mode in long arithmetic: e^(pτ)·Σ a[i]·τ^i. Conjugates stand for themselves.
type longMode struct {
	p *long
	a []*long
}

// extend adds stages from earlyEnd on. largest is the largest value so far.
func (k *kernel) extend(f *transform, largest float64) error {
	const call = "timeresp"
	if !(largest > 0) {
		return &tf.UnsupportedError{Call: call, What: "a response that stays below the range of float64"}
	}
	size := k.roundingAt(k.earlyEnd) / modalRounding
	bits := 1100.0
	if !math.IsInf(size, 0) && !math.IsNaN(size) {
		bits = math.Log2(size / largest)
	}
	w := newBench(uint(160 + max(bits, 0)))
	modes := f.longModes(w)
	final := k.ultimate()
	start := k.earlyEnd
	for range maxStages {
		g := stage{start: start, final: final}
		done := g.build(w, modes, largest)
		k.stages = append(k.stages, g)
		if done {
			tail := g.spread(start)
			for i := len(k.stages) - 1; i >= 0; i-- {
				k.stages[i].tail = tail
				tail = max(tail, k.stages[i].spread(k.stages[i].start))
			}
			k.stages[len(k.stages)-1].tail = 0
			return nil
		}
		for i := 1; i <= stagePieces; i++ {
			largest = math.Max(largest, math.Abs(g.at(start+g.length*float64(i)/stagePieces, 0)))
		}
		start += g.length
	}
	return &tf.UnsupportedError{Call: call, What: "poles that lie too close together for too long"}
}

// longModes finds poles and amplitudes anew.
func (f *transform) longModes(w *bench) []longMode {
	num, den := f.longCoefficients(w)
	poles := make([]*long, 0, 2*len(f.poles))
	multiplicity := make([]int, 0, 2*len(f.poles))
	for i := range f.poles {
		p := w.number().setWide(f.poles[i].at)
		if f.poles[i].at != f.poles[i].exact {
			w.refine(p, den, f.poles[i].multiplicity)
		}
		poles = append(poles, p)
		multiplicity = append(multiplicity, f.poles[i].multiplicity)
		if p.im.Sign() != 0 {
			q := w.number().set(p)
			q.im.Neg(&q.im)
			poles = append(poles, q)
			multiplicity = append(multiplicity, f.poles[i].multiplicity)
		}
	}
	modes := make([]longMode, len(poles))
	d, factorial := w.number(), new(big.Float).SetPrec(w.prec)
	for i, p := range poles {
		a := w.numbers(multiplicity[i])
		work := w.numbers(max(len(num), len(a)))
		for j := range num {
			work[j].re.Set(num[j])
		}
		t := w.number()
		for l := range a {
			for j := len(work) - 2; j >= l; j-- {
				work[j].add(work[j], w.mul(t, work[j+1], p))
			}
			a[l].set(work[l])
		}
		for j, q := range poles {
			if j == i {
				continue
			}
			d.sub(p, q)
			for range multiplicity[j] {
				w.div(a[0], a[0], d)
				for l := 1; l < len(a); l++ {
					w.div(a[l], a[l].sub(a[l], a[l-1]), d)
				}
			}
		}
		slices.Reverse(a)
		factorial.SetInt64(1)
		for l := 2; l < len(a); l++ {
			factorial.Mul(factorial, new(big.Float).SetInt64(int64(l)))
			a[l].re.Quo(&a[l].re, factorial)
			a[l].im.Quo(&a[l].im, factorial)
		}
		modes[i] = longMode{p, a}
	}
	return modes
}

// longCoefficients returns the transform with exact coefficients, divided by the leading one.
func (f *transform) longCoefficients(w *bench) (num, den []*big.Float) {
	exact := func(n *big.Int, exponent int) *big.Float {
		x := new(big.Float).SetPrec(w.prec).SetInt(n)
		return x.SetMantExp(x, exponent)
	}
	integers, exponent := f.denominator.Integers()
	lead := exact(integers[len(integers)-1], exponent+f.scale*(len(integers)-1))
	den = make([]*big.Float, f.in.zeros, len(integers)+f.in.zeros+2)
	for i := range den {
		den[i] = new(big.Float).SetPrec(w.prec)
	}
	for i, n := range integers {
		c := exact(n, exponent+f.scale*i)
		den = append(den, c.Quo(c, lead))
	}
	if f.in.omega != 0 {
		o := new(big.Float).SetPrec(w.prec).SetFloat64(math.Ldexp(f.in.omega, -f.scale))
		o.Mul(o, o)
		den = append(den, new(big.Float).SetPrec(w.prec), new(big.Float).SetPrec(w.prec))
		for i := len(den) - 1; i >= 0; i-- {
			c := new(big.Float).SetPrec(w.prec).Mul(den[i], o)
			if i >= 2 {
				c.Add(c, den[i-2])
			}
			den[i] = c
		}
	}
	integers, exponent = f.numerator.Integers()
	num = make([]*big.Float, len(integers)+len(f.in.num)-1)
	for i := range num {
		num[i] = new(big.Float).SetPrec(w.prec)
	}
	for k, c := range f.in.num {
		factor := new(big.Float).SetPrec(w.prec).SetFloat64(c)
		factor.SetMantExp(factor, f.in.exponent(k, f.scale))
		factor.Quo(factor, lead)
		for i, n := range integers {
			x := exact(n, exponent+f.scale*i)
			num[i+k].Add(num[i+k], x.Mul(x, factor))
		}
	}
	// Of a biproper transform the constant part is left out.
	for len(num) >= len(den) {
		top := num[len(num)-1]
		for i := range den {
			j := len(num) - len(den) + i
			num[j].Sub(num[j], new(big.Float).SetPrec(w.prec).Mul(top, den[i]))
		}
		num = num[:len(num)-1]
	}
	return num, den
}

// refine improves a root of multiplicity m by Newton's method on the derivative of which it
// is a simple one.
func (w *bench) refine(p *long, den []*big.Float, m int) {
	if m > 1 {
		c := make([]*big.Float, len(den))
		for i := range c {
			c[i] = new(big.Float).SetPrec(w.prec).Set(den[i])
		}
		for ; m > 1; m-- {
			for i := 1; i < len(c); i++ {
				c[i-1].Mul(c[i], new(big.Float).SetInt64(int64(i)))
			}
			c = c[:len(c)-1]
		}
		den = c
	}
	y, d, step := w.number(), w.number(), w.number()
	for range 12 {
		y.re.SetInt64(0)
		y.im.SetInt64(0)
		d.set(y)
		for i := len(den) - 1; i >= 0; i-- {
			w.mul(d, d, p)
			d.add(d, y)
			w.mul(y, y, p)
			y.re.Add(&y.re, den[i])
		}
		if y.isZero() || d.isZero() {
			return
		}
		w.div(step, y, d)
		p.sub(p, step)
		if step.exponent() < p.exponent()-int(w.prec)*3/4 {
			return
		}
	}
}

// A cluster is a set of modes, closed under conjugation or without a conjugate pair.
type cluster struct {
	members []int
	center  complex128
	c       *long
	h       float64
	reach   float64   // the h that the radius of the cluster allows
	q       []float64 // |q|
	size    float64   // Σ|q|
	mirror  bool      // conjugate of another cluster: left out
	double  bool      // stands for its conjugate too
}

// build fills the stage from its start on, and reports whether it lasts forever.
func (g *stage) build(w *bench, modes []longMode, largest float64) bool {
	alive := shiftModes(w, modes, g.start, largest)
	n := len(alive)
	points := make([]complex128, n)
	for i := range alive {
		points[i] = alive[i].p.complex()
	}
	// Single linkage: shortest links first, until the clusters are small enough in size.
	type link struct {
		i, j     int
		distance float64
	}
	var links []link
	d := w.number()
	for i := range n {
		for j := range i {
			links = append(links, link{j, i, cmplx.Abs(d.sub(alive[i].p, alive[j].p).complex())})
		}
	}
	slices.SortFunc(links, func(a, b link) int { return cmp.Compare(a.distance, b.distance) })
	label := make([]int, n)
	for i := range label {
		label[i] = i
	}
	clusters := make([]*cluster, n)
	for i := range clusters {
		clusters[i] = g.cluster(w, alive, points, []int{i})
	}
	// The best partition is the one with the longest pieces; a chain takes pieces so short
	// that its coefficients are small enough.
	limit := tolerance / modalRounding * largest
	best := struct {
		h        float64
		clusters []*cluster
	}{h: -1}
	consider := func() (reach float64) {
		h, sum := math.Inf(1), 0.0
		reach = h
		for i, c := range clusters {
			if label[i] != i {
				continue
			}
			if len(c.members) > 1 {
				c.shorten(limit / float64(n))
				h = min(h, c.h)
				reach = min(reach, c.reach)
			}
			sum += c.size
		}
		if sum <= limit && h > best.h {
			best.h = h
			best.clusters = best.clusters[:0]
			for i, c := range clusters {
				if label[i] == i {
					best.clusters = append(best.clusters, c)
				}
			}
		}
		return reach
	}
	for next := 0; consider() > best.h && next < len(links); {
		within := links[next].distance * (1 + 1e-6)
		changed := map[int]bool{}
		for ; next < len(links) && links[next].distance <= within; next++ {
			a, b := label[links[next].i], label[links[next].j]
			if a == b {
				continue
			}
			a, b = min(a, b), max(a, b)
			for i := range label {
				if label[i] == b {
					label[i] = a
				}
			}
			changed[a] = true
			delete(changed, b)
		}
		for a := range changed {
			var members []int
			for i := range label {
				if label[i] == a {
					members = append(members, i)
				}
			}
			clusters[a] = g.cluster(w, alive, points, members)
		}
	}
	if best.h < 0 {
		return false
	}
	g.length = math.Inf(1)
	for _, c := range best.clusters {
		if len(c.members) > 1 {
			g.length = min(g.length, stagePieces*c.h)
		}
	}
	for _, c := range best.clusters {
		if c.mirror {
			continue
		}
		if len(c.members) == 1 {
			g.addMode(&alive[c.members[0]], c.double)
		} else {
			g.addChain(w, alive, c)
		}
	}
	return math.IsInf(g.length, 1)
}

// shiftModes returns the modes with time counted from τ, without those that have died away.
func shiftModes(w *bench, modes []longMode, tau float64, largest float64) []longMode {
	var alive []longMode
	threshold := math.Log2(largest) - deadBits
	shift := new(big.Float).SetPrec(w.prec).SetFloat64(tau)
	for _, m := range modes {
		re, _ := m.p.re.Float64()
		if re < 0 {
			// e^(re·τ)·Σ|a|τ^i, with room for the growth of the powers.
			top := math.Inf(-1)
			for i, a := range m.a {
				if !a.isZero() {
					at := max(tau, float64(i)/-re)
					top = max(top, float64(a.exponent())+float64(i)*math.Log2(at)+re*at*math.Log2E)
				}
			}
			if top < threshold {
				continue
			}
		}
		alive = append(alive, w.shiftMode(m, shift))
	}
	return alive
}

// shiftMode returns the mode with time counted from τ.
func (w *bench) shiftMode(m longMode, tau *big.Float) longMode {
	turn, t := w.number(), w.number()
	w.exp(turn, t.scale(m.p, tau))
	a := w.numbers(len(m.a))
	for i := range a {
		a[i].set(m.a[i])
	}
	for i := range a {
		for j := len(a) - 2; j >= i; j-- {
			a[j].add(a[j], t.scale(a[j+1], tau))
		}
	}
	for i := range a {
		w.mul(a[i], a[i], turn)
	}
	return longMode{m.p, a}
}

// cluster sums up the members.
func (g *stage) cluster(w *bench, alive []longMode, points []complex128, members []int) *cluster {
	c := &cluster{members: members}
	upper, lower, origin := 0, 0, false
	sum := complex(0, 0)
	for _, i := range members {
		switch {
		case imag(points[i]) > 0:
			upper++
		case imag(points[i]) < 0:
			lower++
		}
		origin = origin || points[i] == 0
		sum += points[i]
	}
	c.center = sum / complex(float64(len(members)), 0)
	switch {
	case origin:
		c.center = 0
	case upper == len(members):
		c.double = true
	case lower == len(members):
		c.mirror = true
	default:
		c.center = complex(real(c.center), 0)
	}
	if len(members) == 1 {
		for i, a := range alive[members[0]].a {
			// The powers of s are at their largest at i/|re|.
			at := 1.0
			if re := real(points[members[0]]); re < 0 && i > 0 {
				at = float64(i) / -re
			}
			c.size += cmplx.Abs(a.complex()) * math.Pow(at, float64(i))
		}
		return c
	}
	c.c = w.number()
	c.c.re.SetFloat64(real(c.center))
	c.c.im.SetFloat64(imag(c.center))
	radius := 0.0
	d := w.number()
	for _, i := range members {
		radius = max(radius, cmplx.Abs(d.sub(alive[i].p, c.c).complex()))
	}
	c.h = math.Ldexp(1, -math.Ilogb(radius)) // h·radius in [1, 2)
	c.reach = c.h
	for _, q := range w.coefficients(alive, c, c.members) {
		c.q = append(c.q, cmplx.Abs(q.complex()))
		c.size += c.q[len(c.q)-1]
	}
	return c
}

// shorten makes the pieces shorter until the sum of the coefficients keeps to the limit.
func (c *cluster) shorten(limit float64) {
	for range 60 {
		if c.size <= limit || c.q[0] > limit {
			return
		}
		c.h /= 2
		c.size = 0
		for k := range c.q {
			c.q[k] = math.Ldexp(c.q[k], -k)
			c.size += c.q[k]
		}
	}
}

// coefficients returns the Taylor coefficients q of a cluster at the origin of time.
func (w *bench) coefficients(alive []longMode, c *cluster, members []int) []*long {
	q := w.numbers(earlyTerms)
	h := new(big.Float).SetPrec(w.prec).SetFloat64(c.h)
	d, power, t := w.number(), w.number(), w.number()
	inverse := new(big.Float).SetPrec(w.prec)
	for _, i := range members {
		d.sub(alive[i].p, c.c)
		d.scale(d, h)
		for j, a := range alive[i].a {
			// a·h^j·x^j·e^(d·x)
			power.set(a)
			for range j {
				power.scale(power, h)
			}
			for k := j; k < earlyTerms; k++ {
				q[k].add(q[k], power)
				inverse.SetInt64(int64(k - j + 1))
				w.mul(t, power, d)
				power.re.Quo(&t.re, inverse)
				power.im.Quo(&t.im, inverse)
			}
		}
	}
	return q
}

// addMode takes a mode over as it is.
func (g *stage) addMode(m *longMode, double bool) {
	at := m.p.wide()
	a := make([]complex128, len(m.a))
	for i := range a {
		a[i] = m.a[i].complex()
		if double {
			a[i] *= 2
		}
	}
	if m.p.isZero() {
		g.drift = make([]float64, len(a))
		for i := range a {
			g.drift[i] = real(a[i])
		}
		return
	}
	n := mode{re: at.re.hi, reLo: at.re.lo, im: at.im.hi, imLo: at.im.lo, count: int32(len(a)), first: int32(len(g.amplitudes))}
	n.ar, n.ai = real(a[0]), imag(a[0])
	if len(a) > 1 {
		g.amplitudes = append(g.amplitudes, a...)
	}
	n.measure()
	g.modes = append(g.modes, n)
}

// addChain lays the pieces of a cluster.
func (g *stage) addChain(w *bench, alive []longMode, c *cluster) {
	ch := chain{re: real(c.center), im: imag(c.center), h: c.h}
	pieces := int(math.Ceil(g.length / c.h))
	h := new(big.Float).SetPrec(w.prec).SetFloat64(c.h)
	members := make([]longMode, len(c.members))
	index := make([]int, len(c.members))
	relative := make([]*long, len(c.members))
	for i, j := range c.members {
		members[i], index[i] = alive[j], i
		relative[i] = w.number().sub(alive[j].p, c.c)
		if alive[j].p.isZero() && len(alive[j].a) == 1 {
			ch.limit = real(alive[j].a[0].complex())
		}
	}
	for i := range pieces {
		for _, q := range w.coefficients(members, c, index) {
			z := q.complex()
			if c.double {
				z *= 2
			}
			ch.q = append(ch.q, z)
		}
		if i == pieces-1 {
			break
		}
		for j := range members {
			m := w.shiftMode(longMode{relative[j], members[j].a}, h)
			members[j].a = m.a
		}
	}
	ch.size = make([]float64, pieces)
	for i := pieces - 1; i >= 0; i-- {
		q := ch.q[i*earlyTerms:][:earlyTerms]
		sum := cmplx.Abs(q[0] - complex(ch.limit, 0))
		for _, z := range q[1:] {
			sum += cmplx.Abs(z)
		}
		ch.size[i] = sum * math.Exp(max(ch.re*c.h*float64(i), ch.re*c.h*float64(i+1)))
		if i < pieces-1 {
			ch.size[i] = max(ch.size[i], ch.size[i+1])
		}
	}
	g.chains = append(g.chains, ch)
}

// stageOf returns the stage at τ.
func (k *kernel) stageOf(tau float64) *stage {
	lo, hi := 0, len(k.stages)
	for hi-lo > 1 {
		if m := (lo + hi) / 2; k.stages[m].start <= tau {
			lo = m
		} else {
			hi = m
		}
	}
	return &k.stages[lo]
}

// at returns the signal at tau + lo.
func (g *stage) at(tau, lo float64) float64 {
	s, e := twoSum(tau, -g.start)
	lo += e
	y := g.modalAt(s, lo)
	for i := range g.chains {
		y += g.chains[i].at(s, lo)
	}
	return y
}

// locate returns the piece, its coefficients, and the place on it.
func (c *chain) locate(s, lo float64) (q []complex128, x float64) {
	i := min(int(s/c.h), len(c.q)/earlyTerms-1)
	// i·h is exact: h is a power of two.
	d, e := twoSum(s, -float64(i)*c.h)
	return c.q[i*earlyTerms:][:earlyTerms], (d + (e + lo)) / c.h
}

// turn returns e^(cs).
func (c *chain) turn(s, lo float64) complex128 {
	re := c.re * s
	reLo := math.FMA(c.re, s, -re) + c.reLo*s + c.re*lo
	e := math.Exp(re)
	e += e * reLo
	if c.im == 0 {
		return complex(e, 0)
	}
	im := c.im * s
	imLo := math.FMA(c.im, s, -im) + c.imLo*s + c.im*lo
	sin, cos := math.Sincos(im)
	sin, cos = sin+imLo*cos, cos-imLo*sin
	return complex(e*cos, e*sin)
}

func (c *chain) at(s, lo float64) float64 {
	q, x := c.locate(s, lo)
	turn := c.turn(s, lo)
	var re, im float64
	for i := len(q) - 1; i >= 0; i-- {
		re, im = re*x+real(q[i]), im*x+imag(q[i])
	}
	return real(turn)*re - imag(turn)*im
}

// cellEnd returns where a cell that starts at τ must end.
func (g *stage) cellEnd(tau float64) float64 {
	s := tau - g.start
	end := g.length
	for i := range g.chains {
		h := g.chains[i].h
		end = min(end, h*(math.Floor(s/h)+1))
	}
	return g.start + end
}

// cellStart returns where a cell that ends at τ must start.
func (g *stage) cellStart(tau float64) float64 {
	s := tau - g.start
	start := 0.0
	for i := range g.chains {
		h := g.chains[i].h
		start = max(start, h*(math.Ceil(s/h)-1))
	}
	return g.start + start
}

// spread bounds |y - limit| from τ on.
func (g *stage) spread(tau float64) float64 {
	var n node
	g.node(tau, &n)
	return n.spread
}

// node fills n; the fourth derivative is bounded up to the end of the cell.
func (g *stage) node(tau float64, n *node) {
	s, lo := twoSum(tau, -g.start)
	g.modalNode(s, n)
	n.t = tau
	for i := range g.chains {
		g.chains[i].node(s, lo, n)
	}
	n.spread = max(n.spread, g.tail)
	n.suggest()
}

func (c *chain) node(s, lo float64, n *node) {
	q, x := c.locate(s, lo)
	turn := c.turn(s, lo)
	at := complex(c.re, c.im)
	var p, d, dd complex128
	var sizes [5]float64 // of Σ|q|x^k and its derivatives at x = 1
	z := complex(x, 0)
	for i := len(q) - 1; i >= 0; i-- {
		dd = dd*z + 2*d
		d = d*z + p
		p = p*z + q[i]
		for j := 4; j > 0; j-- {
			sizes[j] += float64(j) * sizes[j-1]
		}
		sizes[0] += abs(q[i])
	}
	d /= complex(c.h, 0)
	dd /= complex(c.h*c.h, 0)
	n.y += real(turn * p)
	n.d += real(turn * (d + at*p))
	n.c += real(turn * (dd + at*(2*d+at*p)))
	piece := min(int(s/c.h), len(c.size)-1)
	n.spread += c.size[piece]
	size := abs(at)
	top := math.Exp(max(c.re*s, c.re*c.h*float64(piece+1)))
	h := 1 / c.h
	sum := sizes[4]*h*h*h*h + size*(4*sizes[3]*h*h*h+size*(6*sizes[2]*h*h+size*(4*sizes[1]*h+size*sizes[0])))
	n.fourth += top * sum
}

// cellEnd returns where a cell that starts at τ must end at the latest.
func (k *kernel) cellEnd(tau float64) float64 {
	switch {
	case tau < k.earlyEnd:
		i, _ := k.piece(tau, 0)
		end := k.step * float64(i+1)
		if end <= tau {
			end += k.step
		}
		return min(end, k.earlyEnd)
	case len(k.stages) > 0:
		return k.stageOf(tau).cellEnd(tau)
	}
	return math.Inf(1)
}

// cellStart returns where a cell that ends at τ must start at the earliest.
func (k *kernel) cellStart(tau float64) float64 {
	switch {
	case tau <= k.earlyEnd:
		i, _ := k.piece(tau, 0)
		start := k.step * float64(i)
		if start >= tau {
			start -= k.step
		}
		return max(0, start)
	case len(k.stages) > 0:
		lo, hi := 0, len(k.stages)
		for hi-lo > 1 {
			if m := (lo + hi) / 2; k.stages[m].start < tau {
				lo = m
			} else {
				hi = m
			}
		}
		return k.stages[lo].cellStart(tau)
	}
	return k.earlyEnd
}
