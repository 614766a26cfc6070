package timeresp

import (
	"context"
	"sync"
	"testing"

	"github.com/polewright/polewright/tf"
)

// TestRecordsAreShared: responses and records may be read by several goroutines; the race
// detector watches.
func TestRecordsAreShared(t *testing.T) {
	loop := tf.Loop{Controller: tf.MustParse("4 (s + 1) / s"), Plant: tf.MustParse("1 / (s (s + 2))"), Limits: tf.Limits{Amplitude: 1}}
	record, err := Run(context.Background(), loop, StepInput(1), Until(10), TrackingTime(1))
	if err != nil {
		t.Fatal(err)
	}
	response, err := StepOf(loop)
	if err != nil {
		t.Fatal(err)
	}
	wantRecord, wantResponse := record.At(tf.Output, 2.5), response.At(2.5)
	var wait sync.WaitGroup
	for range 4 {
		wait.Go(func() {
			for i := range 50 {
				record.At(tf.Effort, float64(i)/5)
				response.At(float64(i) / 5)
			}
			if _, err := record.Figures(0.02); err != nil {
				t.Error(err)
			}
			if _, err := response.Figures(0.02); err != nil {
				t.Error(err)
			}
			if a, b := record.At(tf.Output, 2.5), response.At(2.5); a != wantRecord || b != wantResponse {
				t.Errorf("got %v and %v, want %v and %v", a, b, wantRecord, wantResponse)
			}
		})
	}
	wait.Wait()
}
