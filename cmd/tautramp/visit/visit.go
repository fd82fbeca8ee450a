// Package visit runs one visit to a mill: it starts the capture, pairs what
// comes in, follows the cycles, guards the limit and against under-reading,
// and keeps one Status that a terminal or a page draws. Start with Run.
//
// All that it shows is provisional: the recording decides. Deliberately
// absent: ports, drawing, key presses.
package visit

import (
	"time"

	"tautramp/acquire"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/analyze"
)

// Config is one visit.
type Config struct {
	// Acquire is the capture: Devices, Clock, Out and Operator are the
	// caller's; Run sets OnEntry and passes the operator's events on.
	Acquire  acquire.Config
	Header   recording.Header // as given to Acquire.Out, with Parsed
	Plan     recording.Plan   // Ramps 0: until the context ends
	Cautions []string         // recorded as prompts before anything else; the caller shows them

	// OnStatus draws. It is called from one goroutine, at most about ten times
	// a real second and at once when phase, cycle, alarm or next step change;
	// while it works the capture waits. It may be nil.
	OnStatus func(Status)
}

// Summary is how a visit ended.
type Summary struct {
	Cycles   int      // closed, exercise included
	Closed   bool     // all planned cycles are
	Alarm    string   // text of the gravest alarm that was raised; "" when none was
	Alarms   []string // each alarm's text, in the order in which they were raised
	Counters []pairing.Counters
	Reason   string // why it ended, a sentence without its stop
}

// AlarmKind says why the operator must stop. The zero value is no alarm.
type AlarmKind string

// The alarms, the gravest first.
const (
	NoAlarm      AlarmKind = ""
	OverLimit    AlarmKind = "limit"         // the setting reached its limit
	UnderReading AlarmKind = "under-reading" // the setting rises, the extension does not follow
	Blind        AlarmKind = "no reading"    // the setting rises, and a sensor cannot be read
)

// Pace says how fast the setting moves.
type Pace string

// The paces. The zero value is none: the setting stands still.
const (
	TooSlow  Pace = "slow"
	GoodPace Pace = "good"
	TooFast  Pace = "too fast"
)

// Status is all that a screen shows. Unknown numbers are NaN.
type Status struct {
	At        time.Duration
	SettingSI float64
	StretchM  float64 // extension since the zero of this cycle; NaN before there is one
	StressPa  float64 // provisional
	RateSI    float64 // setting per second
	Pace      Pace
	Phase     analyze.PhaseKind
	Cycle     int // 1-based
	Planned   int // 0: no end is planned
	Exercise  bool
	Lost      int // sequence numbers missing
	Rejected  int
	Link      []string // by device: "" when all is well, else what is not
	Alarm     AlarmKind
	AlarmText string
	Next      string // what to do next, one sentence
	Done      bool
}
