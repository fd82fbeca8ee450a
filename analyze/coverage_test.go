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
	b.modulusPa *= 1 + 0.01*b.rng.NormFloat64()
	b.gaugeM *= 1 + 0.0025*b.rng.NormFloat64()
	b.netM2 *= 1 + 0.01*b.rng.NormFloat64()
	either := func(limit float64) float64 { return limit * (2*b.rng.Float64() - 1) }
	b.reversalM = either(2e-6)
	b.indicatorErr, b.gaugeErr = drawnWithin(b.rng, 3e-6), drawnWithin(b.rng, 3.75*psi)
	b.zeroM += either(b.countM)
	// Curl and warmth shift the loaded band's stretch against the slack one's.
	b.tautM = either(assumedCurl*b.gaugeM) + either(assumedWarmthK*expansionPerK*b.gaugeM)
	b.wander = 0.01
	b.settingHz, b.extensionHz = 20, 5
	return b
}

// tally is how the truth lay against the estimates of many rigs.
type tally struct {
	hits, n        int
	sum            float64
	errors, claims float64 // squares of truth less value, and of the standard uncertainty
}

// take judges an estimate's whole interval.
func (y *tally) take(e estimate.Estimate, truth float64) {
	lo, hi := e.Interval95()
	y.judge(lo, hi, e.Value, e.Std(), truth)
}

// judge leaves out what is unknown.
func (y *tally) judge(lo, hi, value, std, truth float64) {
	if math.IsNaN(value) {
		return
	}
	y.n++
	y.sum += truth - value
	y.errors += (truth - value) * (truth - value)
	y.claims += std * std
	if lo <= truth && truth <= hi {
		y.hits++
	}
}

// score is the errors' root mean square over that of the standard uncertainties:
// 1 for an honest budget, less for one that claims too much doubt.
func (y *tally) score() float64 { return math.Sqrt(y.errors / y.claims) }

// scores is what an honest score may be by chance: its relative standard
// deviation is 1 / sqrt(2 n) for normal errors.
func scores(n int) (least, most float64) {
	chance := 3.7 / math.Sqrt(2*float64(n))
	return 0.85 * (1 - chance), 1.1 * (1 + chance)
}

func TestIntervalsHoldTheTruth(t *testing.T) {
	rigs := 100
	if testing.Short() {
		rigs = 9
	}
	all := map[string]*tally{}
	of := func(name string) *tally {
		if all[name] == nil {
			all[name] = &tally{}
		}
		return all[name]
	}
	for seed := range uint64(rigs) {
		b := drawn(seed + 1000)
		h := cycles([]shape{smooth, pumped, stairs}[seed%3], 4, 20, 880)
		judge(of, b, analyzed(t, b.measure(h)))
	}
	for _, name := range slices.Sorted(maps.Keys(all)) {
		y := all[name]
		t.Logf("%s: %d of %d, score %.2f", name, y.hits, y.n, y.score())
		if y.n < rigs*4/5 || y.hits < leastHits(y.n) {
			t.Errorf("%s: the 95 %% interval holds the truth in %d of %d, below %d", name, y.hits, y.n, leastHits(y.n))
		}
		if least, most := scores(y.n); y.score() < least || y.score() > most {
			t.Errorf("%s: errors are %.2f of what is claimed, want %.2f to %.2f", name, y.score(), least, most)
		}
	}
	if len(all) != 12 {
		t.Errorf("intervals of %d figures", len(all))
	}
}

// judge sets every figure of a result against its truth.
func judge(of func(string) *tally, b *bench, r *Result) {
	target := r.Setup.TargetPa
	of("rising setting").take(r.AtRising.TrueSI, b.settingAt(Rising, target))
	of("falling setting").take(r.AtFalling.TrueSI, b.settingAt(Falling, target))
	of("F0").take(r.Friction.F0N, b.f0N)
	of("mu").take(r.Friction.Mu, b.mu)
	of("W").take(r.Friction.WeightN, b.weightN)
	of("A*").take(r.Friction.AreaM2, b.areaM2)
	of("half-width").take(r.Working.HalfSI, b.halfAt(r.Working.RisingSI))
	of("half-width of the setting").take(r.WidthRatio, b.halfAt(r.Working.RisingSI)/r.Working.RisingSI)
	for _, d := range []Direction{Rising, Falling} {
		e, err := r.StressAt(d, 600*psi)
		if err != nil {
			e = estimate.Unknown(err.Error())
		}
		of(string(d)+" stress").take(e, b.stressAt(d, 600*psi))
	}
	of("running up").take(r.Running.AfterRisingPa[1], b.stressAt(Falling, b.settingAt(Rising, target))-target)
	of("running down").take(r.Running.AfterFallingPa[0], b.stressAt(Rising, b.settingAt(Falling, target))-target)
}
