package timeresp

import "github.com/polewright/polewright/internal/hybrid"

// hybridSource tells the signals of a loop that was followed by Taylor series.
type hybridSource struct{ result *hybrid.Result }

func (s hybridSource) reader() signalReader { return hybridReader{s.result.Reader()} }

func (s hybridSource) segments() int { return s.result.Segments() }

func (s hybridSource) switches() []LimitChange {
	changes := make([]LimitChange, len(s.result.Switches))
	for i, c := range s.result.Switches {
		changes[i] = LimitChange{Time: c.Time, From: int(c.From), To: int(c.To)}
	}
	return changes
}

type hybridReader struct{ reader *hybrid.Reader }

func (d hybridReader) at(signal hybrid.Signal, t float64) float64 { return d.reader.At(signal, t) }

func (d hybridReader) span(i int) (from, to float64) { return d.reader.Span(i) }

func (d hybridReader) crossings(signal hybrid.Signal, i int, level float64, found []float64) []float64 {
	return d.reader.Crossings(signal, i, level, found)
}

func (d hybridReader) turns(signal hybrid.Signal, i int, found []float64) []float64 {
	return d.reader.Turns(signal, i, found)
}
