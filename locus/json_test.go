package locus

import (
	"encoding/json"
	"math"
	"strings"
	"testing"
)

func TestJSON(t *testing.T) {
	for _, w := range []Window{{math.Inf(-1), math.Inf(1)}, {-2.5, 0}, {3, math.Inf(1)}} {
		data, err := json.Marshal(w)
		if err != nil {
			t.Fatal(err)
		}
		var back Window
		if err := json.Unmarshal(data, &back); err != nil || back != w {
			t.Errorf("%s comes back as %v, %v", data, back, err)
		}
	}
	var w Window
	for text, place := range map[string]string{`{"lo": 1, "hi": 2, "top": 3}`: "top", `{"lo": 2, "hi": 1}`: "lo", `{"lo": null, "hi": 1}`: "lo", `{"lo": "x", "hi": 1}`: "lo"} {
		if err := json.Unmarshal([]byte(text), &w); err == nil || !strings.Contains(err.Error(), place) {
			t.Errorf("%s: %v", text, err)
		}
	}
	data, err := json.Marshal(Asymptotes{Centroid: math.NaN()})
	if err != nil || string(data) != `{"centroid":null,"angles":[]}` {
		t.Errorf("no asymptotes are written %s, %v", data, err)
	}
	var a Asymptotes
	if err := json.Unmarshal([]byte(`{"centroid": -1.5, "angles": [3]}`), &a); err != nil || a.Centroid != -1.5 || len(a.Angles) != 1 {
		t.Errorf("asymptotes come back as %v, %v", a, err)
	}
}
