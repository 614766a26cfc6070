package tf

import (
	"encoding/json"
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/polewright/polewright/poly"
)

func TestLoopJSON(t *testing.T) {
	l := Loop{
		Controller:       MustParse("0.2 (z - 0.5) / (z - 1), period 0.1"),
		Plant:            MustParse("18 exp(-0.02 s) / (s (s + 3))"),
		Sensor:           MustParse("1 / (0.01 s + 1)"),
		Hold:             FirstOrderHold,
		ComputationDelay: 0.013,
		Limits:           Limits{Amplitude: 10, Rate: math.Inf(1)},
	}
	data, err := json.Marshal(l)
	if err != nil {
		t.Fatal(err)
	}
	const want = `{"controller":"0.2 (z - 0.5) / (z - 1), period 0.1","plant":"18 exp(-0.02 s) / (s (s + 3))","sensor":"1 / (0.01 s + 1)",` +
		`"hold":"first-order hold","computation_delay":0.013,"limits":{"amplitude":10,"rate":"unbounded"}}`
	if string(data) != want {
		t.Errorf("JSON = %s, want %s", data, want)
	}
	var back Loop
	if err := json.Unmarshal(data, &back); err != nil {
		t.Fatal(err)
	}
	if !sameLoop(l, back) {
		t.Errorf("read back %+v, want %+v", back, l)
	}
	if !back.Prefilter.isWire() {
		t.Error("an absent prefilter is no wire")
	}
	if err := json.Unmarshal([]byte(`{"Plant": "1/s", "ComputationDelay": 0.5}`), &back); err != nil || back.ComputationDelay != 0.5 {
		t.Errorf("names of the fields: %v", err)
	}
}

func sameLoop(a, b Loop) bool {
	return a.Prefilter.Equal(b.Prefilter) && a.Controller.Equal(b.Controller) && a.Plant.Equal(b.Plant) && a.Sensor.Equal(b.Sensor) &&
		a.Hold == b.Hold && a.ComputationDelay == b.ComputationDelay && a.Limits == b.Limits
}

func TestLoopJSONErrors(t *testing.T) {
	for _, tt := range []struct{ text, member, says string }{
		{`{"plant": "1/s", "gain": 3}`, "gain", "unknown"},
		{`{"plant": "1/s", "limits": {"amplitude": 1, "torque": 3}}`, "limits.torque", "unknown"},
		{`{"plant": "1/(s"}`, "plant", "column 5"},
		{`{"plant": 3}`, "plant", ""},
		{`{"plant": "1/s", "plant": "2/s"}`, "plant", "twice"},
		{`{"plant": null}`, "plant", "null"},
		{`{"hold": "sample"}`, "hold", "none of"},
		{`{"limits": {"rate": -1}}`, "limits.rate", "≥ 0"},
		{`{"limits": 4}`, "limits", "object"},
		{`{"computation_delay": "unbounded"}`, "computation_delay", ""},
	} {
		var l Loop
		err := json.Unmarshal([]byte(tt.text), &l)
		var at *JSONError
		if !errors.As(err, &at) || at.Member != tt.member || !strings.Contains(err.Error(), tt.says) {
			t.Errorf("%s: error %v, want member %q and %q", tt.text, err, tt.member, tt.says)
		}
	}
	bad, _ := New(one, poly.New())
	if _, err := json.Marshal(Loop{Plant: bad}); err == nil {
		t.Error("an invalid plant is written")
	}
	if _, err := json.Marshal(Loop{Plant: MustParse("1/s"), ComputationDelay: math.NaN()}); err == nil {
		t.Error("a computation delay of NaN is written")
	}
}

func FuzzFunctionJSON(f *testing.F) {
	for _, text := range []string{`"1/s"`, `"0.2 z / (z - 0.8), period 0.01"`, `"exp(-0.1 s) exp(-0.2 s)"`, `"0x1p-1100 s"`, `null`, `3`, `"\u007a, period 1"`} {
		f.Add([]byte(text))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		var g Function
		if json.Unmarshal(data, &g) != nil {
			return
		}
		written, err := json.Marshal(g)
		if err != nil {
			t.Fatalf("%s reads as %v: %v", data, g, err)
		}
		var back Function
		if err := json.Unmarshal(written, &back); err != nil || !back.Equal(g) {
			t.Fatalf("%s is written %s, which reads as %v, %v", data, written, back, err)
		}
	})
}

func FuzzLoopJSON(f *testing.F) {
	for _, text := range []string{
		`{"plant":"1/s"}`, `{"prefilter":"1","controller":"2, period 1","plant":"1/(s+1)","sensor":"3","hold":"first-order hold","computation_delay":0.5}`,
		`{"plant":"1/s","limits":{"amplitude":"unbounded","rate":2}}`, `{}`, `{"gain":1}`, `[]`, `{"plant":"1/s","Plant":"1/s"}`,
	} {
		f.Add([]byte(text))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		var l Loop
		if json.Unmarshal(data, &l) != nil {
			return
		}
		written, err := json.Marshal(l)
		if err != nil {
			t.Fatalf("%s: %v", data, err)
		}
		var back Loop
		if err := json.Unmarshal(written, &back); err != nil || !sameLoop(l, back) {
			t.Fatalf("%s is written %s, which reads as %+v, %v", data, written, back, err)
		}
	})
}
