// Package refdata helps tests compare float64 results with reference values that are
// printed as decimal strings with more digits than a float64 holds.
package refdata

import (
	"encoding/json"
	"fmt"
	"math"
	"math/big"
	"os"
	"strconv"
	"testing"
)

// precision of the comparison, bits; the references carry at most 40 digits (133 bits).
const precision = 400

// Read decodes a JSON file of the calling package's testdata into v.
func Read(t testing.TB, path string, v any) {
	t.Helper()
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(data, v); err != nil {
		t.Fatalf("%s: %v", path, err)
	}
}

// A Decimal is a reference value as printed. JSON strings and numbers decode into it; null
// leaves it empty.
type Decimal string

// UnmarshalJSON keeps the digits as they stand.
func (d *Decimal) UnmarshalJSON(data []byte) error {
	if string(data) == "null" {
		*d = ""
		return nil
	}
	if len(data) > 0 && data[0] == '"' {
		var s string
		if err := json.Unmarshal(data, &s); err != nil {
			return err
		}
		*d = Decimal(s)
		return nil
	}
	if _, err := strconv.ParseFloat(string(data), 64); err != nil {
		return fmt.Errorf("refdata: %s is no decimal", data)
	}
	*d = Decimal(data)
	return nil
}

// Float returns the float64 nearest to the decimal: the meaning of an input.
// "inf" and "-inf" are infinities; an empty one is NaN.
func (d Decimal) Float(t testing.TB) float64 {
	t.Helper()
	if d == "" {
		return math.NaN()
	}
	x, err := strconv.ParseFloat(string(d), 64)
	if err != nil {
		t.Fatalf("refdata: %q: %v", string(d), err)
	}
	return x
}

// Floats returns the float64 nearest to each decimal.
func Floats(t testing.TB, ds []Decimal) []float64 {
	t.Helper()
	xs := make([]float64, len(ds))
	for i, d := range ds {
		xs[i] = d.Float(t)
	}
	return xs
}

// Big returns the decimal with all its digits: the meaning of a result.
func (d Decimal) Big(t testing.TB) *big.Float {
	t.Helper()
	x, _, err := big.ParseFloat(string(d), 10, precision, big.ToNearestEven)
	if err != nil {
		t.Fatalf("refdata: %q: %v", string(d), err)
	}
	return x
}

// Miss returns |got - want|, computed with all digits of want.
func Miss(t testing.TB, got float64, want Decimal) float64 {
	t.Helper()
	if math.IsNaN(got) {
		return math.Inf(1)
	}
	if math.IsInf(got, 0) {
		if got == want.Float(t) {
			return 0
		}
		return math.Inf(1)
	}
	g := new(big.Float).SetPrec(precision).SetFloat64(got)
	m, _ := g.Sub(g, want.Big(t)).Float64()
	return math.Abs(m)
}

// Off returns |got - want|/|want|, and |got| where want is 0.
func Off(t testing.TB, got float64, want Decimal) float64 {
	t.Helper()
	miss := Miss(t, got, want)
	if w := math.Abs(want.Float(t)); w > 0 && !math.IsInf(w, 0) {
		return miss / w
	}
	return miss
}
