package tf

import "testing"

func BenchmarkSample(b *testing.B) {
	for _, tt := range []struct{ name, text string }{
		{"order=2", "1 / (s (s + 1))"},
		{"order=4", "1 / (s + 1)^4"},
		{"order=4/deadtime", "exp(-0.35 s) / (s + 1)^4"},
		{"order=12", "(s+0.3) / ((s+1)(s+2)(s+3)(s+4)(s+5)(s+6)(s+7)(s+8)(s+9)(s+10)(s+11)(s+12))"},
	} {
		g := MustParse(tt.text)
		b.Run(tt.name, func(b *testing.B) {
			for b.Loop() {
				if _, err := g.Sample(0.1, ZeroOrderHold); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
