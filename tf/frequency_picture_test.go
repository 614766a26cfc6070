package tf_test

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"sort"
	"sync"
	"testing"

	"github.com/polewright/polewright/tf"
)

// Between its points the curve stays where the line through them is, also beside resonances of
// damping ratio 1e-5.
func TestCurveFollowsTheResponse(t *testing.T) {
	texts := []string{
		"1 / (s^2 + 0.00002 s + 1)",
		"4 / (s (s + 1))",
		"exp(-0.3 s) (s^2 + 0.001 s + 4) / ((s^2 + 0.00004 s + 9) (s + 0.1))",
		"(s^2 + 4) / ((s + 1)^2 (s^2 + 9))",
		"0.5 / (z^2 - z), period 0.01",
		"7",
	}
	r := rand.New(rand.NewPCG(1, 2))
	for _, text := range texts {
		g := tf.MustParse(text)
		response, err := g.FrequencyResponse()
		if err != nil {
			t.Fatal(err)
		}
		curves, err := response.Curve(0, 0)
		if err != nil {
			t.Fatal(err)
		}
		lo, hi, low, high := math.Inf(1), 0.0, math.Inf(1), math.Inf(-1)
		count := 0
		for _, c := range curves {
			count += len(c.Points)
			for i, p := range c.Points {
				if i > 0 && !(p.Frequency > c.Points[i-1].Frequency) {
					t.Fatalf("%s: %v does not ascend", text, p)
				}
				lo, hi = min(lo, p.Frequency), max(hi, p.Frequency)
				l := math.Log(cmplx.Abs(p.Value))
				low, high = min(low, l), max(high, l)
			}
			list := c.Decibels()
			for i := range list.Len() {
				if x, y := list.XY(i); math.IsInf(y, 0) || math.IsNaN(y) || math.IsInf(x, 0) {
					t.Fatalf("%s: point %v, %v", text, x, y)
				}
			}
		}
		if count > 3000 {
			t.Errorf("%s: %d points", text, count)
		}
		for range 3000 {
			w := lo * math.Pow(hi/lo, r.Float64())
			if r.IntN(2) == 0 { // crowd about a point: resonances are there
				c := curves[r.IntN(len(curves))]
				w = c.Points[r.IntN(len(c.Points))].Frequency * (1 + 1e-3*(r.Float64()-0.5)*math.Pow(10, -4*r.Float64()))
			}
			for _, c := range curves {
				i := sort.Search(len(c.Points), func(i int) bool { return c.Points[i].Frequency >= w })
				if i == 0 || i == len(c.Points) {
					continue
				}
				a, b := c.Points[i-1], c.Points[i]
				s := math.Log(w/a.Frequency) / math.Log(b.Frequency/a.Frequency)
				la, lb := math.Log(cmplx.Abs(a.Value)), math.Log(cmplx.Abs(b.Value))
				got := math.Log(cmplx.Abs(g.AtFrequency(w)))
				if miss := math.Abs(la + s*(lb-la) - got); miss > 2e-3*max(high-low, 1) {
					t.Errorf("%s: at %v the line is off by %v of a height of %v", text, w, miss, high-low)
				}
			}
		}
		polar, err := response.PolarCurve(0, 0, 0)
		if err != nil {
			t.Fatal(err)
		}
		for _, c := range polar {
			list := c.Polar()
			for i := range list.Len() {
				if x, y := list.XY(i); !(math.Hypot(x, y) <= 2) {
					t.Errorf("%s: polar point %v, %v", text, x, y)
				}
			}
		}
	}
}

// Goroutines may share a response; run with the race detector.
func TestResponseIsShared(t *testing.T) {
	r, err := tf.MustParse("exp(-0.3 s) (s^2 + 0.001 s + 4) / ((s^2 + 0.00004 s + 9) (s + 0.1))").FrequencyResponse()
	if err != nil {
		t.Fatal(err)
	}
	want, err := r.Curve(0, 0)
	if err != nil {
		t.Fatal(err)
	}
	var group sync.WaitGroup
	for range 8 {
		group.Add(1)
		go func() {
			defer group.Done()
			got, err := r.Curve(0, 0)
			if err != nil || len(got) != len(want) || len(got[0].Points) != len(want[0].Points) {
				t.Errorf("another curve: %v", err)
			}
			r.Phase(1)
		}()
	}
	group.Wait()
}
