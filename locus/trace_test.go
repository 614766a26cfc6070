package locus

import (
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
