package poly_test

import (
	"errors"
	"fmt"
	"log"

	"github.com/polewright/polewright/poly"
)

// Where are the closed-loop poles of 1 + K/(s(s+1)(s+2)) at the gain K = 6, at the limit of
// stability? s³ + 3s² + 2s + 6 = (s + 3)(s² + 2): one pair stands on the imaginary axis, and
// its real part is exactly 0.
func ExamplePoly_Roots() {
	roots, err := poly.New(1, 3, 2, 6).Roots()
	if err != nil {
		log.Fatal(err)
	}
	for _, r := range roots {
		onAxis := real(r.Value) == 0 && r.HalfRe == 0
		fmt.Printf("%.6f sharp: %v, on the imaginary axis: %v\n", r.Value, r.Radius < 1e-15, onAxis)
	}
	// Output:
	// (-3.000000+0.000000i) sharp: true, on the imaginary axis: false
	// (0.000000-1.414214i) sharp: true, on the imaginary axis: true
	// (0.000000+1.414214i) sharp: true, on the imaginary axis: true
}

// A repeated root is told as one, however ill-conditioned: (s + 1)¹⁰.
func ExamplePoly_Roots_repeated() {
	p := poly.New(1)
	for range 10 {
		p = p.Mul(poly.New(1, 1))
	}
	roots, err := p.Roots()
	if err != nil {
		log.Fatal(err)
	}
	for _, r := range roots {
		fmt.Println(real(r.Value), r.Multiplicity)
	}
	// Output: -1 10
}

// Roots that are given stay as given, also in products.
func ExampleFromRoots() {
	p, err := poly.FromRoots(2, -0.1, complex(-1, 3), complex(-1, -3))
	if err != nil {
		log.Fatal(err)
	}
	q, err := poly.FromRoots(1, -0.1)
	if err != nil {
		log.Fatal(err)
	}
	roots, err := p.Mul(q).Scale(5).Roots()
	if err != nil {
		log.Fatal(err)
	}
	for _, r := range roots {
		fmt.Println(r.Value, r.Radius, r.Multiplicity)
	}

	var argument *poly.ArgumentError
	if _, err := poly.FromRoots(1, 1i); errors.As(err, &argument) {
		fmt.Println(argument)
	}
	// Output:
	// (-1-3i) 0 1
	// (-1+3i) 0 1
	// (-0.1+0i) 0 2
	// poly.FromRoots: roots[0]: (0+1i) and its conjugate do not come equally often
}

// How does the damping of s² + 2s + k fall as k grows? Each answer starts the next.
func ExampleSolver_Near() {
	var s poly.Solver
	roots, err := s.Roots(poly.New(1, 2, 1))
	if err != nil {
		log.Fatal(err)
	}
	for k := 1.0; k <= 4; k++ {
		if roots, err = s.Near(poly.New(1, 2, k), roots); err != nil {
			log.Fatal(err)
		}
		fmt.Printf("%.0f: %.4f, %d times\n", k, roots[len(roots)-1].Value, roots[len(roots)-1].Multiplicity)
	}
	// Output:
	// 1: (-1.0000+0.0000i), 2 times
	// 2: (-1.0000+1.0000i), 1 times
	// 3: (-1.0000+1.4142i), 1 times
	// 4: (-1.0000+1.7321i), 1 times
}

// Discs that suffice for a picture.
func ExampleRelativeRadius() {
	roots, err := poly.New(1, 6, 11, 6).Roots(poly.RelativeRadius(1e-9))
	if err != nil {
		log.Fatal(err)
	}
	for _, r := range roots {
		fmt.Printf("%.6f %v\n", r.Value, r.Radius < 1e-8)
	}
	// Output:
	// (-3.000000+0.000000i) true
	// (-2.000000+0.000000i) true
	// (-1.000000+0.000000i) true
}
