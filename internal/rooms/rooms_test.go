// Package rooms holds the test that keeps imports pointing downwards. It has
// no code of its own.
package rooms

import (
	"os/exec"
	"slices"
	"strings"
	"testing"
)

const module = "github.com/qofs/qofs/"

// above lists, for each public room, the public rooms that it may import. All
// of them may import internal packages; internal packages import no public one.
var above = map[string][]string{
	"units":          {},
	"poly":           {},
	"tf":             {"poly", "units"},
	"lti":            {"poly", "units", "tf", "lti/statespace"},
	"lti/statespace": {"poly", "units", "tf"},
	"lti/impedance":  {"poly", "units", "tf"},
	"lti/response":   {"poly", "units", "tf", "lti", "lti/statespace"},
	"lti/stability":  {"poly", "units", "tf", "lti", "lti/statespace", "lti/response"},
	"lti/design":     {"poly", "units", "tf", "lti", "lti/statespace", "lti/response", "lti/stability"},
	"lti/identify":   {"poly", "units", "tf", "lti", "lti/statespace", "lti/response", "lti/stability"},
	"lti/sampled":    {"poly", "units", "tf", "lti", "lti/statespace", "lti/response", "lti/stability", "lti/realtime"},
	"lti/realtime":   {},
	"lti/golden":     {"poly", "units", "tf", "lti", "lti/statespace", "lti/response", "lti/stability", "lti/sampled", "lti/realtime"},
}

// outside lists what the library may import beside the standard library.
var outside = []string{
	"gonum.org/v1/gonum/mat",
	"gonum.org/v1/gonum/num/dual",
	"gonum.org/v1/gonum/unit",
	"gonum.org/v1/gonum/optimize",
}

func TestImportsPointDownwards(t *testing.T) {
	imports := list(t, "{{.ImportPath}} {{join .Imports \" \"}}")
	if len(imports) < 5 {
		t.Fatalf("found only %d packages", len(imports))
	}
	for _, line := range imports {
		path, deps, _ := strings.Cut(line, " ")
		room, ok := strings.CutPrefix(path, module)
		if !ok {
			t.Errorf("package %s outside the module's folders", path)
			continue
		}
		for _, dep := range strings.Fields(deps) {
			if fault := judge(room, dep); fault != "" {
				t.Errorf("%s imports %s: %s", room, dep, fault)
			}
		}
	}
}

func TestRealtimeStandsAlone(t *testing.T) {
	for _, line := range list(t, "{{.ImportPath}} {{join .Imports \" \"}}") {
		if path, deps, _ := strings.Cut(line, " "); path == module+"lti/realtime" {
			if deps != "" && deps != "math" {
				t.Errorf("lti/realtime imports %s, want math alone", deps)
			}
		}
	}
}

func TestJudge(t *testing.T) {
	for _, c := range []struct {
		room, dep string
		fine      bool
	}{
		{"tf", module + "poly", true},
		{"poly", module + "tf", false},
		{"internal/ball", module + "poly", false},
		{"internal/ball", module + "internal/fault", true},
		{"poly", "math/big", true},
		{"poly", "unsafe", false},
		{"poly", "gonum.org/v1/gonum/mat", true},
		{"poly", "gonum.org/v1/gonum/stat", false},
		{"somewhere", "math", false},
	} {
		if got := judge(c.room, c.dep) == ""; got != c.fine {
			t.Errorf("judge(%q, %q) fine = %v, want %v", c.room, c.dep, got, c.fine)
		}
	}
}

// judge returns what is wrong with an import, or nothing.
func judge(room, dep string) string {
	internal := strings.HasPrefix(room, "internal/")
	allowed, known := above[room]
	if !known && !internal {
		return "a room that the design does not have"
	}
	switch rest, ours := strings.CutPrefix(dep, module); {
	case dep == "unsafe" || dep == "C":
		return "neither unsafe nor cgo"
	case ours && strings.HasPrefix(rest, "internal/"):
		return ""
	case ours && !slices.Contains(allowed, rest):
		return "points upwards"
	case ours || !strings.Contains(strings.SplitN(dep, "/", 2)[0], ".") || slices.Contains(outside, dep):
		return ""
	}
	return "a dependency that the library does not take"
}

func list(t *testing.T, format string) []string {
	t.Helper()
	command := exec.Command("go", "list", "-f", format, "./...")
	command.Dir = "../.."
	out, err := command.Output()
	if err != nil {
		t.Skipf("the go command does not answer here: %v", err)
	}
	var lines []string
	for _, line := range strings.Split(strings.TrimSpace(string(out)), "\n") {
		// This package has tests only; go list names it without imports.
		if !strings.HasPrefix(line, module+"internal/rooms") {
			lines = append(lines, line)
		}
	}
	return lines
}
