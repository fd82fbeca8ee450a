// Package pairing turns a recording into pairs: each device's ticks onto one
// host timeline, each channel's counts into SI readings, and two channels of
// different rates into (setting, extension) pairs. Start with FromRecording;
// Live does the same as lines come in, causally.
//
// Pure: no clock, no files. Deliberately absent: any idea of loading or
// unloading, friction or stress.
package pairing

import (
	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// Reading is one sample in SI on the host timeline.
type Reading struct {
	T      float64 // s since the recording's start
	Value  float64 // SI; meaningless unless Status is protocol.Good
	Status protocol.Status
	Part   int // clock segment of its device; readings of two parts are not comparable in time
}

// Channel is one channel's declaration and its readings in time order.
type Channel struct {
	Device   int
	Spec     protocol.Chan // as declared last
	PeriodS  float64       // nominal time from sample to sample
	CountSI  float64       // least count in SI: the width of the interval a reading stands for
	Readings []Reading
}

// Pair is one reading of the extension with the setting at the same instant.
type Pair struct {
	T          float64 // s since the recording's start
	Setting    float64 // SI: Pa, N.m, rad or m as the channel's quantity says
	Extension  float64 // m, as indicated: no zero subtracted
	SettingStd float64 // standard uncertainty from the time error, SI; of steps from how well one is met, enlarged so that their mean has a step's
	Part       int     // pairs of different parts have a gap between them
}

// Mark is something the operator said, or was told, on the host timeline.
type Mark struct {
	T    float64 // s
	Kind MarkKind
	Text string
	// What a press stands for where the recording declares it (recording.Presses);
	// "" for every other mark.
	As       recording.PressAs
	Declared string // the quantity as declared, such as "600 psi"
}

// MarkKind is the kind of a mark.
type MarkKind string

// The kinds of mark.
const (
	Button   MarkKind = "button" // push button or foot switch pressed
	Operator MarkKind = "mark"   // key or page button
	Zero     MarkKind = "zero"   // the operator says the band is slack
	Alarm    MarkKind = "alarm"  // the program warned the operator: in Set.Alarms only
)

// ClockFit is one segment of a device's clock mapped to the host timeline:
// t = Offset + Rate * tick (unwrapped within the segment).
type ClockFit struct {
	Device     int
	Part       int
	FirstTick  uint64  // unwrapped
	LastTick   uint64  // unwrapped
	Offset     float64 // s
	Rate       float64 // s per tick
	OffsetStd  float64 // s, standard uncertainty of a mapped instant against the other device
	RatePPM    float64 // measured rate of the device's clock against the nominal one, parts per million; 0 when nominal
	RateStdPPM float64 // its standard uncertainty
	Points     int     // lines with a tick and a receive time
	Method     string  // MethodEnvelope, MethodNominal or MethodTicks
}

// How a segment of a clock was mapped.
const (
	MethodEnvelope = "receive times, lower envelope"
	MethodNominal  = "receive times, smallest delay at the nominal rate" // too short for a rate of its own
	MethodTicks    = "ticks alone"                                       // no receive times
)

// Counters is what went missing on the way, by device.
type Counters struct {
	Device     int
	Lines      int    // good lines
	Samples    int    // Val records
	Lost       int    // numbers missing from the sequence, modulo 65,536 per gap; refused lines are among them
	DeviceSaid uint32 // lines the device says it dropped, all boots together
	Rejected   int    // lines refused by the scanner
	Restarts   int
	Backward   int // samples refused: not later than the channel's last one
	Saturated  int // samples at or beyond the end of the range
	Missing    int // samples without a reading: no sensor, or its fault
	Undeclared int // samples of a channel that was never declared
}

// Set is everything later rooms may know of a recording.
type Set struct {
	Setting   Channel // readings of the channel chosen as setting
	Extension Channel
	Others    []Channel // temperature and the like
	Pairs     []Pair
	Marks     []Mark
	Clocks    []ClockFit
	Counters  []Counters
	BothFaces bool // Extension is the mean of two channels, one on each face of the band
	Unpaired  int  // good extension readings without a setting at their instant
	Plan      Plan
	Alarms    []Mark  // raised during the visit, in the order of the recording
	Ended     string  // how the visit ended, in words; "" where nothing says so
	Stepped   bool    // the setting is known at the presses alone; Setting has a reading at each
	StepStd   float64 // standard uncertainty of each of them, SI
	Simulated bool    // a device says that what it measures is made up
	Warnings  []string
}

// Plan mirrors the recording's plan, so that the analysis needs no recording. An
// Exercise of 0 means that no cycle is for exercise; Ramps of 0, as many as there
// are.
type Plan struct{ Exercise, Ramps int }

// CutsOff tells whether the channel's display is known to cut off its last
// digit: its 0 then stands for two counts, from below zero to above (SPEC 6.4).
func (c Channel) CutsOff() bool { return c.Spec.Shows == protocol.ShowsTruncated }

// CutKnown tells whether the channel's display is known to round or to cut off
// its last digit. Where it is not, half a count more is in doubt.
func (c Channel) CutKnown() bool {
	return c.Spec.Shows == protocol.ShowsRounded || c.CutsOff()
}
