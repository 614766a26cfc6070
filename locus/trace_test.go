package locus

import (
	"context"
	"errors"
	"math"
	"math/cmplx"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/poly"
)

type referenceTrack struct {
	Start [2]refdata.Decimal `json:"start_pole"`
	At    []struct {
		K  refdata.Decimal `json:"k"`
		Re refdata.Decimal `json:"re"`
		Im refdata.Decimal `json:"im"`
	} `json:"at"`
}

type referenceFamily struct {
	Name        string            `json:"name"`
	Numerator   []refdata.Decimal `json:"numerator"`
	Denominator []refdata.Decimal `json:"denominator"`
	Tracks      []referenceTrack  `json:"tracks"`
	PolesAt     []struct {
		K refdata.Decimal `json:"k"`
	} `json:"poles_at"`
}

func (r referenceFamily) family(t testing.TB) Family {
	return Family{fixed: poly.New(refdata.Floats(t, r.Denominator)...), scaled: poly.New(refdata.Floats(t, r.Numerator)...)}
}

func referenceFamilies(t testing.TB) []referenceFamily {
	var all []referenceFamily
	refdata.Read(t, "testdata/locus.json", &all)
	return all
}

// TestTracks compares the identity and the places of branches with those of testdata/locus.json.
func TestTracks(t *testing.T) {
	for _, r := range referenceFamilies(t) {
		if len(r.Tracks) == 0 {
			continue
		}
		t.Run(r.Name, func(t *testing.T) {
			last := 0.0
			for _, track := range r.Tracks {
				last = max(last, track.At[len(track.At)-1].K.Float(t))
			}
			for _, lo := range []float64{0, r.Tracks[0].At[0].K.Float(t)} {
				l, err := r.family(t).Trace(lo, last)
				if err != nil {
					t.Fatal(err)
				}
				used := map[int]bool{}
				for _, track := range r.Tracks {
					// the branch is the one that is nearest at the first gain
					best, pick := math.Inf(1), -1
					at := func(i int, b Branch) complex128 {
						s, ok := b.At(track.At[i].K.Float(t))
						if !ok {
							t.Fatalf("no place at gain %v", track.At[i].K)
						}
						return s
					}
					for i, b := range l.Branches {
						s := at(0, b)
						want := complex(track.At[0].Re.Float(t), track.At[0].Im.Float(t))
						if d := cmplx.Abs(s - want); d < best {
							best, pick = d, i
						}
					}
					if used[pick] {
						t.Errorf("branch %d twice", pick)
					}
					used[pick] = true
					for i := range track.At {
						s := at(i, l.Branches[pick])
						miss := math.Hypot(refdata.Miss(t, real(s), track.At[i].Re), refdata.Miss(t, imag(s), track.At[i].Im))
						if miss > 1e-12*cmplx.Abs(s) {
							t.Errorf("from %v at gain %v: %v, want %v%+vj (off by %.2g)", track.Start, track.At[i].K, s, track.At[i].Re, track.At[i].Im, miss)
						}
					}
				}
			}
		})
	}
}

// TestTraceReferences traces every reference family over several intervals.
func TestTraceReferences(t *testing.T) {
	inf := math.Inf(1)
	for _, r := range referenceFamilies(t) {
		for _, span := range [][2]float64{{1e-3, 1e3}, {0, 1e3}, {0, inf}, {-1e3, 1e3}, {-inf, 0}, {-inf, inf}} {
			f := r.family(t)
			l, err := f.Trace(span[0], span[1])
			if err != nil {
				t.Errorf("%s %v: %v", r.Name, span, err)
				continue
			}
			for _, b := range l.Branches {
				for i := range b.Len() {
					x, y := b.XY(i)
					if math.IsNaN(x+y) || math.IsInf(x, 0) || math.IsInf(y, 0) {
						t.Errorf("%s %v: point %v %v", r.Name, span, x, y)
					}
					if i > 0 && b.GainAt(i) < b.GainAt(i-1) {
						t.Errorf("%s %v: gain falls from %v to %v", r.Name, span, b.GainAt(i-1), b.GainAt(i))
					}
				}
			}
		}
	}
}

// TestBreakPointsAreReached compares the vertices of branches with [Family.BreakPoints]: as many
// branches as the order says have a point exactly there, at exactly that gain.
func TestBreakPointsAreReached(t *testing.T) {
	for _, r := range referenceFamilies(t) {
		f := r.family(t)
		l, err := f.Trace(math.Inf(-1), math.Inf(1))
		if err != nil {
			t.Errorf("%s: %v", r.Name, err)
			continue
		}
		points, err := f.BreakPoints()
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range points {
			if f.reduced().common.Degree() > 0 && p.S == -1 {
				continue // a branch runs through a fixed root
			}
			count := 0
			for _, b := range l.Branches {
				for i := range b.Len() {
					x, y := b.XY(i)
					if math.Abs(b.GainAt(i)-p.Gain) <= 0x1p-52*math.Abs(p.Gain) && cmplx.Abs(complex(x, y)-p.S) <= 4e-16*cmplx.Abs(p.S) {
						count++
						if s, ok := b.At(b.GainAt(i)); !ok || s != complex(x, y) {
							t.Errorf("%s: At(%v) = %v, want %v", r.Name, p.Gain, s, p.S)
						}
						break
					}
				}
			}
			if count != p.Order {
				t.Errorf("%s: %d branches reach %+v", r.Name, count, p)
			}
		}
	}
}

// TestTurningRule follows branches through break points: rays on which roots come and go
// alternate π/m apart, and each branch takes the next one counter-clockwise for Im s ≥ 0, the next
// one clockwise below.
func TestTurningRule(t *testing.T) {
	for _, r := range referenceFamilies(t) {
		f := r.family(t)
		l, err := f.Trace(math.Inf(-1), math.Inf(1))
		if err != nil {
			t.Errorf("%s: %v", r.Name, err)
			continue
		}
		points, err := f.BreakPoints()
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range points {
			if f.reduced().common.Degree() > 0 && p.S == -1 {
				continue // a branch runs through a fixed root
			}
			for i, b := range l.Branches {
				if s, ok := b.At(p.Gain); !ok || cmplx.Abs(s-p.S) > 1e-9*cmplx.Abs(p.S) {
					continue
				}
				step := 1e-13 * math.Abs(p.Gain)
				before, ok1 := b.At(p.Gain - step)
				after, ok2 := b.At(p.Gain + step)
				if !ok1 || !ok2 {
					t.Errorf("%s: branch %d ends at %+v", r.Name, i, p)
					continue
				}
				turn := cmplx.Phase((after - p.S) / (before - p.S))
				want := math.Pi / float64(p.Order)
				if imag(p.S) < 0 {
					want = -want
				}
				if math.Abs(turn-want) > 0.05 {
					t.Errorf("%s: branch %d at %+v turns by %v, want %v", r.Name, i, p, turn, want)
				}
			}
		}
	}
}

// TestTraceOfSamples traces a family in z and reads damping off its branches.
func TestTraceOfSamples(t *testing.T) {
	f := Family{fixed: poly.New(1, -1.5, 0.5), scaled: poly.New(1), period: 0.1}
	l, err := f.Trace(0, 1)
	if err != nil {
		t.Fatal(err)
	}
	for _, b := range l.Branches {
		last := b.Len() - 1
		x, y := b.XY(last)
		s := cmplx.Log(complex(x, y)) / 0.1
		if got, want := b.NaturalFrequencyAt(last), cmplx.Abs(s); math.Abs(got-want) > 1e-12*want {
			t.Errorf("natural frequency %v, want %v", got, want)
		}
		if got, want := b.DampingRatioAt(last), -real(s)/cmplx.Abs(s); math.Abs(got-want) > 1e-12 {
			t.Errorf("damping ratio %v, want %v", got, want)
		}
	}
	if frame := l.Frame(); !frame.Contains(1i) || !frame.Contains(-1) {
		t.Errorf("the unit circle is not in view: %v", frame)
	}
}

// TestTraceInterrupted stops where the context says so.
func TestTraceInterrupted(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	f := Family{fixed: poly.New(1, 3, 2, 0), scaled: poly.New(1)}
	if _, err := f.Trace(0, 1e3, Interrupted(ctx)); !errors.Is(err, context.Canceled) {
		t.Errorf("%v", err)
	}
}
