package pairing

import (
	"fmt"
	"math"

	"tautramp/protocol"
)

// rateDoubtPPM is a rate too far off for any resonator: the tick rate declared
// is wrong, or a rehearsal's clock factor was not told.
const rateDoubtPPM = 20_000

// warnings says what a reader of the set must know about the way the readings
// came.
func (in *intake) warnings(s *Set) []string {
	var out []string
	for i := range in.devices {
		out = append(out, in.devices[i].warnings()...)
	}
	out = append(out, rateWarnings(s.Clocks)...)
	return append(out, channelWarnings(s)...)
}

func (d *device) warnings() []string {
	var out []string
	say := func(format string, args ...any) {
		out = append(out, fmt.Sprintf("device %d: ", d.counters.Device+1)+fmt.Sprintf(format, args...))
	}
	if d.foreign {
		say("it speaks version %d of the wire, this program version %d; nothing of it is used", d.here.Version, protocol.Version)
	}
	for _, c := range d.changed {
		say("channel %c was declared again with another meaning; each reading was read as declared before it", c)
	}
	if d.counters.Backward > 0 {
		say("%d readings were not later than the one before and are left out", d.counters.Backward)
	}
	if parts := d.sampledParts(); parts > 1 {
		if d.seg.hasAt {
			say("its clock ran in %d parts; nothing is interpolated between them", parts)
		} else {
			say("its clock ran in %d parts; how long it was off between them is not known", parts)
		}
	}
	return out
}

// sampledParts counts the stretches of the clock that hold readings. A boot line
// that waited in the port since before the capture makes one that holds none.
func (d *device) sampledParts() int {
	n := 0
	for _, s := range d.segments {
		if s.after != [letters]int64{} {
			n++
		}
	}
	return n
}

func rateWarnings(clocks []ClockFit) []string {
	var out []string
	for _, c := range clocks {
		if math.Abs(c.RatePPM) > rateDoubtPPM {
			out = append(out, fmt.Sprintf("device %d: its clock runs %+.1f %% off the rate that it declares; a wrong tick rate, or a rehearsal's clock factor that was not told",
				c.Device+1, c.RatePPM/1e4))
		}
	}
	return out
}

func channelWarnings(s *Set) []string {
	var out []string
	for _, c := range []struct {
		name string
		*Channel
	}{{"setting", &s.Setting}, {"extension", &s.Extension}} {
		if n := saturated(c.Readings); n > 0 {
			out = append(out, fmt.Sprintf("%d readings of the %s stood at the end of the sensor's range and make no pair", n, c.name))
		}
		if c.Spec.Shows == protocol.ShowsUnknown {
			out = append(out, fmt.Sprintf("whether the display of the %s rounds or cuts its last digit off is not known: its zero may be half a count off", c.name))
		}
	}
	return out
}

func saturated(readings []Reading) int {
	n := 0
	for _, r := range readings {
		if r.Status == protocol.Low || r.Status == protocol.High {
			n++
		}
	}
	return n
}
