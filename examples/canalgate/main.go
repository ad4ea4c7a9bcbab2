// Canalgate analyses the level control of an irrigation canal: a pool whose
// level is held by the gate at its head, through a dead time that dominates the
// loop. It reads the canal from a JSON file, prints what an engineer wants to
// know before closing the loop, and draws the step responses.
//
//	go run ./canalgate [-input canal.json] [-output DIR]
package main

import (
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"path/filepath"
)

const maxInput = 1 << 20 // bytes

func main() {
	if err := run(os.Args[1:], os.Stdout); err != nil {
		if !errors.Is(err, flag.ErrHelp) {
			fmt.Fprintln(os.Stderr, "canalgate:", err)
		}
		os.Exit(1)
	}
}

func run(arguments []string, w io.Writer) error {
	flags := flag.NewFlagSet("canalgate", flag.ContinueOnError)
	source := flags.String("input", "", "JSON `file` of the canal; the built-in one if empty")
	output := flags.String("output", filepath.Join(os.TempDir(), "canalgate"), "`folder` for the pictures")
	if err := flags.Parse(arguments); err != nil {
		return err
	}
	if flags.NArg() > 0 {
		return fmt.Errorf("found %q after the flags, want nothing", flags.Arg(0))
	}
	text, name := canal, "built-in canal.json"
	if *source != "" {
		var err error
		if text, err = readFile(*source); err != nil {
			return err
		}
		name = *source
	}
	in, err := readInput(text)
	if err != nil {
		return fmt.Errorf("%s:\n%w", name, err)
	}
	r, err := compute(in)
	if err != nil {
		return fmt.Errorf("%s: %w", name, err)
	}
	if err := r.report(w); err != nil {
		return err
	}
	paths, err := r.draw(*output)
	if err != nil {
		return err
	}
	if len(paths) > 0 {
		heading(w, "pictures")
	}
	for _, p := range paths {
		fmt.Fprintf(w, "  %s\n", p)
	}
	return nil
}

func readFile(name string) (string, error) {
	f, err := os.Open(name)
	if err != nil {
		return "", err
	}
	defer f.Close()
	b, err := io.ReadAll(io.LimitReader(f, maxInput+1))
	if err == nil && len(b) > maxInput {
		err = fmt.Errorf("%s: more than %d bytes", name, maxInput)
	}
	return string(b), err
}
