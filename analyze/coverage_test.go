package analyze

import (
	"maps"
	"math"
	"slices"
	"sort"
	"testing"

	"tautramp/acquire/pairing"
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

// tally is how the truth lay against the estimates of many rigs.
type tally struct {
	hits, n        int
	errors, claims float64 // squares of truth less value, and of the standard uncertainty
}

// take judges an estimate's whole interval.
func (y *tally) take(e estimate.Estimate, truth float64) {
	lo, hi := e.Interval95()
	y.judge(lo, hi, e.Value, e.Std(), truth)
}

// takeRandom judges the interval from scatter alone.
func (y *tally) takeRandom(e estimate.Estimate, truth float64) {
	lo, hi := e.RandomInterval95()
	y.judge(lo, hi, e.Value, e.Random, truth)
}

// judge leaves out what is unknown.
func (y *tally) judge(lo, hi, value, std, truth float64) {
	if math.IsNaN(value) {
		return
	}
	y.n++
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
// deviation is 1 / sqrt(2 n) for normal errors. drawn keeps its instruments well
// inside their limits, the intervals do not know that. The weight hangs on the
// end of the indicator's scale, where the budget lets shift and gain add up and
// drawn has one limit for both.
func scores(name string, n int) (least, most float64) {
	chance := 3.7 / math.Sqrt(2*float64(n))
	least = 0.9
	if name == "W" {
		least = 0.6
	}
	return least * (1 - chance), 1.1 * (1 + chance)
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
		b.plan.Ramps = 4
		h := cycles([]shape{smooth, pumped, stairs}[seed%3], 5, 20, 860)
		set := b.measure(h)
		whole := analyzed(t, set)
		r := analyzed(t, before(set, h.t[h.begins[4]]))
		judge(of, b, r)
		// What a further ramp shows is what the next setting promises.
		next := whole.work.ramps[len(whole.work.ramps)-1]
		for _, d := range []Direction{Rising, Falling} {
			at := r.AtRising
			if d == Falling {
				at = r.AtFalling
			}
			shown := settingFigure(d, r.Setup.TargetPa)(next, r.work.k)
			if low, high := next.covers(d); shown >= low && shown <= high {
				of(string(d)+", next setting").takeRandom(at.NextSI, shown)
			}
		}
	}
	for _, name := range slices.Sorted(maps.Keys(all)) {
		y := all[name]
		t.Logf("%s: %d of %d, score %.2f", name, y.hits, y.n, y.score())
		if y.n < rigs*4/5 || y.hits < leastHits(y.n) {
			t.Errorf("%s: the 95 %% interval holds the truth in %d of %d, below %d", name, y.hits, y.n, leastHits(y.n))
		}
		if least, most := scores(name, y.n); y.score() < least || y.score() > most {
			t.Errorf("%s: errors are %.2f of what is claimed, want %.2f to %.2f", name, y.score(), least, most)
		}
	}
	if len(all) != 14 {
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

// before is what was recorded until then.
func before(set *pairing.Set, endS float64) *pairing.Set {
	out := *set
	out.Plan.Ramps--
	out.Pairs = out.Pairs[:sort.Search(len(out.Pairs), func(i int) bool { return out.Pairs[i].T >= endS })]
	all := out.Setting.Readings
	out.Setting.Readings = all[:sort.Search(len(all), func(i int) bool { return all[i].T >= endS })]
	return &out
}
