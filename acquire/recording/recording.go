// Package recording is the capture file (.ramp): what the wire said and what
// the host did, append-only text in sealed blocks. SPEC.md beside this file is
// the contract. Use Create or NewWriter to write, Read to read.
//
// Deliberately absent: repair and re-opening for append. A visit that resumes
// is a new file that names its predecessor.
package recording

import (
	"time"

	"tautramp/acquire/mill"
)

// Header is everything the analysis needs that did not come over the wire.
type Header struct {
	Program     string        // name and version of the program that wrote the file
	Started     time.Time     // wall clock at time zero
	Source      Source        // how the lines came in
	ClockFactor float64       // recorded seconds per real second; 1 except in rehearsal
	Continues   string        // seal of the file this one continues, or ""
	Devices     []string      // port of each device, by index
	Tensioner   string        // name in the profile
	Band        string        // name in the profile
	Plan        Plan          // cycles asked for
	Presses     Presses       // what each press stands for; the zero value: plain marks
	Bench       *Bench        // of a bench test; nil: a visit to a tensioner
	Profile     []byte        // mill.toml as it was, byte for byte
	Parsed      *mill.Profile // Profile parsed; filled by Read, ignored by writers
}

// Source says how lines came into a recording.
type Source string

// The sources.
const (
	Live     Source = "live"     // receive times are the host's
	Imported Source = "imported" // no receive times
)

// Plan is the number of cycles asked for at the start.
type Plan struct {
	Exercise int // cycles first, recorded and never fitted
	Ramps    int // cycles to be fitted
}

// Entry is one wire line or one host event, in the order they happened.
type Entry struct {
	Device int           // index into Header.Devices; -1 for an event of no device
	At     time.Duration // since Header.Started, monotonic
	HasAt  bool          // false: no receive time (imported)
	Wire   []byte        // the line without its line end; nil for an event
	Event  *Event        // nil for a wire line
}

// Event is something the host did or noticed.
type Event struct {
	Kind EventKind
	Text string // free text or the event's argument; may be empty
}

// EventKind is the word of a host event.
type EventKind string

// The events (SPEC 5).
const (
	Opened     EventKind = "opened"   // a port is open
	LostPort   EventKind = "lost"     // a port went away
	Silent     EventKind = "silent"   // no line for longer than the watchdog allows
	Restarted  EventKind = "restart"  // the device booted again
	Sent       EventKind = "sent"     // a command, its text
	Discarded  EventKind = "discard"  // bytes outside any line; Text is their number
	Paused     EventKind = "paused"   // the wall clock jumped against the monotonic one; Text in seconds
	Mark       EventKind = "mark"     // operator's mark
	ZeroMark   EventKind = "zero"     // operator says: the band is slack now
	Undo       EventKind = "undo"     // operator takes the last mark back
	Confirmed  EventKind = "confirm"  // operator confirms what was asked; Text says what
	Vented     EventKind = "vent"     // operator says: the setting's transducer is closed off and vented now
	LowerTurn  EventKind = "turn"     // operator says: this is the low end of the cycle, though nothing rests
	Abort      EventKind = "abort"    // operator held the switch: stop, release slowly
	Prompted   EventKind = "prompt"   // what the program asked the operator to do
	Alarm      EventKind = "alarm"    // Text says which
	CycleEnd   EventKind = "cycle"    // Text is the cycle's number
	Interrupt  EventKind = "stopped"  // ended by the operator
	Abandoned  EventKind = "gave-up"  // ended by the program; Text says why
	WallTime   EventKind = "wall"     // wall clock, RFC 3339, in every block
	PlanClosed EventKind = "complete" // all planned cycles, or points, are closed
	Taken      EventKind = "taken"    // bench: a point was taken; Text says which
	Refused    EventKind = "refused"  // bench: a press was refused; Text says why
	Again      EventKind = "again"    // bench: a series starts afresh; Text says why
)

// Outcome is how a file ends. The zero value is no verdict.
type Outcome string

// The outcomes of reading a file.
const (
	Complete Outcome = "complete" // end record present, every seal fits
	Torn     Outcome = "torn"     // seals fit, end record missing: the tail was lost
	Corrupt  Outcome = "corrupt"  // a seal does not fit
)

// Recording is a file read back: the intact prefix and what is known of the
// rest.
type Recording struct {
	Header    Header
	Entries   []Entry // sealed entries only
	Outcome   Outcome
	TailBytes int64  // bytes after the last good seal
	Seal      string // last good seal: identifies the data up to there
}
