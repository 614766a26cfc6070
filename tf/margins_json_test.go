package tf

import (
	"encoding/json"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
)

func TestMarginsJSON(t *testing.T) {
	for _, text := range []string{"1 / (s + 1)", "6 / (s + 1)^3", "9 / (s + 1)^3", "2 exp(-0.5 s) / (s + 1)", "2 / (s - 1)"} {
		m, err := Loop{Plant: MustParse(text)}.Margins()
		if err != nil {
			t.Fatal(err)
		}
		data, err := json.Marshal(m)
		if err != nil {
			t.Fatalf("%s: %v", text, err)
		}
		var back Margins
		if err := json.Unmarshal(data, &back); err != nil {
			t.Fatalf("%s: %v", data, err)
		}
		if diff := cmp.Diff(m, back, cmpopts.EquateNaNs(), cmpopts.EquateEmpty()); diff != "" {
			t.Errorf("%s: %s\n%s", text, data, diff)
		}
	}
	var m Margins
	if err := json.Unmarshal([]byte(`{"delay": 1, "delays": 2}`), &m); err == nil || !strings.Contains(err.Error(), "delays") {
		t.Errorf("an unknown member: %v", err)
	}
	if err := json.Unmarshal([]byte(`{"delay": "bounded"}`), &m); err == nil {
		t.Error("a text for a number is read")
	}
}
