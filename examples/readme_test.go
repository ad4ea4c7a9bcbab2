// Package examples holds the test that keeps the README's programs and their
// output true.
package examples

import (
	"os"
	"os/exec"
	"strings"
	"testing"
)

func TestReadmeIsTrue(t *testing.T) {
	readme, err := os.ReadFile("../README.md")
	if err != nil {
		t.Fatal(err)
	}
	blocks := strings.Split(string(readme), "```")
	holds := func(language, text string) bool {
		for _, b := range blocks {
			if b == language+"\n"+text {
				return true
			}
		}
		return false
	}
	for _, name := range []string{"firstloop", "tour", "waysin"} {
		source, err := os.ReadFile(name + "/main.go")
		if err != nil {
			t.Fatal(err)
		}
		text := string(source)
		if name == "firstloop" {
			text = text[strings.Index(text, "package main"):]
		} else {
			from, to := strings.Index(text, "func main() {\n")+len("func main() {\n"), strings.LastIndex(text, "}")
			text = strings.ReplaceAll("\n"+text[from:to], "\n\t", "\n")[1:]
		}
		if !holds("go", text) {
			t.Errorf("the README does not hold %s/main.go", name)
		}
		out, err := exec.Command("go", "run", "./"+name).Output()
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if !holds("text", string(out)) {
			t.Errorf("the README does not hold the output of %s:\n%s", name, out)
		}
	}
}
