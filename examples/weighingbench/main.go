// Weighingbench models a vibration-isolated bench that carries a laboratory
// balance: how much of the motion of the floor reaches the pan. The same bench is
// entered as equations, as a chain of mounts and masses, as matrices and as a
// nonlinear mount that is linearised under its load.
//
//	go run ./weighingbench [-output DIR]
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
			fmt.Fprintln(os.Stderr, "weighingbench:", err)
		}
		os.Exit(1)
	}
}

func run(arguments []string, w io.Writer) error {
	flags := flag.NewFlagSet("weighingbench", flag.ContinueOnError)
	output := flags.String("output", filepath.Join(os.TempDir(), "weighingbench"), "`folder` for the pictures")
	if err := flags.Parse(arguments); err != nil {
		return err
	}
	folder, err := filepath.Abs(*output)
	if err != nil {
		return err
	}
	b, err := newBench()
	if err != nil {
		return err
	}
	fmt.Fprintln(w, "A LABORATORY BALANCE ON A BENCH THAT KEEPS THE FLOOR'S VIBRATION AWAY")
	for _, part := range []func(io.Writer) error{b.equations, b.waysIn, b.modes, b.isolation, b.settling, mount} {
		if err := part(w); err != nil {
			return err
		}
	}
	paths, err := b.draw(folder)
	if err != nil {
		return err
	}
	heading(w, "pictures")
	for _, p := range paths {
		fmt.Fprintf(w, "  %s\n", p)
	}
	heading(w, "cautions")
	fmt.Fprintln(w, "  "+strings.Join(cautions, "\n  "))
	return nil
}

var cautions = []string{
	"A model is not the bench: it is linear, in one direction, and knows nothing of",
	"what the floor does in the others. Heavy masses on soft mounts tip and fall:",
	"their supports and stops follow local codes and a responsible engineer.",
}

func heading(w io.Writer, text string) { fmt.Fprintf(w, "\n%s\n\n", strings.ToUpper(text)) }
