package tf

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// heldSimulation runs a sampled-data loop by matrix exponentials over the pieces of a period:
// the independent way. Plant 1/(s+1), sensor 1/(0.2s+1), controller u = 2e, computation delay.
func heldSimulation(n int, period, delay float64, reference, load, noise float64) (output, effort []float64) {
	a := mat.NewDense(3, 3, []float64{
		-1, 0, 1, // plant, driven by the third state, the input
		5, -5, 0, // sensor
		0, 0, 0,
	})
	advance := func(x *mat.VecDense, dt, u float64) {
		x.SetVec(2, u)
		var e mat.Dense
		var scaled mat.Dense
		scaled.Scale(dt, a)
		e.Exp(&scaled)
		var y mat.VecDense
		y.MulVec(&e, x)
		x.CopyVec(&y)
	}
	x := mat.NewVecDense(3, nil)
	before := 0.0 // effort that still acts at the beginning of a period
	for range n {
		output = append(output, x.AtVec(0))
		u := 2 * (reference - x.AtVec(1) - noise)
		effort = append(effort, u)
		advance(x, delay, before+load)
		advance(x, period-delay, u+load)
		before = u
	}
	return output, effort
}

func TestSampledDataLoopWithSensorAndDelay(t *testing.T) {
	const n = 40
	for _, delay := range []float64{0, 0.03} {
		l := Loop{
			Controller:       MustParse("2, period 0.1"),
			Plant:            MustParse("1 / (s + 1)"),
			Sensor:           MustParse("1 / (0.2 s + 1)"),
			ComputationDelay: delay,
		}
		for from, in := range map[Point][3]float64{Reference: {1, 0, 0}, LoadDisturbance: {0, 1, 0}, Noise: {0, 0, 1}} {
			output, effort := heldSimulation(n, 0.1, delay, in[0], in[1], in[2])
			for to, want := range map[Point][]float64{Output: output, Effort: effort} {
				path, err := l.Path(from, to)
				if err != nil {
					t.Fatal(err)
				}
				g, err := path.Function()
				if err != nil {
					t.Fatal(err)
				}
				for k, y := range stepSamples(g, n) {
					if math.Abs(y-want[k]) > 1e-12 {
						t.Errorf("delay %v, %v to %v: sample %d = %v, want %v", delay, from, to, k, y, want[k])
						break
					}
				}
			}
		}
		if _, err := l.Path(OutputDisturbance, Output); err == nil {
			t.Error("an output disturbance in front of a sampled sensor is no function of z")
		}
		// With the sensor in z instead, everything is there.
		l.Sensor = MustParse("0.5 / (z - 0.5), period 0.1")
		for from := Reference; from <= Noise; from++ {
			for to := Output; to <= Effort; to++ {
				path, err := l.Path(from, to)
				if err != nil {
					t.Fatal(err)
				}
				if _, err := path.Function(); err != nil {
					t.Error(err)
				}
			}
		}
	}
}

func TestSampledDataLoopErrors(t *testing.T) {
	c, p := MustParse("1 / (z - 1), period 0.1"), MustParse("1 / (s + 1)")
	for name, l := range map[string]Loop{
		"improper plant":                  {Controller: c, Plant: MustParse("s")},
		"hold that is none":               {Controller: c, Plant: p, Hold: Trapezoidal},
		"prefilter in s":                  {Prefilter: p, Controller: c, Plant: p},
		"two periods":                     {Controller: c, Plant: p, Sensor: MustParse("1 / z, period 0.2")},
		"delay without sampling":          {Plant: p, ComputationDelay: 0.1},
		"delay around a plant in z":       {Controller: c, Plant: c, ComputationDelay: 0.1},
		"negative delay":                  {Controller: c, Plant: p, ComputationDelay: -0.1},
		"sensor in s behind a plant in z": {Controller: c, Plant: c, Sensor: p},
	} {
		if g, err := l.Open(); err == nil {
			t.Errorf("%s: %v", name, g)
		}
	}
}

// An extrapolating hold, by hand: y' = u gives y(k+1) = y(k) + T·u(k) + T/2·(u(k)-u(k-1)); for a
// lag the two integrals of the exponential are written out.
func TestFirstOrderHold(t *testing.T) {
	T := 0.25
	g, err := MustParse("1 / s").Sample(T, FirstOrderHold)
	if err != nil || !g.Equal(MustParse("(0.375 z - 0.125) / (z^2 - z), period 0.25")) {
		t.Errorf("integrator: %v, %v", g, err)
	}
	g, err = MustParse("1 / (s + 1)").Sample(T, FirstOrderHold)
	if err != nil {
		t.Fatal(err)
	}
	a := math.Exp(-T)
	slope := 1 - (1-a)/T // ∫ exp(-(T-t))·t/T dt
	for i, want := range []float64{-slope, 1 - a + slope} {
		if got := g.Numerator().Coefficient(i); math.Abs(got-want) > 1e-15 {
			t.Errorf("lag: numerator coefficient %d = %v, want %v", i, got, want)
		}
	}
	if g.Denominator().Degree() != 2 || g.Denominator().Coefficient(0) != 0 {
		t.Errorf("lag: denominator %v, want z(z - %v)", g.Denominator(), a)
	}
}
