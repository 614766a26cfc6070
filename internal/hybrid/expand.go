package hybrid

import "math"

// seriesOf holds the series of a segment: of every signal, of what enters each delay line,
// and of the states.
type seriesOf struct {
	signal [signals]series
	line   [lines]series
	states []series
}

// demanded returns coefficient j of what a sampled controller asks for.
func (s *segment) demanded(j int) float64 {
	switch j {
	case 0:
		return s.demand
	case 1:
		return s.slope
	}
	return 0
}

// expand forms the series about the start of a segment, coefficient by coefficient. Within
// one order the signals follow from the states and the inputs round the loop; with direct
// parts all round it and no dead time the demand v solves v + direct·u = v₀.
func (m *machine) expand(seg *segment, out *seriesOf) {
	if len(out.states) != len(seg.states) {
		out.states = make([]series, len(seg.states))
	}
	for i, x := range seg.states {
		out.states[i] = series{}
		out.states[i][0] = x
	}
	m.expandInputs(seg.from, out)
	var delayed [lines]series
	if seg.delayed != nil {
		delayed = *seg.delayed
	}
	x, dx := make([]float64, len(seg.states)), make([]float64, len(seg.states))
	part := func(i int, v []float64) []float64 { return v[m.at[i]:m.at[i+1]] }
	for j := 0; j < terms; j++ {
		for i := range x {
			x[i] = out.states[i][j]
		}
		reference := out.signal[Reference][j]
		if m.delays[lineReference] > 0 {
			reference = delayed[lineReference][j]
		}
		load, disturbance, noise := out.signal[Load][j], out.signal[Disturbance][j], out.signal[Noise][j]
		filtered := m.prefilter.output(part(0, x), reference)
		// round returns what the loop makes of actuator output u.
		round := func(u float64) (plantIn, y, sensorIn, measured, e, v float64) {
			plantIn = u + load
			in := plantIn
			if m.delays[linePlant] > 0 {
				in = delayed[linePlant][j]
			}
			y = m.plant.output(part(2, x), in) + disturbance
			sensorIn = y
			in = sensorIn
			if m.delays[lineSensor] > 0 {
				in = delayed[lineSensor][j]
			}
			measured = m.sensor.output(part(3, x), in) + noise
			e = filtered - measured
			if m.loop.Period == 0 {
				v = m.controller.output(part(1, x), e)
			}
			return
		}
		var u, w float64
		switch seg.mode {
		case Upper, Lower:
			if j == 0 {
				u = float64(seg.mode) * m.loop.Amplitude
			}
		case Rising, Falling:
			switch j {
			case 0:
				u = seg.effort
			case 1:
				u = math.Copysign(m.loop.Rate, float64(seg.mode))
			}
		default:
			switch {
			case m.loop.Period > 0:
				u = seg.demanded(j)
			case m.delays[lineDemand] > 0:
				u = delayed[lineDemand][j]
			default:
				_, _, _, _, _, u = round(0)
				u /= 1 + m.direct
			}
		}
		plantIn, y, sensorIn, measured, e, v := round(u)
		switch {
		case m.loop.Period > 0:
			w = seg.demanded(j)
		case m.delays[lineDemand] > 0:
			w = delayed[lineDemand][j]
		case seg.mode == Linear:
			w = u
		default:
			w = v
		}
		out.signal[Error][j], out.signal[Demand][j], out.signal[Effort][j] = e, w, u
		out.signal[Output][j], out.signal[Measured][j] = y, measured
		out.line[lineDemand][j], out.line[linePlant][j], out.line[lineSensor][j] = v, plantIn, sensorIn
		if j == terms-1 {
			break
		}
		track := 0.0
		if m.loop.Tracking > 0 {
			track = (u - w) / m.loop.Tracking
		}
		if m.delays[linePlant] > 0 {
			plantIn = delayed[linePlant][j]
		}
		if m.delays[lineSensor] > 0 {
			sensorIn = delayed[lineSensor][j]
		}
		m.prefilter.slope(part(0, x), reference, 0, part(0, dx))
		if m.loop.Period == 0 {
			m.controller.slope(part(1, x), e, track, part(1, dx))
		}
		m.plant.slope(part(2, x), plantIn, 0, part(2, dx))
		m.sensor.slope(part(3, x), sensorIn, 0, part(3, dx))
		for i, d := range dx {
			out.states[i][j+1] = d / float64(j+1)
		}
	}
}

func (m *machine) expandInputs(t float64, out *seriesOf) {
	for i, signal := range [4]Signal{Reference, Load, Disturbance, Noise} {
		out.signal[signal] = series{}
		if m.in[i] != nil {
			m.in[i].Taylor(t, out.signal[signal][:])
		}
	}
}

// length returns how long a segment may be, at most h, for the terms left out of the
// series of the states and signals to be below 1e-18 of their size: the choice of step of
// À. Jorba and M. Zou, A software package for the numerical integration of ODEs by means of
// high-order Taylor methods, Experimental Mathematics 14 (2005) 99–117, section 3.
func (s *seriesOf) length(h float64, scale []float64) float64 {
	for i := range s.states {
		h = s.states[i].length(h, scale[i])
	}
	for _, signal := range [3]Signal{Demand, Output, Measured} {
		h = s.signal[signal].length(h, 0)
	}
	return h
}

func (s *series) length(h, scale float64) float64 {
	const negligible = 1e-18
	for n := 0; n < 2000; n++ {
		size, power := scale, 1.0
		var tail float64
		for j, c := range s {
			term := math.Abs(c) * power
			if math.IsNaN(term) || math.IsInf(term, 0) {
				tail, size = 1, 0
				break
			}
			size = math.Max(size, term)
			if j >= terms-2 {
				tail = math.Max(tail, term)
			}
			power *= h
		}
		if tail <= negligible*size {
			return h
		}
		shrink := math.Pow(negligible*size/tail, 1.0/(terms-1))
		h *= math.Max(0.1, math.Min(0.97, shrink))
	}
	return h
}
