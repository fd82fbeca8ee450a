package simrig

import (
	"fmt"
	"math"

	"tautramp/acquire/mill"
	"tautramp/protocol"
)

const (
	psiPa = 6894.757293168361
	inchM = 0.0254
	iceK  = 273.15
)

// sensors fills in what each sensor is by default, and plants the arbitrary
// zero of the indicator's display.
func (r *rehearsal) sensors() error {
	r.Pressure.fill(Sensor{
		Count: Count{"[psi]", 5, -2}, PerSecond: 50, LowSI: -20 * psiPa, HighSI: 1500 * psiPa,
		NoiseSI: psiPa, Serial: r.serialOf(mill.MeasuresSetting, mill.DimPressure),
	})
	r.Indicator.fill(Sensor{
		Count: Count{"[in_i]", 5, -5}, PerSecond: 10, LowSI: -0.5 * inchM, HighSI: 0.5 * inchM,
		NoiseSI: 1e-7, WindowS: 0.05, Serial: r.serialOf(mill.MeasuresExtension, mill.DimLength),
	})
	r.Temperature.fill(Sensor{
		Count: Count{"Cel", 1, -1}, PerSecond: 1, LowSI: iceK - 40, HighSI: iceK + 85, NoiseSI: 0.03,
	})
	turning := mill.MeasuresSetting
	r.Torque.fill(Sensor{
		Count: Count{"N.m", 1, -2}, PerSecond: 50, LowSI: -1000, HighSI: 1000, NoiseSI: 0.05, Serial: r.serialOf(turning, mill.DimTorque),
	})
	r.Turns.fill(Sensor{
		Count: Count{"circ", 1, -4}, PerSecond: 50, LowSI: -200 * 2 * math.Pi, HighSI: 200 * 2 * math.Pi, NoiseSI: 2e-4 * 2 * math.Pi, Serial: r.serialOf(turning, mill.DimAngle),
	})
	r.Spring.fill(Sensor{
		Count: Count{"mm", 1, -2}, PerSecond: 50, LowSI: -0.001, HighSI: 1, NoiseSI: 5e-6, Serial: r.serialOf(turning, mill.DimLength),
	})
	for _, s := range []*Sensor{&r.Pressure, &r.Torque, &r.Turns, &r.Spring, &r.Temperature} {
		s.WindowS = 0
	}
	r.Indicator.OffsetSI += 2e-4 + 4e-4*newRand(r.Seed, streamZero, 0).Float64()
	gauge := r.Config.gauge(r.tensioner.SetBy)
	r.truth.ZeroM, r.truth.ZeroPa, r.truth.GaugeSpan = r.Indicator.OffsetSI, gauge.OffsetSI, gauge.Span
	for _, s := range []*Sensor{&r.Pressure, &r.Torque, &r.Turns, &r.Spring, &r.Indicator, &r.Temperature} {
		if s.PerSecond > 1000 || !(s.PerSecond > 0) || s.Span <= 0 {
			return fmt.Errorf("%w: a sensor with %g samples a second and span %g; up to 1000, above 0", ErrConfig, s.PerSecond, s.Span)
		}
		if s.LagS < 0 || s.DelayS < 0 || s.DelayS > 2 || s.NoiseS < 0 || s.StickSI < 0 || s.Scatter < 0 || s.Backstep < 0 {
			return fmt.Errorf("%w: a sensor with lag %g s, delay %g s (up to 2), noise over %g s, stick %g, scatter %g and backstep %g counts; none below 0",
				ErrConfig, s.LagS, s.DelayS, s.NoiseS, s.StickSI, s.Scatter, s.Backstep)
		}
	}
	return nil
}

// fill takes from d what s leaves to default.
func (s *Sensor) fill(d Sensor) {
	if s.Count == (Count{}) {
		s.Count = d.Count
	}
	if s.LowSI == 0 && s.HighSI == 0 {
		s.LowSI, s.HighSI = d.LowSI, d.HighSI
	}
	if s.Shows == "" {
		s.Shows = protocol.ShowsRounded
	}
	if s.Serial == "" {
		s.Serial = d.Serial
	}
	s.PerSecond = orElse(s.PerSecond, d.PerSecond)
	s.NoiseSI = orNone(s.NoiseSI, d.NoiseSI)
	s.WindowS = orNone(s.WindowS, d.WindowS)
	s.Span = orElse(s.Span, 1)
}

// serialOf is the serial number of the profile's instrument, where it has one
// that the wire can carry.
func (r *rehearsal) serialOf(measures string, dim mill.Dim) string {
	i, _ := r.Profile.FindInstrument(measures, dim, "")
	probe := protocol.Here{Version: 1, Model: model, Serial: i.Serial, TickHz: 1, Cause: protocol.CauseAsked}
	if _, err := protocol.Append(nil, probe); err != nil {
		return ""
	}
	return i.Serial
}

// channels makes the channels of one board, in the order of their letters.
func (r *rehearsal) channels(board int) ([]*channel, error) {
	var list []*channel
	add := func(index int, q protocol.Quantity, s Sensor, value, sum func(view) float64) {
		c := &channel{Sensor: s, value: value, sum: sum, rng: newRand(r.Seed, streamNoise, index)}
		c.spec = protocol.Chan{ID: byte('a' + len(list)), Quantity: q, Unit: s.Count.Unit,
			Mantissa: s.Count.Mantissa, Exponent: s.Count.Exponent, Res: 1}
		c.prepare(r.Seed, index)
		list = append(list, c)
	}
	last := len(r.Boards) - 1
	if board == 0 {
		r.settings(add)
	}
	if board == last {
		r.indicators(add)
	}
	if board == 0 && r.Thermometer {
		add(2, protocol.Temperature, r.Temperature, func(v view) float64 { return r.heat.bandK(v.driveS) }, nil)
	}
	if board == 0 && r.RigThermometer {
		add(3, protocol.Temperature, r.Temperature, func(v view) float64 { return r.heat.rigK(v.driveS) }, nil)
	}
	if r.Load > 1000*len(list) {
		return nil, fmt.Errorf("%w: a load of %d lines a second; board %d makes %d at most", ErrConfig, r.Load, board, 1000*len(list))
	}
	for _, c := range list {
		perSecond := c.PerSecond
		if r.Load > 0 {
			perSecond = float64(r.Load) / float64(len(list))
		}
		c.builtPeriod = uint32(math.Round(float64(r.Boards[board].TickHz) / perSecond))
		c.spec.Period = c.builtPeriod
		if _, err := protocol.Append(nil, c.spec); err != nil {
			return nil, fmt.Errorf("%w: the sensor for %s: %w", ErrConfig, c.spec.Quantity, err)
		}
	}
	return list, nil
}

// settings adds what the tensioner is set by, and the turns beside a torque or
// a spring.
func (r *rehearsal) settings(add func(int, protocol.Quantity, Sensor, func(view) float64, func(view) float64)) {
	turns := func(v view) float64 { return v.angleRad }
	switch r.tensioner.SetBy {
	case mill.SetByTorque:
		add(0, protocol.Torque, r.Torque, func(v view) float64 { return v.torqueNM }, nil)
		add(5, protocol.Angle, r.Turns, turns, nil)
	case mill.SetByTurns:
		add(0, protocol.Angle, r.Turns, turns, nil)
	case mill.SetBySpring:
		add(0, protocol.Spring, r.Spring, func(v view) float64 { return r.springLengthM(v.springM) }, nil)
		add(5, protocol.Angle, r.Turns, turns, nil)
	default:
		add(0, protocol.Pressure, r.Pressure, func(v view) float64 { return v.pressurePa }, nil)
	}
}

// indicatorCount is how many indicators sit on the band.
func (r *rehearsal) indicatorCount() int {
	if r.Second == NoSecond {
		return 1
	}
	return 2
}

// indicators adds the indicator, and the second one where there is one: of the
// same make, with its own zero and noise.
func (r *rehearsal) indicators(add func(int, protocol.Quantity, Sensor, func(view) float64, func(view) float64)) {
	first, second := r.Indicator, r.Indicator
	second.OffsetSI = 2e-4 + 4e-4*newRand(r.Seed, streamZero, 1).Float64()
	second.Serial = ""
	switch r.Second {
	case SecondFace:
		first.Face, second.Face = 'A', 'B'
	case SecondSpan:
		first.OnSpan, second.OnSpan = 1, 2
	}
	add(1, protocol.Extension, first,
		func(v view) float64 { return v.extensionM[0] }, func(v view) float64 { return v.extensionSum[0] })
	if r.Second != NoSecond {
		add(4, protocol.Extension, second,
			func(v view) float64 { return v.extensionM[1] }, func(v view) float64 { return v.extensionSum[1] })
	}
}
