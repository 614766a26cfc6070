package spec

import (
	"fmt"
	"math"

	"github.com/polewright/polewright/locus"
)

// A Map is the second-order map of a sheet: the regions of the s-plane in which closed-loop
// poles would have to lie if the loop were a standard second-order system. It is a rule, not
// a proof: for a loop with further poles, zeros or dead time it may promise what the loop
// does not keep, and refuse gains that work. [Resemblance] says whether a loop behaves like
// second order, [Sheet.Windows] what is true.
type Map struct {
	AllPoles     locus.Region // where every pole has to lie; Re s < 0 if no requirement says more
	DominantPair locus.Region // where the dominant pair has to lie
	Assumptions  []string     // what the map takes for granted, in sentences
	Lines        []MapLine    // one for each requirement
}

// A MapLine is the map of one requirement.
type MapLine struct {
	Requirement            int          // index in the sheet
	Name                   string       // of the requirement
	AllPoles, DominantPair locus.Region // nil where the map says nothing
	Words                  string       // the region and how it follows, in words
}

// Map returns the second-order map of the sheet. Requirements that say nothing of poles are
// named in the assumptions. The error is that of [Sheet.Validate].
//
//   - overshoot at most p: damping ratio at least [DampingForOvershoot](p), for all poles
//   - settling within t into the band b: Re s < ln(b)/t, for all poles
//   - rise within t: natural frequency at least ω·t_r(ζ)/t, the exact rise time of the standard
//     system at the damping that the overshoot asks for, 0.5 without one; for the dominant pair
//   - peak within t: damped frequency at least π/t, for the dominant pair
//   - damping and regions for the poles: as they stand
//   - phase margin: the damping of ω²/(s(s + 2ζω)) with that margin; complementary sensitivity
//     peak: the damping with that resonant peak; bandwidth: natural frequencies between the
//     limits divided by the bandwidth of the standard system; all for the dominant pair
func (s Sheet) Map(opt ...Option) (Map, error) {
	if err := s.Validate(); err != nil {
		return Map{}, err
	}
	m := Map{Assumptions: []string{
		"The loop behaves like the standard second-order system ω²/(s² + 2ζωs + ω²): no zeros, no dead time, no further poles near the pair.",
	}}
	damping := 0.0
	for _, r := range s {
		if l, ok := r.(*limited); ok {
			switch l.kind {
			case overshoot:
				if z, err := DampingForOvershoot(math.Min(l.limit, 1-1e-15)); err == nil {
					damping = math.Max(damping, z)
				}
			case dampingRatio:
				damping = math.Max(damping, l.limit)
			}
		}
	}
	assumed := damping
	if assumed == 0 {
		assumed = 0.5
	}
	silent := ""
	for i, r := range s {
		line := mapLine(r, assumed)
		line.Requirement, line.Name = i, r.Name()
		if line.AllPoles == nil && line.DominantPair == nil {
			if silent != "" {
				silent += ", "
			}
			silent += r.Name()
		}
		m.Lines = append(m.Lines, line)
	}
	if silent != "" {
		m.Assumptions = append(m.Assumptions, "The map says nothing of: "+silent+".")
	}
	for _, l := range m.Lines {
		if l.Name == riseTime.word || l.Name == bandwidthBetween.word {
			if damping == 0 {
				m.Assumptions = append(m.Assumptions, "No requirement fixes the damping; rise time and bandwidth are mapped at a damping ratio of 0.5 (common practice).")
			} else {
				m.Assumptions = append(m.Assumptions, fmt.Sprintf("Rise time and bandwidth are mapped at the damping ratio %.4g that the sheet asks for.", damping))
			}
			break
		}
	}
	for _, r := range s {
		if l, ok := r.(*limited); ok && l.kind == settlingTime {
			m.Assumptions = append(m.Assumptions, "Settling is read off the envelope e^(Re s·t) alone; the settling time of the true response jumps with every extremum that touches the band.")
			break
		}
	}
	var all, pair []locus.Region
	for _, l := range m.Lines {
		if l.AllPoles != nil {
			all = append(all, l.AllPoles)
			pair = append(pair, l.AllPoles)
		}
		if l.DominantPair != nil {
			pair = append(pair, l.DominantPair)
		}
	}
	m.AllPoles, m.DominantPair = joinRegions(all), joinRegions(pair)
	return m, nil
}

func joinRegions(r []locus.Region) locus.Region {
	switch len(r) {
	case 0:
		return locus.LeftOf(0)
	case 1:
		return r[0]
	}
	return locus.All(r...)
}

// sector is the region of damping above zeta; at 1 the widest sector that float64 can tell
// from the axis.
func sector(zeta float64) locus.Region {
	return locus.Damped(math.Min(math.Max(zeta, math.SmallestNonzeroFloat64), math.Nextafter(1, 0)))
}

func mapLine(r Requirement, damping float64) MapLine {
	l, ok := r.(*limited)
	if !ok {
		return MapLine{Words: "the map says nothing"}
	}
	switch l.kind {
	case overshoot:
		if l.limit >= 1 {
			return MapLine{AllPoles: locus.LeftOf(0), Words: "any damping"}
		}
		z, err := DampingForOvershoot(l.limit)
		if err != nil {
			break
		}
		return MapLine{AllPoles: sector(z), Words: fmt.Sprintf("damping ratio at least %.4g, %.4g rad off the negative real axis", z, math.Acos(z))}
	case settlingTime:
		sigma := math.Log(l.second) / l.limit
		return MapLine{AllPoles: locus.LeftOf(sigma), Words: fmt.Sprintf("Re s < %.6g rad/s, ln(band)/t", sigma)}
	case riseTime:
		w := SecondOrder{damping, 1}.RiseTime() / l.limit
		return MapLine{DominantPair: locus.Beyond(w), Words: fmt.Sprintf("natural frequency at least %.6g rad/s", w)}
	case peakTime:
		w := math.Pi / l.limit
		return MapLine{DominantPair: faster{w}, Words: fmt.Sprintf("damped frequency at least %.6g rad/s, π/t", w)}
	case dampingRatio:
		return MapLine{AllPoles: sector(l.limit), Words: fmt.Sprintf("damping ratio at least %.4g", l.limit)}
	case poleRegion:
		return MapLine{AllPoles: l.region, Words: "the region as it stands"}
	case phaseMargin:
		if z, err := DampingForPhaseMargin(l.limit); err == nil {
			return MapLine{DominantPair: sector(z), Words: fmt.Sprintf("damping ratio at least %.4g, that of ω²/(s(s + 2ζω)) with the phase margin", z)}
		}
	case complementaryPeak:
		if z, err := DampingForResonantPeak(l.limit); err == nil {
			return MapLine{DominantPair: sector(z), Words: fmt.Sprintf("damping ratio at least %.4g, that of the resonant peak", z)}
		}
	case bandwidthBetween:
		b := SecondOrder{damping, 1}.Bandwidth()
		region := locus.Within(l.second / b)
		if l.limit > 0 {
			region = locus.All(locus.Beyond(l.limit/b), region)
		}
		return MapLine{DominantPair: region, Words: fmt.Sprintf("natural frequency from %.6g to %.6g rad/s", l.limit/b, l.second/b)}
	}
	return MapLine{Words: "the map says nothing"}
}

// faster is the region |Im s| > omega.
type faster struct{ omega float64 }

func (r faster) Contains(s complex128) bool { return math.Abs(imag(s)) > r.omega }

func (r faster) Boundary() []locus.Curve {
	return []locus.Curve{locus.StraightLine(complex(0, r.omega), 1), locus.StraightLine(complex(0, -r.omega), 1)}
}

// A Promise is what a region promises of a standard second-order system with both poles in it.
type Promise struct {
	Overshoot    float64 // at most, fraction of the final value
	SettlingTime float64 // at most, s; +Inf if nothing bounds it
	RiseTime     float64 // at most, s, 10 % to 90 %; +Inf if nothing bounds it
}

// PromiseOf is the map the other way round: the figures that every standard second-order
// system has whose poles are damped by at least zeta (0 to 1), decay at least like e^(-decay·t)
// and lie at least radius from the origin, both in rad/s and ≥ 0. The settling time, for the
// band given, is that of a double real pole, the slowest of all; so is the rise time.
func PromiseOf(zeta, decay, radius, band float64) Promise {
	p := Promise{Overshoot: 1, SettlingTime: inf, RiseTime: inf}
	if zeta > 0 {
		p.Overshoot = SecondOrder{math.Min(zeta, 1), 1}.Overshoot()
	}
	if decay > 0 {
		p.SettlingTime = SecondOrder{1, decay}.SettlingTime(band)
	}
	// A pole at distance r with damping z decays like z·r, and one that decays is as far out.
	if r := math.Max(radius, decay); r > 0 {
		p.RiseTime = SecondOrder{1, r}.RiseTime()
		if s := zeta * r; s > decay {
			p.SettlingTime = SecondOrder{1, s}.SettlingTime(band)
		}
	}
	return p
}
