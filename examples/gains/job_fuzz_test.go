package main

import (
	"errors"
	"os"
	"path/filepath"
	"testing"
)

// FuzzReadJob: whatever stands in a job file, reading it ends in a job or in an error that
// tells a place within the file.
func FuzzReadJob(f *testing.F) {
	files, err := filepath.Glob("jobs/*.json")
	if err != nil || len(files) == 0 {
		f.Fatal("no job files", err)
	}
	for _, name := range files {
		data, err := os.ReadFile(name)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(data)
	}
	f.Add([]byte(`{"plant": "1/s", "sheet": [{"require": "overshoot", "at most": 1e-3}], "variants": [{"name": "a", "plant": "2/s"}]}`))
	f.Add([]byte(`{"plant": "1/0", "sheet": []`))
	f.Add([]byte("{\"plant\": \"\u00b5\", \"sheet\": [\"\"]}"))
	f.Fuzz(func(t *testing.T, data []byte) {
		j, err := readJob("job", data)
		if err == nil {
			if len(j.sheet) == 0 || len(j.words) != len(j.sheet) || len(j.loops) != len(j.names) {
				t.Fatalf("an incomplete job without an error: %+v", j)
			}
			return
		}
		var place *jobError
		if !errors.As(err, &place) {
			t.Fatalf("error without a place: %v", err)
		}
		if place.Line < 1 || place.Column < 1 || place.Err == nil {
			t.Fatalf("no place: %+v", place)
		}
	})
}
