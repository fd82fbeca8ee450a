package station_test

import (
	"math"
	"testing"

	"tautramp/acquire/simrig"
	"tautramp/analyze/gauge"
)

// A pointer that hangs back until it is off by 4 psi lets 8 psi go by after a
// turn; friction inside the gauge leaves a loop and lets nothing go by.
func TestTheDeadBandIsReadAtTheTopsOfATransducerTest(t *testing.T) {
	plan := short(t, `kind = "transducer"`, `find = "sweep"`, "steps = 4", "repeats = 2", "top_hold_seconds = 5")
	for name, c := range map[string]struct {
		gauge simrig.BenchGauge
		want  float64
	}{
		"sticks": {simrig.BenchGauge{StickSI: 4 * psi}, 8 * psi},
		"loop":   {simrig.BenchGauge{LoopSI: 8 * psi}, 0},
	} {
		cfg := onBench(plan)
		cfg.Gauge = c.gauge
		cfg.Gauge.LagS = -1
		s := run(t, plan, cfg, nil)
		s.finished(t)
		r, err := gauge.Evaluate(s.again(t).Test(""))
		if err != nil {
			t.Fatal(err)
		}
		if n := len(r.Test.Reversals); n != 2 {
			t.Errorf("%s: %d turns were read, of 2", name, n)
		}
		if !r.DeadBand.Known() || math.Abs(r.DeadBand.Value-c.want) > math.Min(r.DeadBand.Expanded(), 2*psi) {
			t.Errorf("%s: dead band %.2f +- %.2f psi, planted %.2f", name, r.DeadBand.Value/psi, r.DeadBand.Expanded()/psi, c.want/psi)
		}
		if h := r.Hysteresis.Value; !(math.Abs(h-(8*psi-c.want)) < 2*psi) {
			t.Errorf("%s: hysteresis %.2f psi apart from the dead band of %.2f psi", name, h/psi, r.DeadBand.Value/psi)
		}
	}
}
