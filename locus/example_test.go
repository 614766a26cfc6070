package locus_test

import (
	"fmt"
	"log"
	"math"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// How far can the gain K of a servo with open loop K/(s(s+1)(s+2)) be raised before it
// oscillates? Routh's array gives K = 6, where s² = -2.
func ExampleFamily_Windows() {
	family, err := locus.Gain(tf.MustParse("1 / (s (s+1) (s+2))"))
	if err != nil {
		log.Fatal(err)
	}
	windows, err := family.Windows(locus.LeftOf(0))
	if err != nil {
		log.Fatal(err)
	}
	for _, w := range windows {
		fmt.Printf("stable for %.4g < K < %.4g\n", w.Lo, w.Hi)
	}
	// Output: stable for 0 < K < 6
}

// The same servo shall be damped with ζ > 0.5 and settle faster than e^(-t/4).
func ExampleAll() {
	family, err := locus.Gain(tf.MustParse("1 / (s (s+1) (s+2))"))
	if err != nil {
		log.Fatal(err)
	}
	windows, err := family.Windows(locus.All(locus.Damped(0.5), locus.LeftOf(-0.25)))
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("%.6f\n", windows)
	// Output: [{0.328125 1.037037}]
}

// Where do the branches of K/(s(s+4)(s²+4s+20)) meet? On the axis at -2, and off it at -2 ± j√6.
func ExampleFamily_BreakPoints() {
	family, err := locus.Gain(tf.MustParse("1 / (s (s+4) (s^2+4s+20))"))
	if err != nil {
		log.Fatal(err)
	}
	points, err := family.BreakPoints()
	if err != nil {
		log.Fatal(err)
	}
	for _, p := range points {
		fmt.Printf("%d roots at %.4f for K = %.4f\n", p.Order, p.S, p.Gain)
	}
	// Output:
	// 2 roots at (-2.0000+0.0000i) for K = 64.0000
	// 2 roots at (-2.0000-2.4495i) for K = 100.0000
	// 2 roots at (-2.0000+2.4495i) for K = 100.0000
}

// At which gain and frequency does the servo oscillate?
func ExampleFamily_Crossings() {
	family, err := locus.Gain(tf.MustParse("1 / (s (s+1) (s+2))"))
	if err != nil {
		log.Fatal(err)
	}
	crossings, err := family.Crossings(locus.LeftOf(0))
	if err != nil {
		log.Fatal(err)
	}
	for _, c := range crossings {
		fmt.Printf("%+.4f rad/s at K = %.4f, touching only: %v\n", imag(c.S), c.Gain, c.Touch == poly.Holds)
	}
	// Output:
	// -1.4142 rad/s at K = 6.0000, touching only: false
	// +1.4142 rad/s at K = 6.0000, touching only: false
}

// Three branches go to infinity, from the centroid -1, at ±60° and along the negative axis.
func ExampleFamily_Asymptotes() {
	family, err := locus.Gain(tf.MustParse("1 / (s (s+1) (s+2))"))
	if err != nil {
		log.Fatal(err)
	}
	a := family.Asymptotes(locus.Positive)
	fmt.Printf("from %.4g at", a.Centroid)
	for _, angle := range a.Angles {
		fmt.Printf(" %.4g°", angle*180/math.Pi)
	}
	fmt.Println()
	// Output: from -1 at -60° 60° 180°
}

// What lead must a compensator give for a double integrator to have closed-loop poles at
// -1 ± j√3 (ζ = 0.5, 2 rad/s)? The plant's angle there is -240°.
func ExampleFamily_Deficiency() {
	family, err := locus.Gain(tf.MustParse("1 / s^2"))
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("%.4g°\n", family.Deficiency(complex(-1, math.Sqrt(3)))*180/math.Pi)
	// Output: 60°
}

// A sampled servo k(z+0.9)/((z-1)(z-0.8)): which gains keep it stable, and which damp it with
// ζ > 0.5?
func ExampleOnSamples() {
	family, err := locus.Gain(tf.MustParse("0.02 (z + 0.9) / ((z - 1) (z - 0.8)), period 0.01"))
	if err != nil {
		log.Fatal(err)
	}
	for _, r := range []locus.Region{locus.LeftOf(0), locus.Damped(0.5)} {
		windows, err := family.Windows(locus.OnSamples(r, family.Period()))
		if err != nil {
			log.Fatal(err)
		}
		fmt.Printf("%.4f\n", windows)
	}
	// Output:
	// [{0.0000 11.1111}]
	// [{0.0000 0.9658}]
}

// An unstable plant with one unstable pole: for which gains does exactly one unstable root remain?
func ExampleFamily_WindowsOf() {
	family, err := locus.Gain(tf.MustParse("(s+2) / ((s-1)(s+1)(s+10))"))
	if err != nil {
		log.Fatal(err)
	}
	windows, err := family.WindowsOf(2, locus.LeftOf(0))
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(windows)
	// Output: [{-Inf 5}]
}

// A region of one's own: the ellipse of poles that the specification of a servo allows, about
// -2 rad/s with half-axes of 1.5 and 1 rad/s.
type ellipse struct{ center, a, b float64 }

func (e ellipse) Contains(s complex128) bool {
	x, y := (real(s)-e.center)/e.a, imag(s)/e.b
	return x*x+y*y < 1
}

func (e ellipse) Boundary() []locus.Curve {
	at := func(t float64) complex128 { return complex(e.center+e.a*math.Cos(t), e.b*math.Sin(t)) }
	velocity := func(lo, hi float64) locus.Disc {
		m := lo/2 + hi/2
		return locus.Disc{
			Center: complex(-e.a*math.Sin(m), e.b*math.Cos(m)),
			Radius: max(e.a, e.b) * (hi - lo) / 2 * 1.000001, // the second derivative times half the width
		}
	}
	return []locus.Curve{locus.Parametric(-math.Pi, math.Pi, at, velocity)}
}

func ExampleParametric() {
	family, err := locus.Gain(tf.MustParse("1 / ((s+1) (s+3))"))
	if err != nil {
		log.Fatal(err)
	}
	// (s+2)² = 1 - k: real poles for k < 1, then a pair at -2 ± j√(k-1).
	windows, err := family.Windows(ellipse{center: -2, a: 1.5, b: 1})
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("%.4f\n", windows)
	// Output: [{-1.2500 2.0000}]
}

// Which gain gives a pair of poles the damping ratio 0.6, and where are they?
func ExampleFamily_On() {
	family, err := locus.Gain(tf.MustParse("1 / (s (s+1.2))"))
	if err != nil {
		log.Fatal(err)
	}
	points, err := family.On(locus.Ray(0, complex(-0.6, 0.8)))
	if err != nil {
		log.Fatal(err)
	}
	for _, p := range points {
		fmt.Printf("%.4f at k = %.4f\n", p.S, p.Gain)
	}
	// Output: (-0.6000+0.8000i) at k = 1.0000
}

// The poles of a loop at many gains, each search starting from the last answer.
func ExampleWorkspace() {
	family, err := locus.Gain(tf.MustParse("1 / (s (s+2))"))
	if err != nil {
		log.Fatal(err)
	}
	var w locus.Workspace
	for _, k := range []float64{4, 5, 10} {
		roots, err := w.PolesAt(family, k)
		if err != nil {
			log.Fatal(err)
		}
		fmt.Printf("k = %v: %.4f\n", k, roots[1].Value)
	}
	// Output:
	// k = 4: (-1.0000+1.7321i)
	// k = 5: (-1.0000+2.0000i)
	// k = 10: (-1.0000+3.0000i)
}
