package locus_test

import (
	"fmt"
	"log"
	"math"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
)

// Where do the closed-loop poles of K/(s(s+1)(s+2)) go as K grows? Those from 0 and -1 meet at
// -1 + 1/√3 for K = 2/√27 and leave the real axis; at K = 6 they are at ±j√2, and the third is
// at -3.
func ExampleFamily_Trace() {
	family, err := locus.Parameter(poly.New(1, 3, 2, 0), poly.New(1))
	if err != nil {
		log.Fatal(err)
	}
	l, err := family.Trace(0, math.Inf(1))
	if err != nil {
		log.Fatal(err)
	}
	for _, b := range l.Branches {
		re, im := b.XY(0)
		s, _ := b.At(6)
		fmt.Printf("from %v to imaginary part %.4f at K = 6\n", complex(re, im), imag(s))
	}
	// Output:
	// from (-2+0i) to imaginary part 0.0000 at K = 6
	// from (-1+0i) to imaginary part -1.4142 at K = 6
	// from (0+0i) to imaginary part 1.4142 at K = 6
}

// At which damping do the poles of K/(s(s+2)) travel? They leave the real axis at -1 for K = 1
// and go straight up and down, so that at K = 4 the damping ratio is 1/2 and the natural
// frequency 2 rad/s.
func ExampleBranch_DampingRatioAt() {
	family, err := locus.Parameter(poly.New(1, 2, 0), poly.New(1))
	if err != nil {
		log.Fatal(err)
	}
	l, err := family.Trace(0, 4)
	if err != nil {
		log.Fatal(err)
	}
	for _, b := range l.Branches {
		last := b.Len() - 1
		fmt.Printf("K = %v: damping ratio %.3f, natural frequency %.3f rad/s\n",
			b.GainAt(last), b.DampingRatioAt(last), b.NaturalFrequencyAt(last))
	}
	// Output:
	// K = 4: damping ratio 0.500, natural frequency 2.000 rad/s
	// K = 4: damping ratio 0.500, natural frequency 2.000 rad/s
}

// What does a picture of (s+3)/(s(s+2)) show besides the branches?
func ExampleLocus() {
	family, err := locus.Parameter(poly.New(1, 2, 0), poly.New(1, 3))
	if err != nil {
		log.Fatal(err)
	}
	l, err := family.Trace(0, math.Inf(1))
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println("poles", l.Poles())
	fmt.Println("zeros", l.Zeros())
	for _, a := range l.Asymptotes() {
		fmt.Printf("asymptote from %.0f to the left: %v\n", real(a[0]), real(a[1]) < real(a[0]))
	}
	fmt.Println("break points -3±√3 in view:", l.Frame().Contains(complex(-3-math.Sqrt(3), 0)), l.Frame().Contains(complex(-3+math.Sqrt(3), 0)))
	fmt.Println("arrowheads:", len(l.Arrows(2)))
	// Output:
	// poles [{(-2+0i) 1} {(0+0i) 1}]
	// zeros [{(-3+0i) 1}]
	// asymptote from 1 to the left: true
	// break points -3±√3 in view: true true
	// arrowheads: 4
}
