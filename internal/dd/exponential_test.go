package dd

import (
	"os"
	"strings"
	"testing"
)

// TestTables compares the source with the file that the script writes.
func TestTables(t *testing.T) {
	source, err := os.ReadFile("tables.go")
	if err != nil {
		t.Fatal(err)
	}
	table, err := os.ReadFile("testdata/tables.txt")
	if err != nil {
		t.Fatal(err)
	}
	_, code, _ := strings.Cut(string(source), "package dd\n")
	if a, b := strings.Fields(code), strings.Fields(string(table)); strings.Join(a, " ") != strings.Join(b, " ") {
		t.Error("tables.go is not testdata/tables.txt")
	}
}

func TestExactPoints(t *testing.T) {
	if v := Exp(DD{}); v != From(1) {
		t.Errorf("e^0 = %v", v)
	}
	if s, c := SinCos(DD{}); s != (DD{}) || c != From(1) {
		t.Errorf("sin 0, cos 0 = %v, %v", s, c)
	}
}
