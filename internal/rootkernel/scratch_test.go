package rootkernel

import (
	"fmt"
	"math"
	"math/rand"
	"testing"

	"github.com/polewright/polewright/internal/baseline"
)

func stable(r *rand.Rand, n int) []float64 {
	c := []float64{1}
	mul := func(f ...float64) {
		o := make([]float64, len(c)+len(f)-1)
		for i, a := range c {
			for j, b := range f {
				o[i+j] += a * b
			}
		}
		c = o
	}
	for k := 0; k < n; {
		w := math.Pow(10, 2*r.Float64())
		if n-k >= 2 && r.Intn(2) == 0 {
			z := r.Float64()
			mul(1, 2*z*w, w*w)
			k += 2
		} else {
			mul(1, w)
			k++
		}
	}
	return c
}
func rev(c []float64) []float64 {
	o := make([]float64, len(c))
	for i := range c {
		o[len(c)-1-i] = c[i]
	}
	return o
}
func gauss(r *rand.Rand, n int) []float64 {
	c := make([]float64, n+1)
	for i := range c {
		c[i] = r.NormFloat64()
	}
	return c
}
func TestStats(t *testing.T) {
	for _, fam := range []struct {
		name string
		f    func(*rand.Rand, int) []float64
	}{{"stable", stable}, {"gauss", gauss}} {
		for _, n := range []int{1, 2, 3, 4, 5, 8, 12, 20, 21, 30, 60} {
			r := rand.New(rand.NewSource(1))
			var k Kernel
			tot, fail, mx := 0, 0, 0
			moves := 0
			N := 5000
			for q := 0; q < N; q++ {
				k.Set(rev(fam.f(r, n)), nil)
				k.Start(0)
				ok := false
				s := 0
				for ; s < 60; s++ {
					for _, d := range k.pairs() {
						if d.restless {
							moves++
						}
					}
					if k.sweep() {
						ok = true
						break
					}
				}
				if !ok {
					fail++
				}
				tot += s + 1
				mx = max(mx, s)
			}
			fmt.Printf("%s %d: mean sweeps %.2f max %d fail %d moves/unit %.2f\n", fam.name, n, float64(tot)/float64(N), mx, fail, float64(moves)/float64(N)/float64(max(1, n/2)))
		}
	}
}
func BenchmarkFloat(b *testing.B) {
	for _, n := range []int{4, 8, 12, 20} {
		r := rand.New(rand.NewSource(1))
		var ps [][]float64
		for i := 0; i < 1024; i++ {
			ps = append(ps, rev(stable(r, n)))
		}
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			var k Kernel
			i := 0
			for b.Loop() {
				k.Set(ps[i&1023], nil)
				k.Start(0)
				k.Iterate(30)
				i++
			}
		})
		b.Run(fmt.Sprint(n, "eigen"), func(b *testing.B) {
			i := 0
			for b.Loop() {
				baseline.CompanionRoots(ps[i&1023])
				i++
			}
		})
	}
}

func TestCert(t *testing.T) {
	for _, fam := range []struct {
		name string
		f    func(*rand.Rand, int) []float64
	}{{"stable", stable}, {"gauss", gauss}} {
		for _, n := range []int{1, 2, 3, 4, 5, 8, 12, 20, 21, 30, 60} {
			r := rand.New(rand.NewSource(1))
			var k Kernel
			var ds []Disc
			res := map[string]int{}
			for q := 0; q < 5000; q++ {
				k.Set(rev(fam.f(r, n)), nil)
				k.Start(0)
				if !k.Iterate(50) {
					res["iter"]++
				}
				var f Failure
				ds, f = k.Certify(ds[:0], false)
				res[fmt.Sprint(f)]++
			}
			fmt.Println(fam.name, n, res)
		}
	}
}
func BenchmarkFull(b *testing.B) {
	for _, n := range []int{4, 8, 12, 20} {
		r := rand.New(rand.NewSource(1))
		var ps [][]float64
		for i := 0; i < 1024; i++ {
			ps = append(ps, rev(stable(r, n)))
		}
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			var k Kernel
			var ds []Disc
			i := 0
			for b.Loop() {
				k.Set(ps[i&1023], nil)
				k.Start(0)
				k.Iterate(30)
				ds, _ = k.Certify(ds[:0], false)
				i++
			}
		})
	}
}
