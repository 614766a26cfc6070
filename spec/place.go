package spec

import (
	"fmt"
	"math"
	"strings"
)

// A Place says where a gain in use stands among the windows.
type Place struct {
	Gain   float64
	Inside bool
	Window int // index of the window that holds the gain; -1 outside
	// Below and Above are the nearest ends on both sides: those of the window that holds the
	// gain, or of the windows next to it. nil where there is none, or the end is 0 or infinite.
	Below, Above *Distance
}

// A Distance is how far a gain is from an end.
type Distance struct {
	End      End
	Ratio    float64 // of the two gains, the larger over the smaller, ≥ 1
	Decibels float64 // 20·lg of it
}

// Place returns where a gain stands among the windows.
func (g Gains) Place(k float64) Place {
	p := Place{Gain: k, Window: -1}
	if i, ok := g.Find(k); ok {
		w := g.Windows[i]
		p.Inside, p.Window = true, i
		p.Below, p.Above = distance(k, w.Lo), distance(k, w.Hi)
		return p
	}
	for _, w := range g.Windows {
		if w.Hi.Gain <= k {
			p.Below = distance(k, w.Hi)
		}
		if w.Lo.Gain >= k && p.Above == nil {
			p.Above = distance(k, w.Lo)
		}
	}
	return p
}

func distance(k float64, e End) *Distance {
	ratio := math.Abs(e.Gain / k)
	if ratio < 1 {
		ratio = 1 / ratio
	}
	if e.Gain == 0 || k == 0 || math.IsInf(ratio, 0) || math.IsNaN(ratio) {
		return nil
	}
	return &Distance{End: e, Ratio: ratio, Decibels: 20 * math.Log10(ratio)}
}

// String returns the end with what ends the window there.
func (e End) String() string {
	s := "no end found"
	switch {
	case math.IsInf(e.Gain, 0):
		s = "unbounded"
	case e.Gain == 0:
		s = "0"
	default:
		s = fmt.Sprintf("%.10g", e.Gain)
	}
	if len(e.By) > 0 {
		var by []string
		for _, c := range e.By {
			by = append(by, c.String())
		}
		s += " (" + strings.Join(by, "; ") + ")"
	}
	return s
}

// String returns the cause in words.
func (c Cause) String() string {
	s := c.Name
	if c.Kind == Jump {
		s += ", which jumps there"
	}
	if c.Loop > 0 {
		s += fmt.Sprintf(", loop %d", c.Loop)
	}
	return s
}

// String returns the window as an interval in mathematical notation with its causes.
func (w GainWindow) String() string {
	if w.Lo.Gain == w.Hi.Gain {
		return "k = " + w.Lo.String()
	}
	left, right := "<", "<"
	if w.Lo.Closed {
		left = "≤"
	}
	if w.Hi.Closed {
		right = "≤"
	}
	return w.Lo.String() + " " + left + " k " + right + " " + w.Hi.String()
}

// String returns the place in words.
func (p Place) String() string {
	var b strings.Builder
	if p.Inside {
		fmt.Fprintf(&b, "gain %.6g is inside window %d", p.Gain, p.Window+1)
	} else {
		fmt.Fprintf(&b, "gain %.6g is in no window", p.Gain)
	}
	for _, d := range []struct {
		word string
		d    *Distance
	}{{"above", p.Below}, {"below", p.Above}} {
		if d.d != nil {
			fmt.Fprintf(&b, ", %.4g times (%.3g dB) %s %s", d.d.Ratio, d.d.Decibels, d.word, d.d.End.String())
		}
	}
	return b.String()
}
