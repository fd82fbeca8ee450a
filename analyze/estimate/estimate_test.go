package estimate

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

func TestUnknownEstimateSaysSoEverywhere(t *testing.T) {
	for name, e := range map[string]Estimate{"zero value": {}, "unknown": Unknown("no slack band")} {
		lo, hi := e.Interval95()
		rlo, rhi := e.RandomInterval95()
		if e.Known() || !math.IsNaN(e.Std()) || !math.IsNaN(lo+hi+rlo+rhi) {
			t.Errorf("%s: known %v, std %v, interval %v %v", name, e.Known(), e.Std(), lo, hi)
		}
	}
	if Unknown("no slack band").Why == "" {
		t.Error("the reason is lost")
	}
}

func TestIntervalUsesDegreesOfFreedom(t *testing.T) {
	e := Estimate{Value: 10, Random: 3, System: 4, DoF: 2, Method: "test"}
	if e.Std() != 5 {
		t.Errorf("std %v, want 5", e.Std())
	}
	rlo, rhi := e.RandomInterval95()
	// Welch-Satterthwaite, 5^4 / (3^4 / 2) = 15.43, would give 10.6 to each side,
	// less than the 12.9 of scatter alone.
	if lo, hi := e.Interval95(); lo != rlo || hi != rhi {
		t.Errorf("%v to %v is narrower than scatter alone, %v to %v", lo, hi, rlo, rhi)
	}
	many := e
	many.DoF = 20 // 5^4 / (3^4 / 20) = 154.3
	lo, hi := many.Interval95()
	half := Student95(625.0/81*20) * 5
	near(t, "low", lo, 10-half, 1e-12)
	near(t, "high", hi, 10+half, 1e-12)
	near(t, "random low", rlo, 10-3*4.30265272975, 1e-9)
	near(t, "random high", rhi, 10+3*4.30265272975, 1e-9)
	if lo, hi := (Estimate{Value: 7, Method: "exact"}).Interval95(); lo != 7 || hi != 7 {
		t.Errorf("exact value has interval %v to %v", lo, hi)
	}
	if lo, _ := (Estimate{Value: 7, Random: 1, Method: "no freedom"}).Interval95(); !math.IsInf(lo, -1) {
		t.Errorf("scatter without degrees of freedom gives a finite end %v", lo)
	}
}

// Two ramps leave one degree of freedom. Truth is drawn from the estimate's own
// budget: scatter of two ramps, and a system part of 0.3 of the scatter's.
func TestIntervalOfTwoRampsHoldsTheTruth(t *testing.T) {
	const trials = 8000
	r := rand.New(rand.NewPCG(8, 8))
	hits := 0
	for range trials {
		a, b := r.NormFloat64(), r.NormFloat64()
		e := OverRamps([]float64{a, b}, []float64{0, 0}, 100)
		e.System = 0.3 / math.Sqrt2
		if lo, hi := e.Interval95(); math.Abs(e.System*r.NormFloat64()-(lo+hi)/2) <= (hi-lo)/2 {
			hits++
		}
	}
	// Exact: P(|t1| <= 12.706 / sqrt 1.09) = 94.8 %; the standard deviation of a
	// share of 8,000 is 0.25 %.
	if share := float64(hits) / trials; share < 0.94 || share > 0.97 {
		t.Errorf("the 95 %% interval holds the truth in %.2f %%", 100*share)
	}
}

func TestFitsRefuseBadPoints(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for _, c := range []struct {
		name string
		x, y []float64
		want error
	}{
		{"nothing", nil, nil, ErrTooFew},
		{"one point", []float64{1}, []float64{1}, ErrTooFew},
		{"lengths differ", []float64{1, 2, 3}, []float64{1, 2}, ErrTooFew},
		{"no spread", []float64{2, 2, 2, 2, 2, 2, 2}, []float64{1, 2, 3, 4, 5, 6, 7}, ErrNoSpread},
		{"NaN", []float64{1, 2, nan, 4, 5, 6}, []float64{1, 2, 3, 4, 5, 6}, ErrBadValue},
		{"infinite", []float64{1, 2, 3, 4, 5, 6}, []float64{1, 2, inf, 4, 5, 6}, ErrBadValue},
	} {
		if _, err := FitLine(c.x, c.y); !errors.Is(err, c.want) {
			t.Errorf("%s: line: %v, want %v", c.name, err, c.want)
		}
		if _, err := FitStick(c.x, c.y); !errors.Is(err, c.want) {
			t.Errorf("%s: stick: %v, want %v", c.name, err, c.want)
		}
		if _, err := fitSerial(c.x, c.y); !errors.Is(err, c.want) {
			t.Errorf("%s: serial: %v, want %v", c.name, err, c.want)
		}
		if _, _, err := StraightAbove(c.x, c.y); !errors.Is(err, c.want) {
			t.Errorf("%s: straight: %v, want %v", c.name, err, c.want)
		}
	}
	if _, err := FitWeighted([]float64{1, 2, 3}, []float64{1, 2, 3}, []float64{1, 0, 1}); !errors.Is(err, ErrBadValue) {
		t.Errorf("weight of zero: %v", err)
	}
}

func TestStickWithItsBreakOnAPoint(t *testing.T) {
	// Two separate lines would meet outside the gap; the best stick breaks on a
	// point. A fine search over the break must not find anything better.
	r := rand.New(rand.NewPCG(1, 2))
	var x, y []float64
	for i := range 40 {
		u := float64(i) / 10
		x, y = append(x, u), append(y, 0.3*u+1.7*math.Max(0, u-2)+0.4*r.NormFloat64())
	}
	s, err := FitStick(x, y)
	if err != nil {
		t.Fatal(err)
	}
	for b := 0.15; b < 3.8; b += 0.001 {
		if rss := stickAt(x, y, b); rss < s.RSS*(1-1e-9) {
			t.Fatalf("a break at %v has RSS %v, below the fit's %v at %v", b, rss, s.RSS, s.Break)
		}
	}
}

// stickAt is the RSS of the best stick with its break at b, by solving the
// normal equations afresh.
func stickAt(x, y []float64, b float64) float64 {
	var m [3][4]float64
	for i := range x {
		row := [3]float64{1, x[i], math.Max(0, x[i]-b)}
		for j := range row {
			for k := range row {
				m[j][k] += row[j] * row[k]
			}
			m[j][3] += row[j] * y[i]
		}
	}
	for j := range m {
		for k := range m {
			if k != j {
				f := m[k][j] / m[j][j]
				for c := range m[k] {
					m[k][c] -= f * m[j][c]
				}
			}
		}
	}
	rss := 0.0
	for i := range x {
		r := y[i] - m[0][3]/m[0][0] - m[1][3]/m[1][1]*x[i] - m[2][3]/m[2][2]*math.Max(0, x[i]-b)
		rss += r * r
	}
	return rss
}

func TestStraightAboveFindsTheToeVector(t *testing.T) {
	// A toe: zero, then a parabola, then 200 (x - 0.5). Any correct method
	// returns zero 0.5 and slope 200 (toe compensation of ASTM D638 Annex A1;
	// the numbers are a vector of this project).
	x := []float64{0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1, 1.2, 1.4, 1.6, 1.8, 2}
	y := []float64{0, 0, 1.37268202386e-81, 1.66666666667, 6.66666666667, 15, 26.6666666667, 41.6666666667, 60, 80, 100, 140, 180, 220, 260, 300}
	from, ok, err := StraightAbove(x, y)
	if err != nil || !ok {
		t.Fatalf("from %v, ok %v, %v", from, ok, err)
	}
	ax, ay := above(x, y, from)
	l, err := FitLine(ax, ay)
	if err != nil {
		t.Fatal(err)
	}
	zero, _ := l.InverseAt(0)
	near(t, "zero", zero, 0.5, 1e-3)
	near(t, "slope", l.B, 200, 1e-3)
}

func TestStraightAboveKeepsAStraightLineWhole(t *testing.T) {
	lines, cut := 200, 0
	if testing.Short() {
		lines = 40
	}
	for seed := range uint64(lines) {
		r := rand.New(rand.NewPCG(seed, 7))
		var x, y []float64
		for i := range 300 {
			u := float64(i) / 300
			x, y = append(x, u), append(y, math.Round(40*(u+0.01*r.NormFloat64()))/40)
		}
		from, ok, err := StraightAbove(x, y)
		if err != nil || !ok {
			t.Fatalf("seed %d: %v %v", seed, ok, err)
		}
		if from > 0.05 {
			cut++
		}
	}
	if cut > lines/40 {
		t.Errorf("%d of %d straight lines were cut", cut, lines)
	}
}

func TestStraightAboveRefusesACurve(t *testing.T) {
	var x, y []float64
	for i := range 200 {
		u := float64(i) / 200
		x, y = append(x, u), append(y, u*u*u)
	}
	if from, ok, err := StraightAbove(x, y); err != nil || ok {
		t.Errorf("a cubic is called straight above %v (%v)", from, err)
	}
}

func TestDependenceOfAWhiteSeriesIsOneAndOfASawToothLarge(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	white, saw := make([]float64, 4000), make([]float64, 4000)
	for i := range white {
		white[i] = r.NormFloat64()
		saw[i] = float64(i%40) / 40
	}
	if d := Dependence(white); d > 1.3 {
		t.Errorf("white noise: %v", d)
	}
	if d := Dependence(saw); d < 5 || d > 20 {
		t.Errorf("saw-tooth of period 40: %v", d)
	}
	same := make([]float64, 99)
	for i := range same {
		same[i] = 0.0005461 // its mean is rounded
	}
	if d := Dependence(same); d != 1 {
		t.Errorf("constant: %v", d)
	}
}

func TestRampsIntervalHoldsTheTruth(t *testing.T) {
	// Nominal 95 %; three standard errors are 1 % for 4,000 trials a case. Where
	// the ramps scatter no more than each by itself, the floor makes the
	// interval wider than it need be.
	trials, slack := 4000, 0.0
	if testing.Short() {
		trials, slack = 200, 0.04
	}
	for _, c := range []struct {
		name            string
		ramps           int
		between, within float64
		low, high       float64
	}{
		{"3 ramps, scatter between them", 3, 5, 1, 0.94, 0.96},
		{"2 ramps, scatter between them", 2, 5, 1, 0.94, 0.965},
		{"3 ramps, no scatter between them", 3, 0, 1, 0.95, 0.99},
		{"1 ramp, no scatter between them", 1, 0, 1, 0.94, 0.96},
	} {
		r := rand.New(rand.NewPCG(5, uint64(c.ramps)))
		hits := 0
		for range trials {
			values, vars := make([]float64, c.ramps), make([]float64, c.ramps)
			for i := range values {
				values[i] = c.between*r.NormFloat64() + c.within*r.NormFloat64()
				vars[i] = c.within * c.within
			}
			if lo, hi := OverRamps(values, vars, 300).Interval95(); lo <= 0 && hi >= 0 {
				hits++
			}
		}
		if share := float64(hits) / float64(trials); share < c.low-slack || share > c.high+slack {
			t.Errorf("%s: the truth lies inside in %.1f %%, want %.1f to %.1f %%", c.name, 100*share, 100*c.low, 100*c.high)
		}
	}
}

func TestRampsLeaveOutWhatIsNotANumber(t *testing.T) {
	e := OverRamps([]float64{1, math.NaN(), 3}, []float64{0.01, 0.01, 0.01}, 10)
	if e.Value != 2 || e.DoF != 1 {
		t.Errorf("%+v, want the mean of two", e)
	}
	if e := OverRamps([]float64{math.NaN()}, []float64{1}, 10); e.Known() {
		t.Errorf("%+v from nothing", e)
	}
	if e := OverRamps([]float64{2, 2, 2}, []float64{1, 1, 1}, 10); e.Random == 0 {
		t.Error("equal ramps leave no doubt at all")
	}
}

func TestRobustFiguresOfFewValues(t *testing.T) {
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"median of three", Median([]float64{3, 1, 2}), 2},
		{"median of four", Median([]float64{4, 1, 3, 2}), 2.5},
		{"quantile", Quantile([]float64{0, 10, 20, 30, 40}, 0.9), 36},
		{"MAD", MAD([]float64{1, 2, 3, 4, 100}) * 0.6745, 1},
		{"noise of a straight series", Noise([]float64{1, 2, 3, 4, 5}), 0},
		{"noise of two", Noise([]float64{1, 2}), 0},
	} {
		if c.got != c.want {
			t.Errorf("%s: %v, want %v", c.name, c.got, c.want)
		}
	}
	if !math.IsNaN(Median(nil)) {
		t.Error("a median of nothing")
	}
	r := rand.New(rand.NewPCG(8, 8))
	v := make([]float64, 5000)
	for i := range v {
		v[i] = 0.001*float64(i) + 2*r.NormFloat64()
		if i%50 == 0 {
			v[i] += 100 // steps and spikes must not count
		}
	}
	if s := Noise(v); math.Abs(s-2) > 0.25 {
		t.Errorf("noise %v, want 2", s)
	}
}
