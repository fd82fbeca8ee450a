package visit

import (
	"math"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
)

const (
	zeroS     = 1.0  // rest before a zero is taken
	zeroLeast = 5    // readings of a zero, at least
	zeroMost  = 64   // and at most
	slackLift = 0.6  // of what lifts the weight: below it friction is unlikely to hold a band taut
	slackElse = 0.12 // of the limit, where the weight is not known
	slackTurn = 0.02 // likewise for a screw or a spring: a loaded screw may loosen at a tenth of it
)

// zero is the extension of the slack band: the median of the readings while the
// setting rests at its low end, taken anew before each rise.
type zero struct {
	below    float64 // setting below which a resting band counts as slack
	value    float64 // m; NaN before there is one
	readings recent
	lastT    float64 // of the last reading taken
	level    float64 // setting at the start of this rest
	believe  float64 // setting up to which the operator's word that the band is slack is taken
	marks    []mark  // of the operator, that may be undone
	byHand   bool    // value is the operator's, not read since
}

// mark is one key of the operator: a mark in the recording, or a zero.
type mark struct {
	isZero bool
	taken  bool    // as the zero
	before float64 // the zero before it was taken
}

func slackOf(by mill.SetBy) float64 {
	if by == mill.SetByTorque || by == mill.SetBySpring {
		return slackTurn
	}
	return slackElse
}

func newZero(s site) zero {
	return zero{below: orElse(slackLift*s.lift, s.slack*s.limit), believe: orElse(s.lift, s.slack*s.limit),
		value: math.NaN(), readings: recent{most: zeroMost}}
}

func (z *zero) forget() {
	z.value, z.byHand = math.NaN(), false // undoing a mark shall not bring back what is forgotten
	z.readings.values = z.readings.values[:0]
}

// take collects readings at rest. They are spread over several seconds: at most
// ten a second.
func (z *zero) take(k *tracker, p pairing.Pair) {
	if k.stage == onRise || k.stillS() < zeroS || p.Setting > z.below ||
		len(z.readings.values) > 0 && math.Abs(p.Setting-z.level) > k.band/2 {
		z.readings.values = z.readings.values[:0]
		return
	}
	if len(z.readings.values) == 0 {
		z.level = p.Setting
	} else if p.T < z.lastT+0.1 {
		return
	}
	z.lastT = p.T
	z.readings.add(p.Extension)
	if len(z.readings.values) >= zeroLeast {
		z.value, z.byHand = z.readings.median(), false
	}
}

// markZero is the operator saying that the band is slack now. A zero taken on a
// loaded band would make every stress read low, so it is believed only where
// that can be: at rest, and with no more on the tensioner than lifts the
// weight.
func (k *tracker) markZero() ReplyKind {
	z := &k.zero
	if !(k.stillS() > 0) || !(k.setting <= z.believe) || math.IsNaN(k.stretch) {
		return k.refuseZero()
	}
	before := z.value
	z.value, z.byHand = k.stretch, true
	z.readings.values = z.readings.values[:0]
	z.marks = append(z.marks, mark{isZero: true, taken: true, before: before})
	return ZeroTaken
}

// refuseZero keeps a place for the event, which is recorded all the same, so
// that undo takes back what the recording takes back.
func (k *tracker) refuseZero() ReplyKind {
	k.zero.marks = append(k.zero.marks, mark{isZero: true})
	return ZeroRefused
}

// markPlain notes a mark that changes no figure, and returns how many stand.
func (z *zero) markPlain() int {
	z.marks = append(z.marks, mark{})
	n := 0
	for _, m := range z.marks {
		if !m.isZero {
			n++
		}
	}
	return n
}

// undo takes the last mark back. A zero read from the slack band since then
// stays.
func (z *zero) undo() ReplyKind {
	n := len(z.marks)
	if n == 0 {
		return NothingToDo
	}
	if last := z.marks[n-1]; last.taken && z.byHand {
		z.value = last.before
	}
	z.marks = z.marks[:n-1]
	return Undone
}

// stretch is the extension since the zero, NaN before there is one.
func (k *tracker) stretchM() float64 { return k.stretch - k.zero.value }

// stressPa is E (e - zero) / L.
func (k *tracker) stressPa() float64 { return k.site.modulus * k.stretchM() / k.site.gauge }
