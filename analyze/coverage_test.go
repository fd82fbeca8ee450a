package analyze

import (
	"maps"
	"math"
	"slices"
	"testing"

	"tautramp/analyze/estimate"
)

// leastHits is the fewest hits of n that intervals of 95 % would give less
// often than once in 10,000 by chance.
func leastHits(n int) int {
	below, k := 0.0, 0
	for ; ; k++ {
		lg := func(v int) float64 { g, _ := math.Lgamma(float64(v) + 1); return g }
		below += math.Exp(lg(n) - lg(k) - lg(n-k) + float64(k)*math.Log(0.95) + float64(n-k)*math.Log(0.05))
		if below > 1e-4 {
			return k
		}
	}
}

// drawn is a T-1 whose systematic errors are drawn from the example profile's
// own budget, and whose F0 wanders by 1 % from ramp to ramp: modulus 1 %, gauge
// length 0.05 in in 20 in, section 1 %, indicator 3 um and 2 um of reversal,
// transducer 3.75 psi.
func drawn(seed uint64) *bench {
	b := newBench(seed)
	within := func(limit float64) float64 { return limit * (2*b.rng.Float64() - 1) }
	b.modulusPa *= 1 + 0.01*b.rng.NormFloat64()
	b.gaugeM *= 1 + 0.0025*b.rng.NormFloat64()
	b.netM2 *= 1 + 0.01*b.rng.NormFloat64()
	b.reversalM = within(2e-6) // inside the limit
	left := 3e-6 - math.Abs(b.reversalM)/2
	b.extensionErrM = [2]float64{within(left), within(left)}
	b.settingErrSI = [2]float64{within(3.75 * psi), within(3.75 * psi)}
	b.zeroM += within(b.countM)
	b.wander = 0.01
	b.settingHz, b.extensionHz = 20, 5
	return b
}

func TestIntervalsHoldTheTruth(t *testing.T) {
	rigs := 100
	if testing.Short() {
		rigs = 9
	}
	hits := map[string]int{}
	for seed := range uint64(rigs) {
		b := drawn(seed + 1000)
		r := analyzed(t, b.measure(cycles([]shape{smooth, pumped, stairs}[seed%3], 4, 20, 860)))
		count := func(name string, e estimate.Estimate, truth float64) {
			if lo, hi := e.Interval95(); lo <= truth && truth <= hi {
				hits[name]++
			}
		}
		target := 9500 * psi
		count("rising setting", r.AtRising.TrueSI, b.settingAt(Rising, target))
		count("falling setting", r.AtFalling.TrueSI, b.settingAt(Falling, target))
		count("F0", r.Friction.F0N, b.f0N)
		count("mu", r.Friction.Mu, b.mu)
		count("W", r.Friction.WeightN, b.weightN)
		count("A*", r.Friction.AreaM2, b.areaM2)
	}
	for _, name := range slices.Sorted(maps.Keys(hits)) {
		n := hits[name]
		t.Logf("%s: %d of %d", name, n, rigs)
		if n < leastHits(rigs) {
			t.Errorf("%s: the 95 %% interval holds the truth in %d of %d rigs, below %d", name, n, rigs, leastHits(rigs))
		}
	}
	if len(hits) != 6 {
		t.Errorf("intervals of %d figures", len(hits))
	}
}
