package spec

import (
	"math"
	"sort"
)

// Gains is the answer of [Sheet.Windows]: every gain that meets the sheet on every loop, as
// sorted, disjoint windows.
type Gains struct {
	Windows []GainWindow
	// MissedBelow is the widest window, relative to the gap between neighbouring critical
	// gains (ends of stability and break points; beyond the last of them, relative to the
	// gain itself), that the search could have missed; 0 if proven. It is a proof up to
	// rounding for requirements of this package on rational loops, and an estimate for those
	// judged by their figures alone, see Estimated.
	MissedBelow float64
	// Estimated is set where MissedBelow rests on samples of a figure rather than on bounds:
	// requirements of one's own, integral criteria, bandwidth, and loops with dead time.
	Estimated bool
	// SearchedFrom and SearchedTo are the gains between which the windows were searched. Below
	// and above them the nearest verdict was only sampled, over nine decades; ends at 0 and at
	// infinity rest on that.
	SearchedFrom, SearchedTo float64
	Evaluations              int // closed loops looked at
}

// A GainWindow is an interval of gains that all meet the sheet. Lo == Hi is a single gain.
type GainWindow struct{ Lo, Hi End }

// An End is one end of a window.
type End struct {
	Gain   float64 // ±Inf: unbounded
	Closed bool    // the end belongs to the window: a limit met with equality is met; an end of stability is open
	Proven bool    // the window ends here, or is proven to have no end (0, ±Inf); false: no end was found up to Gains.SearchedFrom or SearchedTo, or the answer gave out here
	By     []Cause // what ends the window; empty at 0 and where nothing does
}

// A Cause tells what ends a window.
type Cause struct {
	Requirement int    // index in the sheet; -1 for stability
	Name        string // of the requirement; "stability"
	Loop        int    // index of the loop
	Kind        EndKind
}

// EndKind tells how a requirement ends a window.
type EndKind int

const (
	// Crossing: the figure passes its limit continuously.
	Crossing EndKind = iota
	// Jump: the figure is discontinuous there, as a settling time is where an extremum
	// touches the band.
	Jump
	// Stability: the closed loop loses its stability there.
	Stability
)

func (k EndKind) String() string {
	switch k {
	case Crossing:
		return "crossing"
	case Jump:
		return "jump"
	case Stability:
		return "stability"
	}
	return "unknown"
}

// Contains reports whether the gain lies in one of the windows.
func (g Gains) Contains(k float64) bool {
	_, ok := g.Find(k)
	return ok
}

// Find returns the index of the window that holds the gain.
func (g Gains) Find(k float64) (int, bool) {
	for i, w := range g.Windows {
		if w.Contains(k) {
			return i, true
		}
	}
	return 0, false
}

// Contains reports whether the gain lies in the window.
func (w GainWindow) Contains(k float64) bool {
	if !(k >= w.Lo.Gain && k <= w.Hi.Gain) {
		return false
	}
	return (k > w.Lo.Gain || w.Lo.Closed) && (k < w.Hi.Gain || w.Hi.Closed) && !math.IsInf(k, 0)
}

// intersect returns the gains that lie in both lists, each sorted and disjoint.
func intersect(a, b []GainWindow) []GainWindow {
	var out []GainWindow
	for i, j := 0, 0; i < len(a) && j < len(b); {
		w := GainWindow{Lo: laterStart(a[i].Lo, b[j].Lo), Hi: earlierEnd(a[i].Hi, b[j].Hi)}
		if w.Lo.Gain < w.Hi.Gain && !w.sliver() || w.Lo.Gain == w.Hi.Gain && w.Lo.Closed && w.Hi.Closed {
			out = append(out, w)
		}
		if endsBefore(a[i].Hi, b[j].Hi) {
			i++
		} else {
			j++
		}
	}
	return out
}

// sliver reports whether a window beside an end of stability is so narrow that its two ends,
// found in different ways, are one and the same gain but for rounding.
func (w GainWindow) sliver() bool {
	return (!w.Lo.Closed || !w.Hi.Closed) && w.Hi.Gain*(1-1e-14) <= w.Lo.Gain && !math.IsInf(w.Hi.Gain, 1)
}

func endsBefore(a, b End) bool { return a.Gain < b.Gain || a.Gain == b.Gain && !a.Closed }

func laterStart(a, b End) End {
	switch {
	case a.Gain > b.Gain:
		return a
	case b.Gain > a.Gain:
		return b
	}
	return joined(a, b)
}

func earlierEnd(a, b End) End {
	switch {
	case a.Gain < b.Gain:
		return a
	case b.Gain < a.Gain:
		return b
	}
	return joined(a, b)
}

// joined is the end at which two windows both end.
func joined(a, b End) End {
	e := End{Gain: a.Gain, Closed: a.Closed && b.Closed, Proven: a.Proven || b.Proven}
	switch {
	case a.Closed == b.Closed:
		e.By = append(append(e.By, a.By...), b.By...)
	case a.Closed:
		e.By = b.By
	default:
		e.By = a.By
	}
	return e
}

// complement returns the gains in (0, ∞) that lie in none of the open intervals given, with
// the ends that these have. Intervals may overlap.
func complement(holes []GainWindow) []GainWindow {
	sort.Slice(holes, func(i, j int) bool { return holes[i].Lo.Gain < holes[j].Lo.Gain })
	var out []GainWindow
	lo := End{Gain: 0}
	for _, h := range holes {
		if !(h.Hi.Gain > lo.Gain) {
			continue
		}
		if h.Lo.Gain > lo.Gain || h.Lo.Gain == lo.Gain && lo.Closed && h.Lo.Gain > 0 {
			hi := h.Lo
			hi.Closed, hi.Proven = true, true
			out = append(out, GainWindow{Lo: lo, Hi: hi})
		}
		lo = h.Hi
		lo.Closed, lo.Proven = true, true
	}
	if !math.IsInf(lo.Gain, 1) {
		out = append(out, GainWindow{Lo: lo, Hi: End{Gain: inf}})
	}
	return out
}
