package poly

import (
	"fmt"
	"math/big"
	"strconv"
	"strings"
	"unicode/utf8"
)

// A RouthTable is Routh's table of a polynomial, worked out without rounding. As many roots as
// the first column has changes of sign lie to the right of the imaginary axis, in the singular
// cases too. The zero value is the table of nothing.
type RouthTable struct {
	Rows  []RouthRow // from sⁿ down to s⁰
	Count Count      // of roots with Re s < 0, = 0 and > 0
}

// A RouthRow is one row of the table.
type RouthRow struct {
	Power     int       // the row is that of s^Power
	Entries   []float64 // rounded to nearest; Power/2 + 1 of them
	Singular  Singular  // Regular, unless the row was replaced by the one that is shown
	Replaced  []float64 // the entries before that; nil in a regular row
	Shift     int       // after a zero first entry: by how many places the row was shifted and added
	Auxiliary Poly      // in place of a row of zeros: the polynomial of the row above, which it is the derivative of
}

// Singular tells why a row of Routh's table had to be replaced.
type Singular int8

const (
	Regular   Singular = iota // it was not
	ZeroFirst                 // its first entry was zero, but not all were
	ZeroRow                   // all its entries were zero
)

// String returns "regular", "zero first entry" or "row of zeros".
func (s Singular) String() string {
	switch s {
	case Regular:
		return "regular"
	case ZeroFirst:
		return "zero first entry"
	case ZeroRow:
		return "row of zeros"
	}
	return fmt.Sprintf("Singular(%d)", int8(s))
}

// maxTableDegree is the highest degree that a table is made for; nobody reads a longer one.
const maxTableDegree = 100

// RouthTable returns Routh's table.
//
// A row of zeros is replaced by the derivative of the auxiliary polynomial, the one of the row
// above: its roots are roots of p, symmetric about the origin, those on the imaginary axis
// among them. A row that only begins with zeros, k of them, gets itself added, shifted k places
// to the left and multiplied by (-1)^k. On the imaginary axis that multiplies the row's
// polynomial by a positive number, so that the count holds; no small quantity is needed whose
// sign would have to be followed.
//
// Sources: Gantmacher, The Theory of Matrices, vol. 2, Chelsea 1959, ch. XV, §§ 3–4; M. Benidir
// and B. Picinbono, Extended table for eliminating the singularities in Routh's array, IEEE
// Trans. Automat. Control 35 (1990) 218–222.
//
// The error is a [*ArgumentError] for an invalid polynomial, for the zero polynomial and beyond
// degree 100.
func (p Poly) RouthTable() (RouthTable, error) {
	const call = "poly.Poly.RouthTable"
	if err := p.checkRootQuestion(call); err != nil {
		return RouthTable{}, err
	}
	n := p.Degree()
	if n > maxTableDegree {
		return RouthTable{}, &ArgumentError{Call: call, Argument: "p", Reason: fmt.Sprintf("degree %d; at most %d", n, maxTableDegree)}
	}
	integers, exponent := p.integers().Integers()
	unit := new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), uint(max(exponent, -exponent))))
	if exponent < 0 {
		unit.Inv(unit)
	}
	var table RouthTable
	axis := n + 1 // the power of the highest auxiliary polynomial; n+1 if there is none
	var above, row []*big.Rat
	var signs []int
	for power := n; power >= 0; power-- {
		next := make([]*big.Rat, power/2+1)
		if power >= n-1 {
			for i := range next {
				next[i] = new(big.Rat).SetInt(integers[power-2*i])
				next[i].Mul(next[i], unit)
			}
		} else {
			q := new(big.Rat).Quo(above[0], row[0])
			for i := range next {
				// Entries beyond the end of a row are zeros.
				next[i] = new(big.Rat).Set(above[i+1])
				if i+1 < len(row) {
					next[i].Sub(next[i], new(big.Rat).Mul(q, row[i+1]))
				}
			}
		}
		line := RouthRow{Power: power}
		zeros := 0
		for zeros < len(next) && next[zeros].Sign() == 0 {
			zeros++
		}
		switch {
		case zeros == len(next):
			line.Singular, line.Replaced = ZeroRow, make([]float64, len(next))
			line.Auxiliary = auxiliary(row, power+1)
			if axis > n {
				axis = power + 1
			}
			for i := range next {
				// of r·s^(power+1-2i)
				next[i].Mul(row[i], new(big.Rat).SetInt64(int64(power+1-2*i)))
			}
		case zeros > 0:
			line.Singular, line.Replaced, line.Shift = ZeroFirst, rounded(next), zeros
			for i := 0; i+zeros < len(next); i++ {
				t := next[i+zeros]
				if zeros%2 != 0 {
					t = new(big.Rat).Neg(t)
				}
				next[i] = new(big.Rat).Add(next[i], t)
			}
		}
		line.Entries = rounded(next)
		table.Rows = append(table.Rows, line)
		signs = append(signs, next[0].Sign())
		above, row = row, next
	}
	right, rightOfAxis := 0, 0
	for i := 1; i < len(signs); i++ {
		if signs[i] != signs[i-1] {
			right++
			if n-i < axis {
				rightOfAxis++
			}
		}
	}
	boundary := 0
	if axis <= n {
		// Below its row of zeros the table counts the roots of the auxiliary polynomial to
		// the right, as many as to the left; the rest are on the axis.
		boundary = axis - 2*rightOfAxis
	}
	table.Count = Count{Inside: n - boundary - right, Boundary: boundary, Outside: right}
	return table, nil
}

// auxiliary returns the polynomial of a row, rounded to float64 coefficients.
func auxiliary(row []*big.Rat, power int) Poly {
	c := make([]float64, power+1)
	for i, x := range rounded(row) {
		c[2*i] = x
	}
	return New(c...)
}

func rounded(row []*big.Rat) []float64 {
	x := make([]float64, len(row))
	for i, r := range row {
		x[i], _ = r.Float64()
	}
	return x
}

// String returns the table as in a report: a line for each row, with a note on those that were
// replaced, and a line that draws the conclusion. It is meant for a font of fixed width.
func (t RouthTable) String() string { return t.Text("s", 'g', 6) }

// Text returns the table in the given variable with entries in the format and precision of
// [strconv.FormatFloat].
func (t RouthTable) Text(variable string, format byte, precision int) string {
	if len(t.Rows) == 0 {
		return ""
	}
	write := func(x float64) string { return strconv.FormatFloat(x+0, format, precision, 64) }
	var heads []string
	var cells [][]string
	var widths []int
	headWidth := 0
	for _, r := range t.Rows {
		head := variable + superscript(r.Power)
		headWidth = max(headWidth, utf8.RuneCountInString(head))
		heads = append(heads, head)
		line := make([]string, len(r.Entries))
		for i, x := range r.Entries {
			line[i] = write(x)
			if i == len(widths) {
				widths = append(widths, 0)
			}
			widths[i] = max(widths[i], len(line[i]))
		}
		cells = append(cells, line)
	}
	var b strings.Builder
	for k, r := range t.Rows {
		b.WriteString(heads[k])
		b.WriteString(strings.Repeat(" ", headWidth-utf8.RuneCountInString(heads[k])))
		b.WriteString(" |")
		for i, width := range widths {
			cell := ""
			if i < len(cells[k]) {
				cell = cells[k][i]
			} else if r.Singular == Regular {
				break // nothing stands to the right of it
			}
			fmt.Fprintf(&b, " %*s", width, cell)
		}
		switch r.Singular {
		case ZeroRow:
			fmt.Fprintf(&b, "   row of zeros: derivative of the auxiliary polynomial %s", r.Auxiliary.Text(variable, format, precision))
		case ZeroFirst:
			replaced := make([]string, len(r.Replaced))
			for i, x := range r.Replaced {
				replaced[i] = write(x)
			}
			sign := "plus"
			if r.Shift%2 != 0 {
				sign = "minus"
			}
			fmt.Fprintf(&b, "   zero first entry: (%s) %s itself shifted left by %d", strings.Join(replaced, ", "), sign, r.Shift)
		}
		b.WriteByte('\n')
	}
	changes := t.Count.Outside
	plural := "s"
	if changes == 1 {
		plural = ""
	}
	fmt.Fprintf(&b, "%d change%s of sign in the first column: roots with Re %s < 0: %d, = 0: %d, > 0: %d\n",
		changes, plural, variable, t.Count.Inside, t.Count.Boundary, t.Count.Outside)
	return b.String()
}

// MarshalText writes what [RouthTable.String] returns.
func (t RouthTable) MarshalText() ([]byte, error) { return []byte(t.String()), nil }
