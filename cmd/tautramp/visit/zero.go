package visit

import (
	"math"

	"tautramp/acquire/pairing"
)

const (
	zeroS     = 1.0  // rest before a zero is taken
	zeroLeast = 5    // readings of a zero, at least
	zeroMost  = 64   // and at most
	slackLift = 0.6  // of what lifts the weight: below it friction is unlikely to hold a band taut
	slackElse = 0.12 // of the limit, where the weight is not known
)

// zero is the extension of the slack band: the median of the readings while the
// setting rests at its low end, taken anew before each rise.
type zero struct {
	below    float64 // setting below which a resting band counts as slack
	value    float64 // m; NaN before there is one
	readings recent
	lastT    float64 // of the last reading taken
	level    float64 // setting at the start of this rest
}

func newZero(s site) zero {
	return zero{below: orElse(slackLift*s.lift, slackElse*s.limit), value: math.NaN(), readings: recent{most: zeroMost}}
}

func (z *zero) forget() {
	z.value = math.NaN()
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
		z.value = z.readings.median()
	}
}

// mark is the operator saying that the band is slack now.
func (z *zero) mark(extension float64) { z.value = extension }

// stretch is the extension since the zero, NaN before there is one.
func (k *tracker) stretchM() float64 { return k.stretch - k.zero.value }

// stressPa is E (e - zero) / L.
func (k *tracker) stressPa() float64 { return k.site.modulus * k.stretchM() / k.site.gauge }
