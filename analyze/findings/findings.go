// Package findings says what is wrong with a tensioner, with evidence. Start
// with Look: features are computed once from a result, each with its doubt;
// causes are rows of data, each with what speaks for it, what else would look
// the same, and what to do; one engine goes through the rows.
//
// Pure: no files, no clock. Deliberately absent: wording of figures and units
// (report), and any idea of how a simulated rig makes its faults. The limits
// stand in one table, mill.Thresholds. How certainty is reckoned, and what its
// numbers are worth, is in METHOD.md. Causes and words may change; the keys are
// stable.
package findings

import (
	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// Input is what is looked at. Set may be nil: what only the readings tell is
// then not measured. So may Result, where nothing could be fitted: what the
// readings tell by themselves is still looked for.
type Input struct {
	Profile *mill.Profile // its own thresholds; nil for the table's
	Result  *analyze.Result
	Set     *pairing.Set
}

// Report is all that was looked for.
type Report struct {
	Findings []Finding  // most certain first
	Open     []Open     // what this recording cannot show
	Clear    []Cause    // looked for and not found
	Own      []OwnLimit // thresholds that the mill sets itself
	Features []Feature  // everything that was computed, in the table's order
	System   mill.SetBy // what the tensioner is set by
	Advice   string     // how all advice begins
}

// Finding is one cause, or one group that cannot be told apart.
type Finding struct {
	Key       Key
	Name      string  // heading, in the trade's words
	Causes    []Cause // one, or a declared group of at most three
	Certainty float64 // see METHOD.md; of simulated rigs only, never a chance on a real mill
	Word      Word
	Level     Level
	Times     float64           // severity: the leading figure over its limit
	Share     estimate.Estimate // severity: relative to the working setting, or to the stretch there
	Evidence  []Evidence
	RuledOut  []string // what else would look the same, and does not
	NotRuled  []string // what else would, and may be
	Next      string   // the measurement that would separate
	Advice    []string
	Region    Region
}

// Open is causes that the recording cannot show, and why: what was not
// measured, and how to.
type Open struct {
	Why    string
	Causes []Cause
}

// OwnLimit is a threshold that this mill sets itself.
type OwnLimit struct {
	mill.Threshold
	Table float64 // what the table has
}

// Word is how certain a finding is, in words.
type Word string

// The words. METHOD.md says what they are worth.
const (
	High     Word = "high"
	Likely   Word = "likely"
	Possible Word = "possible"
)

// Level is what a finding asks for.
type Level string

// The levels, the mildest first. All but Watch need high certainty.
const (
	Watch   Level = "watch"
	Again   Level = "measure again" // the recording is at fault, not the tensioner
	Service Level = "service"
	Stop    Level = "stop"
)

// Evidence is one figure against its limit.
type Evidence struct {
	Feature
	Relation  Relation
	Limit     float64 // in the feature's own measure
	Threshold mill.ThresholdKey
	Beyond    float64 // probability that the true figure lies beyond the limit
}

// Look goes through the causes of the tensioner's kind. The same input gives
// the same report to the last bit.
func Look(in Input) *Report {
	if in.Result == nil {
		in.Result = &analyze.Result{}
	}
	by := in.Result.Setup.Tensioner.SetBy
	if by == "" {
		by = measuredBy(in.Set)
	}
	d := newData(in)
	rep := &Report{Features: measure(d), System: by, Advice: lockOut, Own: ownLimits(in.Profile)}
	e := engine{features: index(rep.Features), limit: func(k mill.ThresholdKey) float64 {
		v, _ := in.Profile.Threshold(k)
		return v
	}, data: d}
	e.run(rowsFor(by), rep)
	return rep
}

// measuredBy is what the tensioner is set by, by the channel of the setting.
func measuredBy(set *pairing.Set) mill.SetBy {
	if set == nil {
		return mill.SetByPressure
	}
	switch set.Setting.Spec.Quantity {
	case torque:
		return mill.SetByTorque
	case angle:
		return mill.SetByTurns
	case spring:
		return mill.SetBySpring
	}
	return mill.SetByPressure
}

func ownLimits(p *mill.Profile) []OwnLimit {
	var own []OwnLimit
	for _, t := range mill.Thresholds() {
		if v, its := p.Threshold(t.Key); its && v != t.Value {
			table := t.Value
			t.Value = v
			own = append(own, OwnLimit{t, table})
		}
	}
	return own
}
