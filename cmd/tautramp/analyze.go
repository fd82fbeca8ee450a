package main

import (
	"context"
	"errors"
	"fmt"
	"math/rand/v2"
	"path/filepath"

	"tautramp/acquire/mill"
	"tautramp/analyze"
	"tautramp/analyze/findings"
	"tautramp/analyze/report"
)

// Fewer trials do not tell where an interval ends; more take minutes. The seed is
// fixed, so that a result is the same every time.
const (
	leastTrials = 10_000
	mostTrials  = 1_000_000
	trialSeed   = 101
)

func runAnalyze(_ context.Context, args []string, e env) error {
	var r resultFlags
	var other otherBand
	var schema bool
	var before string
	var trials int
	fs := flags("analyze", "FILE.ramp", "Computes the result of a recording again, from its raw lines.", e)
	r.add(fs)
	other.add(fs)
	fs.StringVar(&r.instruments, "instruments", "", instrumentsAbout)
	fs.StringVar(&before, "before", "", "recording of the condition found, to compare this one with")
	fs.IntVar(&trials, "trials", 0, "check the intervals by so many random trials, 10000 to 1000000, and tell where they differ")
	fs.BoolVar(&schema, "schema", false, "print the JSON Schema of --json and stop")
	if err := parse(fs, args, 0, 1); err != nil {
		return err
	}
	if schema {
		_, err := e.stdout.Write(report.Schema())
		return err
	}
	if fs.NArg() != 1 {
		return &usageError{"analyze takes one recording"}
	}
	system, target, err := r.check()
	if err == nil {
		err = other.check()
	}
	if err != nil {
		return err
	}
	if trials != 0 && (trials < leastTrials || trials > mostTrials) {
		return &usageError{fmt.Sprintf("--trials: %d is not between %d and %d", trials, leastTrials, mostTrials)}
	}
	r.before, r.trials = before, trials
	return analyzeFile(fs.Arg(0), r, other, system, target, false, e)
}

// analyzeFile computes a recording's result and puts it where the flags say.
func analyzeFile(path string, r resultFlags, other otherBand, system mill.System, target mill.Pressure, cautionsShown bool, e env) error {
	if err := refuseSame(path, r.outputs()...); err != nil {
		return err
	}
	measuredTarget := target
	if other.asked() { // the target is the other band's
		measuredTarget = mill.Pressure{}
	}
	res, meta, err := computeOverridden(path, measuredTarget, r.instruments)
	if errors.Is(err, errBenchTest) {
		return analyzeBench(path, r, cautionsShown, e)
	}
	if err != nil {
		return err
	}
	if other.asked() {
		if res, err = other.of(res, target); err != nil {
			return fmt.Errorf("%s: %w", path, err)
		}
	}
	if r.before != "" {
		if err := compareWith(r.before, res, &meta, target); err != nil {
			return err
		}
	}
	if r.trials > 0 {
		if err := res.Trials(r.trials, rand.New(rand.NewPCG(trialSeed, uint64(r.trials)))); err != nil {
			return fmt.Errorf("%s: %w", path, err)
		}
	}
	meta.CautionsShown = cautionsShown
	if err := r.write(res, meta, system, e); err != nil {
		return err
	}
	if err := res.TargetError(); err != nil {
		// What was written stands: the other figures are good.
		return fmt.Errorf("%s: %w", path, &explainedError{report.Explain(err, system), err})
	}
	return nil
}

// compareWith puts the comparison with an earlier recording into a result's
// report.
func compareWith(path string, left *analyze.Result, meta *report.Meta, target mill.Pressure) error {
	found, _, err := computeResult(path, target)
	if err != nil {
		return err
	}
	c := findings.Compare(found, left)
	meta.Before, meta.BeforeFile = &c, filepath.Base(path)
	return nil
}

// explainedError is an error told in the reader's units.
type explainedError struct {
	text string
	err  error
}

func (e *explainedError) Error() string { return e.text }
func (e *explainedError) Unwrap() error { return e.err }
