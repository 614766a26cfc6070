package locus

import "math"

// A Window is the open interval of gains Lo < k < Hi; ends may be infinite.
type Window struct{ Lo, Hi float64 }

var everything = Window{math.Inf(-1), math.Inf(1)}

// intersect returns the intersection of two ascending lists of disjoint windows.
func intersect(a, b []Window) []Window {
	var both []Window
	for i, j := 0, 0; i < len(a) && j < len(b); {
		w := Window{max(a[i].Lo, b[j].Lo), min(a[i].Hi, b[j].Hi)}
		if w.Lo < w.Hi {
			both = append(both, w)
		}
		if a[i].Hi < b[j].Hi {
			i++
		} else {
			j++
		}
	}
	return both
}
