package simrig

import (
	"math"
	"math/rand/v2"

	"tautramp/protocol"
)

// Sensor is one measuring channel. SI units of its quantity: Pa, m, K.
type Sensor struct {
	Count       Count          // what one count is worth; the zero value means the sensor's default
	PerSecond   float64        // samples a second; 0 means the sensor's default
	LowSI       float64        // range; both 0 means the sensor's default
	HighSI      float64        //
	NoiseSI     float64        // standard deviation of one reading; 0 means the sensor's default, negative none
	OffsetSI    float64        // added to the true value; the indicator adds an arbitrary zero of its own
	Span        float64        // factor on the true value; 0 means 1
	WindowS     float64        // Indicator: s over which it averages; 0 means 0.05, negative none
	Shows       protocol.Shows // how it cuts to its count; "" means rounded
	Serial      string         // "" means the profile's instrument, if there is one
	Face        byte           // 'A' or 'B' of the band; 0 says nothing
	OnSpan      byte           // run of the band that it says it is on, 1 or 2; 0 says nothing
	LagS        float64        // s by which it follows slowly, as through a snubber or a filter; 0 means none
	DelayS      float64        // s by which it is late, up to 2; 0 means none
	NoiseS      float64        // s over which its noise hangs together (autoregressive, first order); 0 means not at all
	DriftS      float64        // drift of its zero, SI/s from the start of the drive; 0 means none
	SpanDriftS  float64        // drift of its span, part/s; 0 means none
	BowSI       float64        // most by which it strays from straight, halfway up its range; 0 means none
	RippleSI    float64        // error that comes again every RippleM: a scale's pitch or a pinion; 0 means none
	RippleM     float64        // SI; 0 means 1/50 of the range
	RipplePhase float64        // rad
	StickSI     float64        // a pointer that sticks: it follows when it is off by more; 0 means none
	ClipSI      float64        // the sensor gives no more than this, and says nothing of it; 0 means none
	Scatter     float64        // display: standard deviation of each step's place, counts; 0 means none
	Backstep    float64        // display: counts by which it steps later on the way back; 0 means none
	Absent      bool           // not connected
	AbsentAtS   float64        // s after the start of the drive at which it falls out
	AbsentForS  float64        // s until it is back; 0 means that it does not fall out
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
	streamVary
	streamScatter
	streamBench
)

func newRand(seed uint64, stream, index int) *rand.Rand {
	return rand.New(rand.NewPCG(seed, uint64(stream)<<8|uint64(index)))
}

// view is the rig at one instant.
type view struct {
	t            float64 // s on the rig's timeline
	driveS       float64 // s into the drive; negative before it
	pullN        float64 // of both spans
	travelM      float64 // of the wheel
	pressurePa   float64
	torqueNM     float64
	angleRad     float64
	springM      float64
	extensionM   [2]float64 // of the first and the second indicator
	extensionSum [2]float64 // m s: integrals since the rig was made
	referenceSI  float64    // of a bench: what is true
	testedSI     float64    // and what the tested instrument shows
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

	kept    *[]Sample // readings kept instead of sent; nil: they are sent
	task    *task     // while running
	tick    int64     // ticks since boot at the middle of the next sample
	open    bool      // inside the window
	openT   float64
	openSum float64

	begun     bool // there is a reading before this one
	lastT     float64
	lastSI    float64 // true value at the last reading
	lagSI     float64 // what the lag has let through
	pointerSI float64 // where a pointer that sticks stands
	noiseSI   float64
	display   display
}

// prepare works out the scale and the range in counts.
func (c *channel) prepare(seed uint64, index int) {
	c.baseSI = protocol.ToSI(c.spec, 0)
	c.unitSI = protocol.ToSI(c.spec, 1) - c.baseSI
	c.spec.Low = int32(math.Round((c.LowSI - c.baseSI) / c.unitSI))
	c.spec.High = int32(math.Round((c.HighSI - c.baseSI) / c.unitSI))
	c.spec.Shows, c.spec.Face, c.spec.Span, c.spec.Serial = c.Shows, c.Face, c.OnSpan, c.Serial
	c.display = display{truncates: c.Shows == protocol.ShowsTruncated, scatter: c.Scatter, back: c.Backstep, seed: seed, index: index}
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
	shown := c.sense(si, v) + c.noise(v.t)
	c.begun, c.lastT, c.lastSI = true, v.t, si
	if c.missing(v.driveS) { // noise is drawn even then: one draw a sample
		return 0, protocol.Absent
	}
	if c.ClipSI != 0 {
		shown = min(shown, c.ClipSI)
	}
	return c.cut(shown)
}

// sense is what the sensor makes of a true value, without noise.
func (c *channel) sense(si float64, v view) float64 {
	si = c.lagged(si, v.t)
	t := max(0, v.driveS)
	out := si*(c.Span+c.SpanDriftS*t) + c.OffsetSI + c.DriftS*t
	if c.BowSI != 0 {
		u := si / c.HighSI
		out += c.BowSI * 4 * u * (1 - u)
	}
	if c.RippleSI != 0 {
		out += c.RippleSI * math.Sin(2*math.Pi*si/orElse(c.RippleM, c.HighSI/50)+c.RipplePhase)
	}
	if c.StickSI > 0 {
		if !c.begun {
			c.pointerSI = out
		}
		// The tube pulls the pointer along once it is off by more than its friction holds.
		c.pointerSI = max(out-c.StickSI, min(out+c.StickSI, c.pointerSI))
		out = c.pointerSI
	}
	return out
}

// noise is the next of the channel's noise.
func (c *channel) noise(t float64) float64 {
	fresh := c.rng.NormFloat64() * c.NoiseSI
	if c.NoiseS <= 0 {
		return fresh
	}
	keeps := 0.0
	if c.begun {
		keeps = math.Exp(-(t - c.lastT) / c.NoiseS)
	}
	c.noiseSI = keeps*c.noiseSI + math.Sqrt(1-keeps*keeps)*fresh
	return c.noiseSI
}

// lagged is what a lag of the first order lets through of a value that went
// straight from the last reading to this one.
func (c *channel) lagged(si, t float64) float64 {
	if c.LagS <= 0 || !c.begun || t <= c.lastT {
		c.lagSI = si
		return si
	}
	dt := t - c.lastT
	rate := (si - c.lastSI) / dt
	c.lagSI = si - rate*c.LagS + (c.lagSI-c.lastSI+rate*c.LagS)*math.Exp(-dt/c.LagS)
	return c.lagSI
}

func (c *channel) missing(driveS float64) bool {
	out := driveS - c.AbsentAtS
	return c.Absent || c.AbsentForS > 0 && out >= 0 && out < c.AbsentForS
}

// cut brings a value to counts and says whether it is within the range.
func (c *channel) cut(si float64) (int32, protocol.Status) {
	counts := c.display.show((si - c.baseSI) / c.unitSI)
	switch {
	case counts <= float64(c.spec.Low):
		return c.spec.Low, protocol.Low
	case counts >= float64(c.spec.High):
		return c.spec.High, protocol.High
	}
	return int32(counts), protocol.Good
}
