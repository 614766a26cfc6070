package tf

import "testing"

// The plain way of evaluating is two runs of Horner's rule without any guarantee.
func BenchmarkAt(b *testing.B) {
	g := MustParse("18 (s + 2) exp(-0.02 s) / (s^3 + 3 s^2 + 7 s + 1)")
	num, den := g.Numerator().Coefficients(), g.Denominator().Coefficients()
	s := 0.3 + 2i
	b.Run("method=guaranteed", func(b *testing.B) {
		for b.Loop() {
			g.At(s)
		}
	})
	b.Run("method=horner", func(b *testing.B) {
		for b.Loop() {
			n, d := complex128(0), complex128(0)
			for _, c := range num {
				n = n*s + complex(c, 0)
			}
			for _, c := range den {
				d = d*s + complex(c, 0)
			}
			_ = n / d
		}
	})
}

func BenchmarkLoop(b *testing.B) {
	continuous := Loop{Controller: MustParse("2 (s + 1) / s"), Plant: MustParse("1 / (s (s + 3) (s + 8))")}
	sampled := Loop{Controller: MustParse("2 (z - 0.9) / (z - 1), period 0.05"), Plant: MustParse("1 / (s (s + 3) (s + 8))")}
	for name, l := range map[string]Loop{"continuous": continuous, "sampled": sampled} {
		b.Run("Open/loop="+name, func(b *testing.B) {
			for b.Loop() {
				if _, err := l.Open(); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run("Closed/loop="+name, func(b *testing.B) {
			for b.Loop() {
				if _, err := l.Closed(); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
