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
	AimSI    float64          // setting to stop at, for one approach to a card's number; 0: what the plan needs
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
	Aborted      AlarmKind = "abort"         // the operator held the switch
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

// ReplyKind says what became of a key. The zero value: none was pressed yet.
type ReplyKind string

// The replies.
const (
	ZeroTaken   ReplyKind = "zero taken"
	ZeroRefused ReplyKind = "kept for the result, not used here: the band is not surely slack" // for the live figures; the event is recorded all the same
	MarkTaken   ReplyKind = "mark taken"
	Undone      ReplyKind = "last mark taken back"
	VentTaken   ReplyKind = "vented zero noted"
	TurnTaken   ReplyKind = "lower turn taken, the cycle is closed"
	TurnRefused ReplyKind = "no lower turn here: the setting has not come down from a ramp"
	AbortTaken  ReplyKind = "abort"
	Noted       ReplyKind = "noted"
	NothingToDo ReplyKind = "nothing to undo"
)

// Reply is the answer to the last key.
type Reply struct {
	Kind      ReplyKind
	At        time.Duration // when; tells one reply from the next
	SettingSI float64       // then; NaN when it was not known
	Number    int           // of marks that stand, for MarkTaken
	Mark      string        // what the press stands for, where the recording declares it
}

// Status is all that a screen shows. Unknown numbers are NaN. A number is
// unknown also while a board that it needs is away: nothing old is shown as if
// it were read now.
type Status struct {
	At        time.Duration
	SettingSI float64
	GoalSI    float64 // setting up to which Next sends the operator; NaN when it sends nobody up, or where not known; never above 0.95 of the limit
	LowSI     float64 // setting down to which Next sends the operator, where the cycle closes; NaN when it sends nobody down
	StretchM  float64 // extension since the zero of this cycle; NaN before there is one
	StressPa  float64 // provisional
	RateSI    float64 // setting per second, smoothed; Phase agrees with its sign
	Pace      Pace
	PaceSI    float64 // setting per second over several seconds, by which Pace is judged; NaN where there is none
	SlowSI    float64 // bounds of a good PaceSI, either way
	FastSI    float64
	Phase     analyze.PhaseKind
	Cycle     int // 1-based
	Planned   int // 0: no end is planned
	Exercise  bool
	Resting   bool // at the low end, before a rise
	Lost      int  // sequence numbers missing
	Rejected  int
	Link      []string // by board: "" when all is well, else what is not
	Alarm     AlarmKind
	AlarmText string
	Next      string // what to do next, one sentence without figures
	Reply     Reply  // to the last key
	Mark      string // what the next press stands for; "" where nothing is declared
	Done      bool
	Simulated bool // a board says that what it measures is made up
}
