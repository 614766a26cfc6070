package locus

import (
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"github.com/polewright/polewright/internal/baseline"
	"github.com/polewright/polewright/poly"
)

// randomPlant returns a plant of degree n as coefficients, highest power first: real poles and
// lightly damped pairs over three decades, and zeros of the same kind, two fewer than poles.
func randomPlant(r *rand.Rand, n int) (fixed, scaled []float64) {
	product := func(count int) []float64 {
		c := []float64{1}
		multiply := func(q ...float64) {
			out := make([]float64, len(c)+len(q)-1)
			for i, x := range c {
				for j, y := range q {
					out[i+j] += x * y
				}
			}
			c = out
		}
		for count > 0 {
			w := math.Pow(10, 3*r.Float64()-1.5)
			if count >= 2 && r.Float64() < 0.6 {
				ζ := 0.02 + 0.6*r.Float64()
				multiply(1, 2*ζ*w, w*w)
				count -= 2
			} else {
				multiply(1, w)
				count--
			}
		}
		return c
	}
	fixed = product(n)
	scaled = product(r.IntN(n-1) + 0)
	// a gain of 1 in the middle of the interesting range
	g := fixed[len(fixed)-1] / scaled[len(scaled)-1]
	for i := range scaled {
		scaled[i] *= g
	}
	return fixed, scaled
}

type plant struct{ fixed, scaled []float64 }

// randomPlants returns the plants of a benchmark. Nothing is kept between calls, so that each
// is new every time.
func randomPlants(n int) []plant {
	r := rand.New(rand.NewPCG(1, uint64(n)))
	plants := make([]plant, 64)
	for i := range plants {
		plants[i].fixed, plants[i].scaled = randomPlant(r, n)
	}
	return plants
}

// sweep is what a user would write by hand: eigenvalues at a grid of gains, each set matched
// to the last by nearest neighbours.
func sweep(fixed, scaled []float64, lo, hi float64, count int) [][]complex128 {
	n := len(fixed)
	c := make([]float64, n)
	var tracks [][]complex128
	for i := range count {
		k := lo * math.Pow(hi/lo, float64(i)/float64(count-1))
		copy(c, fixed)
		for j, b := range scaled {
			c[n-len(scaled)+j] += k * b
		}
		roots := baseline.CompanionRoots(c)
		if i == 0 {
			for _, s := range roots {
				tracks = append(tracks, []complex128{s})
			}
			continue
		}
		for t := range tracks {
			last := tracks[t][i-1]
			best, pick := math.Inf(1), 0
			for j, s := range roots {
				if d := cmplx.Abs(s - last); d < best {
					best, pick = d, j
				}
			}
			tracks[t] = append(tracks[t], roots[pick])
			roots[pick] = cmplx.Inf()
		}
	}
	return tracks
}

// BenchmarkTrace traces plants never seen before over six decades of gain and reads every
// point; beside it 1000 gains by companion eigenvalues and nearest neighbours.
func BenchmarkTrace(b *testing.B) {
	for _, n := range []int{4, 8, 12, 20} {
		b.Run(fmt.Sprintf("method=trace/degree=%d", n), func(b *testing.B) {
			plants := randomPlants(n)
			var points, sum float64
			next := 0
			for b.Loop() {
				fixed, scaled := plants[next%len(plants)].fixed, plants[next%len(plants)].scaled
				next++
				f, err := Parameter(poly.New(fixed...), poly.New(scaled...))
				if err != nil {
					b.Fatal(err)
				}
				l, err := f.Trace(1e-3, 1e3)
				if err != nil {
					b.Fatal(err)
				}
				for _, branch := range l.Branches {
					for i := range branch.Len() {
						x, y := branch.XY(i)
						sum += x + y + branch.GainAt(i)
						points++
					}
				}
			}
			b.ReportMetric(points/float64(b.N), "points")
			if math.IsNaN(sum) {
				b.Fatal("NaN")
			}
		})
		b.Run(fmt.Sprintf("method=eigenvalues/degree=%d", n), func(b *testing.B) {
			plants := randomPlants(n)
			next := 0
			for b.Loop() {
				plant := plants[next%len(plants)]
				next++
				sweep(plant.fixed, plant.scaled, 1e-3, 1e3, 1000)
			}
		})
	}
}

// BenchmarkTraceGrowth shows how the time for one point grows with the degree: at most as n².
func BenchmarkTraceGrowth(b *testing.B) {
	for _, n := range []int{3, 5, 8, 12, 16, 20, 25, 30} {
		b.Run(fmt.Sprintf("degree=%d", n), func(b *testing.B) {
			plants := randomPlants(n)
			points, next := 0, 0
			for b.Loop() {
				plant := plants[next%len(plants)]
				next++
				l, err := Family{fixed: poly.New(plant.fixed...), scaled: poly.New(plant.scaled...)}.Trace(1e-3, 1e3)
				if err != nil {
					b.Fatal(err)
				}
				for _, branch := range l.Branches {
					points += branch.Len()
				}
			}
			perPoint := float64(b.Elapsed().Nanoseconds()) / float64(points)
			b.ReportMetric(perPoint, "ns/point")
			b.ReportMetric(perPoint/float64(n*n), "ns/(point·n²)")
		})
	}
}
