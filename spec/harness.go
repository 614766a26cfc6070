package spec

import (
	"context"
	"iter"
	"runtime"
	"strings"
	"sync"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// A Checked is one loop of [Sheet.CheckEach] with what was found on it.
type Checked struct {
	Loop   tf.Loop
	Report Report
}

// Workers sets how many goroutines [Sheet.CheckEach] uses; 0 means one for each processor
// that the program may use.
func Workers(n int) Option { return func(s *settings) { s.workers = n } }

// CheckEach checks the sheet on every loop of a sequence, in parallel, and yields the
// reports in the order of the loops, each with the error of its check. Memory does not grow
// with the number of loops: the sequence is read only a little ahead of what was yielded.
//
// When the context ends, what follows is one more pair with its error. When the consumer
// stops, the work stops; no goroutine is left behind. The sequence is read from one
// goroutine at a time.
func (s Sheet) CheckEach(ctx context.Context, loops iter.Seq[tf.Loop], opt ...Option) iter.Seq2[Checked, error] {
	workers := newSettings(opt).workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	return func(yield func(Checked, error) bool) {
		if err := s.Validate(); err != nil {
			yield(Checked{}, err)
			return
		}
		// Loops travel in small batches, so that handing over costs little beside a check.
		const batchSize = 16
		type result struct {
			checked Checked
			err     error
		}
		type batch struct {
			loops   []tf.Loop
			results []result
			done    chan struct{}
		}
		work, cancel := context.WithCancel(ctx)
		var group sync.WaitGroup
		jobs := make(chan *batch, workers)
		order := make(chan *batch, 2*workers)
		group.Go(func() {
			defer close(order)
			defer close(jobs)
			var b *batch
			send := func() bool {
				if b == nil {
					return true
				}
				next := b
				b = nil
				select {
				case order <- next:
				case <-work.Done():
					return false
				}
				select {
				case jobs <- next:
				case <-work.Done():
					close(next.done)
					return false
				}
				return true
			}
			for l := range loops {
				if work.Err() != nil {
					return
				}
				if b == nil {
					b = &batch{done: make(chan struct{})}
				}
				b.loops = append(b.loops, l)
				if len(b.loops) == batchSize && !send() {
					return
				}
			}
			send()
		})
		for range workers {
			group.Go(func() {
				for b := range jobs {
					b.results = make([]result, 0, len(b.loops))
					for _, l := range b.loops {
						if work.Err() != nil {
							break
						}
						r, err := s.check(work, l)
						b.results = append(b.results, result{Checked{l, r}, err})
					}
					close(b.done)
				}
			})
		}
		defer group.Wait()
		defer cancel()
		for b := range order {
			<-b.done
			for _, r := range b.results {
				if ctx.Err() != nil {
					break
				}
				if !yield(r.checked, r.err) {
					return
				}
			}
			if ctx.Err() != nil {
				break
			}
		}
		if err := ctx.Err(); err != nil {
			cancel()
			yield(Checked{}, err)
		}
	}
}

// Testing is what [Require] needs of a *testing.T.
type Testing interface {
	Helper()
	Errorf(format string, arguments ...any)
}

// Require checks the sheet on the loop and fails the test where it is not met, with a line
// for each failing requirement: what was reached, the limit, the slack, and where. It
// reports whether the sheet is met.
//
//	func TestGain(t *testing.T) {
//		spec.Require(t, sheet, loop.WithGain(4.2))
//	}
func Require(t Testing, s Sheet, l tf.Loop) bool {
	t.Helper()
	r, err := s.Check(context.Background(), l)
	if err != nil {
		t.Errorf("the sheet could not be checked: %v", err)
		return false
	}
	if r.Met() {
		return true
	}
	t.Errorf("%s", r.Failures())
	return false
}

// Failures returns the failing requirements, one a line, with their figures; empty if the
// sheet is met.
func (r Report) Failures() string {
	if r.Met() {
		return ""
	}
	if r.Stable != poly.Holds {
		return "the closed loop is not internally stable" + unstablePoles(r)
	}
	var b strings.Builder
	for n, i := range r.Failing() {
		if n > 0 {
			b.WriteByte('\n')
		}
		b.WriteString(verdictWord(r.Findings[i].Verdict) + ": " + r.line(i))
	}
	return b.String()
}

func unstablePoles(r Report) string {
	var poles []string
	for _, p := range r.Poles {
		if real(p.Value) >= 0 && imag(p.Value) >= 0 {
			poles = append(poles, formatPole(p.Value))
		}
	}
	if len(poles) == 0 {
		return ""
	}
	return ": pole " + strings.Join(poles, ", ")
}
