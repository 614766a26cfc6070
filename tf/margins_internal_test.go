package tf

import (
	"errors"
	"fmt"
	"math"
	"testing"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/poly"
)

type decimals = []refdata.Decimal

type marginCase struct {
	ID, Title, Domain      string
	Numerator, Denominator decimals
	Delay                  refdata.Decimal
	Period                 refdata.Decimal
	ListedUpTo             refdata.Decimal `json:"phase_crossovers_listed_up_to_w"`
	Stable                 bool
	Gain                   []struct {
		W     refdata.Decimal `json:"w"`
		Phase refdata.Decimal `json:"phase_margin_rad"`
		Delay refdata.Decimal `json:"delay_margin"`
	} `json:"gain_crossovers"`
	Phase []struct {
		W    refdata.Decimal `json:"w"`
		Gain refdata.Decimal `json:"gain_margin"`
		At   string
	} `json:"phase_crossovers"`
	Figures struct {
		Increase        refdata.Decimal `json:"gain_margin_increase"`
		Decrease        refdata.Decimal `json:"gain_margin_decrease"`
		SmallestDegrees refdata.Decimal `json:"smallest_phase_margin_deg"`
		Delay           refdata.Decimal `json:"delay_margin"`
		Sensitivity     refdata.Decimal `json:"sensitivity_peak"`
		SensitivityAt   refdata.Decimal `json:"sensitivity_peak_frequency"`
		Complementary   refdata.Decimal `json:"complementary_peak"`
		ComplementaryAt refdata.Decimal `json:"complementary_peak_frequency"`
	}
}

func marginCases(t testing.TB) []marginCase {
	var file struct{ Cases []marginCase }
	refdata.Read(t, "testdata/margin.json", &file)
	return file.Cases
}

func (c marginCase) form(t testing.TB) *axisForm {
	period := 0.0
	if c.Domain == "z" {
		period = c.Period.Float(t)
	}
	return newAxisForm(poly.New(refdata.Floats(t, c.Numerator)...), poly.New(refdata.Floats(t, c.Denominator)...), c.Delay.Float(t), period)
}

// bar is the relative error that the references are met with.
const bar = 1e-10

func check(t *testing.T, what string, got float64, want refdata.Decimal) {
	t.Helper()
	if off := refdata.Off(t, got, want); !(off <= bar) {
		t.Errorf("%s = %v, want %s: off by %.2g", what, got, want, off)
	}
}

// The float64 stage and the exact one must both reproduce the references.
func TestCrossoversOfReferences(t *testing.T) {
	for _, c := range marginCases(t) {
		a := c.form(t)
		if a.deadTime != 0 {
			continue
		}
		if !a.ok {
			t.Errorf("%s: not in range of the float64 stages", c.ID)
			continue
		}
		for _, stage := range []string{"float64", "exact"} {
			t.Run(c.ID+"/"+stage, func(t *testing.T) {
				var gain, phase []Crossover
				var okG, okP, okS, okC bool
				var s, comp Peak
				if stage == "float64" {
					gain, okG = a.gainCrossoversFast()
					phase, okP = a.phaseCrossoversFast()
					s, okS = a.peakFast(sensitivityCurve)
					comp, okC = a.peakFast(complementaryCurve)
				} else {
					e := a.exactly()
					var err [4]error
					gain, err[0] = e.gainCrossovers()
					phase, err[1] = e.phaseCrossovers()
					s, err[2] = e.peak(sensitivityCurve)
					comp, err[3] = e.peak(complementaryCurve)
					okG, okP, okS, okC = err[0] == nil, err[1] == nil, err[2] == nil, err[3] == nil
				}
				if !okG || !okP || !okS || !okC {
					t.Log("this stage passes on", okG, okP, okS, okC)
				}
				if okG {
					if len(gain) != len(c.Gain) {
						t.Fatalf("gain crossovers %v, want %v", gain, c.Gain)
					}
					for i, w := range c.Gain {
						check(t, "frequency", gain[i].Frequency, w.W)
						check(t, "phase margin", gain[i].Margin, w.Phase)
					}
				}
				if okP {
					if len(phase) != len(c.Phase) {
						t.Fatalf("phase crossovers %v, want %v", phase, c.Phase)
					}
					for i, w := range c.Phase {
						check(t, "frequency", phase[i].Frequency, w.W)
						check(t, "gain margin", phase[i].Margin, w.Gain)
					}
				}
				if okS {
					check(t, "sensitivity peak", s.Magnitude, c.Figures.Sensitivity)
					check(t, "its frequency", s.Frequency, c.Figures.SensitivityAt)
				}
				if okC {
					check(t, "complementary peak", comp.Magnitude, c.Figures.Complementary)
					check(t, "its frequency", comp.Frequency, c.Figures.ComplementaryAt)
				}
			})
		}
		if got := a.stable() == poly.Holds; got != c.Stable {
			t.Errorf("%s: stable %v, want %v", c.ID, got, c.Stable)
		}
		fast, ok := routh(a.whole, a.memory)
		count := exact.LeftOf(exactPoly(a.numerator).Add(exactPoly(a.denominator)), exact.Dyadic{})
		if ok && (count.Boundary != 0 || count.Outside != fast) {
			t.Errorf("%s: %d roots right by Routh's table, %v exactly", c.ID, fast, count)
		}
	}
}

// Every figure of the references, dead time included.
func TestMarginsOfReferences(t *testing.T) {
	for _, c := range marginCases(t) {
		t.Run(c.ID, func(t *testing.T) {
			m, err := c.form(t).margins(0)
			if err != nil {
				t.Fatal(err)
			}
			if len(m.GainCrossovers) != len(c.Gain) {
				t.Fatalf("gain crossovers %v, want %v", m.GainCrossovers, c.Gain)
			}
			for i, w := range c.Gain {
				check(t, "frequency", m.GainCrossovers[i].Frequency, w.W)
				check(t, "phase margin", m.GainCrossovers[i].Margin, w.Phase)
			}
			i := 0
			for _, w := range c.Phase {
				if f := w.W.Float(t); !(f > 0) || math.IsInf(f, 1) {
					continue
				}
				if i >= len(m.PhaseCrossovers) {
					t.Fatalf("phase crossovers %v, want %v", m.PhaseCrossovers, c.Phase)
				}
				check(t, "frequency", m.PhaseCrossovers[i].Frequency, w.W)
				check(t, "gain margin", m.PhaseCrossovers[i].Margin, w.Gain)
				i++
			}
			if i != len(m.PhaseCrossovers) {
				t.Fatalf("phase crossovers %v, want %v", m.PhaseCrossovers, c.Phase)
			}
			if got := m.Stable == poly.Holds; got != c.Stable || m.Stable == poly.Undecided {
				t.Errorf("stable %v, want %v", m.Stable, c.Stable)
			}
			check(t, "sensitivity peak", m.SensitivityPeak, c.Figures.Sensitivity)
			check(t, "its frequency", m.SensitivityPeakAt, c.Figures.SensitivityAt)
			p, err := c.form(t).closedLoopPeak(complementaryCurve)
			if err != nil {
				t.Fatal(err)
			}
			check(t, "complementary peak", p.Magnitude, c.Figures.Complementary)
			check(t, "its frequency", p.Frequency, c.Figures.ComplementaryAt)
			if w := c.Figures.Delay; w != "" {
				check(t, "delay margin", m.Delay, w)
			}
			if w := c.Figures.SmallestDegrees; w != "" {
				check(t, "smallest phase margin", m.PhaseMargin*180/math.Pi, w)
			}
			if w := c.Figures.Decrease; w != "" {
				check(t, "gain decrease", m.GainDecrease, w)
			}
			if w := c.Figures.Increase; w != "" {
				check(t, "gain increase", m.GainIncrease, w)
			}
		})
	}
}

// Loops at the edges of what margins are: each has a defined answer or a typed error.
func TestDegenerateLoops(t *testing.T) {
	tests := []struct {
		text       string
		degenerate bool
		stable     poly.Verdict
		gain       int
		peak       float64
		peakAt     float64
	}{
		{"1", true, poly.Holds, 0, 0.5, 0},
		{"-1", true, poly.Fails, 0, math.Inf(1), 0},
		{"(1-s)/(1+s)", true, poly.Fails, 0, math.Inf(1), math.Inf(1)},
		{"exp(-s)", true, poly.Fails, 0, math.Inf(1), math.Inf(1)},
		{"1/z^3, period 1", true, poly.Fails, 0, math.Inf(1), math.Pi / 3},
		{"-0.5", true, poly.Holds, 0, 2, 0},
		{"1/s^2", true, poly.Fails, 1, math.Inf(1), 1},
		{"0.5", false, poly.Holds, 0, 2.0 / 3, 0},
		{"0", false, poly.Holds, 0, 1, 0},
		{"0/(s-1)", false, poly.Fails, 0, 1, 0},
		{"(s-1)/((s-1)(s+2))", false, poly.Fails, 0, 1, math.Inf(1)},
		{"(s^2+4)/(s (s^2+4))", false, poly.Fails, 1, 1, math.Inf(1)},
		{"exp(-s)(s^2+1)/((s^2+1)(s+2))", false, poly.Fails, 0, math.NaN(), math.NaN()},
		{"(z+1)/((z+1)(z-0.5)), period 1", false, poly.Fails, 1, 3, math.Pi},
		{"-s/(s+1)", false, poly.Fails, 0, math.Inf(1), math.Inf(1)},
		{"8/(s+1)^3", false, poly.Fails, 1, math.Inf(1), math.Sqrt(3)},
		{"0.5 exp(-s)", false, poly.Holds, 0, 2, math.Pi},
		{"2 exp(-s)", false, poly.Fails, 0, 1, math.Pi},
		{"s", false, poly.Holds, 1, 1, 0},
	}
	for _, test := range tests {
		m, err := (Loop{Plant: MustParse(test.text)}).Margins()
		var d *DegenerateError
		if errors.As(err, &d) != test.degenerate || err != nil && !test.degenerate {
			t.Errorf("%s: error %v", test.text, err)
		}
		if m.Stable != test.stable {
			t.Errorf("%s: stable %v, want %v", test.text, m.Stable, test.stable)
		}
		if len(m.GainCrossovers) != test.gain {
			t.Errorf("%s: gain crossovers %v, want %d", test.text, m.GainCrossovers, test.gain)
		}
		near := func(got, want float64) bool {
			return math.IsNaN(want) || got == want || math.Abs(got-want) < 1e-12*math.Abs(want)
		}
		if !near(m.SensitivityPeak, test.peak) || !near(m.SensitivityPeakAt, test.peakAt) {
			t.Errorf("%s: sensitivity peak %v at %v, want %v at %v", test.text, m.SensitivityPeak, m.SensitivityPeakAt, test.peak, test.peakAt)
		}
		if m.Stable != poly.Holds && m.Delay != 0 {
			t.Errorf("%s: delay margin %v of a loop that is not stable", test.text, m.Delay)
		}
	}
}

// The search encloses the peaks that the roots of the derivative give.
func TestPeakBySearch(t *testing.T) {
	for _, c := range marginCases(t) {
		a := c.form(t)
		if a.deadTime != 0 {
			continue
		}
		s, ok := a.peakBySearch(sensitivityCurve)
		if !ok {
			t.Errorf("%s: no peak", c.ID)
		}
		check(t, c.ID+": sensitivity peak", s.Magnitude, c.Figures.Sensitivity)
		check(t, c.ID+": its frequency", s.Frequency, c.Figures.SensitivityAt)
		s, ok = a.peakBySearch(complementaryCurve)
		if !ok {
			t.Errorf("%s: no peak", c.ID)
		}
		check(t, c.ID+": complementary peak", s.Magnitude, c.Figures.Complementary)
		check(t, c.ID+": its frequency", s.Frequency, c.Figures.ComplementaryAt)
	}
}

// Light resonances, fast sampling and dead time: loops of the project's own, in 60 digits by mpmath.
func TestMarginsOfHardLoops(t *testing.T) {
	type crossover struct{ Frequency, Margin refdata.Decimal }
	var file struct {
		Cases []struct {
			Kind                   string
			Numerator, Denominator decimals
			Delay, Period          refdata.Decimal
			Stable                 bool
			ListedUpTo             refdata.Decimal `json:"listed_up_to"`
			Gain, Phase            []crossover
			Peak                   refdata.Decimal
			PeakAt                 refdata.Decimal `json:"peak_at"`
		}
	}
	refdata.Read(t, "testdata/more_margins.json", &file)
	if len(file.Cases) < 20 {
		t.Fatalf("%d cases", len(file.Cases))
	}
	for i, c := range file.Cases {
		t.Run(fmt.Sprintf("%d/%s", i, c.Kind), func(t *testing.T) {
			a := newAxisForm(poly.New(refdata.Floats(t, c.Numerator)...), poly.New(refdata.Floats(t, c.Denominator)...), c.Delay.Float(t), c.Period.Float(t))
			m, err := a.margins(0)
			if err != nil {
				t.Fatal(err)
			}
			if (m.Stable == poly.Holds) != c.Stable || m.Stable == poly.Undecided {
				t.Errorf("stable %v, want %v", m.Stable, c.Stable)
			}
			compare := func(what string, got []Crossover, want []crossover) {
				t.Helper()
				if len(got) != len(want) {
					t.Errorf("%s %v, want %v", what, got, want)
					return
				}
				for k, w := range want {
					check(t, what, got[k].Frequency, w.Frequency)
					check(t, what+": margin", got[k].Margin, w.Margin)
				}
			}
			compare("gain crossover", m.GainCrossovers, c.Gain)
			compare("phase crossover", m.PhaseCrossovers, c.Phase)
			if c.Peak != "" && m.SensitivityPeakAt > 0 && !math.IsInf(m.SensitivityPeakAt, 1) {
				check(t, "sensitivity peak", m.SensitivityPeak, c.Peak)
				check(t, "its frequency", m.SensitivityPeakAt, c.PeakAt)
			}
			if c.ListedUpTo != "" {
				check(t, "complete to", m.CompleteTo, c.ListedUpTo)
			}
		})
	}
}

// Many periods of delay: as a phase they give what the polynomial written out gives.
func TestPhaseCrossoversOfPeriods(t *testing.T) {
	for _, text := range []string{"0.02/(z-0.9), period 1", "0.5, period 0.1", "-0.3 (z-0.5)/((z-0.9)(z-0.2)), period 2", "0.01(z+0.9)/((z-1)(z-0.8)), period 0.01", "0.1/(z^2-1.8z+0.9), period 1"} {
		for _, periods := range []int{6, 7, 13, 20} {
			h := MustParse(text)
			g, err := h.WithDeadTime(float64(periods) * h.Period())
			if err != nil {
				t.Fatal(err)
			}
			a, err := g.axis("")
			if err != nil {
				t.Fatal(err)
			}
			want, err := a.exactly().phaseCrossovers()
			if err != nil {
				t.Fatal(err)
			}
			got, ok := a.phaseCrossoversOfPeriods()
			if !ok || len(got) != len(want) {
				t.Errorf("%s behind %d periods: %v, want %v", text, periods, got, want)
				continue
			}
			for i, w := range want {
				if math.Abs(got[i].Frequency-w.Frequency) > 1e-11*w.Frequency || math.Abs(got[i].Margin-w.Margin) > 1e-11*w.Margin {
					t.Errorf("%s behind %d periods: %v, want %v", text, periods, got[i], w)
				}
			}
		}
	}
}
