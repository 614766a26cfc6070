package tf_test

import (
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"os"
	"slices"
	"strconv"
	"testing"

	"github.com/polewright/polewright/internal/baseline"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// loops returns how many random loops a test draws: few by default, POLEWRIGHT_LOOPS of them
// if that is set.
func loops(t testing.TB, few int) int {
	if s := os.Getenv("POLEWRIGHT_LOOPS"); s != "" {
		n, err := strconv.Atoi(s)
		if err != nil {
			t.Fatal(err)
		}
		return n
	}
	return few
}

// A drawnLoop is an open loop by its roots, so that an independent evaluation keeps its digits.
type drawnLoop struct {
	gain         float64
	zeros, poles []complex128
	dead, period float64
	f            tf.Function
}

// draw makes loops that lean to the hard ones: light resonances, poles on the axis and right
// of it, repeated roots, integrators, negative gains, equal degrees, scales far apart.
func draw(t testing.TB, r *rand.Rand, sampled, delayed bool) drawnLoop {
	var l drawnLoop
	scale := 1.0
	if r.IntN(4) == 0 {
		scale = math.Pow(10, 12*r.Float64()-6)
	}
	if sampled {
		scale = 1
	}
	spread := 1 + 2*r.Float64()
	root := func() []complex128 {
		w := scale * math.Pow(10, spread*(r.Float64()-0.5))
		side := -1.0
		if r.IntN(8) == 0 {
			side = 1
		}
		switch r.IntN(8) {
		case 0:
			return []complex128{0}
		case 1, 2, 3:
			return []complex128{complex(side*w, 0)}
		default:
			zeta := math.Pow(10, -3*r.Float64())
			if r.IntN(12) == 0 {
				zeta = 0
			}
			re, im := side*zeta*w, w*math.Sqrt(1-zeta*zeta)
			return []complex128{complex(re, im), complex(re, -im)}
		}
	}
	list := func(n int) (roots []complex128) {
		for len(roots) < n {
			next := root()
			if len(roots) > 0 && r.IntN(12) == 0 {
				next = []complex128{roots[len(roots)-1]}
				if imag(next[0]) != 0 {
					next = append(next, cmplx.Conj(next[0]))
				}
			}
			if len(roots)+len(next) <= n {
				roots = append(roots, next...)
			}
		}
		return roots
	}
	n := 1 + r.IntN(8)
	l.poles = list(n)
	l.zeros = list(r.IntN(n + 1))
	if sampled {
		// From s to z by the bilinear map at a period that suits the scale.
		l.period = math.Pow(10, 3*r.Float64()-4)
		for _, roots := range []*[]complex128{&l.zeros, &l.poles} {
			for i, s := range *roots {
				h := s * complex(l.period/2, 0)
				if h == 1 {
					h = 0.5
				}
				(*roots)[i] = (1 + h) / (1 - h)
			}
		}
	}
	// |L| = about 1 somewhere in the middle.
	l.gain = 1
	middle := complex(0, scale*math.Pow(10, spread*(r.Float64()-0.5)))
	if sampled {
		middle = cmplx.Exp(middle * complex(l.period, 0))
	}
	l.gain = 1 / cmplx.Abs(l.at(middle))
	if !(l.gain > 1e-100 && l.gain < 1e100) {
		l.gain = 1
	}
	if r.IntN(6) == 0 {
		l.gain = -l.gain
	}
	var err error
	if l.f, err = tf.FromRoots(l.gain, l.zeros, l.poles); err != nil {
		t.Fatal(err)
	}
	if sampled {
		if l.f, err = l.f.WithPeriod(l.period); err != nil {
			t.Fatal(err)
		}
	}
	if delayed {
		l.dead = math.Pow(10, 3*r.Float64()-2) / scale
		if l.f, err = l.f.WithDeadTime(l.dead); err != nil {
			t.Fatal(err)
		}
	}
	return l
}

// at evaluates by the roots; s is z of a sampled loop.
func (l drawnLoop) at(s complex128) complex128 {
	return l.near(s, 0)
}

// near evaluates at origin + s, s small: roots about the origin keep their digits.
func (l drawnLoop) near(s, origin complex128) complex128 {
	y := complex(l.gain, 0)
	for i, p := range l.poles {
		if i < len(l.zeros) {
			y *= s - (l.zeros[i] - origin)
		}
		y /= s - (p - origin)
	}
	if l.dead != 0 {
		y *= cmplx.Exp(-s * complex(l.dead, 0))
	}
	return y
}

func (l drawnLoop) atFrequency(w float64) complex128 {
	if l.period != 0 {
		sin, cos := math.Sincos(w * l.period / 2)
		return l.near(complex(-2*sin*sin, 2*sin*cos), 1)
	}
	return l.at(complex(0, w))
}

func (l drawnLoop) String() string {
	return fmt.Sprintf("gain %v, zeros %v, poles %v, dead time %v, period %v", l.gain, l.zeros, l.poles, l.dead, l.period)
}

// frequencies returns a dense grid, denser beside every root.
func (l drawnLoop) frequencies(last float64) []float64 {
	lo, hi := math.Inf(1), 0.0
	features := []float64{}
	for _, roots := range [][]complex128{l.zeros, l.poles} {
		for _, s := range roots {
			if l.period != 0 {
				s = cmplx.Log(s) / complex(l.period, 0)
			}
			if m := cmplx.Abs(s); m > 0 && !math.IsInf(m, 0) {
				lo, hi = min(lo, m), max(hi, m)
				features = append(features, m)
				for k := 1e-5; k < 0.3; k *= 1.5 {
					features = append(features, m*(1-k), m*(1+k))
				}
			}
		}
	}
	if hi == 0 {
		lo, hi = 1, 1
	}
	lo, hi = lo/1e3, hi*1e3
	if last > 0 {
		hi = last
	}
	if l.period != 0 {
		hi = math.Pi / l.period * (1 - 1e-12)
	}
	for w := lo; w < hi; w *= 1.01 {
		features = append(features, w)
	}
	if l.dead > 0 {
		for w := 0.05 / l.dead; w < hi && len(features) < 20000; w += 0.05 / l.dead {
			features = append(features, w)
		}
	}
	slices.Sort(features)
	i, _ := slices.BinarySearch(features, hi)
	return slices.Compact(features[:i])
}

// between counts the crossovers in (lo, hi).
func between(list []tf.Crossover, lo, hi float64) (n int) {
	for _, c := range list {
		if c.Frequency > lo && c.Frequency < hi {
			n++
		}
	}
	return n
}

// checkAgainstSweep holds margins against an evaluation by the roots on a dense grid: what the
// grid sees must have been found, what was found must be so, and no sample may exceed the
// peak.
func checkAgainstSweep(t *testing.T, l drawnLoop) {
	t.Helper()
	loop := tf.Loop{Plant: l.f}
	m, err := loop.Margins()
	if err != nil {
		if _, ok := err.(*tf.DegenerateError); !ok {
			t.Errorf("%v: %v", l, err)
		}
		return
	}
	last := 0.0
	if l.dead > 0 {
		last = m.CompleteTo
	}
	grid := l.frequencies(last)
	value := make([]complex128, len(grid))
	for i, w := range grid {
		value[i] = l.atFrequency(w)
	}
	for i := range grid {
		y := value[i]
		if cmplx.IsNaN(y) || cmplx.IsInf(y) {
			continue
		}
		if s := 1 / cmplx.Abs(1+y); s > m.SensitivityPeak*(1+1e-8) {
			t.Errorf("%v: |S| = %v at %v, above the peak %v at %v", l, s, grid[i], m.SensitivityPeak, m.SensitivityPeakAt)
		}
		if i == 0 {
			continue
		}
		x := value[i-1]
		if l.dead*(grid[i]-grid[i-1]) > 0.5 {
			continue // the grid is too coarse here
		}
		clear := func(v float64) bool { return math.Abs(v) > 1e-9 }
		if a, b := cmplx.Abs(x)-1, cmplx.Abs(y)-1; a*b < 0 && clear(a) && clear(b) {
			if n := between(m.GainCrossovers, grid[i-1], grid[i]); n&1 == 0 {
				t.Errorf("%v: %d gain crossovers between %v and %v, where |L| goes from %v to %v", l, n, grid[i-1], grid[i], a+1, b+1)
			}
		}
		// A change of the side of the negative real axis, without a jump through a pole or a zero.
		if turn := cmplx.Phase(y / x); math.Abs(turn) < 0.7 && real(x) < 0 && real(y) < 0 && imag(x)*imag(y) < 0 &&
			clear(imag(x)/cmplx.Abs(x)) && clear(imag(y)/cmplx.Abs(y)) {
			if n := between(m.PhaseCrossovers, grid[i-1], grid[i]); n&1 == 0 {
				t.Errorf("%v: %d phase crossovers between %v and %v", l, n, grid[i-1], grid[i])
			}
		}
	}
	// What was found is so. The tolerance grows with the steepness of L.
	steep := func(w float64) float64 {
		a, b := l.atFrequency(w*(1-1e-9)), l.atFrequency(w*(1+1e-9))
		return 1e-12 + 1e-10*cmplx.Abs(b-a)/cmplx.Abs(a)*1e9
	}
	for _, c := range m.GainCrossovers {
		y := l.atFrequency(c.Frequency)
		if off := math.Abs(cmplx.Abs(y) - 1); off > steep(c.Frequency) {
			t.Errorf("%v: |L| = %v at the gain crossover %v", l, cmplx.Abs(y), c.Frequency)
		}
		if off := cmplx.Abs(cmplx.Rect(1, c.Margin) + y); off > 2*steep(c.Frequency) {
			t.Errorf("%v: phase margin %v at %v, where arg(-L) = %v", l, c.Margin, c.Frequency, cmplx.Phase(-y))
		}
	}
	for _, c := range m.PhaseCrossovers {
		y := l.atFrequency(c.Frequency) * complex(c.Margin, 0)
		if c.Margin < 1e-9 || c.Margin > 1e9 {
			continue // so near to a pole or a zero that the frequency's own rounding tells
		}
		if off := cmplx.Abs(y + 1); off > 2*steep(c.Frequency)+1e-10 {
			t.Errorf("%v: margin %v at the phase crossover %v, where L = %v", l, c.Margin, c.Frequency, l.atFrequency(c.Frequency))
		}
	}
	if at := m.SensitivityPeakAt; at > 0 && !math.IsInf(at, 1) && !math.IsInf(m.SensitivityPeak, 1) {
		beside := false // a root on the axis, where the rounding of the frequency alone changes L
		for _, s := range append(slices.Clone(l.zeros), l.poles...) {
			beside = beside || real(s) == 0 && math.Abs(imag(s)-at) < 1e-7*at
		}
		if s := 1 / cmplx.Abs(1+l.atFrequency(at)); !beside && math.Abs(s-m.SensitivityPeak) > 1e-8*m.SensitivityPeak*max(1, m.SensitivityPeak) {
			t.Errorf("%v: |S| = %v at %v, where the peak %v should be", l, s, at, m.SensitivityPeak)
		}
	}
	checkStability(t, l, m)
}

// checkStability holds the verdict against eigenvalues of the companion matrix, or with dead
// time against the winding of 1 + L.
func checkStability(t *testing.T, l drawnLoop, m tf.Margins) {
	t.Helper()
	if m.Stable == poly.Undecided {
		t.Errorf("%v: stability undecided", l)
		return
	}
	n, d := l.f.Numerator(), l.f.Denominator()
	if l.dead == 0 {
		f := n.Add(d)
		if f.Degree() < max(n.Degree(), d.Degree()) {
			return
		}
		c := make([]float64, f.Degree()+1)
		for i := range c {
			c[f.Degree()-i] = f.Coefficient(i)
		}
		roots := baseline.CompanionRoots(c)
		if l.period != 0 {
			// All crowd about 1, where the eigenvalues have few digits: proven roots instead.
			proven, err := f.Roots()
			if err != nil {
				t.Fatal(err)
			}
			roots = nil
			for _, s := range proven {
				roots = append(roots, s.Value)
			}
		}
		worst := math.Inf(-1)
		for _, s := range roots {
			x := real(s) / cmplx.Abs(s)
			if l.period != 0 {
				x = cmplx.Abs(s) - 1
			}
			if s == 0 {
				x = 0
				if l.period != 0 {
					x = -1
				}
			}
			worst = max(worst, x)
		}
		if (math.Abs(worst) > 1e-4 || l.period != 0 && math.Abs(worst) > 1e-12) && (worst < 0) != (m.Stable == poly.Holds) {
			t.Errorf("%v: stable %v, but the worst root is at %v", l, m.Stable, worst)
		}
	}
	if m.Stable == poly.Holds && m.Delay > 0 && !math.IsInf(m.Delay, 1) && l.period == 0 {
		for _, side := range []float64{0.999, 1.001} {
			g, err := l.f.WithDeadTime(l.dead + side*m.Delay)
			if err != nil {
				t.Fatal(err)
			}
			after, err := (tf.Loop{Plant: g}).Margins()
			if err != nil {
				t.Errorf("%v: %v", l, err)
				return
			}
			if want := side < 1; (after.Stable == poly.Holds) != want {
				t.Errorf("%v: with %v of the delay margin %v stable is %v", l, side, m.Delay, after.Stable)
			}
		}
	}
	if m.Stable == poly.Holds {
		for _, side := range []float64{0.999, 1.001} {
			if k := 1 + (m.GainIncrease-1)*side; !math.IsInf(k, 1) {
				checkGain(t, l, k, side < 1)
			}
			if k := 1 - (1-m.GainDecrease)*side; k > 0 && m.GainDecrease > 0 {
				checkGain(t, l, k, side < 1)
			}
		}
	}
}

func checkGain(t *testing.T, l drawnLoop, k float64, want bool) {
	t.Helper()
	m, err := (tf.Loop{Plant: l.f}).WithGain(k).Margins()
	if err != nil {
		t.Errorf("%v: %v", l, err)
		return
	}
	if want && m.Stable != poly.Holds {
		t.Errorf("%v: not stable at the gain %v, inside the gain margin", l, k)
	}
}

func TestMarginsAgainstSweep(t *testing.T) {
	for _, kind := range []struct {
		name             string
		sampled, delayed bool
		few              int
	}{{"continuous", false, false, 120}, {"sampled", true, false, 60}, {"dead time", false, true, 30}} {
		t.Run(kind.name, func(t *testing.T) {
			r := rand.New(rand.NewPCG(4, uint64(kind.few)))
			for range loops(t, kind.few) {
				checkAgainstSweep(t, draw(t, r, kind.sampled, kind.delayed))
			}
		})
	}
}

// Stable gains of loops with dead time: the verdict of Margins at random gains agrees, and for
// an integrator with dead time the limit is π/(2·dead time) (K. J. Åström and T. Hägglund, PID
// Controllers, 2nd ed., 1995, chapter 2, from memory; by hand, the phase -π/2 - ωT is -π at ω = π/(2T)).
func TestStableGains(t *testing.T) {
	list, err := (tf.Loop{Plant: tf.MustParse("exp(-0.25 s)/s")}).StableGains()
	if err != nil || len(list) != 1 || list[0].Lo != 0 || math.Abs(list[0].Hi-2*math.Pi) > 1e-12 {
		t.Errorf("integrator with dead time: %v, %v", list, err)
	}
	for _, text := range []string{
		"1/(s (s+1)(s+2))", "1/(s-1)", "(s+1)^2/s^3", "1/s^2", "1/(z-0.5), period 1", "exp(-0.2 s)/(s-1)",
		"exp(-1.1 s)/(s-1)", "0.5 (s+2)/(s+1) exp(-s)", "exp(-s)(s+1)/s^2", "exp(-s)/(s^2+0.05s+1)",
	} {
		l := tf.Loop{Plant: tf.MustParse(text)}
		list, err := l.StableGains()
		if err != nil {
			if _, ok := err.(*tf.DegenerateError); !ok {
				t.Errorf("%s: %v", text, err)
			}
			continue
		}
		t.Log(text, list)
	}
	r := rand.New(rand.NewPCG(8, 1))
	for i := range loops(t, 12) {
		l := draw(t, r, i%4 == 3, i%4 != 3)
		loop := tf.Loop{Plant: l.f}
		list, err := loop.StableGains()
		if err != nil {
			switch err.(type) {
			case *tf.UnsupportedError, *tf.DegenerateError:
			default:
				t.Errorf("%v: %v", l, err)
			}
			continue
		}
		for range 12 {
			k := math.Pow(10, 6*r.Float64()-3)
			m, err := loop.WithGain(k).Margins()
			if err != nil {
				continue
			}
			inside, near := false, false
			for _, g := range list {
				inside = inside || k > g.Lo && k < g.Hi
				near = near || math.Abs(k-g.Lo) < 1e-8*k || math.Abs(k-g.Hi) < 1e-8*k
			}
			if !near && inside != (m.Stable == poly.Holds) {
				t.Errorf("%v: stable at %v by its margins %v, stable gains %v", l, k, m.Stable, list)
			}
		}
	}
}

// Double poles and zeros on the axis beside dead time, where float64 loses the argument.
func TestDoubleRootsOnTheAxisWithDeadTime(t *testing.T) {
	for _, l := range []drawnLoop{
		{
			gain: 2.0372124577704836e+06, dead: 0.1998446702508195,
			zeros: []complex128{0.09751077051118581i, -0.09751077051118581i, -10.427287004659238},
			poles: []complex128{-0.14677364081691402, -11.78683101252463, 14.57901568792337i, -14.57901568792337i, -14.57901568792337i, 14.57901568792337i, -20.293458885804164, 0},
		},
		{
			gain: -2.0315803062029363, dead: 0.389361725717364,
			zeros: []complex128{0.9928297367278821i, -0.9928297367278821i, -0.9928297367278821i, 0.9928297367278821i, -0.24640583804479457, -0.24640583804479457, -0.24640583804479457, -0.45850431382142276},
			poles: []complex128{-6.7752657361914315, -1.0436394738109132, -1.4097131746053249, 2.943927983966974, -0.7803234725453393, 0.16285860250354564i, -0.16285860250354564i, 0},
		},
	} {
		g, err := tf.FromRoots(l.gain, l.zeros, l.poles)
		if err != nil {
			t.Fatal(err)
		}
		if l.f, err = g.WithDeadTime(l.dead); err != nil {
			t.Fatal(err)
		}
		checkAgainstSweep(t, l)
	}
}
