package pairing

import (
	"time"

	"tautramp/protocol"
)

const (
	// partGapS stands between two parts of a log without receive times: how
	// long the device was off is not known.
	partGapS = 1.0
	// pauseS is how far the host's clock may jump before times on both sides of
	// the jump are not comparable.
	pauseS = 2.0
	// disorderS is how much older than the line before it a line's tick may be
	// (SPEC 4.3); older still, the device's counter has started afresh.
	disorderS = 1.0
	// youngS is how long a counter that went back may have run, beside the time
	// without a line: boards boot in seconds.
	youngS = 30.0
	// promptS is how late a line may be and still count as not queued.
	promptS = 0.5
	letters = 26 // channels a device may have, 'a' to 'z'
)

// stamp is when a line was made and when it came in.
type stamp struct {
	tick  uint32
	at    time.Duration
	hasAt bool
}

// segment is a stretch over which one device's clock ran through. Its ticks
// are unwrapped, beginning with the first as sent.
type segment struct {
	device int
	part   int
	hz     float64 // nominal ticks per second
	factor float64 // clock seconds per real second
	first  int64
	last   int64          // largest so far
	anchor float64        // s, host time of the first tick where there are no receive times
	after  [letters]int64 // one more than the last tick of each channel; 0 = none

	env    envelope
	lastAt time.Duration
	hasAt  bool
	least  float64 // s, smallest receive time minus nominal device time so far
	late   float64 // s, how much above that the last line was

	cached clockLine
	fresh  bool       // cached is of all points so far
	doubts [2]float64 // what stds returns
	judged bool       // doubts is of all points so far
}

// breakKind is what ended a segment without anyone saying so.
type breakKind int

const (
	noBreak  breakKind = iota
	rebooted           // the ticks went back
	slept              // the host's clock stood still, the device's did not
)

func (s *segment) broken(t stamp) breakKind {
	known, silentS := t.hasAt && s.hasAt, 0.0
	if known {
		silentS = (t.at - s.lastAt).Seconds()
	}
	forwardS := s.forwardS(t)
	switch {
	case forwardS < -disorderS && float64(t.tick) < (silentS+youngS)*s.hz:
		return rebooted
	case forwardS < -disorderS && known:
		return slept // for over half a wrap
	case known && s.late < promptS && forwardS-silentS > pauseS:
		// Lines that waited in a queue also come closer together than they were
		// made; but then the line before was late.
		return slept
	}
	return noBreak // an old stretch of a log may repeat: its samples are refused
}

// forwardS is how far a tick is ahead of the last one, in nominal seconds.
func (s *segment) forwardS(t stamp) float64 { return float64(s.unwrap(t)-s.last) / s.hz }

// unwrap gives a tick its place on the unwrapped scale: the nearest to the last
// one, or, after a silence of over a quarter of the wrap, the nearest to where
// the receive times say that it should be. Without receive times a silence of
// over half a wrap cannot be seen (SPEC 4.2).
func (s *segment) unwrap(t stamp) int64 {
	near := s.last
	if t.hasAt && s.hasAt {
		if silent := (t.at - s.lastAt).Seconds() * s.hz; silent > 1<<(protocol.TickBits-2) {
			near += int64(silent)
		}
	}
	return near + int64(int32(t.tick-uint32(near)))
}

// take places a tick and, with a receive time, learns from it.
func (s *segment) take(t stamp) int64 {
	tick := s.unwrap(t)
	s.last = max(s.last, tick)
	if !t.hasAt {
		return tick
	}
	x := float64(tick - s.first)
	s.env.add(point{x, t.at.Seconds()}, s.hz)
	behind := t.at.Seconds() - x/s.hz
	if !s.hasAt || behind < s.least {
		s.least = behind
	}
	s.late = behind - s.least
	s.lastAt, s.hasAt, s.fresh, s.judged = t.at, true, false, false
	return tick
}

// line is the clock's mapping as known by now; x counts from the first tick.
func (s *segment) line() clockLine {
	if !s.hasAt {
		return clockLine{a: s.anchor, b: 1 / s.hz, method: MethodTicks}
	}
	if !s.fresh {
		s.cached, s.fresh = s.env.line(s.hz), true
	}
	return s.cached
}

// at is a tick on the host timeline, s.
func (s *segment) at(tick int64) float64 {
	l := s.line()
	return l.a + l.b*float64(tick-s.first)
}

// stds are the standard uncertainties of an instant, s, and of the rate,
// relative. Ticks alone are compared with no other device's: the instant then
// has none.
func (s *segment) stds() (instant, rate float64) {
	if !s.hasAt {
		return 0, nominalRateStd
	}
	if !s.judged {
		s.doubts[0], s.doubts[1] = s.env.stds(s.line(), s.hz, s.factor)
		s.judged = true
	}
	return s.doubts[0], s.doubts[1]
}

// fit is the mapping as the result states it.
func (s *segment) fit() ClockFit {
	l := s.line()
	instant, rate := s.stds()
	f := ClockFit{Device: s.device, Part: s.part, FirstTick: uint64(s.first), LastTick: uint64(s.last),
		Offset: l.a - l.b*float64(s.first), Rate: l.b, OffsetStd: instant,
		RateStdPPM: rate * 1e6, Points: s.env.whole.n, Method: l.method}
	if l.method == MethodEnvelope {
		f.RatePPM = (1/(l.b*s.hz) - 1) * 1e6
	}
	return f
}
