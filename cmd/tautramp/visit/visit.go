// Package visit runs one visit to a mill: it starts the capture, pairs what
// comes in, follows the cycles, guards the limit and against under-reading,
// and keeps one Status that a terminal or a page draws. Start with Run.
//
// Deliberately absent: ports, drawing, key presses.
package visit

import (
	"time"

	"tautramp/analyze"
)

// AlarmKind says why the operator must stop. The zero value is no alarm.
type AlarmKind string

// The alarms.
const (
	NoAlarm      AlarmKind = ""
	OverLimit    AlarmKind = "limit"         // the setting passed its limit
	UnderReading AlarmKind = "under-reading" // the setting rises, the extension does not follow
)

// Status is all that a screen shows. Unknown numbers are NaN.
type Status struct {
	At        time.Duration
	SettingSI float64
	StretchM  float64 // extension since the zero of this cycle; NaN before there is one
	StressPa  float64 // provisional
	RateSI    float64 // setting per second
	Phase     analyze.PhaseKind
	Cycle     int // 1-based
	Planned   int
	Exercise  bool
	Lost      int // sequence numbers missing
	Rejected  int
	Link      []string // one short text per device
	Alarm     AlarmKind
	AlarmText string
	Next      string // what to do next, one sentence
	Done      bool
}
