// Kiln models a furnace zone at 900 °C twice: from its thermal equations and from
// a recorded step test, and compares the two.
//
//	go run ./kiln [-record FILE] [-output DIR]
//
// Without -record a test is made up, with noise, a coarse reading and a slow drift
// as a real one has, and written to the folder as a CSV file to look at.
package main

import (
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
)

func main() {
	if err := run(os.Args[1:], os.Stdout); err != nil {
		if !errors.Is(err, flag.ErrHelp) {
			fmt.Fprintln(os.Stderr, "kiln:", err)
		}
		os.Exit(1)
	}
}

func run(arguments []string, w io.Writer) error {
	flags := flag.NewFlagSet("kiln", flag.ContinueOnError)
	source := flags.String("record", "", "CSV `file` with the columns time, heater and zone; a made-up test if empty")
	output := flags.String("output", filepath.Join(os.TempDir(), "kiln"), "`folder` for the picture and the record")
	if err := flags.Parse(arguments); err != nil {
		return err
	}
	folder, err := filepath.Abs(*output)
	if err != nil {
		return err
	}
	z, err := newZone()
	if err != nil {
		return err
	}
	fmt.Fprintln(w, "A FURNACE ZONE AT 900 °C, FROM ITS EQUATIONS AND FROM A TEST")
	if err := z.report(w); err != nil {
		return err
	}
	if err := radiation(w); err != nil {
		return err
	}
	name := *source
	if name == "" {
		if err := os.MkdirAll(folder, 0o755); err != nil {
			return err
		}
		name = filepath.Join(folder, "steptest.csv")
		if err := z.writeTest(name); err != nil {
			return err
		}
	}
	t, err := readTest(name)
	if err != nil {
		return fmt.Errorf("%s: %w", name, err)
	}
	heading(w, "step test "+filepath.Base(name))
	if err := t.report(w, z); err != nil {
		return err
	}
	paths, err := t.draw(folder, z)
	if err != nil {
		return err
	}
	heading(w, "files")
	if *source == "" {
		paths = append([]string{name}, paths...)
	}
	for _, p := range paths {
		fmt.Fprintf(w, "  %s\n", p)
	}
	heading(w, "cautions")
	fmt.Fprintln(w, "  "+strings.Join(cautions, "\n  "))
	return nil
}

var cautions = []string{
	"A model is not the kiln: it is linear about 900 °C and leaves out what the",
	"equations leave out. Over-temperature trips, burner and door interlocks",
	"follow local codes and a licensed, responsible engineer.",
}

func heading(w io.Writer, text string) { fmt.Fprintf(w, "\n%s\n\n", strings.ToUpper(text)) }
