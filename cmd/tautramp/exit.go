package main

import (
	"errors"
	"io/fs"
	"slices"

	"tautramp/acquire"
	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/port"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
	"tautramp/analyze/gauge"
	"tautramp/analyze/report"
	"tautramp/cmd/tautramp/station"
)

// usageError is a command line that cannot be obeyed.
type usageError struct{ text string }

func (e *usageError) Error() string { return e.text }

// alarmError says that a capture raised an alarm. Its files are whole all the
// same.
type alarmError struct{ text string }

func (e *alarmError) Error() string { return "an alarm was raised: " + e.text }

// fileError is a file that cannot be read or written.
type fileError struct{ err error }

func (e *fileError) Error() string { return e.err.Error() }
func (e *fileError) Unwrap() error { return e.err }

// tornError is a recording whose end is missing.
type tornError struct{ file string }

func (e *tornError) Error() string {
	return e.file + ": the end is missing; everything up to the last seal is good"
}

// planError is a bench plan that cannot be followed.
type planError struct {
	plan string
	err  error
}

func (e *planError) Error() string { return "plan " + e.plan + ": " + e.err.Error() }
func (e *planError) Unwrap() error { return e.err }

// poorReferenceError says why no instrument could pass a bench test.
type poorReferenceError struct{ text string }

func (e *poorReferenceError) Error() string { return "the test is not worth starting: " + e.text }

// continueError is a bench test that cannot go on.
type continueError struct{ text string }

func (e *continueError) Error() string { return e.text }

// exitRow ties one class of error to its exit code.
type exitRow struct {
	code int
	what string // for the help text
	hint string // the next step, printed under the error
	is   func(error) bool
}

// exitTable is the only place where errors meet exit codes. The first row
// that fits wins, an alarm before all else; the last one fits everything.
func exitTable() []exitRow {
	return []exitRow{
		{0, "done", "", func(err error) bool { return err == nil }},
		{12, "an alarm was raised during the capture", "stop, release slowly, find the cause before ramping again; the recording is whole", as[*alarmError]()},
		{2, "the command line cannot be obeyed", "tautramp help lists the commands, tautramp COMMAND --help explains one", anyOf(as[*usageError](), is(mill.ErrUnknownName, gauge.ErrKind, simrig.ErrNoEnd))},
		{20, "a bench plan has a mistake", "mend what is named above; tautramp bench --plan dial --write-plan my-plan.toml writes a good example", as[*planError]()},
		{3, "mill.toml has a mistake", "mend the line named above; tautramp profile writes a good example", anyOf(as[*mill.ProfileError](), is(simrig.ErrNotRehearsable))},
		{14, "the stretch of the slack band is not known, and so no band stress", "let the setting down until the band is slack before and after each ramp, or press z when it is", is(analyze.ErrNoZero)},
		{11, "a file cannot be read or written", "check the name, the folder and the free space; nothing was overwritten", isFileFailure},
		{4, "a port cannot be opened", "tautramp ports lists what is plugged in; close other programs that use it", is(port.ErrNotFound, port.ErrBusy, port.ErrDenied, port.ErrBadName, port.ErrNoTerminal)},
		{6, "a device does not speak this wire", "check the port, the speed (--baud) and the board's program; protocol/SPEC.md is the wire", is(acquire.ErrNoAnswer, acquire.ErrNotOurs, acquire.ErrRefused)},
		{5, "a port went away and did not come back", "plug it in and start a new capture; the recording up to here is good", is(acquire.ErrGaveUp, port.ErrGone, port.ErrStuck)},
		{7, "the file is not a recording", "give the .ramp file that capture or import wrote", is(recording.ErrNotRecording, recording.ErrNoHeader, recording.ErrVersion, errBenchTest)},
		{8, "a recording was altered or damaged", "go back to the original file; figures from a damaged one prove nothing", as[*recording.CorruptError]()},
		{9, "the recording holds too little to compute a result", "record at least one full rise and fall, with both sensors reading; tautramp check FILE shows what is there", is(analyze.ErrTooFewPairs, analyze.ErrNoCycle, pairing.ErrNoSetting, pairing.ErrNoExtension, pairing.ErrNoTime, pairing.ErrNoPairs, estimate.ErrBadValue)},
		{10, "the target lies outside what was captured", "ramp past the target, never past the maker's limit, or give a --target inside the range", as[*analyze.OutOfRangeError]()},
		{15, "a card is refused", "a wrong card is worse than none: follow what the line above says", as[*report.CardError]()},
		{21, "the reference is too poor for what is asked of it", "use a better reference or a wider limit; --anyway starts all the same, for the errors alone", as[*poorReferenceError]()},
		{22, "the boards do not measure what the bench test needs", "connect the sensors that the plan needs; tautramp bench --help names --tested-channel", is(station.ErrNoChannel)},
		{23, "a bench test cannot go on", "begin a new test, or give the last of its recordings, with the earlier ones beside it", anyOf(as[*continueError](), is(station.ErrNotNext, station.ErrNotBench))},
		{24, "the bench test holds no point", "take the points that the screen asks for; tautramp bench --continue FILE goes on with a broken-off test", is(gauge.ErrNoPoints)},
		{13, "a recording has no end", "analyze uses what is sealed; record again if a ramp is missing", as[*tornError]()},
		{1, "something that should not happen", "please report it with the recording", func(error) bool { return true }},
	}
}

// byCode is the table in the order in which people look a code up.
func byCode(table []exitRow) []exitRow {
	return slices.SortedFunc(slices.Values(table), func(a, b exitRow) int { return a.code - b.code })
}

func classify(err error) exitRow {
	table := exitTable()
	for _, row := range table {
		if row.is(err) {
			return row
		}
	}
	return table[len(table)-1]
}

// isFileFailure is true for files, and not for the paths of ports, whose errors
// wrap the system's too.
func isFileFailure(err error) bool {
	if as[*fileError]()(err) {
		return true
	}
	return as[*fs.PathError]()(err) && !is(port.ErrNotFound, port.ErrBusy, port.ErrDenied, port.ErrBadName, port.ErrGone)(err)
}

func is(targets ...error) func(error) bool {
	return func(err error) bool {
		for _, target := range targets {
			if errors.Is(err, target) {
				return true
			}
		}
		return false
	}
}

func as[E error]() func(error) bool {
	return func(err error) bool {
		_, ok := errors.AsType[E](err)
		return ok
	}
}

func anyOf(tests ...func(error) bool) func(error) bool {
	return func(err error) bool {
		for _, test := range tests {
			if test(err) {
				return true
			}
		}
		return false
	}
}
