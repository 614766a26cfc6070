package api

import (
	"flag"
	"os"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

var update = flag.Bool("update", false, "write api.txt anew from the source")

// TestListing holds the exported API against api.txt. Where it differs on purpose:
//
//	go test ./internal/api -update
//
// and say in CHANGELOG.md what an importer has to know.
func TestListing(t *testing.T) {
	lines, err := List("../..")
	if err != nil {
		t.Fatal(err)
	}
	got := strings.Join(lines, "\n") + "\n"
	if *update {
		if err := os.WriteFile("api.txt", []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	want, err := os.ReadFile("api.txt")
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(strings.Split(string(want), "\n"), strings.Split(got, "\n")); diff != "" {
		t.Errorf("the exported API is not what api.txt lists (-listed +source):\n%s", diff)
	}
}
