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
