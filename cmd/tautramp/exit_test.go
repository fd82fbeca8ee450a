package main

import (
	"errors"
	"fmt"
	"io/fs"
	"testing"

	"tautramp/acquire"
	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/port"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
	"tautramp/analyze"
	"tautramp/analyze/gauge"
	"tautramp/cmd/tautramp/station"
)

func TestEachClassOfErrorHasItsExitCode(t *testing.T) {
	for _, c := range []struct {
		err  error
		code int
	}{
		{nil, 0},
		{errors.New("never seen"), 1},
		{&usageError{"no"}, 2},
		{&mill.ProfileError{Line: 3, Key: "band.net_width", Problem: "no unit"}, 3},
		{mill.ErrUnknownName, 2},
		{gauge.ErrKind, 2}, {simrig.ErrNoEnd, 2},
		{port.ErrNotFound, 4},
		{port.ErrBusy, 4},
		{port.ErrBadName, 4},
		{port.ErrNoTerminal, 4},
		{&acquire.DeviceError{Name: "x", Err: acquire.ErrGaveUp}, 5},
		{&acquire.DeviceError{Name: "x", Err: acquire.ErrNoAnswer}, 6},
		{&acquire.DeviceError{Name: "x", Err: acquire.ErrNotOurs}, 6},
		{recording.ErrNotRecording, 7},
		{recording.ErrVersion, 7},
		{&recording.CorruptError{Offset: 9}, 8},
		{analyze.ErrTooFewPairs, 9},
		{analyze.ErrNoCycle, 9},
		{analyze.ErrNoZero, 14},
		{pairing.ErrNoExtension, 9},
		{pairing.ErrNoTime, 9},
		{&analyze.OutOfRangeError{What: "band stress"}, 10},
		{&fileError{errors.New("disk full")}, 11},
		{&fs.PathError{Op: "open", Path: "x", Err: fs.ErrNotExist}, 11},
		{&alarmError{"limit"}, 12},
		{&tornError{"x.ramp"}, 13},
		{&planError{"dial", &mill.ProfileError{Key: "steps", Problem: "missing"}}, 20},
		{&poorReferenceError{"too poor"}, 21},
		{station.ErrNoChannel, 22},
		{&acquire.DeviceError{Name: "x", Err: station.ErrNoChannel}, 22},
		{&continueError{"done"}, 23},
		{station.ErrNotNext, 23},
		{station.ErrNotBench, 23},
		{gauge.ErrNoPoints, 24},
		{errBenchTest, 7},
		{errors.Join(analyze.ErrNoCycle, &alarmError{"limit"}), 12},
	} {
		wrapped := c.err
		if wrapped != nil {
			wrapped = fmt.Errorf("somewhere: %w", wrapped)
		}
		if row := classify(wrapped); row.code != c.code {
			t.Errorf("%v has exit code %d, want %d", c.err, row.code, c.code)
		}
	}
}

func TestEveryExitCodeIsUsedOnceAndSaysWhatItMeans(t *testing.T) {
	seen := map[int]bool{}
	for _, row := range exitTable() {
		if seen[row.code] || row.what == "" || (row.code > 0 && row.hint == "") {
			t.Errorf("exit row %d is double, or says nothing", row.code)
		}
		seen[row.code] = true
	}
}
