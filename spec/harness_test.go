package spec

import (
	"context"
	"errors"
	"fmt"
	"iter"
	"runtime"
	"strings"
	"testing"
	"time"

	"github.com/polewright/polewright/tf"
)

func loopsOf(p []benchPlant, n int) iter.Seq[tf.Loop] {
	return func(yield func(tf.Loop) bool) {
		for i := range n {
			q := p[i%len(p)]
			if !yield(q.loop().WithGain(q.most * float64(i%97+1) / 100)) {
				return
			}
		}
	}
}

func TestCheckEachKeepsTheOrder(t *testing.T) {
	plants := benchPlants(8)
	sheet := plants[0].sheet()
	i := 0
	for c, err := range sheet.CheckEach(t.Context(), loopsOf(plants, 300), Workers(4)) {
		if err != nil {
			t.Fatal(err)
		}
		want, err := sheet.Check(t.Context(), c.Loop)
		if err != nil {
			t.Fatal(err)
		}
		q := plants[i%len(plants)]
		g, h := c.Loop.Controller.At(0), q.loop().WithGain(q.most*float64(i%97+1)/100).Controller.At(0)
		if g != h {
			t.Fatalf("loop %d has gain %v, want %v", i, g, h)
		}
		if got := c.Report.String(); got != want.String() {
			t.Fatalf("loop %d: %s, want %s", i, got, want)
		}
		i++
	}
	if i != 300 {
		t.Errorf("%d loops, want 300", i)
	}
}

func TestCheckEachStops(t *testing.T) {
	plants := benchPlants(8)
	before := runtime.NumGoroutine()
	n := 0
	for range plants[0].sheet().CheckEach(t.Context(), loopsOf(plants, 1<<30), Workers(3)) {
		if n++; n == 50 {
			break
		}
	}
	ctx, cancel := context.WithCancel(t.Context())
	defer cancel()
	n = 0
	var last error
	var cancelled time.Time
	for _, err := range plants[0].sheet().CheckEach(ctx, loopsOf(plants, 1<<30), Workers(3)) {
		last = err
		if n++; n == 50 {
			cancelled = time.Now()
			cancel()
		}
	}
	took := time.Since(cancelled)
	if !errors.Is(last, context.Canceled) {
		t.Errorf("the last error is %v", last)
	}
	t.Logf("stopped %v after the context ended", took)
	for range 100 {
		if runtime.NumGoroutine() <= before {
			return
		}
		time.Sleep(time.Millisecond)
	}
	t.Errorf("%d goroutines, %d before", runtime.NumGoroutine(), before)
}

func TestCheckEachInvalid(t *testing.T) {
	n := 0
	for _, err := range (Sheet{OvershootAtMost(-1)}).CheckEach(t.Context(), loopsOf(benchPlants(1), 5)) {
		var sheet *SheetError
		if !errors.As(err, &sheet) {
			t.Errorf("%v, want a *SheetError", err)
		}
		n++
	}
	if n != 1 {
		t.Errorf("%d results, want 1", n)
	}
	for _, err := range (Sheet{}).CheckEach(t.Context(), func(yield func(tf.Loop) bool) { yield(tf.Loop{}) }) {
		if err == nil {
			t.Error("a loop without a plant was checked")
		}
	}
}

type recorder struct{ text string }

func (r *recorder) Helper() {}
func (r *recorder) Errorf(format string, arguments ...any) {
	r.text += fmt.Sprintf(format, arguments...)
}

// A failure message carries the numbers.
func TestRequire(t *testing.T) {
	loop := tf.Loop{Plant: mustFunction(t, []float64{1}, []float64{1, 2, 0})}
	sheet := Sheet{OvershootAtMost(0.05), SettlesWithin(10, 0.02)}
	var r recorder
	if !Require(&r, sheet, loop) || r.text != "" {
		t.Errorf("k = 1 is critically damped and meets the sheet: %s", r.text)
	}
	if Require(&r, sheet, loop.WithGain(20)) || !strings.Contains(r.text, "overshoot 0.486") || !strings.Contains(r.text, "limit 0.05") || strings.Contains(r.text, "settling") {
		t.Errorf("k = 20: %s", r.text)
	}
	r.text = ""
	if Require(&r, sheet, loop.WithGain(-1)) || !strings.Contains(r.text, "not internally stable") || !strings.Contains(r.text, "0.414214") {
		t.Errorf("k = -1: %s", r.text)
	}
}

func BenchmarkCheckEach(b *testing.B) {
	plants := benchPlants(64)
	sheet := plants[0].sheet()
	for _, workers := range []int{1, 2} {
		b.Run(fmt.Sprintf("workers=%d", workers), func(b *testing.B) {
			const loops = 4000
			for b.Loop() {
				for _, err := range sheet.CheckEach(context.Background(), loopsOf(plants, loops), Workers(workers)) {
					if err != nil {
						b.Fatal(err)
					}
				}
			}
			b.ReportMetric(float64(b.N*loops)/b.Elapsed().Seconds(), "checks/s")
		})
	}
}
