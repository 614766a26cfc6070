package ode

import "math"

// stiffness remembers how often of late the step was held by stability and not by accuracy.
type stiffness struct{ held, free, easy int }

// watchStiffness chooses the method for the steps to come. For the explicit method
// h·|λ| is estimated from its last two stages, which belong to the same time; 6.1 is about
// where its region of stability ends: Hairer, Wanner, Solving Ordinary Differential
// Equations II, section IV.2. The way back is taken where h·‖J‖ stays small.
func (g *Integrator) watchStiffness(h float64) {
	if g.o.Method != Automatic {
		return
	}
	if g.stiff {
		if g.implicit.jacobianNorm*math.Abs(h) < 2 {
			g.signs.easy++
		} else {
			g.signs.easy = 0
		}
		if g.signs.easy == 20 {
			g.stiff, g.signs = false, stiffness{}
		}
		return
	}
	e := g.explicit
	var above, below float64
	for c := range e.y {
		df := e.k[stages853][c] - e.k[stages853-1][c]
		dy := e.y[c] - e.y12[c]
		above += df * df
		below += dy * dy
	}
	if below > 0 && math.Abs(h)*math.Sqrt(above/below) > 6.1 {
		g.signs.free = 0
		if g.signs.held++; g.signs.held == 15 {
			g.stiff, g.signs = true, stiffness{}
			if g.implicit != nil {
				g.implicit.forget()
			}
		}
	} else if g.signs.free++; g.signs.free == 6 {
		g.signs.held = 0
	}
}
