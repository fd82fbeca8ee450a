package main

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"

	"tautramp/acquire/port"
	"tautramp/acquire/recording"
	"tautramp/protocol"
)

func runImport(ctx context.Context, args []string, e env) error {
	var p profileFlags
	var press pressFlags
	var plan recording.Plan
	var out string
	fs := flags("import", "FILE.txt",
		"Makes a recording from a text file of wire lines without host times, such as the\nlog of a board that wrote to a memory card. Times come from the board's ticks.", e)
	fs.StringVar(&out, "out", "", "recording to write (default: the file's name with .ramp)")
	fs.IntVar(&plan.Exercise, "exercise", 1, "cycles first that are never fitted")
	fs.IntVar(&plan.Ramps, "ramps", 0, "cycles expected after them (0 = as many as there are)")
	p.add(fs, "mill.toml", "the mill's profile")
	press.add(fs)
	if err := parse(fs, args, 1, 1); err != nil {
		return err
	}
	in := fs.Arg(0)
	if out == "" {
		out = strings.TrimSuffix(in, filepath.Ext(in)) + ".ramp"
	}
	if err := refuseExisting(out); err != nil {
		return err
	}
	s, err := p.load(e)
	if err != nil {
		return err
	}
	presses, err := press.presses(s.tensioner, plan)
	if err != nil {
		return err
	}
	counts, err := importFile(ctx, in, out, recording.Header{
		Program: programVersion(), Started: e.wall(), Source: recording.Imported, ClockFactor: 1,
		Devices: []string{filepath.Base(in)}, Tensioner: s.tensioner.Name, Band: s.band.Name, Plan: plan, Presses: presses, Profile: s.text,
	})
	if err != nil {
		return err
	}
	_, err = fmt.Fprintf(e.stdout, "%s: %s\nnext: tautramp analyze %s\n", out, counts, out)
	return err
}

// lineCounts is what a text file of wire lines held.
type lineCounts struct{ good, refused, unknown int }

func (c lineCounts) String() string {
	return fmt.Sprintf("%d good lines, %d refused, %d of a kind this version does not know", c.good, c.refused, c.unknown)
}

func (c *lineCounts) add(line protocol.Line) {
	switch {
	case line.Err != nil:
		c.refused++
	default:
		c.good++
		if _, ok := line.Record.(protocol.Unknown); ok {
			c.unknown++
		}
	}
}

// importFile copies every line, good or refused, into a new recording. A text
// file without one good line is no wire log. A failure leaves no recording
// behind: the text is still there.
func importFile(ctx context.Context, in, out string, header recording.Header) (lineCounts, error) {
	counts, err := countLines(in, nil)
	if err != nil {
		return counts, err
	}
	if counts.good == 0 {
		return counts, fmt.Errorf("%s: no wire line in it: %w", in, recording.ErrNotRecording)
	}
	w, err := recording.Create(out, header, syncEveryReal)
	if err != nil {
		return counts, &fileError{err}
	}
	counts, err = countLines(in, func(line protocol.Line) error {
		if err := ctx.Err(); err != nil {
			return err
		}
		return w.Write(recording.Entry{Wire: line.Text})
	})
	if closeErr := w.Close(0, header.Started); err == nil {
		err = closeErr
	}
	if err != nil {
		return counts, &fileError{errors.Join(fmt.Errorf("import of %s: %w", in, err), os.Remove(out))}
	}
	return counts, nil
}

// replayPrefix makes a text file a port that ends.
const replayPrefix = "file:"

// countLines reads a text file of wire lines and hands each to use, if given.
func countLines(path string, use func(protocol.Line) error) (lineCounts, error) {
	var counts lineCounts
	card, err := port.Open(context.Background(), replayPrefix+path, port.Options{})
	if err != nil {
		return counts, &fileError{err}
	}
	defer card.Close() // read only: its error changes nothing
	lines := protocol.NewScanner(card)
	for lines.Scan() {
		counts.add(lines.Line())
		if use == nil {
			continue
		}
		if err := use(lines.Line()); err != nil {
			return counts, err
		}
	}
	if err := lines.Err(); err != nil {
		return counts, fmt.Errorf("reading %s: %w", path, err)
	}
	return counts, nil
}
