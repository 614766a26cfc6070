package timeresp

import "math"

// Sample fills out with the response at start, start + step, start + 2·step and so on, in
// seconds; as accurate as [Response.At], and much faster for many samples. It allocates
// nothing if there are few modes.
func (r *Response) Sample(out []float64, start, step float64) {
	if len(r.arcs) == 1 && step > 0 && len(out) > 16 {
		a := &r.arcs[0]
		if k, ok := a.signal.(*kernel); ok && len(k.stages) == 0 {
			// Before the modes are used alone, sample by sample.
			i := 0
			for i < len(out) && !((start+float64(i)*step-a.from)*k.w >= k.earlyEnd) {
				out[i] = r.At(start + float64(i)*step)
				i++
			}
			k.sampleModes(out[i:], start+float64(i)*step, a.from, step) // rounded once, to an instant as good
			return
		}
	}
	for i := range out {
		out[i] = r.At(start + float64(i)*step)
	}
}

const block = 128 // samples

// powers holds e^(p·k·step) for k < block.
type powers struct{ re, im [block]float64 }

// fill sets the powers by squaring: seven products at most lie behind each.
func (p *powers) fill(re, im float64) {
	p.re[0], p.im[0] = 1, 0
	p.re[1], p.im[1] = re, im
	for k := 2; k < block; k++ {
		// e^(k/2) squared, and e^((k-1)/2)·e^((k+1)/2) for odd k
		a, b := k/2, k-k/2
		p.re[k] = p.re[a]*p.re[b] - p.im[a]*p.im[b]
		p.im[k] = p.re[a]*p.im[b] + p.im[a]*p.re[b]
	}
}

// sampleModes fills out with the sum of the modes at t, t + step and so on, counted from
// from. Each block starts afresh; within it the modes turn by powers of one step.
func (k *kernel) sampleModes(out []float64, t, from, step float64) {
	if len(out) == 0 {
		return
	}
	for i := 0; i < len(out); i += block {
		part := out[i:min(i+block, len(out))]
		switch len(k.drift) {
		case 0:
			clear(part)
		case 1:
			for j := range part {
				part[j] = k.drift[0]
			}
		default:
			for j := range part {
				tau := (t - from + float64(i+j)*step) * k.w
				y := 0.0
				for l := len(k.drift) - 1; l >= 0; l-- {
					y = y*tau + k.drift[l]
				}
				part[j] = y
			}
		}
	}
	var turn powers
	d := step * k.w
	for n := range k.modes {
		m := &k.modes[n]
		re, im := m.turn(d, 0)
		turn.fill(re, im)
		for i := 0; i < len(out); i += block {
			part := out[i:min(i+block, len(out))]
			// The instant t + i·step - from with what the roundings lose.
			travelled := float64(i) * step
			lost := math.FMA(float64(i), step, -travelled)
			at, rest := twoSum(t, travelled)
			s, more := twoSum(at, -from)
			lo := lost + rest + more
			re, im := m.turn(s*k.w, lo*k.w)
			if m.count > 1 {
				a := k.amplitudes[m.first : m.first+m.count]
				for j := range part {
					tau := s*k.w + float64(j)*d
					var ar, ai float64
					for l := len(a) - 1; l >= 0; l-- {
						ar, ai = ar*tau+real(a[l]), ai*tau+imag(a[l])
					}
					zr, zi := ar*re-ai*im, ar*im+ai*re
					part[j] += zr*turn.re[j] - zi*turn.im[j]
				}
				continue
			}
			zr, zi := m.ar*re-m.ai*im, m.ar*im+m.ai*re
			tr, ti := turn.re[:len(part)], turn.im[:len(part)]
			if m.im == 0 {
				for j := range part {
					part[j] += zr * tr[j]
				}
				continue
			}
			j := 0
			for ; j+4 <= len(part); j += 4 {
				part, tr, ti := part[j:j+4:j+4], tr[j:j+4:j+4], ti[j:j+4:j+4]
				part[0] += zr*tr[0] - zi*ti[0]
				part[1] += zr*tr[1] - zi*ti[1]
				part[2] += zr*tr[2] - zi*ti[2]
				part[3] += zr*tr[3] - zi*ti[3]
			}
			for ; j < len(part); j++ {
				part[j] += zr*tr[j] - zi*ti[j]
			}
		}
	}
}

// turn returns e^(pτ) at τ = tau + lo.
func (m *mode) turn(tau, lo float64) (re, im float64) {
	x := m.re * tau
	xLo := math.FMA(m.re, tau, -x) + m.reLo*tau + m.re*lo
	e := math.Exp(x)
	e += e * xLo
	if m.im == 0 {
		return e, 0
	}
	y := m.im * tau
	yLo := math.FMA(m.im, tau, -y) + m.imLo*tau + m.im*lo
	sin, cos := math.Sincos(y)
	return e * (cos - yLo*sin), e * (sin + yLo*cos)
}
