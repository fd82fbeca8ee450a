package estimate

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

// loops drives a tensioner with friction up and down and reads it late. All in
// psi of setting: y follows the setting within a dead band of its own width.
type loops struct {
	rates   []float64 // psi/s, one a cycle
	half    float64   // half the loop's width, psi
	wander  float64   // of it from cycle to cycle, psi
	late    float64   // s
	hold    float64   // s, once in the middle of each branch
	strokes bool
	count   float64
	noise   float64 // of the setting, psi
	drift   float64 // of zero from cycle to cycle, psi
}

// draw is the setting at 50 Hz, the readings at 10 Hz, and the runs.
func (c loops) draw(r *rand.Rand) (setting, y Trace, runs []Run) {
	var pure []float64
	at := 0.0
	add := func(to, rate float64) {
		for at != to {
			step := math.Min(rate*0.02, math.Abs(to-at))
			if c.strokes && math.Mod(float64(len(pure))*0.02, 2) > 0.6 {
				step = 0
			} else if c.strokes {
				step = math.Min(step*2/0.6, math.Abs(to-at))
			}
			at += math.Copysign(step, to-at)
			pure = append(pure, at)
		}
	}
	wait := func(s float64) {
		for range int(s / 0.02) {
			pure = append(pure, at)
		}
	}
	type leg struct{ from, to int }
	var legs []leg
	for _, rate := range c.rates {
		from := len(pure)
		add(400, rate)
		wait(c.hold)
		add(740, rate)
		top := len(pure)
		add(370, rate)
		wait(c.hold)
		add(120, rate)
		legs = append(legs, leg{from, top}, leg{top, len(pure)})
		add(0, rate)
	}
	wait(4)
	load, zero, half := 0.0, 0.0, c.half
	loads := make([]float64, len(pure))
	for i, p := range pure {
		for k, l := range legs {
			if k%2 == 0 && l.from == i {
				zero, half = c.drift*r.NormFloat64(), c.half+c.wander*r.NormFloat64()
			}
		}
		load = math.Min(math.Max(load, p-half), p+half)
		loads[i] = load + zero
		setting.T = append(setting.T, float64(i)*0.02)
		setting.V = append(setting.V, p+c.noise*r.NormFloat64())
	}
	when := Trace{T: setting.T, V: loads}
	for t := 0.05; t < setting.T[len(setting.T)-1]; t += 0.1 {
		y.T = append(y.T, t)
		v := when.at(t - c.late)
		if c.count > 0 {
			v = math.Round(v/c.count) * c.count
		}
		y.V = append(y.V, v)
	}
	for k, l := range legs {
		run := Run{Sign: 1, Cycle: k / 2}
		low, high := pure[l.from]+150, math.Inf(1)
		if k%2 == 1 {
			run.Sign, low, high = -1, 120, 740-2.5*c.half-60
		}
		run.First = -1
		for i, t := range y.T {
			j := int(t / 0.02)
			if p := pure[min(j, len(pure)-1)]; j >= l.from && j < l.to-60 && p > low && p < high {
				if run.First < 0 {
					run.First = i
				}
				run.Last = i
			}
		}
		runs = append(runs, run)
	}
	return smoothed(setting, 10), y, runs
}

// smoothed is the mean over so many values to either side.
func smoothed(t Trace, half int) Trace {
	out := Trace{T: t.T, V: make([]float64, len(t.V))}
	for i := range t.V {
		near := min(half, i, len(t.V)-1-i)
		out.V[i], _ = Mean(t.V[i-near : i+near+1])
	}
	return out
}

func TestDelayIsFoundWhereTheDataTellIt(t *testing.T) {
	// 0.3 s on T-1 after cleaning: half-width about 15 psi at half the way.
	for _, c := range []struct {
		name  string
		loops loops
		limit float64 // s
	}{
		{"two rates", loops{rates: []float64{8, 16}, half: 15, late: 0.3, count: 4.7, noise: 0.2}, 0.05},
		{"two rates, drift of zero", loops{rates: []float64{8, 16}, half: 15, late: 0.3, count: 4.7, noise: 0.2, drift: 10}, 0.05},
		{"holds", loops{rates: []float64{8, 8, 8}, half: 15, late: 0.3, count: 4.7, noise: 0.2, hold: 5}, 0.05},
		{"holds, friction differs from cycle to cycle", loops{rates: []float64{8, 8, 8}, half: 15, wander: 1, drift: 3, late: 0.3, count: 4.7, noise: 0.2, hold: 5}, 0.2},
		{"strokes", loops{rates: []float64{8, 8, 8}, half: 15, late: 0.3, count: 4.7, noise: 0.2, strokes: true}, 0.05},
		{"none", loops{rates: []float64{8, 16}, half: 15, count: 4.7, noise: 0.2}, 0.05},
		{"early", loops{rates: []float64{8, 16}, half: 15, late: -0.2, count: 4.7, noise: 0.2}, 0.05},
		{"0.001 mm, 1 s", loops{rates: []float64{4, 8, 16}, half: 50, late: 1, count: 3.7, noise: 0.5}, 0.05},
	} {
		if testing.Short() && c.loops.drift == 0 && !c.loops.strokes {
			continue
		}
		n := min(trials(3), 8)
		hits := 0
		for k := range n {
			setting, y, runs := c.loops.draw(rand.New(rand.NewPCG(uint64(k), 31)))
			d, err := FindDelay(setting, y, runs, DelaySearch{})
			if err != nil {
				t.Fatal(err)
			}
			if !d.Late.Known() {
				t.Errorf("%s: %s", c.name, d.Late.Why)
				continue
			}
			if k == 0 {
				t.Logf("%-45s %.3f +/- %.3f s (dof %.0f), %s; alone %.3f +/- %.3f, across %.3f +/- %.3f", c.name, d.Late.Value, d.Late.Random, d.Late.DoF, d.Late.Method, d.Alone.Value, d.Alone.Random, d.Across.Value, d.Across.Random)
			}
			if math.Abs(d.Late.Value-c.loops.late) > c.limit {
				t.Errorf("%s, seed %d: %.3f s, truth %v", c.name, k, d.Late.Value, c.loops.late)
			}
			if lo, hi := d.Late.Interval95(); lo <= c.loops.late && c.loops.late <= hi {
				hits++
			}
		}
		if float64(hits) < 0.8*float64(n)-2 {
			t.Errorf("%s: the interval holds the truth in %d of %d", c.name, hits, n)
		}
	}
}

func TestDelayIsNotInvented(t *testing.T) {
	for _, c := range []struct {
		name  string
		loops loops
	}{
		{"one rate", loops{rates: []float64{8, 8, 8}, half: 15, late: 0.3, count: 4.7, noise: 0.2}},
		{"one rate, wide loop", loops{rates: []float64{8, 8}, half: 50, late: 0, count: 3.7, noise: 0.2}},
		{"rates hardly differ", loops{rates: []float64{8, 8.4}, half: 15, late: 0.3, count: 4.7, noise: 0.2}},
		{"coarse count", loops{rates: []float64{8, 10}, half: 15, late: 0.3, count: 47, noise: 0.2}},
	} {
		for k := range uint64(max(1, trials(2)-1)) {
			setting, y, runs := c.loops.draw(rand.New(rand.NewPCG(k, 32)))
			d, err := FindDelay(setting, y, runs, DelaySearch{})
			if err != nil {
				t.Fatal(err)
			}
			if d.Late.Known() || d.Late.Why == "" {
				t.Errorf("%s, seed %d: %.3f +/- %.3f s from %s", c.name, k, d.Late.Value, d.Late.Random, d.Late.Method)
			}
		}
	}
}

func TestDelayRefusesBadTraces(t *testing.T) {
	good := Trace{T: []float64{0, 1, 2, 3, 4}, V: []float64{0, 1, 2, 3, 4}}
	back := Trace{T: []float64{0, 2, 1, 3, 4}, V: good.V}
	run := []Run{{0, 4, 1, 0}}
	for name, c := range map[string]struct {
		s, y Trace
		runs []Run
		want error
	}{
		"no runs":        {good, good, nil, ErrTooFew},
		"time runs back": {back, good, run, ErrBadValue},
		"readings back":  {good, back, run, ErrBadValue},
		"empty":          {Trace{}, good, run, ErrTooFew},
		"run too long":   {good, good, []Run{{0, 5, 1, 0}}, ErrTooFew},
		"no sign":        {good, good, []Run{{0, 4, 0, 0}}, ErrTooFew},
	} {
		if _, err := FindDelay(c.s, c.y, c.runs, DelaySearch{}); !errors.Is(err, c.want) {
			t.Errorf("%s: %v, want %v", name, err, c.want)
		}
	}
	if d, err := FindDelay(good, good, run, DelaySearch{}); err != nil || d.Late.Known() {
		t.Errorf("five readings: %+v, %v", d.Late, err)
	}
}

// Two rests at different settings, nothing moving near them: no delay changes
// anything, and none is named.
func TestDelayOfRestsAloneIsUnknown(t *testing.T) {
	var setting, y Trace
	for i := range 400 {
		at, v := float64(i)/10, 1.0
		if i >= 200 {
			v = 2
		}
		setting.T, setting.V = append(setting.T, at), append(setting.V, v)
		y.T, y.V = append(y.T, at), append(y.V, 3*v+1e-3*math.Sin(float64(i*i)))
	}
	d, err := FindDelay(setting, y, []Run{{First: 100, Last: 150, Sign: 1}, {First: 250, Last: 300, Sign: 1}}, DelaySearch{})
	if err != nil || d.Late.Known() {
		t.Errorf("%+v, %v", d.Late, err)
	}
}
