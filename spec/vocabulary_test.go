package spec

import (
	"context"
	"encoding/json"
	"errors"
	"math"
	"reflect"
	"strings"
	"testing"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
)

// everything is one of each requirement of the standard vocabulary.
var everything = Sheet{
	OvershootAtMost(0.15), UndershootAtMost(0.1), RisesWithin(0.5), PeaksWithin(0.8), SettlesWithin(2, 0.02),
	StepErrorAtMost(0.01), RampErrorAtMost(0.05), ParabolaErrorAtMost(0.1), EffortAtMost(24), EffortForStepAtMost(0.5, 24),
	GainMarginAtLeast(2), GainReductionMarginAtLeast(2), PhaseMarginAtLeast(0.8), DelayMarginAtLeast(0.02),
	SensitivityPeakAtMost(1.6), ComplementaryPeakAtMost(1.3), DampingAtLeast(0.5),
	PolesLeftOf(-1), PolesWithin(50), PolesBeyond(0.1), LoadPeakAtMost(0.2), LoadRecoversWithin(3, 0.01),
	AbsoluteErrorIntegralAtMost(0.5), SquaredErrorIntegralAtMost(0.3), TimeWeightedAbsoluteErrorIntegralAtMost(0.3),
	TimeWeightedSquaredErrorIntegralAtMost(0.2), BandwidthBetween(5, 20), NoiseAmplificationAtMost(40),
}

func TestSheetRoundTrip(t *testing.T) {
	if err := everything.Validate(); err != nil {
		t.Fatal(err)
	}
	text, err := json.Marshal(everything)
	if err != nil {
		t.Fatal(err)
	}
	var back Sheet
	if err := json.Unmarshal(text, &back); err != nil {
		t.Fatalf("%v in %s", err, text)
	}
	again, err := ParseSheet(everything.String())
	if err != nil {
		t.Fatalf("%v in\n%s", err, everything)
	}
	seen := map[string]bool{}
	for i := range everything {
		for _, s := range []Sheet{back, again} {
			if !reflect.DeepEqual(s[i], everything[i]) {
				t.Errorf("%s came back as %s", describe(everything[i]), describe(s[i]))
			}
		}
		seen[everything[i].Name()] = true
	}
	for word := range StandardVocabulary() {
		if !seen[word] {
			t.Errorf("%q is in the vocabulary and not in this test", word)
		}
	}
	// Limits that need all digits.
	odd := Sheet{OvershootAtMost(0.1 + 0.2), PhaseMarginAtLeast(math.Pi / 4)}
	if back, err = ParseSheet(odd.String()); err != nil || !reflect.DeepEqual(back, odd) {
		t.Errorf("%s came back as %s, %v", odd, back, err)
	}
}

func TestSheetUnits(t *testing.T) {
	s, err := ParseSheet(`
# a comment
overshoot at most 15 %
settling time at most 300 ms, band 5%   # and another
phase margin at least 45 deg
gain margin at least 6 dB
bandwidth at least 2 Hz, at most 3 Hz
`)
	if err != nil {
		t.Fatal(err)
	}
	want := Sheet{
		OvershootAtMost(0.15), SettlesWithin(0.3, 0.05), PhaseMarginAtLeast(45 * (math.Pi / 180)),
		GainMarginAtLeast(math.Pow(10, 6.0/20)), BandwidthBetween(2*2*math.Pi, 3*2*math.Pi),
	}
	if !reflect.DeepEqual(s, want) {
		t.Errorf("got\n%swant\n%s", s, want)
	}
}

// Errors say where and what was expected.
func TestSheetErrors(t *testing.T) {
	for _, c := range []struct{ text, place, says string }{
		{`{"require": "overshoot"}`, "", "array"},
		{`[{"require": "overshoot", "at most": 0.1}`, "line 1", "array"},
		{`[3]`, "[0]", "expected an object"},
		{`[{"at most": 0.1}]`, `[0]."require"`, "is missing"},
		{`[{"require": "overshoots", "at most": 0.1}]`, "[0]", "no known requirement"},
		{`[{"require": "overshoot"}]`, `[0]."at most"`, "is missing"},
		{`[{"require": "overshoot", "at most": 0.1, "bnd": 1}]`, `[0]."bnd"`, "no field"},
		{`[{"require": "overshoot", "at most": 0.1, "at most": 0.1}]`, `[0]."at most"`, "twice"},
		{`[{"require": "overshoot", "at most": "0.1 s"}]`, `[0]."at most"`, "unit"},
		{`[{"require": "overshoot", "at most": [1]}]`, `[0]."at most"`, "number"},
		{`[{"require": "overshoot", "at most": 1e999}]`, `[0]."at most"`, "finite"},
		{`[{"require": "overshoot", "at most": -0.1}]`, "[0]", "below 0"},
		{`[{"require": "settling time", "at most": 1, "band": 2}]`, "[0]", "between 0 and 1"},
		{`[{"require": "poles"}]`, "[0]", "left of"},
		{`[{"require": "poles", "damped": 1.5}]`, `[0]."damped"`, "between 0 and 1"},
		{`[] []`, "", "follows"},
	} {
		var s Sheet
		err := s.UnmarshalJSON([]byte(c.text))
		var e *SheetError
		if !errors.As(err, &e) {
			t.Errorf("%s: %v, want a *SheetError", c.text, err)
			continue
		}
		if !strings.Contains(e.Place, c.place) || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: %v; want the place %q and the words %q", c.text, err, c.place, c.says)
		}
	}
	for _, c := range []struct{ text, place string }{
		{"overshoot at most 0.1\nundershot at most 2", "line 2"},
		{"\n\nsettling time at most 1", "line 3"},
		{"overshoot at most", "line 1"},
		{"overshoot 0.3", "line 1"},
		{"overshoot at most 0.1 furlong", "line 1"},
	} {
		_, err := ParseSheet(c.text)
		var e *SheetError
		if !errors.As(err, &e) || !strings.Contains(e.Place, c.place) {
			t.Errorf("%q: %v, want a *SheetError at %s", c.text, err, c.place)
		}
	}
}

func TestValidate(t *testing.T) {
	nan := math.NaN()
	bad := Sheet{
		OvershootAtMost(-0.1), OvershootAtMost(nan), RisesWithin(0), PeaksWithin(math.Inf(1)), SettlesWithin(1, 0), SettlesWithin(1, 1),
		StepErrorAtMost(-1), EffortAtMost(0), GainMarginAtLeast(0.5), PhaseMarginAtLeast(4), DelayMarginAtLeast(-1), SensitivityPeakAtMost(0),
		DampingAtLeast(0), DampingAtLeast(1.1), PolesIn(nil), BandwidthBetween(3, 2), EffortForStepAtMost(0, 1), LoadRecoversWithin(1, 0), nil,
	}
	for i, r := range bad {
		err := Sheet{OvershootAtMost(0.1), r}.Validate()
		var e *SheetError
		if !errors.As(err, &e) || e.Index != 1 {
			t.Errorf("requirement %d: %v, want a *SheetError with index 1", i, err)
			continue
		}
		var argument *poly.ArgumentError
		if r != nil && !errors.As(err, &argument) {
			t.Errorf("requirement %d: %v does not wrap a *poly.ArgumentError", i, err)
		}
	}
	err := bad.Validate()
	for i := range bad {
		if !strings.Contains(err.Error(), "requirement "+formatNumber(float64(i))+" ") && !strings.Contains(err.Error(), "requirement "+formatNumber(float64(i))+":") {
			t.Errorf("requirement %d is not in the error of the sheet:\n%v", i, err)
		}
	}
	if err := (Sheet{}).Validate(); err != nil {
		t.Errorf("the empty sheet: %v", err)
	}
	if err := (Sheet{DampingAtLeast(1), StepErrorAtMost(0), OvershootAtMost(0)}).Validate(); err != nil {
		t.Errorf("limits at the end of their range: %v", err)
	}
	// The calls validate first.
	if _, err := (Sheet{nil}).Check(t.Context(), benchPlants(1)[0].loop()); err == nil {
		t.Error("Check takes a sheet with a missing requirement")
	}
	if _, err := (Sheet{nil}).Map(); err == nil {
		t.Error("Map takes a sheet with a missing requirement")
	}
}

// quiet is a requirement of a user.
type quiet struct{ most float64 }

func (q quiet) Name() string { return "quiet" }

func (q quiet) Judge(_ context.Context, e *Evidence) (Finding, error) {
	m, err := e.Margins()
	if err != nil {
		return Finding{}, err
	}
	w := 0.0
	for _, c := range m.GainCrossovers {
		w = math.Max(w, c.Frequency)
	}
	return NewFinding("last gain crossover", "rad/s", w, q.most, w, "rad/s"), nil
}

func (q quiet) Entry() (Entry, error) {
	return Entry{Requirement: "quiet", Fields: []Field{{Name: "below", Number: q.most, Unit: "rad/s"}}}, nil
}

func TestVocabularyOfOnesOwn(t *testing.T) {
	v := StandardVocabulary()
	v["quiet"] = func(e *Entry) (Requirement, error) {
		x, err := e.Number("below", "rad/s")
		return quiet{x}, err
	}
	s, err := v.ParseText("quiet below 3 rad/s\novershoot at most 0.3")
	if err != nil {
		t.Fatal(err)
	}
	text, err := json.Marshal(s)
	if err != nil {
		t.Fatal(err)
	}
	back, err := v.ParseJSON(text)
	if err != nil || !reflect.DeepEqual(back, s) {
		t.Errorf("%s came back as %v, %v", text, back, err)
	}
	if err := new(Sheet).UnmarshalJSON(text); err == nil {
		t.Error("the standard vocabulary reads a word of another")
	}
	if _, err := json.Marshal(Sheet{PolesIn(locus.All(locus.LeftOf(-1)))}); err == nil {
		t.Error("a region without words was written")
	}
}

func FuzzSheetJSON(f *testing.F) {
	if text, err := json.Marshal(everything); err == nil {
		f.Add(string(text))
	}
	f.Add(everything.String())
	f.Add(`[{"require": "overshoot", "at most": "15 %"}]`)
	f.Add(`[{"require": "poles", "left of": -1, "damped": 0.5}]`)
	f.Add(`[{"require": "bandwidth", "at least": "1 Hz", "at most": 1e3}]`)
	f.Add("settling time at most 2 s, band 2 %")
	f.Fuzz(func(t *testing.T, text string) {
		var s Sheet
		if err := s.UnmarshalJSON([]byte(text)); err != nil {
			var e *SheetError
			if !errors.As(err, &e) {
				t.Fatalf("UnmarshalJSON(%q): %v is no *SheetError", text, err)
			}
			if s, err = ParseSheet(text); err != nil {
				if !errors.As(err, &e) {
					t.Fatalf("ParseSheet(%q): %v is no *SheetError", text, err)
				}
				return
			}
		}
		if err := s.Validate(); err != nil {
			t.Fatalf("%q was read and is invalid: %v", text, err)
		}
		written, err := json.Marshal(s)
		if err != nil {
			t.Fatal(err)
		}
		var back Sheet
		if err := json.Unmarshal(written, &back); err != nil || !reflect.DeepEqual(back, s) {
			t.Fatalf("%s came back as %v, %v", written, back, err)
		}
		if back, err = ParseSheet(s.String()); err != nil || !reflect.DeepEqual(back, s) {
			t.Fatalf("%q came back as %v, %v", s.String(), back, err)
		}
	})
}
