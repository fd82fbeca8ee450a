package simrig

import (
	"math"
	"math/rand/v2"

	"tautramp/protocol"
)

// Sensor is one measuring channel. SI units of its quantity: Pa, m, K.
type Sensor struct {
	Count      Count          // what one count is worth; the zero value means the sensor's default
	PerSecond  float64        // samples a second; 0 means the sensor's default
	LowSI      float64        // range; both 0 means the sensor's default
	HighSI     float64        //
	NoiseSI    float64        // standard deviation of one reading; 0 means the sensor's default, negative none
	OffsetSI   float64        // added to the true value; the indicator adds an arbitrary zero of its own
	Span       float64        // factor on the true value; 0 means 1
	WindowS    float64        // Indicator: s over which it averages; 0 means 0.05, negative none
	Shows      protocol.Shows // how it cuts to its count; "" means rounded
	Serial     string         // "" means the profile's instrument, if there is one
	Face       byte           // 'A' or 'B' of the band; 0 says nothing
	Absent     bool           // not connected
	AbsentAtS  float64        // s after the start of the drive at which it falls out
	AbsentForS float64        // s until it is back; 0 means that it does not fall out
}

// Count is what one count of a channel is worth: Mantissa * 10^Exponent of a
// unit by its UCUM code.
type Count struct {
	Unit     string
	Mantissa int32
	Exponent int8
}

// streams of random numbers, so that one part's noise does not depend on
// another's.
const (
	streamTick = iota + 1
	streamZero
	streamNoise
)

func newRand(seed uint64, stream, index int) *rand.Rand {
	return rand.New(rand.NewPCG(seed, uint64(stream)<<8|uint64(index)))
}

// view is the rig at one instant.
type view struct {
	t            float64 // s on the rig's timeline
	driveS       float64 // s into the drive; negative before it
	pressurePa   float64
	extensionM   float64
	extensionSum float64 // m s: its integral since the rig was made
	temperatureK float64
}

// channel is a sensor at work on a board.
type channel struct {
	Sensor
	spec   protocol.Chan
	value  func(view) float64
	sum    func(view) float64 // integral of value, to average; nil where there is no window
	rng    *rand.Rand
	unitSI float64 // SI value of one count
	baseSI float64 // SI value of count 0

	builtPeriod uint32 // ticks; spec.Period is the one now

	task    *task // while running
	tick    int64 // ticks since boot at the middle of the next sample
	open    bool  // inside the window
	openT   float64
	openSum float64
}

// prepare works out the scale and the range in counts.
func (c *channel) prepare() {
	c.baseSI = protocol.ToSI(c.spec, 0)
	c.unitSI = protocol.ToSI(c.spec, 1) - c.baseSI
	c.spec.Low = int32(math.Round((c.LowSI - c.baseSI) / c.unitSI))
	c.spec.High = int32(math.Round((c.HighSI - c.baseSI) / c.unitSI))
	c.spec.Shows, c.spec.Face, c.spec.Serial = c.Shows, c.Face, c.Serial
}

// begin opens the averaging window.
func (c *channel) begin(v view) { c.open, c.openT, c.openSum = true, v.t, c.sum(v) }

// read closes the window, or reads at once where there is none, and makes the
// sample.
func (c *channel) read(v view) (count int32, status protocol.Status) {
	si := c.value(v)
	if c.open && v.t > c.openT {
		si = (c.sum(v) - c.openSum) / (v.t - c.openT)
	}
	c.open = false
	noise := c.rng.NormFloat64() * c.NoiseSI // drawn even when absent: one draw a sample
	if c.missing(v.driveS) {
		return 0, protocol.Absent
	}
	return c.cut(si*c.Span + c.OffsetSI + noise)
}

func (c *channel) missing(driveS float64) bool {
	out := driveS - c.AbsentAtS
	return c.Absent || c.AbsentForS > 0 && out >= 0 && out < c.AbsentForS
}

// cut brings a value to counts and says whether it is within the range.
func (c *channel) cut(si float64) (int32, protocol.Status) {
	counts := (si - c.baseSI) / c.unitSI
	if c.Shows == protocol.ShowsTruncated {
		counts = math.Trunc(counts)
	} else {
		counts = math.Round(counts)
	}
	switch {
	case counts <= float64(c.spec.Low):
		return c.spec.Low, protocol.Low
	case counts >= float64(c.spec.High):
		return c.spec.High, protocol.High
	}
	return int32(counts), protocol.Good
}
