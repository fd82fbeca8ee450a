package main

import (
	"bytes"
	"context"
	"fmt"
	"io"
	"os"
	"path/filepath"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/cmd/tautramp/station"
	"tautramp/protocol"
)

func runCheck(_ context.Context, args []string, e env) error {
	var thresholds bool
	fs := flags("check", "FILE", "Checks a file and says what is in it: a recording (.ramp), a mill profile (.toml),\nor a text file of wire lines.", e)
	fs.BoolVar(&thresholds, "thresholds", false, "list the limits that findings rest on, the profile's own where FILE is one")
	if err := parse(fs, args, 0, 1); err != nil {
		return err
	}
	switch {
	case thresholds:
		return listThresholds(fs.Arg(0), e)
	case fs.NArg() != 1:
		return &usageError{"check takes one file"}
	}
	path := fs.Arg(0)
	switch filepath.Ext(path) {
	case ".toml":
		return checkProfile(path, e)
	case ".ramp":
		return checkRecording(path, e)
	}
	return checkLines(path, e)
}

func checkProfile(path string, e env) error {
	text, err := os.ReadFile(path)
	if err != nil {
		return err
	}
	p, err := mill.Parse(text)
	if err != nil {
		return fmt.Errorf("%s: %w", path, err)
	}
	var b bytes.Buffer
	fmt.Fprintf(&b, "%s: good\n", path)
	for _, t := range p.Tensioners {
		fmt.Fprintf(&b, "tensioner %s, set by %s, limit %s\n", t.Name, t.SetBy, t.SettingLimit.Entered)
	}
	for _, band := range p.Bands {
		fmt.Fprintf(&b, "band %s, %s x %s net, target %s\n", band.Name, band.Thickness.Entered, band.NetWidth.Entered, orNone(band.Target.Entered))
	}
	for _, caution := range p.Cautions() {
		fmt.Fprintf(&b, "look again: %s\n", caution)
	}
	_, err = b.WriteTo(e.stdout)
	return err
}

func orNone(entered string) string {
	if entered == "" {
		return "none"
	}
	return entered
}

func checkRecording(path string, e env) error {
	rec, err := recording.ReadFile(path)
	if rec == nil {
		return err
	}
	var b bytes.Buffer
	fmt.Fprintf(&b, "%s: %s\n", path, rec.Outcome)
	fmt.Fprintf(&b, "%s, begun %s, %d entries\nseal %s\n", aboutOf(rec.Header),
		rec.Header.Started.Format("2006-01-02 15:04:05 -0700"), len(rec.Entries), rec.Seal)
	if rec.TailBytes > 0 {
		fmt.Fprintf(&b, "%d bytes after the last good seal are not used\n", rec.TailBytes)
	}
	if err == nil {
		describe(&b, path, rec)
	}
	if _, err := b.WriteTo(e.stdout); err != nil {
		return err
	}
	switch {
	case err != nil:
		return err
	case rec.Outcome == recording.Torn:
		return &tornError{path}
	}
	return nil
}

// aboutOf is what was measured.
func aboutOf(h recording.Header) string {
	if h.Bench != nil {
		return fmt.Sprintf("bench test of %s against %s", h.Bench.Tested, h.Bench.Reference)
	}
	return fmt.Sprintf("tensioner %s, band %s", h.Tensioner, h.Band)
}

func describe(w io.Writer, path string, rec *recording.Recording) {
	if rec.Header.Bench == nil {
		describePairs(w, rec)
		return
	}
	chain, err := readChain(path)
	if err != nil {
		fmt.Fprintf(w, "no result can be computed: %v\n", err)
		return
	}
	bench, err := station.Read(chain...)
	if err != nil {
		fmt.Fprintf(w, "no result can be computed: %v\n", err)
		return
	}
	now := bench.Status()
	fmt.Fprintf(w, "%d of %d points taken, in %d recordings\n", now.Taken, now.Planned, len(chain))
	if !now.Done {
		fmt.Fprintf(w, "tautramp bench --continue %s goes on\n", path)
	}
}

// describePairs says what the recording can be used for; a recording without
// pairs is still a good recording.
func describePairs(w io.Writer, rec *recording.Recording) {
	set, err := pairing.FromRecording(rec)
	if err != nil {
		fmt.Fprintf(w, "no result can be computed: %v\n", err)
		return
	}
	fmt.Fprintf(w, "%d pairs of setting and extension\n", len(set.Pairs))
	for _, c := range set.Counters {
		fmt.Fprintf(w, "board %d: %d good lines, %d lost, %d refused, %d restarts\n", c.Device+1, c.Lines, c.Lost, c.Rejected, c.Restarts)
	}
	for _, c := range set.Clocks {
		fmt.Fprintf(w, "board %d clock, part %d: %+.0f ppm, instants good to %.1f ms (%s)\n", c.Device+1, c.Part+1, c.RatePPM, c.OffsetStd*1e3, c.Method)
	}
	for _, warning := range set.Warnings {
		fmt.Fprintf(w, "note: %s\n", warning)
	}
}

// shownErrorBytes bounds the refused lines that are printed one by one.
const shownErrorBytes = 1000

func checkLines(path string, e env) error {
	var b bytes.Buffer
	counts, err := countLines(path, func(line protocol.Line) error {
		if line.Err != nil && b.Len() < shownErrorBytes {
			fmt.Fprintf(&b, "%v\n", line.Err)
		}
		return nil
	})
	if err != nil {
		return err
	}
	if counts.good == 0 {
		return fmt.Errorf("%s: no wire line in it: %w", path, recording.ErrNotRecording)
	}
	fmt.Fprintf(&b, "%s: %s\n", path, counts)
	_, err = b.WriteTo(e.stdout)
	return err
}
