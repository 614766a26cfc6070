package poly_test

import (
	"encoding/json"
	"fmt"
	"log"
	"math"

	"github.com/polewright/polewright/poly"
)

// At which frequencies does the power spectrum of a filter, a polynomial in ω², cross one half?
// Where 2ω⁴ - 3ω² + 1 = 0: at 1/√2 and at 1.
func ExamplePoly_RealRoots() {
	roots, err := poly.New(2, 0, -3, 0, 1).RealRoots(0, math.Inf(1), poly.LeftOpen())
	if err != nil {
		log.Fatal(err)
	}
	for _, r := range roots {
		fmt.Printf("%.6f\n", real(r.Value))
	}
	// Output:
	// 0.707107
	// 1.000000
}

// Is the loop with the characteristic polynomial s⁴ + s³ + 2s² + 2s + 3 stable? Routh's table has
// a zero in its first column; the count does not mind.
func ExamplePoly_CountLeftOf() {
	p := poly.New(1, 1, 2, 2, 3)
	count, err := p.CountLeftOf(0)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("left %d, on the axis %d, right %d\n", count.Inside, count.Boundary, count.Outside)
	// Output: left 2, on the axis 0, right 2
}

// How many poles of (s + 1)(s² + s + 1) are damped better than 1/2, and how many exactly so?
func ExamplePoly_CountInSector() {
	count, err := poly.New(1, 2, 2, 1).CountInSector(0.5)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("better %d, exactly %d, worse %d\n", count.Inside, count.Boundary, count.Outside)
	// Output: better 1, exactly 2, worse 0
}

// The integrator of a digital controller has its pole at z = 1, on the unit circle.
func ExamplePoly_CountInDisc() {
	count, err := poly.New(1, -1.5, 0.5).CountInDisc(1)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("inside %d, on the circle %d, outside %d\n", count.Inside, count.Boundary, count.Outside)
	// Output: inside 1, on the circle 1, outside 0
}

// At the gain 60 the loop with (s+1)(s+2)(s+3) in the denominator oscillates: a row of zeros, with
// the auxiliary polynomial 6(s² + 11).
func ExamplePoly_RouthTable() {
	table, err := poly.New(1, 6, 11, 66).RouthTable()
	if err != nil {
		log.Fatal(err)
	}
	fmt.Print(table)
	// Output:
	// s³ |  1 11
	// s² |  6 66
	// s¹ | 12      row of zeros: derivative of the auxiliary polynomial 6s² + 66
	// s⁰ | 66
	// 0 changes of sign in the first column: roots with Re s < 0: 1, = 0: 2, > 0: 0
}

func ExamplePoly_Divide() {
	d, err := poly.New(1, 6, 11, 7).Divide(poly.New(1, 1))
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println("quotient ", d.Quotient)
	fmt.Println("remainder", d.Remainder)
	// Output:
	// quotient  s² + 5s + 6
	// remainder 1
}

// A controller tuned for the plant's pole at -2 meets a plant whose pole is at -2.0001.
func ExamplePoly_CommonFactor() {
	zeros, poles := poly.New(1, 2), poly.New(1, 3.0001, 2.0001) // (s+1)(s+2.0001)
	exact, err := zeros.CommonFactor(poles, 0)
	if err != nil {
		log.Fatal(err)
	}
	nearly, err := zeros.CommonFactor(poles, 1e-3)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println("exactly: ", exact)
	fmt.Println("to 0.1 %:", nearly)
	// Output:
	// exactly:  1
	// to 0.1 %: s + 2
}

func ExamplePoly_SquareFree() {
	p := poly.New(1, 1).Power(3).Mul(poly.New(1, 0, 4))
	for _, f := range p.SquareFree() {
		fmt.Printf("(%v) to the power of %d\n", f.Poly, f.Multiplicity)
	}
	// Output:
	// (s² + 4) to the power of 1
	// (s + 1) to the power of 3
}

// Shifting by -1 moves the roots -1, -2, -3 of (s+1)(s+2)(s+3) to 0, -1, -2.
func ExamplePoly_Shift() {
	fmt.Println(poly.New(1, 6, 11, 6).Shift(-1))
	// Output: s³ + 3s² + 2s
}

// With time in milliseconds, s is in krad/s: p(1000·s).
func ExamplePoly_Stretch() {
	fmt.Println(poly.New(1e-6, 2e-3, 1).Stretch(1000))
	fmt.Println(poly.New(0.25, 1, 1).Stretch(2))
	// Output:
	// s² + 2s + 1
	// s² + 2s + 1
}

// A bound of 0 with the value 0 proves a root; elsewhere the bound says which digits to trust.
func ExamplePoly_Evaluate() {
	p := poly.New(1, 6, 11, 6)
	fmt.Println(p.Evaluate(-2))
	value, bound := p.Evaluate(math.Pi)
	fmt.Println(bound <= value*0x1p-49)
	// Output:
	// 0 0
	// true
}

func ExamplePoly_Text() {
	fmt.Println(poly.New(1, -0.75, 0.125).Text("z", 'g', -1))
	fmt.Printf("%.3f\n", poly.New(1, 2.0/3))
	// Output:
	// z² - 0.75z + 0.125
	// 1.000s + 0.667
}

func ExampleParse() {
	p, err := poly.Parse("2s^2 + 0.5 s")
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(p.Coefficients())
	_, err = poly.Parse("2s^2 + z")
	fmt.Println(err)
	// Output:
	// [2 0.5 0]
	// poly: offset 7: variable "z" after "s"
}

// A polynomial keeps the roots that it was made from, in JSON too.
func ExamplePoly_MarshalJSON() {
	p, err := poly.FromRoots(2, -1, complex(0, 3), complex(0, -3))
	if err != nil {
		log.Fatal(err)
	}
	data, err := json.Marshal(p)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(string(data))

	var q poly.Poly
	fmt.Println(json.Unmarshal([]byte(`{"coefficients": [1, 2], "zeros": []}`), &q))
	// Output:
	// {"coefficients":[2,2,18,18],"roots":[-1,[0,3],[0,-3]]}
	// poly: field "zeros": unknown; the fields are "coefficients" and "roots"
}
