package main

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"

	"tautramp/acquire"
	"tautramp/acquire/port"
	"tautramp/acquire/recording"
	"tautramp/analyze/report"
)

// demoSpeed is how many times faster than life the demo's shared clock runs.
const demoSpeed = 60

func runDemo(ctx context.Context, args []string, e env) error {
	o := rigOptions{boards: 1, exercise: 1, ramps: 3, seed: 1, speed: demoSpeed}
	o.tensioner, o.band = demoTensioner, demoBand
	var out, units string
	fs := flags("demo", "", "Does the whole job on the simulated mill of the example profile: rig, capture,\nanalysis, report. Nothing needs to be plugged in.", e)
	fs.StringVar(&out, "out", "", "new or empty folder for the files (default: tautramp-demo-TIME)")
	fs.StringVar(&units, "units", "us", "units on screen and paper: us or si")
	if err := parse(fs, args, 0, 0); err != nil {
		return err
	}
	if out == "" {
		out = "tautramp-demo-" + e.wall().Format("20060102-150405")
	}
	if err := makeEmpty(out); err != nil {
		return err
	}
	r := demoResults(out, units)
	if err := recordDemo(ctx, o, r, out, e); err != nil {
		return err
	}
	return tellDemo(out, e)
}

func demoResults(out, units string) resultFlags {
	at := func(name string) string { return filepath.Join(out, name) }
	return resultFlags{units: units, plot: string(report.PlotLoop), json: at("result.json"), csv: at("table.csv"), html: at("report.html"), png: at("loop.png")}
}

// makeEmpty makes a folder, or takes one that is there and empty.
func makeEmpty(dir string) error {
	if err := os.MkdirAll(dir, 0o755); err != nil {
		return err
	}
	entries, err := os.ReadDir(dir)
	if err != nil {
		return err
	}
	if len(entries) > 0 {
		return &usageError{fmt.Sprintf("%s is not empty; nothing in it is overwritten, give another --out", dir)}
	}
	return nil
}

func recordDemo(ctx context.Context, o rigOptions, r resultFlags, out string, e env) (err error) {
	system, target, err := r.check()
	if err != nil {
		return err
	}
	s, err := o.load(e)
	if err != nil {
		return err
	}
	rig, err := o.build(e)
	if err != nil {
		return err
	}
	end, err := demoEnd(o, e)
	if err != nil {
		return err
	}
	defer end.close()
	rigCtx, stopRig := context.WithCancel(ctx)
	clock := e.clock(o.speed)
	served := make(chan error, 1)
	go func() { served <- end.serve(rigCtx, rig.Boards()[0], clock) }()
	defer func() {
		stopRig()
		err = errors.Join(err, <-served)
	}()
	if err := printCautions(e); err != nil {
		return err
	}
	path := filepath.Join(out, "visit.ramp")
	visitErr := record(ctx, recordJob{
		header: recording.Header{
			Program: programVersion(), Started: clock.Wall(), Source: recording.Live, ClockFactor: o.speed,
			Devices: []string{end.name}, Tensioner: s.tensioner.Name, Band: s.band.Name,
			Plan: recording.Plan{Exercise: o.exercise, Ramps: o.ramps}, Profile: s.text, Parsed: s.profile,
		},
		path: path, system: system, clock: clock,
		devices: []acquire.Device{{Name: end.name, Dial: port.Dialer(end.name, port.Options{})}},
	}, e)
	return finish(path, visitErr, r, system, target, e)
}

// demoEnd is a pseudo-terminal, or TCP where the system has none.
func demoEnd(o rigOptions, e env) (boardEnd, error) {
	end, err := o.openEnd(0)
	if !errors.Is(err, port.ErrNoTerminal) {
		return end, err
	}
	if _, err := fmt.Fprintln(e.stderr, "this system has no pseudo-terminals: the demo's board is on a TCP address instead of a serial port"); err != nil {
		return boardEnd{}, err
	}
	return openListener("127.0.0.1:0")
}

func tellDemo(out string, e env) error {
	_, err := fmt.Fprintf(e.stdout, `
The demo's files are in %s:
  visit.ramp    the recording: every line of the board and every event
  report.html   the report, for a browser or a printer
  result.json   every figure, in SI units
  table.csv     settings and band stress, for a spreadsheet
  loop.png      the loop
next: tautramp analyze %s --units si
`, out, filepath.Join(out, "visit.ramp"))
	return err
}
