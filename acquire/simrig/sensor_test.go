package simrig

import (
	"math"
	"testing"

	"tautramp/protocol"
)

// flat is a channel that reads a value without noise.
func flat(s Sensor, valueSI float64) *channel {
	s.fill(Sensor{Count: Count{"mm", 1, -3}, PerSecond: 10, LowSI: -1e-3, HighSI: 1e-3})
	s.NoiseSI = 0
	c := &channel{Sensor: s, value: func(view) float64 { return valueSI }, rng: newRand(1, 1, 1)}
	c.spec = protocol.Chan{Quantity: protocol.Extension, Unit: s.Count.Unit, Mantissa: s.Count.Mantissa, Exponent: s.Count.Exponent, Res: 1}
	c.prepare(1, 1)
	return c
}

func TestReadingIsCutToItsCount(t *testing.T) {
	for name, c := range map[string]struct {
		sensor  Sensor
		valueSI float64
		count   int32
		status  protocol.Status
	}{
		"rounded up":         {Sensor{}, 41.6e-6, 42, protocol.Good},
		"rounded down":       {Sensor{}, 41.4e-6, 41, protocol.Good},
		"rounded, negative":  {Sensor{}, -41.6e-6, -42, protocol.Good},
		"truncated":          {Sensor{Shows: protocol.ShowsTruncated}, 41.9e-6, 41, protocol.Good},
		"truncated to zero":  {Sensor{Shows: protocol.ShowsTruncated}, -41.9e-6, -41, protocol.Good},
		"tenth of an inch":   {Sensor{Count: Count{"[in_i]", 5, -4}}, 0.0254 * 0.0112, 22, protocol.Good},
		"offset and span":    {Sensor{OffsetSI: 1e-6, Span: 1.01}, 100e-6, 102, protocol.Good},
		"above the range":    {Sensor{}, 1.2e-3, 1000, protocol.High},
		"at the range's end": {Sensor{}, 1e-3, 1000, protocol.High},
		"below the range":    {Sensor{}, -2e-3, -1000, protocol.Low},
		"not connected":      {Sensor{Absent: true}, 5e-6, 0, protocol.Absent},
	} {
		count, status := flat(c.sensor, c.valueSI).read(view{})
		if count != c.count || status != c.status {
			t.Errorf("%s: got %d %c, want %d %c", name, count, status, c.count, c.status)
		}
	}
}

func TestSensorFallsOutForAWhile(t *testing.T) {
	c := flat(Sensor{AbsentAtS: 10, AbsentForS: 5}, 5e-6)
	for driveS, want := range map[float64]protocol.Status{
		-1: protocol.Good, 9.9: protocol.Good, 10: protocol.Absent, 14.9: protocol.Absent, 15: protocol.Good,
	} {
		if _, status := c.read(view{driveS: driveS}); status != want {
			t.Errorf("at %g s status %c, want %c", driveS, status, want)
		}
	}
}

// An indicator that averages shows the mean of its window, which on a ramp is
// the value in the window's middle.
func TestIndicatorAveragesItsWindow(t *testing.T) {
	c := flat(Sensor{}, 0)
	c.value = func(v view) float64 { return v.extensionM[0] }
	c.sum = func(v view) float64 { return v.extensionSum[0] }
	c.begin(view{t: 2, extensionM: [2]float64{100e-6}})
	count, _ := c.read(view{t: 2.5, extensionM: [2]float64{300e-6}, extensionSum: [2]float64{0.5 * 200e-6}})
	if count != 200 {
		t.Errorf("got %d um, want the mean 200", count)
	}
}

func TestNoiseHasTheSpreadAskedFor(t *testing.T) {
	c := mustNew(t, t1(t)).boards[0].channels[0]
	const n = 20000
	var sum, squares float64
	for range n {
		count, _ := c.read(view{pressurePa: 100 * psiPa})
		psi := float64(count) * 0.05
		sum += psi
		squares += (psi - 100) * (psi - 100)
	}
	// Standard errors for n readings of 1 psi: 0.007 of the mean, 0.005 of the
	// spread; five of them.
	near(t, "mean, psi", sum/n, 100, 0.035)
	near(t, "spread, psi", math.Sqrt(squares/n), 1, 0.025)
}

func TestIndicatorsZeroIsArbitraryAndPlanted(t *testing.T) {
	zeros := map[float64]bool{}
	for seed := range uint64(20) {
		c := t1(t)
		c.Seed = seed
		r := mustNew(t, c)
		zero := r.Truth().ZeroM
		if zero < 2e-4 || zero > 6e-4 || zero != r.boards[0].channels[1].OffsetSI {
			t.Errorf("seed %d: zero %g m, channel's %g", seed, zero, r.boards[0].channels[1].OffsetSI)
		}
		zeros[zero] = true
	}
	if len(zeros) != 20 {
		t.Errorf("%d different zeros of 20 seeds", len(zeros))
	}
}

// readOf is what a channel makes of a run of values, in SI.
func readOf(c *channel, values []float64, everyS float64) []float64 {
	var shown []float64
	for i, v := range values {
		c.value = func(view) float64 { return v }
		count, _ := c.read(view{t: float64(i) * everyS, driveS: float64(i) * everyS})
		shown = append(shown, c.baseSI+c.unitSI*float64(count))
	}
	return shown
}

// A pointer that sticks is the published play operator.
func TestStickyPointerIsThePublishedPlay(t *testing.T) {
	v := readVectors(t).Play
	c := flat(Sensor{StickSI: v.R * 1e-4}, 0)
	var values []float64
	for _, u := range v.U {
		values = append(values, u*1e-4)
	}
	for i, shown := range readOf(c, values, 1) {
		near(t, "pointer", shown, v.Y[i]*1e-4, 1e-9)
	}
}

func TestLagOfFirstOrder(t *testing.T) {
	ramp := make([]float64, 100)
	for i := range ramp {
		ramp[i] = float64(i) * 5e-6
	}
	shown := readOf(flat(Sensor{LagS: 0.3}, 0), ramp, 0.1)
	near(t, "behind a ramp of 50 um/s, um", (ramp[99]-shown[99])*1e6, 0.3*50, 0.6)
	step := make([]float64, 10)
	for i := range step[1:] {
		step[i+1] = 900e-6
	}
	// The value goes straight from reading to reading: this step takes 0.01 s.
	near(t, "0.3 s after a step", readOf(flat(Sensor{LagS: 0.3}, 0), step, 0.01)[9]/900e-6, 1-math.Exp(-0.085/0.3), 0.003)
}

func TestDriftSpanBowRippleAndClip(t *testing.T) {
	for name, c := range map[string]struct {
		sensor  Sensor
		want    float64
		valueSI float64
	}{
		"drift of the zero": {Sensor{DriftS: 1e-7}, 510e-6, 500e-6},
		"drift of the span": {Sensor{SpanDriftS: 1e-4}, 505e-6, 500e-6},
		"bow":               {Sensor{BowSI: 20e-6}, 520e-6, 500e-6},
		"no bow at the end": {Sensor{BowSI: 20e-6}, 0, 0},
		"ripple":            {Sensor{RippleSI: 5e-6, RippleM: 400e-6}, 505e-6, 500e-6},
		"clip":              {Sensor{ClipSI: 300e-6}, 300e-6, 500e-6},
	} {
		values := make([]float64, 101)
		for i := range values {
			values[i] = c.valueSI
		}
		near(t, name, readOf(flat(c.sensor, 0), values, 1)[100], c.want, 1e-9)
	}
}

func TestNoiseHangsTogether(t *testing.T) {
	c := t1(t)
	c.Pressure.NoiseS, c.Pressure.NoiseSI = 0.1, 2*psiPa
	ch := mustNew(t, c).boards[0].channels[0]
	const n = 40000
	var last, squares, products float64
	for i := range n {
		count, _ := ch.read(view{t: float64(i) * 0.02, pressurePa: 100 * psiPa})
		off := float64(count)*0.05 - 100
		squares += off * off
		products += off * last
		last = off
	}
	// Autoregressive, first order: neighbours 0.02 s apart correlate by e^-0.2. Their
	// number counts for n (1-r)/(1+r).
	near(t, "spread, psi", math.Sqrt(squares/n), 2, 0.08)
	near(t, "correlation of neighbours", products/squares, math.Exp(-0.2), 0.02)
}

// A delayed channel carries what was, at the stamp of now.
func TestDelayedChannelIsLate(t *testing.T) {
	c := quick(t)
	c.Indicator.DelayS, c.Indicator.NoiseSI = 0.3, -1
	r, trace := mustTrace(t, c)
	samples := samplesOf(t, c)[1]
	checked := 0
	for _, s := range samples.Samples {
		i := (s.T - 0.3) / 0.05
		if i < 100 || int(i)+1 >= len(trace) {
			continue
		}
		a, b := trace[int(i)], trace[int(i)+1]
		part := i - math.Floor(i)
		was := a.ExtensionM + part*(b.ExtensionM-a.ExtensionM)
		near(t, "extension, um", (protocol.ToSI(samples.Spec, s.Count)-r.Truth().ZeroM)*1e6, was*1e6, 0.64+0.3)
		checked++
	}
	if checked < 500 {
		t.Errorf("%d checked", checked)
	}
}

// The steps of a display stand off by the scatter asked for, each time the same,
// and come later on the way back by the backstep.
func TestDisplayStepsWhereItWill(t *testing.T) {
	d := display{scatter: 0.1, back: 0.2, seed: 4, index: 1}
	steps := func(from, to float64) map[float64]float64 {
		at := map[float64]float64{}
		last := math.NaN()
		for i := range 400001 {
			x := from + (to-from)*float64(i)/400000
			shown := d.show(x)
			if !math.IsNaN(last) && shown != last {
				at[max(shown, last)] = x
			}
			last = shown
		}
		return at
	}
	up, down, again := steps(0.2, 400.2), steps(400.2, 0.2), steps(0.2, 400.2)
	var sum, squares float64
	for n, x := range up {
		off := x - 0.1 - (n - 0.5) // half of the backstep later on the way up
		sum, squares = sum+off, squares+off*off
		near(t, "later on the way back", x-down[n], 0.2, 0.003)
		near(t, "the same again", again[n], x, 1e-9)
	}
	n := float64(len(up))
	if n != 400 {
		t.Fatalf("%g steps", n)
	}
	// Standard errors for 400: 0.005 of the mean, 0.0035 of the spread.
	near(t, "mean", sum/n, 0, 0.02)
	near(t, "spread", math.Sqrt(squares/n), 0.1, 0.015)
}

func TestPlainDisplayAgreesWithOneOfTinyScatter(t *testing.T) {
	for _, truncates := range []bool{false, true} {
		plain, tiny := display{truncates: truncates}, display{truncates: truncates, scatter: 1e-9}
		for x := -5.03; x < 5; x += 0.07 {
			near(t, "shown", tiny.show(x), plain.show(x), 0)
		}
	}
}
