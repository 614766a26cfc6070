package timeresp

import (
	"fmt"
	"testing"

	"github.com/polewright/polewright/internal/baseline"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// benchmarkPlant returns coefficients, highest power first, of a plant of even order with
// complex pairs and the stationary gain 1.
func benchmarkPlant(order int) (num, den []float64) {
	den = []float64{1}
	for i := 0; i < order/2; i++ {
		w := 1 + 0.7*float64(i)
		next := make([]float64, len(den)+2)
		for j, c := range den {
			next[j] += c
			next[j+1] += 2 * 0.3 * w * c
			next[j+2] += w * w * c
		}
		den = next
	}
	return []float64{den[len(den)-1]}, den
}

const benchmarkStep = 0.02 // s; 1000 of them last well beyond the settling time

func BenchmarkStepSamplesFigures(b *testing.B) {
	for _, order := range []int{4, 8, 12} {
		num, den := benchmarkPlant(order)
		b.Run(fmt.Sprintf("method=modal/order=%d", order), func(b *testing.B) {
			out := make([]float64, 1001)
			for b.Loop() {
				g, err := tf.New(poly.New(num...), poly.New(den...))
				if err != nil {
					b.Fatal(err)
				}
				r, err := Step(g)
				if err != nil {
					b.Fatal(err)
				}
				r.Sample(out, 0, benchmarkStep)
				if _, err := r.Figures(0.02); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run(fmt.Sprintf("method=exponential/order=%d", order), func(b *testing.B) {
			for b.Loop() {
				y := baseline.StepSamples(num, den, benchmarkStep, 1000)
				baseline.StepScan(y, benchmarkStep, 1, 0.02)
			}
		})
	}
}

func benchmarkResponse(b *testing.B, order int) *Response {
	num, den := benchmarkPlant(order)
	g, err := tf.New(poly.New(num...), poly.New(den...))
	if err != nil {
		b.Fatal(err)
	}
	r, err := Step(g)
	if err != nil {
		b.Fatal(err)
	}
	return r
}

func BenchmarkFigures(b *testing.B) {
	for _, order := range []int{2, 4, 8, 12} {
		r := benchmarkResponse(b, order)
		b.Run(fmt.Sprintf("order=%d", order), func(b *testing.B) {
			for b.Loop() {
				if _, err := r.Figures(0.02); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkAt(b *testing.B) {
	for _, order := range []int{2, 4, 8, 12} {
		r := benchmarkResponse(b, order)
		b.Run(fmt.Sprintf("order=%d", order), func(b *testing.B) {
			t := 0.0
			for b.Loop() {
				r.At(t)
				t += 0.013
				if t > 20 {
					t = 0
				}
			}
		})
	}
}

func BenchmarkStep(b *testing.B) {
	for _, order := range []int{4, 8, 12} {
		num, den := benchmarkPlant(order)
		b.Run(fmt.Sprintf("order=%d", order), func(b *testing.B) {
			b.ReportAllocs()
			g, _ := tf.New(poly.New(num...), poly.New(den...))
			for b.Loop() {
				if _, err := Step(g); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run(fmt.Sprintf("roots/order=%d", order), func(b *testing.B) {
			p := poly.New(den...)
			for b.Loop() {
				if _, err := p.Roots(); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
