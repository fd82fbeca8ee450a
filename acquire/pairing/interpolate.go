package pairing

import (
	"math"

	"tautramp/protocol"
)

const (
	// A setting is interpolated between neighbours at most this far apart: the
	// larger of the two.
	gapPeriods = 5.0
	gapLeastS  = 0.5
	// rateWindowS is how far on either side of a pair the rate of the setting is
	// taken: long beside the noise of single readings, short beside a ramp.
	rateWindowS = 0.5
)

// maxGapS is how far apart two neighbours of a channel may be.
func maxGapS(spec protocol.Chan, hz float64) float64 {
	return math.Max(gapLeastS, gapPeriods*float64(spec.Period)/hz)
}

// valueAt is the setting at an instant between two neighbours; ok is false where
// they do not enclose it, are not both good, are of two parts, or stand too
// far apart. An instant that is a reading's own needs no second one.
func valueAt(t float64, a, b Reading, maxGap float64) (value float64, ok bool) {
	switch {
	case a.T == t && a.Status.Ok():
		return a.Value, true
	case b.T == t && b.Status.Ok():
		return b.Value, true
	case !a.Status.Ok() || !b.Status.Ok() || a.Part != b.Part || t < a.T || t > b.T || b.T-a.T > maxGap:
		return 0, false
	}
	return a.Value + (b.Value-a.Value)*(t-a.T)/(b.T-a.T), true
}

// rateAround is the mean rate of the setting, SI/s, over the good readings of
// one part within rateWindowS of t; near is the index of a reading close to t.
func rateAround(readings []Reading, near int, t float64) float64 {
	usable := func(i int) bool {
		return i >= 0 && i < len(readings) && readings[i].Status.Ok() &&
			readings[i].Part == readings[near].Part && math.Abs(readings[i].T-t) <= rateWindowS
	}
	lo, hi := near, near
	for usable(lo - 1) {
		lo--
	}
	for usable(hi + 1) {
		hi++
	}
	if readings[hi].T == readings[lo].T {
		return 0
	}
	return (readings[hi].Value - readings[lo].Value) / (readings[hi].T - readings[lo].T)
}

// joiner makes pairs of one setting channel and one extension channel.
type joiner struct {
	maxGap float64
	// timeStd is the standard uncertainty of the time between the two channels
	// in these parts of theirs, s.
	timeStd func(settingPart, extensionPart int) float64
	parts   [2]int // of the last pair
	part    int
	some    bool
}

// pair is the pair of an extension reading and the setting at index next of
// readings or just before it.
func (j *joiner) pair(readings []Reading, next int, extension Reading) (Pair, bool) {
	if !extension.Status.Ok() || len(readings) == 0 {
		return Pair{}, false
	}
	a, b := max(next-1, 0), min(next, len(readings)-1)
	value, ok := valueAt(extension.T, readings[a], readings[b], j.maxGap)
	if !ok {
		return Pair{}, false
	}
	near := a
	if readings[b].T == extension.T {
		near = b
	}
	now := [2]int{readings[near].Part, extension.Part}
	if j.some && now != j.parts {
		j.part++
	}
	j.parts, j.some = now, true
	return Pair{T: extension.T, Setting: value, Extension: extension.Value, Part: j.part,
		SettingStd: math.Abs(rateAround(readings, near, extension.T)) * j.timeStd(now[0], now[1])}, true
}
