package readme

import (
	"context"
	"fmt"
	"log"

	"github.com/polewright/polewright/spec"
	"github.com/polewright/polewright/tf"
)

// Which gains make a turntable's position drive meet its requirement sheet?
func Example() {
	loop := tf.Loop{
		Controller: tf.MustParse("(s + 5) / (s + 25)"),
		Plant:      tf.MustParse("90 / (s (s + 4) (s + 30))"),
	}
	sheet := spec.Sheet{spec.OvershootAtMost(0.10), spec.RisesWithin(0.35), spec.SettlesWithin(1.1, 0.02)}
	design, err := sheet.Design(context.Background(), []tf.Loop{loop})
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("%sk = %.4g\n", design.Gains, design.Gain)
	// Output:
	// 29.28754379 (rise time) ≤ k ≤ 50.66634545 (overshoot)
	// k = 43.28
}
