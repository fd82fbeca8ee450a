// Package station runs a bench test: it follows the plan step by step, judges
// each press from the readings about it, finds points by itself where the plan
// says so, guards the limit, and keeps one Status that a terminal or a page
// draws. Start with Run; Read computes the same points from recordings.
//
// A Bench is a pure state machine: what it does depends on the header and the
// entries alone, so that the points of a recording are those that were taken
// live. Deliberately absent: ports, drawing, key presses, and any error or
// verdict of the instrument (analyze/gauge).
package station

import (
	"errors"
	"math"
	"time"

	"tautramp/acquire/pairing"
	"tautramp/analyze/gauge"
)

// Why boards, or a recording, do not fit a bench test.
var (
	ErrNoChannel = errors.New("no channel fits the bench test")
	ErrNotBench  = errors.New("not a recording of a bench test")
	ErrNotNext   = errors.New("the recording does not continue the one before it")
)

// StepKind is what the operator is at.
type StepKind string

// The steps, in the order in which they may come.
const (
	WarmUp     StepKind = "warm-up"
	Mounting   StepKind = "mounting"
	Exercise   StepKind = "exercise"
	ZeroBefore StepKind = "zero before"
	PointStep  StepKind = "point"
	TopHold    StepKind = "hold at the top"
	ZeroAfter  StepKind = "zero after"
	Done       StepKind = "done"
)

// AlarmKind says why the operator must stop. The zero value is no alarm.
type AlarmKind string

// The alarms, the gravest first.
const (
	NoAlarm   AlarmKind = ""
	OverLimit AlarmKind = "limit"      // what is read reached the limit
	Blind     AlarmKind = "no reading" // it rose, and cannot be read now
)

// Answer is what became of the last press, undo, or rest at a point.
type Answer struct {
	Text    string
	Refused bool
	At      time.Duration // when; tells one answer from the next
}

// Status is all that a screen shows. Unknown numbers are NaN.
type Status struct {
	At        time.Duration
	Step      StepKind
	Target    gauge.Target // of a point; else its Series and Run alone
	Cycle     int          // of exercise, 1-based
	Cycles    int
	Taken     int // points that stand
	Planned   int
	NowSI     float64 // what leads to the points: the reference, or the tested length indicator from its zero
	TestedSI  float64 // the tested instrument, where it is read
	GoSI      float64 // where to go now: the point, or where to go back to
	Goes      gauge.Direction
	Back      bool    // go back first: the point was passed
	WaitS     float64 // still to wait here, s; 0 when not
	Next      string  // what to do now, a sentence
	Answer    Answer
	Alarm     AlarmKind
	AlarmText string
	Link      []string // by board: "" when all is well, else what is not
	Lost      int
	Rejected  int
	Points    []gauge.Point // that stand; not to be changed
	Done      bool
}

// Summary is how a test ended.
type Summary struct {
	Taken, Planned int
	Finished       bool     // every step of the plan
	Alarm          string   // text of the gravest alarm that was raised; "" when none was
	Alarms         []string // each one's text, in order
	Counters       []pairing.Counters
	Reason         string // why it ended, a sentence without its stop
}

func nan() float64 { return math.NaN() }
