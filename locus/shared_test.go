package locus_test

import (
	"math"
	"sync"
	"testing"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/tf"
)

// TestFamiliesAreShared: a family and its traced locus may be used by several goroutines; the
// race detector watches.
func TestFamiliesAreShared(t *testing.T) {
	family, err := locus.Gain(tf.MustParse("1 / (s (s + 1) (s + 2))"))
	if err != nil {
		t.Fatal(err)
	}
	traced, err := family.Trace(0, math.Inf(1))
	if err != nil {
		t.Fatal(err)
	}
	var wait sync.WaitGroup
	for range 4 {
		wait.Go(func() {
			windows, err := family.Windows(locus.LeftOf(0))
			if err != nil || len(windows) != 1 || windows[0].Hi != 6 {
				t.Errorf("windows %v, %v; want (0, 6)", windows, err)
			}
			if _, err := family.PolesAt(3); err != nil {
				t.Error(err)
			}
			for _, b := range traced.Branches {
				if _, ok := b.At(0.5); !ok {
					t.Error("a branch is nowhere at gain 0.5")
				}
			}
			traced.Arrows(2)
		})
	}
	wait.Wait()
}
