package locus

import (
	"math"

	"github.com/polewright/polewright/poly"
)

// A Workspace finds the roots of families at one gain after another with storage that it keeps,
// each search starting from the last answer: for loops over many gains. The zero value is
// ready for use. One goroutine at a time may use a Workspace.
type Workspace struct {
	solver poly.Solver
	roots  []poly.Root
	warm   warmRoots
}

// PolesAt returns the roots at a finite gain k, as [Family.PolesAt] does and with the same
// guarantee, but for the size of the discs: Radius is at most 1e-10·|Value|, so that nearly
// multiple roots, and all that have a wider disc, are found as there. The slice is the
// workspace's own and holds until its next call.
func (w *Workspace) PolesAt(f Family, k float64) ([]poly.Root, error) {
	if finite(k) && w.warm.follow(f, k) {
		w.roots = w.warm.appendTo(w.roots[:0])
		return w.roots, nil
	}
	p, err := f.checkedAt("locus.Workspace.PolesAt", k)
	if err != nil {
		w.warm.count = 0
		return nil, err
	}
	roots, err := w.solver.Near(p, w.roots)
	if err != nil {
		w.warm.count = 0
		return nil, err
	}
	w.roots = append(w.roots[:0], roots...)
	w.warm.keep(f, k, w.roots)
	return w.roots, nil
}

// warmDegree is the highest degree that is followed in float64.
const warmDegree = 32

// warmRoots are the simple roots of one family at one gain: real ones and the upper ones of
// conjugate pairs, with their velocities ds/dk.
type warmRoots struct {
	a, b   [warmDegree + 1]float64
	n, m   int // degrees of the two polynomials
	degree int
	k      float64
	count  int // of z; 0: nothing to start from
	moving bool

	z [warmDegree]warmRoot

	f, size [warmDegree + 1]float64 // A + k·B, and |A| + |k·B|
}

type warmRoot struct {
	x, y   float64
	vx, vy float64
	radius float64 // about (x, y)

	// The disc about the last point but one that holds one root at least, and that about (x, y).
	cx, cy, reach float64
}

// keep takes over an answer to go on from.
func (w *warmRoots) keep(f Family, k float64, roots []poly.Root) {
	w.count, w.moving = 0, false
	n, m := f.fixed.Degree(), f.scaled.Degree()
	if n < 0 || m < 0 || max(n, m) > warmDegree || f.fixed.Rounded() || f.scaled.Rounded() {
		return
	}
	w.n, w.m, w.k, w.degree = n, m, k, max(n, m)
	for i := range n + 1 {
		w.a[i] = f.fixed.Coefficient(i)
	}
	for i := range m + 1 {
		w.b[i] = f.scaled.Coefficient(i)
	}
	count, total := 0, 0
	for _, r := range roots {
		if r.Multiplicity != 1 || r.Value == 0 {
			return
		}
		total++
		if y := imag(r.Value); y >= 0 {
			w.z[count] = warmRoot{x: real(r.Value), y: y}
			count++
		}
	}
	if total == w.degree {
		w.count = count
	}
}

// same tells whether the roots are those of f.
func (w *warmRoots) same(f Family) bool {
	if f.fixed.Degree() != w.n || f.scaled.Degree() != w.m || f.fixed.Rounded() || f.scaled.Rounded() {
		return false
	}
	for i := range w.n + 1 {
		if f.fixed.Coefficient(i) != w.a[i] {
			return false
		}
	}
	for i := range w.m + 1 {
		if f.scaled.Coefficient(i) != w.b[i] {
			return false
		}
	}
	return true
}

const (
	warmRadius = 1e-10 // of a disc, in relation to the root
	warmSteps  = 4     // of Newton's method, at most
)

// follow moves the roots to gain k and proves a disc about each; where it cannot, the answer is
// false and nothing is left to go on from but the last roots.
//
// At each point Newton's step t = F/F′ is taken from values with error bounds. The disc of radius
// n·|t| about the point holds a root (P. Henrici, Applied and Computational Complex Analysis,
// vol. 1, Wiley 1974, § 6.4); n disjoint discs hold one each. How far the next point can be from
// that root follows from a bound on F″.
func (w *warmRoots) follow(f Family, k float64) bool {
	if w.count == 0 || w.degree < 2 || !w.same(f) {
		return false
	}
	degree := w.degree
	for i := range degree + 1 {
		w.f[i], w.size[i] = 0, 0
	}
	for i, x := range w.a[:w.n+1] {
		w.f[i], w.size[i] = x, math.Abs(x)
	}
	for i, x := range w.b[:w.m+1] {
		p := float64(k * x)
		w.f[i] += p
		w.size[i] += math.Abs(p)
	}
	if w.f[0] == 0 || w.f[degree] == 0 {
		return false
	}
	dk := 0.0
	if w.moving {
		dk = k - w.k
	}
	w.k = k
	for i := range w.z[:w.count] {
		r := &w.z[i]
		r.x += dk * r.vx
		r.y += dk * r.vy
		if !w.settle(r) {
			w.count, w.moving = 0, false
			return false
		}
	}
	w.moving = true
	if !w.disjoint() {
		w.count = 0
		return false
	}
	return true
}

// settle moves one root home and sets its radius and velocity.
func (w *warmRoots) settle(r *warmRoot) bool {
	n := float64(w.degree)
	// Horner in complex arithmetic rounds less than 4u·(degree + 1) in relation to Σ size·|z|ⁱ,
	// the coefficients by 2u more.
	growth := (4*n + 8) * unitRoundoff * 1.01
	for range warmSteps {
		x, y := r.x, r.y
		size := math.Sqrt(float64(x*x)+float64(y*y)) * (1 + 4*unitRoundoff)
		var fr, fi, dr, di, bound float64
		f, s := w.f[:w.degree+1], w.size[:w.degree+1]
		if y == 0 {
			for i := len(f) - 1; i >= 0; i-- {
				dr = float64(dr*x) + fr
				fr = float64(fr*x) + f[i]
				bound = bound*size + s[i]
			}
		} else {
			for i := len(f) - 1; i >= 0; i-- {
				dr, di = float64(dr*x)-float64(di*y)+fr, float64(dr*y)+float64(di*x)+fi
				fr, fi = float64(fr*x)-float64(fi*y)+f[i], float64(fr*y)+float64(fi*x)
				bound = bound*size + s[i]
			}
		}
		square := float64(dr*dr) + float64(di*di)
		slope := math.Sqrt(square)
		errF := growth * bound
		errD := 2 * n * errF / size
		slope -= errD
		if !(slope > 4*errD) || !(size > 0x1p-400 && size < 0x1p400) {
			return false
		}
		tx, ty := (float64(fr*dr)+float64(fi*di))/square, (float64(fi*dr)-float64(fr*di))/square
		t := math.Sqrt(float64(tx*tx) + float64(ty*ty))
		wide := n * (t*1.01 + errF/slope) * 1.01
		// |F″| ≤ n²·Σ size·|z|ⁱ/|z|² nearby, times (1 + wide/|z|)ⁿ.
		after := 0.55*n*n*bound/(size*size*slope)*wide*wide + (errF+errD*wide)/slope*1.01 + 8*unitRoundoff*size
		r.x, r.y = x-tx, y-ty
		if n*wide < 0.05*size && after < warmRadius*size {
			r.radius = after
			r.cx, r.cy, r.reach = x, y, max(wide, t+after)*(1+0x1p-40)
			r.vx, r.vy = w.velocity(x, y, dr, di, square)
			return true
		}
	}
	return false
}

// velocity returns -B/F′ at (x, y).
func (w *warmRoots) velocity(x, y, dr, di, square float64) (vx, vy float64) {
	var br, bi float64
	for i := w.m; i >= 0; i-- {
		br, bi = float64(br*x)-float64(bi*y)+w.b[i], float64(br*y)+float64(bi*x)
	}
	return -(float64(br*dr) + float64(bi*di)) / square, -(float64(bi*dr) - float64(br*di)) / square
}

// disjoint tells whether no two of the discs of which each holds a root meet, conjugates included:
// then each holds exactly one. It sorts the roots.
func (w *warmRoots) disjoint() bool {
	z := w.z[:w.count]
	largest := 0.0
	for i := range z {
		if z[i].cy != 0 && !(z[i].cy > z[i].reach) {
			return false
		}
		largest = max(largest, z[i].reach)
		for j := i; j > 0 && z[j].cx < z[j-1].cx; j-- {
			z[j], z[j-1] = z[j-1], z[j]
		}
	}
	for i := range z {
		a := &z[i]
		for j := i + 1; j < len(z) && z[j].cx-a.cx <= (a.reach+largest)*(1+0x1p-40); j++ {
			dx, dy, sum := z[j].cx-a.cx, z[j].cy-a.cy, (a.reach+z[j].reach)*(1+0x1p-40)
			if !(float64(dx*dx)+float64(dy*dy) > float64(sum*sum)) {
				return false
			}
		}
	}
	return true
}

// appendTo appends the roots in the order of [poly.Poly.Roots].
func (w *warmRoots) appendTo(dst []poly.Root) []poly.Root {
	for i := range w.z[:w.count] {
		r := &w.z[i]
		root := poly.Root{Value: complex(r.x, r.y), Radius: r.radius, HalfRe: r.radius, HalfIm: r.radius, Multiplicity: 1, Distinct: 1}
		if r.y == 0 {
			root.HalfIm = 0
			dst = append(dst, root)
			continue
		}
		conjugate := root
		conjugate.Value = complex(r.x, -r.y)
		dst = append(dst, conjugate, root)
	}
	for i := 1; i < len(dst); i++ {
		for j := i; j > 0 && before(dst[j].Value, dst[j-1].Value); j-- {
			dst[j], dst[j-1] = dst[j-1], dst[j]
		}
	}
	return dst
}

// before is the order of roots.
func before(a, b complex128) bool {
	return real(a) < real(b) || real(a) == real(b) && imag(a) < imag(b)
}
