package readme

import (
	"os"
	"strings"
	"testing"
)

// TestReadmeExample: the code in the README is the body of Example, which the compiler and
// go test check, and so is what it prints.
func TestReadmeExample(t *testing.T) {
	readme, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	source, err := os.ReadFile("example_test.go")
	if err != nil {
		t.Fatal(err)
	}
	body, printed, ok := strings.Cut(between(t, string(source), "func Example() {\n", "\n}\n"), "\n\t// Output:\n")
	if !ok {
		t.Fatal("the example has no output")
	}
	code := between(t, string(readme), "```go\n", "\n```")
	if got := "\t" + strings.ReplaceAll(code, "\n", "\n\t"); got != body {
		t.Errorf("the README shows\n%s\nwant the body of Example:\n%s", got, body)
	}
	if n := strings.Count(code, "\n") + 1; n > 10 {
		t.Errorf("the README's example has %d lines, want ten at most", n)
	}
	_, after, _ := strings.Cut(string(readme), "prints\n")
	shown := strings.Fields(between(t, after, "```\n", "\n```"))
	if want := strings.Fields(strings.ReplaceAll(printed, "//", "")); strings.Join(shown, " ") != strings.Join(want, " ") {
		t.Errorf("the README says that it prints %q, want %q", shown, want)
	}
}

// TestReadmeCommands: the commands of the README are those that the CI script runs first.
func TestReadmeCommands(t *testing.T) {
	readme, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	script, err := os.ReadFile("../../.ci/run")
	if err != nil {
		t.Fatal(err)
	}
	for _, command := range []string{
		"go -C examples run ./gains gains/jobs/position-drive.json",
		"go test ./... && go -C examples test ./...",
	} {
		if !strings.Contains(string(readme), "\n    "+command+"\n") || !strings.Contains(string(script), "\n"+command+"\n") {
			t.Errorf("%q does not stand in both README.md and .ci/run", command)
		}
	}
}

func between(t *testing.T, text, before, after string) string {
	t.Helper()
	_, rest, ok := strings.Cut(text, before)
	if !ok {
		t.Fatalf("%q not found", before)
	}
	inner, _, ok := strings.Cut(rest, after)
	if !ok {
		t.Fatalf("%q not found", after)
	}
	return inner
}
