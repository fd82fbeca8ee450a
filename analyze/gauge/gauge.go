// Package gauge is the bench test of an instrument against a reference: the
// plan, what was captured at each point, the errors with their uncertainty, and
// the verdict against a class. Start with ParsePlan and Evaluate.
//
// Pure: no files, no clock. Deliberately absent: how a point is captured (cmd),
// rounding and units (report).
package gauge

import (
	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// Direction is from which side a point was approached.
type Direction string

// The directions.
const (
	Up   Direction = "up"
	Down Direction = "down"
)

// Series tells the runs over the same points apart. The zero value is the only
// series of an instrument that nobody taps.
type Series string

// The series of a dial.
const (
	Untapped Series = "untapped"
	Tapped   Series = "tapped"
)

// Target is one point that a plan asks for.
type Target struct {
	Index     int          // of Plan.Points
	Nominal   mill.Setting // as entered in the plan
	Series    Series
	Direction Direction
	Run       int // 0-based; the instrument is mounted anew before each but the first
	Repeat    int // 0-based, within the run
}

// Level is a reading held over a window.
type Level struct {
	SI     float64 // mean
	Spread float64 // standard deviation of the readings in the window, SI
	N      int     // readings; 0: a mark or an entered value, not read by the box
}

// Point is one captured point. Where the dial is read on its mark, Indicated is
// the mark; where the reference is a block or a micrometer, Reference is the
// nominal value entered, with N = 0.
type Point struct {
	Target
	Reference   Level
	Indicated   Level
	T           float64           // s since the recording's start
	Temperature estimate.Estimate // degrees Celsius; unknown where nothing measured it
}

// Zero is the pair of readings with nothing on the instrument: before the first
// point of a series in a run, or after its last.
type Zero struct {
	Series    Series
	Run       int
	Repeat    int
	Reference Level
	Indicated Level
	T         float64
}

// Instruments are the two that a test compares.
type Instruments struct {
	Tested    mill.Instrument
	Reference mill.Instrument
	// CountSI is the least count of each as the board declares it, or the part of
	// a division that a dial is read to; 0: not known.
	TestedCountSI, ReferenceCountSI float64
}

// Conditions are what else was so during the test.
type Conditions struct {
	Day         string            // YYYY-MM-DD
	Place       string            // as entered
	By          string            // who tested
	Medium      string            // "oil", "air", as entered
	Height      mill.Length       // how far the tested instrument stands above the reference; not given: level
	Temperature estimate.Estimate // degrees Celsius; unknown where nothing measured it
	Note        string
	Program     string // that recorded it
	Simulated   bool   // a device said that what it measures is made up
}

// Test is a whole bench test as captured.
type Test struct {
	Plan        Plan
	Points      []Point    // in the order captured; undone ones left out
	Reversals   []Reversal // where both instruments were read through a turn; may be empty
	ZeroBefore  []Zero     // one for each series, run and repeat
	ZeroAfter   []Zero     // parallel to ZeroBefore; a missing one is not there
	Instruments Instruments
	Conditions  Conditions
	Seal        string            // of the recording that holds the raw readings
	Limits      []mill.GaugeLimit // the user's own and replaced limits, from mill.toml
	Limit       string            // name of the limit to judge by; "" takes the plan's
	Rule        string            // name of the decision rule; "" takes the plan's
	NextDue     string            // YYYY-MM-DD for the record; "" leaves the instrument's own
}
