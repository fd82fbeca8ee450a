package main

import (
	"fmt"
	"os"
	"path/filepath"

	"tautramp/acquire/mill"
	"tautramp/acquire/recording"
	"tautramp/analyze"
	"tautramp/analyze/report"
)

const instrumentsAbout = "instrument records, as a bench test writes them, in the place of the profile's"

// withInstruments puts the instrument records of a file into a profile; "" is no
// file.
func withInstruments(profile []byte, path string) ([]byte, error) {
	if path == "" {
		return profile, nil
	}
	record, err := os.ReadFile(path)
	if err != nil {
		return nil, fmt.Errorf("--instruments: %w", err)
	}
	merged, _, err := mill.MergeInstruments(profile, record)
	if err != nil {
		return nil, fmt.Errorf("--instruments %s: %w", path, err)
	}
	return merged, nil
}

// computeOverridden is computeResult with instrument records that take the
// place of the recording's own; the result names their file.
func computeOverridden(path string, target mill.Pressure, instruments string) (*analyze.Result, report.Meta, error) {
	if instruments == "" {
		return computeResult(path, target)
	}
	rec, err := recording.ReadFile(path)
	if err != nil {
		return nil, report.Meta{}, err
	}
	text, err := withInstruments(rec.Header.Profile, instruments)
	if err != nil {
		return nil, report.Meta{}, err
	}
	if rec.Header.Parsed, err = mill.Parse(text); err != nil {
		return nil, report.Meta{}, fmt.Errorf("%s with %s: %w", path, instruments, err)
	}
	return resultBy(rec, path, target, filepath.Base(instruments))
}
