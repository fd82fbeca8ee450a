package findings

import "tautramp/acquire/mill"

// Key names a row; stable, for machines.
type Key string

// Cause is one thing that may be wrong.
type Cause struct {
	Key  Key
	Name string
}

// Relation is on which side of its limit a feature speaks for a cause.
type Relation string

// The relations.
const (
	Above Relation = "above"
	Below Relation = "below"
	// Missing: the feature could not be measured, so the causes that it would tell
	// apart stay together.
	Missing Relation = "not measured"
)

// test is one feature against one limit.
type test struct {
	feature FeatureKey
	is      Relation
	limit   mill.ThresholdKey
}

// rival is what else would show the same. It explains the evidence away where
// all its tests hold; where one cannot be made, it is not ruled out.
type rival struct {
	says  string
	tests []test
}

// row is what a finding is made of.
type row struct {
	key    Key
	name   string
	causes []Cause // one; or a declared group
	tests  []test  // all must hold; the first is what its severity is told by
	shows  []FeatureKey
	rivals []rival
	// yields are rows that say the same more exactly: where one of them is found,
	// this one is not.
	yields []Key
	level  Level
	next   string
	advice []string
	region regionKind
}

// lockOut begins all advice.
const lockOut = "Lock out the drive and both wheels first, and follow the maker's manual: it comes before anything said here."

// The causes.
const (
	Slide      Key = "slide-drag"
	Seal       Key = "seal-drag"
	Pins       Key = "dry-pins"
	StickSlip  Key = "stick-slip"
	Play       Key = "play"
	Toe        Key = "toe"
	CoilBind   Key = "coil-bind"
	EndStop    Key = "end-stop"
	Air        Key = "air-in-oil"
	Leak       Key = "leak-down"
	GaugeLeak  Key = "gauge-leak"
	PumpSide   Key = "pump-side"
	MountCreep Key = "mount-creep"
	MountSlip  Key = "mount-slip"
	GaugeZero  Key = "gauge-zero"
	Gauge      Key = "gauge-sticky"
	Warmth     Key = "temperature"
	Drag       Key = "wheel-drag"
	Tyre       Key = "tyre"
	Section    Key = "section"
	Lag        Key = "lag"
	Saturation Key = "saturation"
	FewRamps   Key = "few-ramps"
	Fast       Key = "too-fast"
	Ragged     Key = "ragged"
	Screw      Key = "dry-screw"
	GaugeSpan  Key = "gauge-span"
	Curl       Key = "curl"
	Weight     Key = "weight"
)

// causeName is what a cause is called in a group.
func causeName(k Key) string {
	for _, c := range []Cause{
		{Slide, "rusted slide or gummed guide"}, {Seal, "dragging cylinder seal"},
		{Pins, "dry pins, links or collar"}, {Screw, "dry screw, nut or collar"},
		{StickSlip, "stick-slip"}, {Play, "play in pin, clevis or nut"}, {Toe, "slack taken up late"},
		{CoilBind, "spring near coil bind"}, {EndStop, "end stop"}, {Air, "air in the oil"},
		{Leak, "leak-down"}, {GaugeLeak, "leak on the gauge side of the oil"},
		{PumpSide, "transducer on the pump side of the check valve"},
		{MountCreep, "creeping mount of the rig"}, {MountSlip, "slipped mount of the rig"},
		{GaugeZero, "gauge off its zero"}, {Gauge, "sticky or bent gauge"}, {Warmth, "drift with temperature"},
		{Drag, "wheel or brake drag"}, {Tyre, "tyre that gives"}, {Section, "wrong section, bore or ratio"},
		{Lag, "lag between the instruments"}, {Saturation, "instrument at the end of its range"},
		{GaugeSpan, "gauge that reads off in proportion"}, {Curl, "curl or flattening of the band on this face"},
		{Weight, "lifted weight not as in mill.toml"},
		{FewRamps, "too few ramps"}, {Fast, "ramp too fast"}, {Ragged, "ramp too ragged"},
	} {
		if c.Key == k {
			return c.Name
		}
	}
	return ""
}

func group(keys ...Key) []Cause {
	var out []Cause
	for _, k := range keys {
		out = append(out, Cause{k, causeName(k)})
	}
	return out
}

// Groups lists, beforehand, the causes that one recording of a kind may not
// tell apart: at most three in each.
func Groups(by mill.SetBy) [][]Cause {
	var out [][]Cause
	for _, r := range rowsFor(by) {
		if len(r.causes) > 1 {
			out = append(out, r.causes)
		}
	}
	return out
}

// Causes lists what is looked for on a kind of tensioner.
func Causes(by mill.SetBy) []Cause {
	seen := map[Key]bool{}
	var out []Cause
	for _, r := range rowsFor(by) {
		for _, c := range r.causes {
			if !seen[c.Key] {
				seen[c.Key] = true
				out = append(out, c)
			}
		}
	}
	return out
}

func rowsFor(by mill.SetBy) []row {
	rows := append(frictionRows(by), shapeRows(by)...)
	rows = append(rows, oilRows(by)...)
	rows = append(rows, rigRows()...)
	return append(rows, rampRows()...)
}
