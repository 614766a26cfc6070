package poly

import (
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

func TestString(t *testing.T) {
	tests := []struct {
		p    Poly
		want string
	}{
		{New(1, 6, 11, 6), "s³ + 6s² + 11s + 6"},
		{New(-1, 0, -2.5), "-s² - 2.5"},
		{New(1, -1), "s - 1"},
		{New(1, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0), "s¹²"},
		{New(), "0"},
		{New(-7), "-7"},
		{New(1e-9, 1e21), "1e-09·s + 1e+21"},
		{New(0.1, 0.2), "0.1s + 0.2"},
		{New(math.NaN()), "invalid polynomial"},
		{New(1e300, 0).Mul(New(1e300, 1)), "1.0000000000000001e+600·s² + 1e+300·s"},
		// 1e300 squared is 1.000000000000000105e600: the float64 is not quite 1e300.
		{New(1e-300, 1).Mul(New(-1e-300, 1)), "-1e-600·s² + 1"},
	}
	for _, test := range tests {
		if got := test.p.String(); got != test.want {
			t.Errorf("got %q, want %q", got, test.want)
		}
	}
}

func TestFormat(t *testing.T) {
	p := New(1, 2.0/3, -1)
	tests := []struct{ format, want string }{
		{"%v", "s² + 0.6666666666666666s - 1"},
		{"%s", "s² + 0.6666666666666666s - 1"},
		{"%.3g", "s² + 0.667s - 1"},
		{"%.3v", "s² + 0.667s - 1"},
		{"%.2f", "1.00s² + 0.67s - 1.00"},
		{"%f", "1.000000s² + 0.666667s - 1.000000"},
		{"%.1e", "1.0e+00·s² + 6.7e-01·s - 1.0e+00"},
		{"%20.2g|", "      s² + 0.67s - 1|"},
		{"%-20.2g|", "s² + 0.67s - 1      |"},
		{"%#v", "poly.New(1, 0.6666666666666666, -1)"},
		{"%d", "%!d(poly.Poly=s² + 0.6666666666666666s - 1)"},
	}
	for _, test := range tests {
		if got := fmt.Sprintf(test.format, p); got != test.want {
			t.Errorf("%s: got %q, want %q", test.format, got, test.want)
		}
	}
	if got, want := New(1, -0.5, 0).Text("z", 'g', -1), "z² - 0.5z"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
}

func TestParse(t *testing.T) {
	tests := []struct {
		text string
		want Poly
	}{
		{"s³ + 6s² + 11s + 6", New(1, 6, 11, 6)},
		{"  6 + 11 s+6*s ^ 2 + s^3", New(1, 6, 11, 6)},
		{"-z", New(-1, 0)},
		{"+ 2·z", New(2, 0)},
		{"1e-3p + .5 − p", New(1e-3, 0.5).Sub(New(1, 0))},
		{"0", New()},
		{"s - s", New()},
		{"0.1 + 0.2", New(0.1).Add(New(0.2))},
		{"0x1.8p1 s¹⁰", New(3, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0)},
		{"0x1p-1100", New(0x1p-1000).Scale(0x1p-100)},
		{"2e + 3", New(2, 3)}, // the variable may be called e
		{"omega² + 1", New(1, 0, 1)},
		{"1e2s", New(100, 0)},
	}
	for _, test := range tests {
		if got, err := Parse(test.text); err != nil || !got.Equal(test.want) {
			t.Errorf("%q: got %v, %v; want %v", test.text, got, err, test.want)
		}
	}
	bad := []struct{ text, place string }{
		{"", "offset 0"}, {"  ", "offset 2"}, {"s +", "offset 3"}, {"s 2", "offset 2"}, {"2 3", "offset 2"},
		{"s + z", "offset 4"}, {"s^", "offset 2"}, {"s^-1", "offset 2"}, {"s^501", "offset 1"}, {"s^99999999999999999999", "offset 1"},
		{"1e999", "offset 0"}, {"1e-999 s", "offset 0"}, {"s + 1.2.3", "offset 4"}, {"0x s", "offset 0"}, {"0x1p99999999", "offset 0"},
		{"(s+1)", "offset 0"}, {"2*", "offset 2"}, {"\xff", "offset 0"}, {"s^2\xff", "offset 3"}, {".", "offset 0"}, {"0x1_0p0", "offset 0"},
	}
	for _, test := range bad {
		var wrong *FormatError
		p, err := Parse(test.text)
		if !errors.As(err, &wrong) || wrong.Place != test.place || p.Err() == nil {
			t.Errorf("%q: got %v, %v; want a FormatError at %s", test.text, p, err, test.place)
		}
	}
}

func TestJSON(t *testing.T) {
	rooted, err := FromRoots(2, -1, -3+4i, -3-4i)
	if err != nil {
		t.Fatal(err)
	}
	tests := []struct {
		p    Poly
		want string
	}{
		{New(1, 6, 11, 6), `[1,6,11,6]`},
		{New(), `[]`},
		{New(0.1, -1e-300), `[0.1,-1e-300]`},
		{New(0x1p-1000).Scale(3 * 0x1p-100), `["0x3p-1100"]`},
		{rooted, `{"coefficients":[2,14,62,50],"roots":[-1,[-3,4],[-3,-4]]}`},
	}
	for _, test := range tests {
		got, err := json.Marshal(test.p)
		if err != nil || string(got) != test.want {
			t.Errorf("got %s, %v; want %s", got, err, test.want)
		}
		var back Poly
		if err := json.Unmarshal(got, &back); err != nil {
			t.Errorf("%s: %v", got, err)
		}
		if diff := cmp.Diff(test.p, back); diff != "" {
			t.Errorf("%s: %s", got, diff)
		}
	}
	var back Poly
	data, _ := json.Marshal(rooted)
	if err := json.Unmarshal(data, &back); err != nil {
		t.Fatal(err)
	}
	roots, err := back.Roots()
	want, _ := rooted.Roots()
	if diff := cmp.Diff(want, roots); err != nil || diff != "" {
		t.Errorf("the roots are not remembered: %v %s", err, diff)
	}
	if err := json.Unmarshal([]byte(`"s² + 1"`), &back); err != nil || !back.Equal(New(1, 0, 1)) {
		t.Errorf("from a string: %v, %v", back, err)
	}
	if err := json.Unmarshal([]byte(`null`), &back); err != nil || !back.Equal(New(1, 0, 1)) {
		t.Errorf("null changed it: %v, %v", back, err)
	}
	if _, err := json.Marshal(New(math.Inf(1))); err == nil {
		t.Error("an invalid polynomial was written")
	}
	if _, err := New(math.NaN()).MarshalText(); err == nil {
		t.Error("an invalid polynomial was written")
	}
}

func TestJSONRefuses(t *testing.T) {
	bad := []struct{ data, place string }{
		{`{"coefficients":[1],"lead":2}`, `field "lead"`},
		{`{"Coefficients":[1]}`, `field "Coefficients"`},
		{`{"coefficients":[1],"coefficients":[2]}`, "coefficients"},
		{`{}`, "coefficients"},
		{`{"coefficients":null}`, "coefficients"},
		{`{"coefficients":{}}`, "coefficients"},
		{`[1,1e999]`, "coefficients[1]"},
		{`[1,1e-999]`, "coefficients[1]"},
		{`[1,null]`, "coefficients[1]"},
		{`["NaN"]`, "coefficients[0]"},
		{`["Inf",1]`, "coefficients[0]"},
		{`["1.5"]`, "coefficients[0]"},
		{`[true]`, "coefficients[0]"},
		{`[[1]]`, "coefficients[0]"},
		{`true`, "JSON"},
		{`17`, "JSON"},
		{`"s +"`, "offset 3"},
		{`{"coefficients":[1,1],"roots":[1]}`, "roots"},
		{`{"coefficients":[1,1],"roots":[-1,-1]}`, "roots"},
		{`{"coefficients":[1,0,1],"roots":[[0,1],[0,1]]}`, "roots"},
		{`{"coefficients":[1,0,1],"roots":[[0,1],[0,-1,0]]}`, "roots[1]"},
		{`{"coefficients":[1,0,1],"roots":[[0,1],"x"]}`, "roots[1]"},
		{`{"coefficients":[1,0,1],"roots":[[0,1],[0,1e999]]}`, "roots[1]"},
		{`[` + strings.Repeat("1,", MaxDegree+1) + `1]`, "coefficients"},
	}
	for _, test := range bad {
		p := New(5)
		var wrong *FormatError
		err := json.Unmarshal([]byte(test.data), &p)
		if !errors.As(err, &wrong) || wrong.Place != test.place {
			t.Errorf("%s: got %v; want a FormatError at %s", test.data, err, test.place)
		}
		if !p.Equal(New(5)) {
			t.Errorf("%s: the polynomial was changed to %v", test.data, p)
		}
	}
}

// TestTextRoundTrip draws polynomials that no float64 coefficients can hold among others.
func TestTextRoundTrip(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 3))
	for range 500 {
		p := drawPoly(r)
		text, err := p.MarshalText()
		if err != nil {
			t.Fatal(err)
		}
		var q Poly
		if err := q.UnmarshalText(text); err != nil || !q.Equal(p) {
			t.Fatalf("%s: read back as %v, %v", text, q, err)
		}
		data, err := json.Marshal(p)
		if err != nil {
			t.Fatal(err)
		}
		var s Poly
		if err := json.Unmarshal(data, &s); err != nil || !s.Equal(p) {
			t.Fatalf("%s: read back as %v, %v", data, s, err)
		}
	}
}

func TestVerdictText(t *testing.T) {
	for v, want := range map[Verdict]string{Undecided: "undecided", Holds: "holds", Fails: "fails"} {
		if v.String() != want {
			t.Errorf("got %q, want %q", v.String(), want)
		}
		data, err := json.Marshal(map[string]Verdict{"stable": v})
		if err != nil || string(data) != `{"stable":"`+want+`"}` {
			t.Errorf("got %s, %v", data, err)
		}
		var back map[string]Verdict
		if err := json.Unmarshal(data, &back); err != nil || back["stable"] != v {
			t.Errorf("%s read as %v, %v", data, back, err)
		}
	}
	if got := Verdict(7).String(); got != "Verdict(7)" {
		t.Errorf("got %q", got)
	}
	if _, err := Verdict(-1).MarshalText(); err == nil {
		t.Error("a verdict that is none was written")
	}
	v := Holds
	if err := v.UnmarshalText([]byte("maybe")); err == nil || v != Holds {
		t.Errorf("maybe was read as %v, %v", v, err)
	}
}
