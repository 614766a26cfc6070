package ode

import (
	"math"
	"slices"
	"strconv"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
)

// The problems are those of T. E. Hull, W. H. Enright, B. M. Fellen, A. E. Sedgwick,
// Comparing numerical methods for ordinary differential equations, SIAM J. Numer. Anal. 9
// (1972) 603–637, classes A to E without C5, and of W. H. Enright, T. E. Hull, B. Lindberg,
// Comparing numerical methods for stiff systems of O.D.E.s, BIT 15 (1975) 10–48; with
// Robertson's reaction. The equations are from memory.

func kepler(_ float64, y, d []float64) {
	r := math.Hypot(y[0], y[1])
	r3 := r * r * r
	d[0], d[1], d[2], d[3] = y[2], y[3], -y[0]/r3, -y[1]/r3
}

func diffusion(_ float64, y, d []float64) {
	for i := range y {
		d[i] = -2 * y[i]
		if i > 0 {
			d[i] += y[i-1]
		}
		if i+1 < len(y) {
			d[i] += y[i+1]
		}
	}
}

func ring(a float64) Func {
	return func(_ float64, y, d []float64) {
		d[0], d[1] = -10*y[0]+a*y[1], -a*y[0]-10*y[1]
		d[2], d[3], d[4], d[5] = -4*y[2], -y[3], -0.5*y[4], -0.1*y[5]
	}
}

func chain(b float64) Func {
	return func(_ float64, y, d []float64) {
		d[0] = -y[0] + 2
		d[1] = -10*y[1] + b*y[0]*y[0]
		d[2] = -40*y[2] + 4*b*(y[0]*y[0]+y[1]*y[1])
		d[3] = -100*y[3] + 10*b*(y[0]*y[0]+y[1]*y[1]+y[2]*y[2])
	}
}

var problems = map[string]Func{
	"A1": func(_ float64, y, d []float64) { d[0] = -y[0] },
	"A2": func(_ float64, y, d []float64) { d[0] = -y[0] * y[0] * y[0] / 2 },
	"A3": func(t float64, y, d []float64) { d[0] = y[0] * math.Cos(t) },
	"A4": func(_ float64, y, d []float64) { d[0] = y[0] / 4 * (1 - y[0]/20) },
	"A5": func(t float64, y, d []float64) { d[0] = (y[0] - t) / (y[0] + t) },
	"B1": func(_ float64, y, d []float64) { d[0], d[1] = 2*(y[0]-y[0]*y[1]), -(y[1] - y[0]*y[1]) },
	"B2": func(_ float64, y, d []float64) { d[0], d[1], d[2] = -y[0]+y[1], y[0]-2*y[1]+y[2], y[1]-y[2] },
	"B3": func(_ float64, y, d []float64) { d[0], d[1], d[2] = -y[0], y[0]-y[1]*y[1], y[1]*y[1] },
	"B4": func(_ float64, y, d []float64) {
		r := math.Hypot(y[0], y[1])
		d[0], d[1], d[2] = -y[1]-y[0]*y[2]/r, y[0]-y[1]*y[2]/r, y[0]/r
	},
	"B5": func(_ float64, y, d []float64) { d[0], d[1], d[2] = y[1]*y[2], -y[0]*y[2], -0.51*y[0]*y[1] },
	"C1": func(_ float64, y, d []float64) {
		d[0], d[9] = -y[0], y[8]
		for i := 1; i < 9; i++ {
			d[i] = y[i-1] - y[i]
		}
	},
	"C2": func(_ float64, y, d []float64) {
		d[0], d[9] = -y[0], 9*y[8]
		for i := 1; i < 9; i++ {
			d[i] = float64(i)*y[i-1] - float64(i+1)*y[i]
		}
	},
	"C3": diffusion, "C4": diffusion,
	"D1": kepler, "D2": kepler, "D3": kepler, "D4": kepler, "D5": kepler,
	"E1": func(t float64, y, d []float64) {
		d[0], d[1] = y[1], -(y[1]/(t+1) + (1-0.25/((t+1)*(t+1)))*y[0])
	},
	"E2": func(_ float64, y, d []float64) { d[0], d[1] = y[1], (1-y[0]*y[0])*y[1]-y[0] },
	"E3": func(t float64, y, d []float64) {
		d[0], d[1] = y[1], y[0]*y[0]*y[0]/6-y[0]+2*math.Sin(2.78535*t)
	},
	"E4": func(_ float64, y, d []float64) { d[0], d[1] = y[1], 0.032-0.4*y[1]*y[1] },
	"E5": func(t float64, y, d []float64) { d[0], d[1] = y[1], math.Sqrt(1+y[1]*y[1])/(25-t) },

	"stiff A1": func(_ float64, y, d []float64) { d[0], d[1], d[2], d[3] = -0.5*y[0], -y[1], -100*y[2], -90*y[3] },
	"stiff A2": func(_ float64, y, d []float64) {
		d[0] = -1800*y[0] + 900*y[1]
		for i := 1; i < 8; i++ {
			d[i] = y[i-1] - 2*y[i] + y[i+1]
		}
		d[8] = 1000*y[7] - 2000*y[8] + 1000
	},
	"stiff A3": func(_ float64, y, d []float64) {
		d[0] = -1e4*y[0] + 100*y[1] - 10*y[2] + y[3]
		d[1], d[2], d[3] = -1e3*y[1]+10*y[2]-10*y[3], -y[2]+10*y[3], -0.1*y[3]
	},
	"stiff A4": func(_ float64, y, d []float64) {
		for i := range y {
			d[i] = -math.Pow(float64(i+1), 5) * y[i]
		}
	},
	"stiff B1": func(_ float64, y, d []float64) {
		d[0], d[1], d[2], d[3] = -y[0]+y[1], -100*y[0]-y[1], -100*y[2]+y[3], -10000*y[2]-100*y[3]
	},
	"stiff B2": ring(3), "stiff B3": ring(8), "stiff B4": ring(25), "stiff B5": ring(100),
	"stiff C1": func(_ float64, y, d []float64) {
		d[0], d[1] = -y[0]+y[1]*y[1]+y[2]*y[2]+y[3]*y[3], -10*y[1]+10*(y[2]*y[2]+y[3]*y[3])
		d[2], d[3] = -40*y[2]+40*y[3]*y[3], -100*y[3]+2
	},
	"stiff C2": chain(0.1), "stiff C3": chain(1), "stiff C4": chain(10), "stiff C5": chain(20),
	"stiff D1": func(_ float64, y, d []float64) {
		d[0], d[1], d[2] = 0.2*(y[1]-y[0]), 10*y[0]-(60-0.125*y[2])*y[1]+0.125*y[2], 1
	},
	"stiff D2": func(_ float64, y, d []float64) {
		d[0] = -0.04*y[0] + 0.01*y[1]*y[2]
		d[1], d[2] = 400*y[0]-100*y[1]*y[2]-3000*y[1]*y[1], 30*y[1]*y[1]
	},
	"stiff E2": func(_ float64, y, d []float64) { d[0], d[1] = y[1], 5*(1-y[0]*y[0])*y[1]-y[0] },
	"Robertson": func(_ float64, y, d []float64) {
		d[0] = -0.04*y[0] + 1e4*y[1]*y[2]
		d[2] = 3e7 * y[1] * y[1]
		d[1] = -d[0] - d[2]
	},
}

// TestPublishedProblems: the tolerance is one of a step, so the error at the end may be
// larger by as much as the problem magnifies a small disturbance on its way. That factor is
// measured here, by a hair's disturbance at eight places of the way.
func TestPublishedProblems(t *testing.T) {
	var file struct {
		Problems []struct {
			Name  string
			Until float64
			Start []float64
			End   []string
			Agree float64
		}
	}
	refdata.Read(t, "testdata/problems.json", &file)
	for _, p := range file.Problems {
		f := problems[p.Name]
		if f == nil {
			t.Errorf("%s: no such problem", p.Name)
			continue
		}
		run := func(from, to float64, start []float64, tolerance float64) ([]float64, Work) {
			g, err := New(f, from, start, Options{RelTol: tolerance, AbsTol: tolerance * 1e-3})
			if err != nil {
				t.Fatal(err)
			}
			if err := g.To(to); err != nil {
				t.Fatalf("%s at tolerance %g: %v", p.Name, tolerance, err)
			}
			return slices.Clone(g.State()), g.Work()
		}
		magnified := 1.0
		const nudge, places = 1e-6, 8
		undisturbed, _ := run(0, p.Until, p.Start, 1e-11)
		for k, at := 0, p.Start; k < places; k++ {
			from := p.Until * float64(k) / places
			for i := range min(len(at), 6) {
				start := slices.Clone(at)
				start[i] += nudge
				moved, _ := run(from, p.Until, start, 1e-11)
				for j := range moved {
					magnified = math.Max(magnified, math.Abs(moved[j]-undisturbed[j])/nudge)
				}
			}
			at, _ = run(from, p.Until*float64(k+1)/places, at, 1e-11)
		}
		for _, tolerance := range []float64{1e-4, 1e-6, 1e-8} {
			got, work := run(0, p.Until, p.Start, tolerance)
			size, miss := 0.0, 0.0
			for i, v := range p.End {
				want, err := strconv.ParseFloat(v, 64)
				if err != nil {
					t.Fatal(err)
				}
				size = math.Max(size, math.Max(math.Abs(want), math.Abs(p.Start[i])))
				miss = math.Max(miss, math.Abs(got[i]-want))
			}
			allowed := (10*tolerance*magnified + p.Agree) * size
			t.Logf("%-9s tolerance %.0e: error %.1e of size, %d steps, %d evaluations, %d stiff", p.Name, tolerance, miss/size, work.Accepted, work.Evaluations, work.Stiff)
			if miss > allowed {
				t.Errorf("%s at tolerance %g: off by %.2g of the size", p.Name, tolerance, miss/size)
			}
		}
	}
}
