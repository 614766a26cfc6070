package hybrid

// A Reader tells the signals of a result. It keeps the series of the segment that it read
// last, so reading in order is cheap. It is not safe for concurrent use; each goroutine
// makes its own.
type Reader struct {
	r    *Result
	held int // segment whose series are held; -1 for none
	now  seriesOf
}

// Reader returns a new reader of the result.
func (r *Result) Reader() *Reader { return &Reader{r: r, held: -1} }

// At returns the signal at time t, 0 ≤ t ≤ Until; at a jump the value just after it.
func (d *Reader) At(signal Signal, t float64) float64 {
	i := d.r.index(t)
	d.load(i)
	return d.now.signal[signal].at(t - d.r.segments[i].from)
}

func (d *Reader) load(i int) {
	if d.held != i {
		d.r.m.expand(&d.r.segments[i], &d.now)
		d.held = i
	}
}

// Span returns the beginning and the end of segment i.
func (d *Reader) Span(i int) (from, to float64) {
	return d.r.segments[i].from, d.r.segments[i].to
}

// Crossings appends the times within segment i at which the signal passes the level, ascending.
func (d *Reader) Crossings(signal Signal, i int, level float64, found []float64) []float64 {
	d.load(i)
	s := d.now.signal[signal]
	s[0] -= level
	return d.rootsOf(&s, i, found)
}

// Turns appends the times within segment i at which the signal has a maximum or minimum.
func (d *Reader) Turns(signal Signal, i int, found []float64) []float64 {
	d.load(i)
	s := d.now.signal[signal].derivative()
	return d.rootsOf(&s, i, found)
}

func (d *Reader) rootsOf(s *series, i int, found []float64) []float64 {
	from, to := d.Span(i)
	n := len(found)
	found = s.roots(to-from, 1e-16*s.size(to-from), found)
	for j := n; j < len(found); j++ {
		found[j] += from
	}
	return found
}
