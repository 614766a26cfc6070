package main

import (
	"bytes"
	"context"
	"encoding/json"
	"flag"
	"image/png"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

var update = flag.Bool("update", false, "write the expected outputs anew")

func runJob(t *testing.T, stdin string, args ...string) (out, problems string, status int) {
	t.Helper()
	var o, p bytes.Buffer
	status = run(context.Background(), args, strings.NewReader(stdin), &o, &p)
	return o.String(), p.String(), status
}

// TestJobs holds the printed answers against testdata, written by this program: a change of
// an answer is to be seen in review. That the answers are true is tested in the library.
func TestJobs(t *testing.T) {
	for _, tt := range []struct {
		name   string
		args   []string
		status int
	}{
		{"position-drive", []string{"jobs/position-drive.json"}, found},
		{"position-drive-in-use", []string{"-gain", "60", "jobs/position-drive.json"}, found},
		{"wash-bath", []string{"jobs/wash-bath.json"}, found},
		{"gantry-arm", []string{"jobs/gantry-arm.json"}, found},
		{"too-much", []string{"jobs/too-much.json"}, none},
	} {
		out, problems, status := runJob(t, "", tt.args...)
		if status != tt.status || problems != "" {
			t.Errorf("%s: status %d, want %d; %s", tt.name, status, tt.status, problems)
		}
		path := filepath.Join("testdata", tt.name+".txt")
		if *update {
			if err := os.WriteFile(path, []byte(out), 0o644); err != nil {
				t.Fatal(err)
			}
			continue
		}
		want, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if out != string(want) {
			t.Errorf("%s prints\n%s\nwant\n%s", tt.name, out, want)
		}
	}
}

// TestSecondOrderRuleFails: of at least one job the report says plainly that the gain of the
// second-order map fails on the true loop.
func TestSecondOrderRuleFails(t *testing.T) {
	out, _, _ := runJob(t, "", "jobs/position-drive.json")
	if !strings.Contains(out, "second-order map would choose a gain of") || !strings.Contains(out, "fails on the true loop") {
		t.Errorf("the report does not say that the map's gain fails:\n%s", out)
	}
}

func TestJSON(t *testing.T) {
	for _, name := range []string{"position-drive", "too-much"} {
		out, problems, _ := runJob(t, "", "-json", "-gain", "3.2", "jobs/"+name+".json")
		var v map[string]any
		if err := json.Unmarshal([]byte(out), &v); err != nil {
			t.Errorf("%s: no JSON: %v; %s\n%s", name, err, problems, out)
		}
		if v["design"] == nil || v["title"] == nil {
			t.Errorf("%s: title or design is missing: %s", name, out)
		}
	}
}

func TestStandardInput(t *testing.T) {
	data, err := os.ReadFile("jobs/gantry-arm.json")
	if err != nil {
		t.Fatal(err)
	}
	file, _, _ := runJob(t, "", "jobs/gantry-arm.json")
	for _, args := range [][]string{nil, {"-"}} {
		if out, problems, status := runJob(t, string(data), args...); status != found || out != file {
			t.Errorf("%v: status %d, %s: prints\n%s\nwant\n%s", args, status, problems, out, file)
		}
	}
}

// TestOtherSign: a plant that turns the sign round has gains k < 0 only.
func TestOtherSign(t *testing.T) {
	out, _, status := runJob(t, `{"plant": "-4 / (s (s + 2))", "sheet": ["overshoot at most 20 %", "settling time at most 6 s, band 2 %"]}`)
	if status != none || !strings.Contains(out, "other sign") {
		t.Errorf("status %d, want %d and a word on the other sign; printed\n%s", status, none, out)
	}
}

func TestVariants(t *testing.T) {
	out, problems, status := runJob(t, `{"plant": "4 / (s (s + 2))", "sheet": ["overshoot at most 20 %", "settling time at most 6 s, band 2 %"],
		"variants": [{"name": "heavy load", "plant": "3 / (s (s + 1.5))"}]}`)
	if status != found || !strings.Contains(out, "On heavy load") {
		t.Errorf("status %d, %s; printed\n%s", status, problems, out)
	}
}

// TestBadInput: status 2, with the file, the place in it and what was expected.
func TestBadInput(t *testing.T) {
	sheet := `"sheet": ["overshoot at most 10 %"]`
	for _, tt := range []struct {
		name, job string
		place     string // line and column, "" where there is none
		words     string
	}{
		{"empty file", ``, "1:1", "no valid JSON"},
		{"no object", `[1]`, "1:1", "expected an object"},
		{"cut off", `{"plant": "1/s",`, "1:17", "JSON"},
		{"comma missing", "{\n  \"plant\": \"1/s\"\n  \"sheet\": []\n}", "3:3", "JSON"},
		{"no plant", `{` + sheet + `}`, "1:1", `"plant" is missing`},
		{"no sheet", `{"plant": "1/s"}`, "1:1", `"sheet" is missing`},
		{"unknown name", `{"plant": "1/s", "plnat": "1/s", ` + sheet + `}`, "1:27", `unknown name "plnat"`},
		{"twice", `{"plant": "1/s", "plant": "1/s", ` + sheet + `}`, "1:18", "twice"},
		{"plant no text", `{"plant": 3, ` + sheet + `}`, "1:11", "quotation marks"},
		{"plant malformed", "{\n \"plant\": \"1 / (s + \",\n " + sheet + `}`, "2:11", "column"},
		{"zero denominator", `{"plant": "1 / (s - s)", ` + sheet + `}`, "1:11", ""},
		{"number too large", `{"plant": "1e999 / s", ` + sheet + `}`, "1:11", ""},
		{"empty sheet", `{"plant": "1/s", "sheet": []}`, "1:27", "empty"},
		{"sheet no list", `{"plant": "1/s", "sheet": 3}`, "1:27", "expected a list"},
		{"unknown requirement", "{\"plant\": \"1/s\", \"sheet\": [\n\"beauty at least 3\"]}", "2:1", "known"},
		{"negative limit", "{\"plant\": \"1/s\", \"sheet\": [\"rise time at most 1 s\",\n\"overshoot at most -3 %\"]}", "2:1", ""},
		{"wrong unit", `{"plant": "1/s", "sheet": ["rise time at most 3 rad"]}`, "1:28", ""},
		{"something behind", `{"plant": "1/s", ` + sheet + `} x`, "1:55", ""},
		{"improper loop", `{"plant": "s^2 + 1", ` + sheet + `}`, "1:1", "improper"},
		{"variant without a name", `{"plant": "1/s", ` + sheet + `, "variants": [{"plant": "2/s"}]}`, "1:68", `"name" is missing`},
	} {
		out, problems, status := runJob(t, tt.job)
		if status != badInput || out != "" {
			t.Errorf("%s: status %d, want %d; printed %q, %q", tt.name, status, badInput, out, problems)
			continue
		}
		want := "gains: standard input"
		if tt.place != "" {
			want += ":" + tt.place + ":"
		}
		if !strings.HasPrefix(problems, want) || !strings.Contains(problems, tt.words) {
			t.Errorf("%s: says %q, want %q and %q", tt.name, problems, want, tt.words)
		}
	}
	for _, args := range [][]string{{"no-such-file"}, {"-gain", "Inf", "jobs/too-much.json"}, {"-gain", "x"}, {"a", "b"}, {"-no-such-flag"}} {
		if _, problems, status := runJob(t, "", args...); status != badInput || problems == "" {
			t.Errorf("%v: status %d, says %q; want status %d and a word", args, status, problems, badInput)
		}
	}
}

func TestPictures(t *testing.T) {
	for _, name := range []string{"position-drive", "too-much"} {
		folder := t.TempDir()
		if _, problems, status := runJob(t, "", "-pictures", folder, "jobs/"+name+".json"); status == badInput {
			t.Fatalf("%s: %s", name, problems)
		}
		for _, picture := range []string{"locus", "step"} {
			file, err := os.Open(filepath.Join(folder, picture+".png"))
			if err != nil {
				t.Fatal(err)
			}
			image, err := png.Decode(file)
			file.Close()
			if err != nil {
				t.Fatalf("%s: %v", picture, err)
			}
			if size := image.Bounds().Size(); size.X < 1200 || size.Y < 700 {
				t.Errorf("%s: %v, too small for a report", picture, size)
			}
			vector, err := os.ReadFile(filepath.Join(folder, picture+".svg"))
			if err != nil {
				t.Fatal(err)
			}
			if !bytes.Contains(vector, []byte("<svg")) || !bytes.Contains(vector, []byte("rad/s")) && picture == "locus" {
				t.Errorf("%s.svg is no picture with units", picture)
			}
		}
	}
}
