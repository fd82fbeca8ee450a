package main

import (
	"context"
	"errors"
	"fmt"
	"path/filepath"
	"slices"
	"strings"
	"time"

	"tautramp/acquire"
	"tautramp/acquire/recording"
	"tautramp/analyze/gauge"
	"tautramp/cmd/tautramp/station"
)

// benchJob is a bench test that is ready to start.
type benchJob struct {
	header recording.Header
	bench  *station.Bench
	plan   gauge.Plan
}

const benchKeyHelp = "KEYS  foot switch, or m Enter: press  held 1.5 s, or u Enter: take back  Ctrl-C: end"

// conduct runs a test, closes its recording, and works it out as analyze would.
func (o *benchOptions) conduct(ctx context.Context, job benchJob, e env) error {
	if filepath.Ext(o.out) != ".ramp" {
		return &usageError{fmt.Sprintf("--out %s: the name of a recording ends in .ramp", o.out)}
	}
	if err := refuseExisting(o.out); err != nil {
		return err
	}
	if err := printTexts("CAUTION  ", station.Cautions(job.plan), e); err != nil {
		return err
	}
	if err := printTexts("PLAN  ", planWords(job.plan), e); err != nil {
		return err
	}
	if _, err := fmt.Fprintln(e.stderr, benchKeyHelp); err != nil {
		return err
	}
	testErr := o.record(ctx, job, e)
	if testErr != nil && !onlyAlarm(testErr) {
		return testErr
	}
	return errors.Join(analyzeBench(o.out, o.resultFlags, true, e), testErr)
}

// record runs the test and closes the recording, whatever happens. An alarm is
// in the error that it returns, alone or beside what ended the test.
func (o *benchOptions) record(ctx context.Context, job benchJob, e env) error {
	clock := e.clock(o.speed)
	every := time.Duration(float64(syncEveryReal) * o.speed)
	out, err := recording.Create(o.out, job.header, every)
	if err != nil {
		return &fileError{err}
	}
	keys, stopKeys := operatorKeys(e, o.said)
	defer stopKeys()
	screen := newBenchScreen(e, job.plan, o.speed)
	show := screen.draw
	if o.show != nil {
		show = func(s station.Status) { o.show(s); screen.draw(s) }
	}
	summary, err := station.Run(ctx, station.Config{
		Acquire: acquire.Config{Devices: o.devices(), Clock: clock, Out: out, Operator: keys,
			GiveUpAfter: time.Duration(float64(o.patience) * o.speed)},
		Bench: job.bench, OnStatus: show,
	})
	closeErr := out.Close(clock.Now(), clock.Wall())
	if closeErr != nil {
		closeErr = &fileError{fmt.Errorf("closing %s: %w", o.out, closeErr)}
	}
	screen.end(summary)
	if err := errors.Join(err, closeErr); err != nil {
		return keepOrRemove(o.out, "tautramp bench --continue "+o.out, summary.Alarm, summary.Counters, err)
	}
	screen.line("recording: " + o.out)
	if summary.Alarm != "" {
		return &alarmError{summary.Alarm}
	}
	return nil
}

// resume goes on with a test that was broken off, in a recording of its own.
func (o *benchOptions) resume(ctx context.Context, e env) error {
	if o.plan != "" || o.about != (recording.Bench{}) {
		return &usageError{"--continue goes on with the plan, the instruments and the conditions of the recording: give neither again"}
	}
	if err := o.check(); err != nil {
		return err
	}
	chain, err := readChain(o.continues)
	if err != nil {
		return err
	}
	bench, err := station.Read(chain...)
	if err != nil {
		return fmt.Errorf("%s: %w", o.continues, err)
	}
	last := chain[len(chain)-1]
	switch {
	case bench.Finished():
		return &continueError{o.continues + ": every point of the plan is taken"}
	case last.Header.ClockFactor != o.speed:
		return &usageError{fmt.Sprintf("the recording was made with --speed %g", last.Header.ClockFactor)}
	}
	now := e.wall()
	if o.out == "" {
		o.out = strings.TrimSuffix(o.continues, ".ramp") + "-" + now.Format("150405") + ".ramp"
	}
	if filepath.Dir(o.out) != filepath.Dir(o.continues) {
		return &usageError{"the recordings of one test stay in one folder: --out must be beside " + o.continues}
	}
	about := *last.Header.Bench
	about.Earlier = filepath.Base(o.continues)
	header := last.Header
	header.Program, header.Started, header.Continues, header.Devices, header.Bench = programVersion(), now, last.Seal, o.ports, &about
	if err := bench.Continue(header, last.Seal); err != nil {
		return err
	}
	return o.conduct(ctx, benchJob{header: header, bench: bench, plan: bench.Plan()}, e)
}

// longestChain bounds how many recordings one test may have.
const longestChain = 50

// readChain reads a recording of a bench test, and before it those that it
// continues, the first one first.
func readChain(path string) ([]*recording.Recording, error) {
	var chain []*recording.Recording
	for {
		rec, err := recording.ReadFile(path)
		switch {
		case err != nil && len(chain) > 0:
			return nil, &continueError{fmt.Sprintf("the recording that the test began with cannot be read: %v; keep the recordings of one test together", err)}
		case err != nil:
			return nil, err
		case rec.Header.Bench == nil:
			return nil, fmt.Errorf("%s: %w", path, station.ErrNotBench)
		}
		chain = append(chain, rec)
		if rec.Header.Continues == "" {
			slices.Reverse(chain)
			return chain, nil
		}
		if len(chain) == longestChain || rec.Header.Bench.Earlier == "" {
			return nil, &continueError{path + ": it does not say which recording it continues"}
		}
		path = filepath.Join(filepath.Dir(path), filepath.Base(rec.Header.Bench.Earlier))
	}
}
