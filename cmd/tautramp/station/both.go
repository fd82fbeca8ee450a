package station

import "math"

const noTested = "there is no reading of the tested instrument: look at its board and its wires"

// testedRead tells whether the tested instrument, where it is read beside what
// leads, was read all through a window.
func (b *Bench) testedRead(from, to float64) bool {
	if b.roles.reference == nil || b.roles.tested == nil {
		return true
	}
	l := b.trails[*b.roles.tested]
	if l == nil {
		return false
	}
	i, k := l.window(from, to)
	apart := (to - from) / 2
	return i < k && l.t[i]-from <= apart && to-l.t[k-1] <= apart
}

// testedGone tells that the tested instrument has been silent for longer than
// boards are late.
func (b *Bench) testedGone() bool {
	if b.roles.reference == nil || b.roles.tested == nil {
		return false
	}
	l := b.trails[*b.roles.tested]
	return l == nil || !(b.now-l.seenAt <= lateS*b.factor+blindS)
}

// heardBy is t, or until when the tested instrument was read where it is read
// too: its board may be later than the reference's.
func (b *Bench) heardBy(t float64) float64 {
	if b.roles.reference == nil || b.roles.tested == nil || b.testedGone() {
		return t
	}
	last, _ := b.trails[*b.roles.tested].now()
	return math.Min(t, last)
}
