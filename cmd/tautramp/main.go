// Command tautramp reads a setting transducer and an extension indicator on a
// band mill, and makes the calibration of the mill's tensioner from a slow
// ramp up and down. One file a verb; this file finds the verb.
package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"strings"
	"syscall"
	"time"

	"github.com/spf13/pflag"

	"tautramp/acquire"
)

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	// A second Ctrl-C ends the program at once: the first one gave the handlers back.
	go func() { <-ctx.Done(); stop() }()
	os.Exit(run(ctx, os.Args[1:], systemEnv()))
}

// env is everything a verb may touch of the outside, passed in so that tests
// can stand in for it.
type env struct {
	stdin   io.Reader
	stdout  io.Writer // results
	stderr  io.Writer // progress, cautions, errors
	columns int       // of stderr where it is a terminal that can redraw a line, else 0
	clock   func(factor float64) acquire.Clock
	wall    func() time.Time
	browse  func(address string) error // opens the browser; nil: there is none
}

func systemEnv() env {
	return env{
		stdin: os.Stdin, stdout: os.Stdout, stderr: os.Stderr,
		columns: terminalWidth(os.Stderr),
		clock:   acquire.NewClock,
		wall:    time.Now,
		browse:  browse,
	}
}

// verb is one command of the program.
type verb struct {
	name  string
	about string
	run   func(ctx context.Context, args []string, e env) error
}

func verbs() []verb {
	return []verb{
		{"profile", "write an example mill.toml to fill in", runProfile},
		{"ports", "list the serial ports of this computer", runPorts},
		{"page", "the whole job in a browser", runPage},
		{"capture", "record a visit: ramp up and down, then the result", runCapture},
		{"bench", "test a gauge against a reference, by foot switch", runBench},
		{"analyze", "compute the result of a recording again", runAnalyze},
		{"card", "write the card for the mill from a recording", runCard},
		{"import", "make a recording from a text file of wire lines", runImport},
		{"check", "check a recording, a mill.toml or a wire log", runCheck},
		{"rig", "run a simulated mill to rehearse on", runRig},
		{"demo", "the whole job on a simulated mill, in under a minute", runDemo},
	}
}

// run does one command line and returns the process's exit code.
func run(ctx context.Context, args []string, e env) int {
	err := dispatch(ctx, args, e)
	if err == nil || errors.Is(err, pflag.ErrHelp) {
		return 0
	}
	row := classify(err)
	fmt.Fprintf(e.stderr, "tautramp: %v\n", err)
	if row.hint != "" {
		fmt.Fprintf(e.stderr, "next: %s\n", row.hint)
	}
	return row.code
}

func dispatch(ctx context.Context, args []string, e env) error {
	if len(args) == 0 {
		usage(e.stderr)
		return &usageError{"no command given"}
	}
	switch args[0] {
	case "help", "--help", "-h":
		if len(args) > 1 {
			return dispatch(ctx, []string{args[1], "--help"}, e)
		}
		usage(e.stdout)
		return nil
	case "version", "--version":
		_, err := fmt.Fprintln(e.stdout, programVersion())
		return err
	}
	for _, v := range verbs() {
		if v.name == args[0] {
			return v.run(ctx, args[1:], e)
		}
	}
	return &usageError{fmt.Sprintf("no command is called %q", args[0])}
}

func usage(w io.Writer) {
	fmt.Fprint(w, "tautramp: what a band mill's tensioner setting does to the band, measured\n\n")
	for _, v := range verbs() {
		fmt.Fprintf(w, "  tautramp %-9s %s\n", v.name, v.about)
	}
	fmt.Fprint(w, "\nEach command explains itself: tautramp capture --help\n")
	fmt.Fprintf(w, "\nExit codes:\n")
	for _, row := range byCode(exitTable()) {
		fmt.Fprintf(w, "  %3d  %s\n", row.code, row.what)
	}
}

// flags makes a flag set that reports its errors instead of ending the
// program.
func flags(name, args, about string, e env) *pflag.FlagSet {
	fs := pflag.NewFlagSet(name, pflag.ContinueOnError)
	fs.SetOutput(e.stderr)
	fs.SortFlags = false
	fs.Usage = func() {
		fmt.Fprintf(e.stdout, "usage: tautramp %s\n\n%s\n\n%s", strings.TrimSpace(name+" "+args+" [flags]"), about, fs.FlagUsagesWrapped(80))
	}
	return fs
}

// parse reads the flags and checks how many other words stand on the line.
func parse(fs *pflag.FlagSet, args []string, least, most int) error {
	if err := fs.Parse(args); err != nil {
		if errors.Is(err, pflag.ErrHelp) {
			return err
		}
		return &usageError{fmt.Sprintf("%s: %v", fs.Name(), err)}
	}
	if n := fs.NArg(); n < least || n > most {
		return &usageError{fmt.Sprintf("%s takes %s, not %d", fs.Name(), countWords(least, most), n)}
	}
	return nil
}

func countWords(least, most int) string {
	switch {
	case most == 0:
		return "no other words"
	case least == most && most == 1:
		return "one file"
	}
	return fmt.Sprintf("%d to %d names", least, most)
}
