package gauge

import (
	"bytes"
	"encoding/csv"
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"strconv"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

var writeTable = flag.Bool("table", false, "write testdata/statistics.csv anew: 10,000 gauges of each kind")

const (
	statisticsFile = "testdata/statistics.csv"
	tableSeed      = 20260901 // nothing was tuned on it, nor on shortSeed
	shortSeed      = 7
	tableGauges    = 10000
)

// made is a made-up gauge of a span of 1000 Pa whose errors are known: a shift,
// a slope and a bend, hysteresis that is widest in the middle, scatter of each
// reading, a display count, and a reference that is off by a constant drawn from
// its own doubt.
type made struct {
	shift, slope, bend, hysteresis float64
	sd, count, refStd              float64
}

const madeSpan = 1000.0

func (m made) errorAt(x float64, d Direction) float64 {
	z := x / madeSpan
	e := m.shift + m.slope*z + m.bend*4*z*(1-z)
	if d == Down {
		e += m.hysteresis * 4 * z * (1 - z)
	}
	return e
}

// test runs the plan on the gauge.
func (m made) test(plan Plan, rng *rand.Rand) Test {
	t := Test{Plan: plan}
	t.Instruments.TestedCountSI = m.count
	t.Instruments.Reference.Limit.SI = m.refStd * math.Sqrt(3)
	t.Instruments.Reference.Limit.Entered = "drawn"
	refErr := m.refStd * rng.NormFloat64()
	round := func(v float64) float64 {
		if m.count == 0 {
			return v
		}
		return math.Round(v/m.count) * m.count
	}
	for _, target := range plan.Targets() {
		x := target.Nominal.SI
		off := m.errorAt(x, target.Direction) + m.sd*rng.NormFloat64()
		p := Point{Target: target, Indicated: exact(x), Reference: exact(x - off + refErr)}
		if plan.IndicatedStreams() {
			at := x + m.count*(rng.Float64()-0.5) // nobody stops just on a count
			p.Reference, p.Indicated = exact(at+refErr), exact(round(at+off))
		}
		t.Points = append(t.Points, p)
	}
	zero := func() Level { return exact(round(m.shift + 0.25*m.sd*rng.NormFloat64())) }
	for run := range plan.Runs {
		for repeat := range plan.Repeats {
			for _, s := range plan.AllSeries() {
				t.ZeroBefore = append(t.ZeroBefore, Zero{Series: s, Run: run, Repeat: repeat, Indicated: zero()})
				t.ZeroAfter = append(t.ZeroAfter, Zero{Series: s, Run: run, Repeat: repeat, Indicated: zero()})
			}
		}
	}
	return t
}

func madePlan(t *testing.T, name string, repeats int) Plan {
	t.Helper()
	p, err := builtIn(t, name).For(mill.Setting{}, setting(t, "1000 Pa"))
	if err != nil {
		t.Fatal(err)
	}
	p.Repeats = repeats
	return p
}

// row is one line of the table: how often what was counted happened.
type row struct {
	name string
	n, k int
}

func (r row) percent() float64 { return 100 * float64(r.k) / float64(r.n) }

// coverage counts how often the 95 % interval of a point's error holds it.
func coverage(t *testing.T, name string, plan Plan, m made, gauges int, seed uint64) row {
	t.Helper()
	rng := rand.New(rand.NewPCG(seed, 1))
	r := row{name: name}
	for range gauges {
		g := m
		g.shift, g.slope = 2*rng.NormFloat64(), 5*rng.NormFloat64()
		res, err := Evaluate(g.test(plan, rng))
		if err != nil {
			t.Fatal(err)
		}
		for _, c := range res.Curves {
			for _, a := range c.At {
				r.count(a.Up, g.errorAt(a.Nominal.SI, Up))
				r.count(a.Down, g.errorAt(a.Nominal.SI, Down))
			}
		}
	}
	return r
}

func (r *row) count(e estimate.Estimate, truth float64) {
	if !e.Known() {
		return
	}
	r.n++
	if lo, hi := e.Interval95(); lo <= truth && truth <= hi {
		r.k++
	}
}

// decisions judges gauges whose true error at the fourth mark, rising, is a
// share of the limit and smaller everywhere else, and counts an outcome. Every
// undecided comparison must lie within the guard.
func decisions(t *testing.T, rule string, share float64, want Outcome, gauges int, seed uint64) row {
	t.Helper()
	const limit = 10.0
	plan := madePlan(t, "dial", 1)
	plan.Limit, plan.Rule = "made up", rule
	own := mill.GaugeLimit{Name: "made up", Error: pascals(t, limit), Source: "made up"}
	at := plan.Points[3].SI
	rng := rand.New(rand.NewPCG(seed, 2))
	r := row{name: fmt.Sprintf("%s, error %g of the limit: %v", rule, share, want)}
	// The bend peaks at 500 Pa; with this slope the error is largest at 400 Pa, and
	// falling less rising stays below zero, so that no other point comes near.
	g := made{bend: share * limit / 0.8, hysteresis: -3, sd: 0.6, refStd: 0.8}
	g.slope = -0.2 * 4 * g.bend
	g.shift = share*limit - g.errorAt(at, Up)
	for range gauges {
		test := g.test(plan, rng)
		test.Limits = []mill.GaugeLimit{own}
		res, err := Evaluate(test)
		if err != nil {
			t.Fatal(err)
		}
		for _, c := range res.Verdict.Checks {
			if size, guard := math.Abs(c.Value.Value), c.Expanded*res.Rule.Guard; c.Outcome == Undecided && (size < c.LimitSI-guard || size > c.LimitSI+guard) {
				t.Fatalf("undecided outside the guard: %+v", c)
			}
			if c.What == "error, up" && c.Series == Untapped && c.Nominal == plan.Points[3] {
				r.n++
				if c.Outcome == want {
					r.k++
				}
			}
		}
	}
	return r
}

func statistics(t *testing.T, gauges int, seed uint64) []row {
	t.Helper()
	digital := made{bend: 3, hysteresis: 2, sd: 0.8, count: 0.5, refStd: 0.6}
	pointer := made{bend: 3, hysteresis: 2, sd: 0.8, refStd: 0.4}
	return []row{
		coverage(t, "interval of a point, transducer, twice up and down", madePlan(t, "transducer", 2), digital, gauges, seed),
		coverage(t, "interval of a point, transducer, four times", madePlan(t, "transducer", 4), digital, gauges, seed),
		coverage(t, "interval of a point, dial, once up and down", madePlan(t, "dial", 1), pointer, gauges, seed),
		coverage(t, "interval of a point, dial, twice up and down", madePlan(t, "dial", 2), pointer, gauges, seed),
		decisions(t, "guard band U", 1, Pass, gauges, seed),
		decisions(t, "ISO 14253-1", 1, Pass, gauges, seed),
		decisions(t, "simple acceptance", 1, Pass, gauges, seed),
		decisions(t, "guard band U", 1, Fail, gauges, seed),
		decisions(t, "guard band U", 1, Undecided, gauges, seed),
		decisions(t, "guard band U", 0.5, Pass, gauges, seed),
		decisions(t, "guard band U", 1.5, Fail, gauges, seed),
	}
}

// bounds are what each row must keep, in percent.
func bounds() [][2]float64 {
	return [][2]float64{
		{93, 97}, {93, 97}, {93, 97}, {93, 97}, // per-point intervals of 95 %
		{0, 2.75}, // false accept at the limit, nominally 2.3 %
		{0, 5.5},  // nominally 4.9 %
		{45, 55},  // nominally 50 %
		{0, 2.75}, // false reject at the limit
		{94, 100}, // the rest
		{98, 100}, // half the limit
		{98, 100}, // half as much again
	}
}

// TestStatistics holds the committed table of 10,000 gauges to its bounds, and a
// run of few gauges, with another seed, to bounds widened by its size. The table
// is made by
//
//	go test ./analyze/gauge -run TestStatistics -table
func TestStatistics(t *testing.T) {
	if *writeTable {
		table(t, statistics(t, tableGauges, tableSeed))
	}
	text, err := os.ReadFile(statisticsFile)
	if err != nil {
		t.Fatal(err)
	}
	committed, err := csv.NewReader(bytes.NewReader(text)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	few := 60
	if testing.Short() {
		few = 20
	}
	fresh := statistics(t, few, shortSeed)
	if len(committed) != len(fresh)+1 {
		t.Fatalf("%d rows in %s, %d kinds", len(committed)-1, statisticsFile, len(fresh))
	}
	for i, r := range fresh {
		b := bounds()[i]
		percent, err := strconv.ParseFloat(committed[i+1][3], 64)
		if err != nil || committed[i+1][0] != r.name || percent < b[0] || percent > b[1] {
			t.Errorf("%s: %v is not within %v to %v %%", r.name, committed[i+1], b[0], b[1])
		}
		p := math.Min(99, math.Max(1, percent)) / 100
		slack := 400 * math.Sqrt(p*(1-p)/float64(few)) // four standard deviations
		if got := r.percent(); math.Abs(got-percent) > slack {
			t.Errorf("%s: %.2f %% of few, %.2f %% in the table", r.name, got, percent)
		}
	}
}

func table(t *testing.T, rows []row) {
	t.Helper()
	var b bytes.Buffer
	fmt.Fprintln(&b, "what,of,counted,percent")
	for _, r := range rows {
		fmt.Fprintf(&b, "%q,%d,%d,%.2f\n", r.name, r.n, r.k, r.percent())
	}
	if err := os.WriteFile(statisticsFile, b.Bytes(), 0o644); err != nil {
		t.Fatal(err)
	}
	t.Logf("\n%s", b.String())
}
