package poly

import (
	"math"
	"math/big"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
)

type rootCase struct {
	Name         string            `json:"name"`
	Source       string            `json:"source"`
	Coefficients []refdata.Decimal `json:"coefficients"`
	Roots        []struct {
		Re   refdata.Decimal `json:"re"`
		Im   refdata.Decimal `json:"im"`
		Mult int             `json:"mult"`
	} `json:"roots"`
}

func rootCases(t testing.TB) []rootCase {
	var cases []rootCase
	refdata.Read(t, "testdata/roots.json", &cases)
	return cases
}

// References: PARI/GP and mpmath, see testdata/README.md.
func TestRootsReferences(t *testing.T) {
	for _, c := range rootCases(t) {
		t.Run(c.Name, func(t *testing.T) {
			p := New(refdata.Floats(t, c.Coefficients)...)
			roots, err := p.Roots()
			if err != nil {
				t.Fatal(err)
			}
			checkShape(t, p, roots)
			used := make([]int, len(roots))
			counted := make([]int, len(roots))
			for _, want := range c.Roots {
				hits := 0
				for i, r := range roots {
					re, im := refdata.Miss(t, real(r.Value), want.Re), refdata.Miss(t, imag(r.Value), want.Im)
					if math.Hypot(re, im) <= r.Radius*(1+0x1p-50) && re <= r.HalfRe && im <= r.HalfIm {
						hits++
						used[i]++
						counted[i] += want.Mult
						if r.Distinct == 1 && (want.Im == "0") != (imag(r.Value) == 0) {
							t.Errorf("%v: reality of %v + %vj is wrong", r, want.Re, want.Im)
						}
						if r.Distinct == 1 && want.Re == "0" && real(r.Value) != 0 {
							t.Errorf("%v: the real part is exactly zero", r)
						}
					}
				}
				if hits != 1 {
					t.Errorf("%v + %vj lies in %d discs of %v", want.Re, want.Im, hits, roots)
				}
			}
			for i, r := range roots {
				if used[i] != r.Distinct || counted[i] != r.Multiplicity {
					t.Errorf("%+v: holds %d different roots, %d in all", r, used[i], counted[i])
				}
			}
		})
	}
}

// checkShape checks what every answer promises by its form.
func checkShape(t testing.TB, p Poly, roots []Root) {
	t.Helper()
	total := 0
	for i, r := range roots {
		total += r.Multiplicity
		size := math.Hypot(real(r.Value), imag(r.Value))
		if r.Radius > 0x1p-50*size && r.Radius > minNormal {
			t.Errorf("%v: root %d: %+v: radius above 2⁻⁵⁰ of the modulus", p.c, i, r)
		}
		if r.Distinct == 1 {
			if r.HalfRe > 0x1p-46*math.Abs(real(r.Value)) && r.HalfRe > minNormal || r.HalfIm > 0x1p-46*math.Abs(imag(r.Value)) && r.HalfIm > minNormal {
				t.Errorf("%v: root %d: %+v: a part is not known well enough", p.c, i, r)
			}
		}
		if r.Distinct < 1 || r.Multiplicity < r.Distinct {
			t.Errorf("%v: root %d: %+v: impossible counts", p.c, i, r)
		}
		if imag(r.Value) != 0 {
			found := false
			for _, q := range roots {
				found = found || q == Root{complex(real(r.Value), -imag(r.Value)), r.Radius, r.HalfRe, r.HalfIm, r.Multiplicity, r.Distinct}
			}
			if !found {
				t.Errorf("%v: root %d: %+v: no conjugate", p.c, i, r)
			}
		}
		if i > 0 {
			q := roots[i-1].Value
			if real(q) > real(r.Value) || real(q) == real(r.Value) && imag(q) >= imag(r.Value) {
				t.Errorf("%v: roots %d and %d out of order", p.c, i-1, i)
			}
		}
		for j, q := range roots[:i] {
			if gap := math.Abs(real(r.Value)-real(q.Value)) + math.Abs(imag(r.Value)-imag(q.Value)); gap > 4*(r.Radius+q.Radius) {
				continue
			}
			x := new(big.Float).SetPrec(2400).SetFloat64(real(r.Value))
			y := new(big.Float).SetPrec(2400).SetFloat64(imag(r.Value))
			x.Sub(x, new(big.Float).SetFloat64(real(q.Value)))
			y.Sub(y, new(big.Float).SetFloat64(imag(q.Value)))
			x.Mul(x, x)
			x.Add(x, y.Mul(y, y))
			reach := new(big.Float).SetPrec(2400).SetFloat64(r.Radius)
			reach.Add(reach, new(big.Float).SetFloat64(q.Radius))
			if x.Cmp(reach.Mul(reach, reach)) <= 0 {
				t.Errorf("%v: discs %d and %d meet: %+v %+v", p.c, j, i, q, r)
			}
		}
	}
	if total != p.Degree() {
		t.Errorf("%v: %d roots counted, degree %d: %+v", p.c, total, p.Degree(), roots)
	}
}
