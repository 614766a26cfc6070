package poly

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/polewright/polewright/internal/exact"
)

func TestRouthTable(t *testing.T) {
	tests := []struct {
		source string
		p      Poly
		want   string
	}{{
		source: "regular; b = (6·11 - 1·6)/6 = 10",
		p:      New(1, 6, 11, 6),
		want: `s³ |  1 11
s² |  6  6
s¹ | 10
s⁰ |  6
0 changes of sign in the first column: roots with Re s < 0: 3, = 0: 0, > 0: 0
`,
	}, {
		source: "row of zeros; s³ + 6s² + 11s + 66 = (s² + 11)(s + 6)",
		p:      New(1, 6, 11, 66),
		want: `s³ |  1 11
s² |  6 66
s¹ | 12      row of zeros: derivative of the auxiliary polynomial 6s² + 66
s⁰ | 66
0 changes of sign in the first column: roots with Re s < 0: 1, = 0: 2, > 0: 0
`,
	}, {
		source: "zero first entry; a textbook case, from memory: two roots to the right",
		p:      New(1, 1, 2, 2, 3),
		want: `s⁴ |  1 2 3
s³ |  1 2
s² | -3 3     zero first entry: (0, 3) minus itself shifted left by 1
s¹ |  3
s⁰ |  3
2 changes of sign in the first column: roots with Re s < 0: 2, = 0: 0, > 0: 2
`,
	}, {
		source: "a constant",
		p:      New(-2),
		want: `s⁰ | -2
0 changes of sign in the first column: roots with Re s < 0: 0, = 0: 0, > 0: 0
`,
	}, {
		source: "an even polynomial begins with a row of zeros",
		p:      New(1, 0, -1),
		want: `s² |  1 -1
s¹ |  2      row of zeros: derivative of the auxiliary polynomial s² - 1
s⁰ | -1
1 change of sign in the first column: roots with Re s < 0: 1, = 0: 0, > 0: 1
`,
	}}
	for _, test := range tests {
		table, err := test.p.RouthTable()
		if err != nil {
			t.Fatal(err)
		}
		if diff := cmp.Diff(test.want, table.String()); diff != "" {
			t.Errorf("%s:\n%s", test.source, diff)
		}
	}
	if s := (RouthTable{}).String(); s != "" {
		t.Errorf("the zero table is %q", s)
	}
	var argument *ArgumentError
	for _, p := range []Poly{{}, New(math.NaN()), New(1, 0).Power(maxTableDegree + 1)} {
		if _, err := p.RouthTable(); !errors.As(err, &argument) {
			t.Errorf("%v: %v, want an ArgumentError", p, err)
		}
	}
}

// TestRouthTableCounts compares with the Cauchy index and looks at the first column itself.
func TestRouthTableCounts(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 9))
	singular := map[Singular]int{}
	for range 2000 {
		p := drawPoly(r)
		if r.IntN(2) == 0 { // more singular ones
			c := make([]float64, 1+r.IntN(9))
			for i := range c {
				c[i] = float64(r.IntN(5) - 2)
			}
			p = New(c...)
			if r.IntN(3) == 0 {
				p = p.Mul(New(1, 0, float64(r.IntN(5)-2)))
			}
		}
		if p.Degree() < 0 {
			continue
		}
		table, err := p.RouthTable()
		if err != nil {
			t.Fatal(err)
		}
		if want := Count(exact.LeftOf(p.integers(), exact.Dyadic{})); table.Count != want {
			t.Fatalf("%v: %+v, by the Cauchy index %+v\n%v", p, table.Count, want, table)
		}
		changes := 0
		for i, row := range table.Rows {
			singular[row.Singular]++
			if row.Entries[0] == 0 || math.IsInf(row.Entries[0], 0) {
				changes = table.Count.Outside // rounded away
				break
			}
			if i > 0 && row.Entries[0]*math.Copysign(1, table.Rows[i-1].Entries[0]) < 0 {
				changes++
			}
		}
		if changes != table.Count.Outside {
			t.Fatalf("%v: %d changes of sign, %d counted\n%v", p, changes, table.Count.Outside, table)
		}
	}
	for _, s := range []Singular{Regular, ZeroFirst, ZeroRow} {
		if singular[s] < 100 {
			t.Errorf("only %d rows were drawn of the kind %q", singular[s], s)
		}
	}
}
