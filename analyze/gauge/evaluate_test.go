package gauge

import (
	"errors"
	"math"
	"math/rand/v2"
	"reflect"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

func TestTheZeroVerdictIsNone(t *testing.T) {
	if (Verdict{}).Outcome.String() != "inconclusive" || (Decision{}).Outcome != Inconclusive {
		t.Error("a verdict out of nothing")
	}
	for _, e := range []estimate.Estimate{{}, estimate.Unknown("why"), {Value: 1, Random: 1, Method: "no degrees of freedom"}} {
		for _, r := range Rules() {
			if d := r.Decide(e, 10); d.Outcome != Inconclusive {
				t.Errorf("%s: %v decides %v", r.Name, e, d.Outcome)
			}
			if d := r.Decide(estimate.Exact(0, "given"), 0); d.Outcome != Inconclusive {
				t.Errorf("%s: no limit, and %v", r.Name, d.Outcome)
			}
		}
	}
}

// good is a dial test that passes its class: errors of a tenth of the limit.
func good(t *testing.T) Test {
	t.Helper()
	g := made{bend: 1, hysteresis: 0.5, sd: 0.1, count: 0.1, refStd: 0.1}
	test := g.test(madePlan(t, "dial", 2), rand.New(rand.NewPCG(5, 5)))
	test.Limit, test.Rule = "EN 837-1 class 1", "guard band U"
	test.Conditions.Day = "2026-09-01"
	return test
}

func evaluated(t *testing.T, test Test) *Result {
	t.Helper()
	r, err := Evaluate(test)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// Whatever a pass rests on: without it there is none.
func TestAPassNeedsEverything(t *testing.T) {
	if v := evaluated(t, good(t)).Verdict; v.Outcome != Pass || !(v.Chance > 0.99) {
		t.Fatalf("%v %v %q", v.Outcome, v.Chance, v.Why)
	}
	for name, spoil := range map[string]func(*Test){
		"a point is missing":         func(t *Test) { t.Points = t.Points[:len(t.Points)-1] },
		"no limit":                   func(t *Test) { t.Limit = "" },
		"the reference is not known": func(t *Test) { t.Instruments.Reference.Limit = mill.Setting{} },
		"the reference failed":       func(t *Test) { t.Instruments.Reference.Bench = &mill.Bench{Verdict: "fail"} },
		"too few points for the class": func(t *Test) {
			t.Limit = "EN 837-1 class 0.6"
			t.Plan.Points = t.Plan.Points[:9]
			t.Points = below(t.Points, 9)
		},
		"nothing says how it scatters": func(t *Test) {
			t.Plan.Points = t.Plan.Points[:2]
			t.Points = once(below(t.Points, 2))
			t.Plan.Repeats = 1
		},
		"it only rose": func(t *Test) { t.Plan.Down = false; t.Points = rising(t.Points) },
		"repeatability was not looked at": func(t *Test) {
			t.Points = once(t.Points)
			t.Plan.Repeats = 1
			t.Limits = []mill.GaugeLimit{{Name: "mine", ErrorShare: [3]float64{1, 1, 1}, Repeatability: t.Plan.High}}
			t.Limit = "mine"
		},
	} {
		test := good(t)
		spoil(&test)
		if v := evaluated(t, test).Verdict; v.Outcome != Inconclusive || len(v.Why) == 0 {
			t.Errorf("%s: %v %q", name, v.Outcome, v.Why)
		}
	}
}

func keep(points []Point, want func(Point) bool) []Point {
	var out []Point
	for _, p := range points {
		if want(p) {
			out = append(out, p)
		}
	}
	return out
}

func below(points []Point, index int) []Point {
	return keep(points, func(p Point) bool { return p.Index < index && (p.Index < index-1 || p.Direction == Up) })
}
func once(points []Point) []Point {
	return keep(points, func(p Point) bool { return p.Repeat == 0 })
}
func rising(points []Point) []Point {
	return keep(points, func(p Point) bool { return p.Direction == Up })
}

// A fail stays one whatever else is missing.
func TestAFailNeedsNoMore(t *testing.T) {
	test := good(t)
	test.Points = test.Points[:5]
	for i := range test.Points {
		test.Points[i].Reference.SI -= 50
	}
	if v := evaluated(t, test).Verdict; v.Outcome != Fail {
		t.Errorf("%v", v.Outcome)
	}
}

func TestFrictionDoesNotCountWhereTheStandardLeavesItOut(t *testing.T) {
	test := good(t)
	for i := range test.Points {
		if test.Points[i].Series == Untapped {
			test.Points[i].Reference.SI -= 30
		}
	}
	test.Limit = "ASME B40.100 grade A"
	r := evaluated(t, test)
	if r.Verdict.Outcome != Pass {
		t.Errorf("tapped it is good: %v", r.Verdict.Outcome)
	}
	if math.Abs(r.TapShift.Value+30) > 1 {
		t.Errorf("the tap moves it by %v", r.TapShift.Value)
	}
	test.Limit = "EN 837-1 class 1"
	if v := evaluated(t, test).Verdict; v.Outcome != Fail {
		t.Errorf("untapped it is off by 3 %%: %v", v.Outcome)
	}
}

// At 25 % and 75 % nobody here knows which part's limit holds.
func TestWherePartsOfAScaleMeetNothingIsDecidedBetweenTheirLimits(t *testing.T) {
	b := newBench(t, Transducer, 0, 250, 500, 750, 1000)
	b.test.Limit, b.test.Rule, b.test.Plan.Repeats, b.test.Plan.Down = "ASME B40.100 grade A", "simple acceptance", 2, false
	for repeat := range 2 {
		for i, q := range b.test.Plan.Points {
			off := []float64{15, 15, 5, 5, 15}[i]
			b.read(i, Up, 0, repeat, q.SI, q.SI+off)
		}
	}
	r := b.evaluate()
	want := []Outcome{Pass, Undecided, Pass, Pass, Pass}
	for i, c := range r.Verdict.Checks {
		if c.Outcome != want[i] {
			t.Errorf("at %v: %v", c.Nominal, c.Outcome)
		}
	}
	if r.Verdict.Outcome == Pass {
		t.Error("it passes")
	}
}

func TestAUsersLimitReplacesABuiltInOne(t *testing.T) {
	own := []mill.GaugeLimit{{Name: "asme b40.100 grade 2a", ErrorShare: [3]float64{0.4, 0.4, 0.4}, Source: "a copy on the shelf"}}
	l, err := FindLimit("ASME B40.100 grade 2A", own)
	if err != nil || l.Origin != FromUser || l.Shares[0] != 0.4 || l.Source != "a copy on the shelf" {
		t.Errorf("%+v %v", l, err)
	}
	if l, _ = FindLimit("ASME B40.100 grade 2A", nil); l.Origin != FromMemory {
		t.Errorf("%+v", l)
	}
	if _, err := FindLimit("no such class", own); !errors.Is(err, mill.ErrUnknownName) {
		t.Error(err)
	}
	if _, err := FindRule("no such rule"); !errors.Is(err, mill.ErrUnknownName) {
		t.Error(err)
	}
}

func TestAReferenceTooPoorIsToldBeforeTheStart(t *testing.T) {
	day := time.Date(2026, 9, 1, 0, 0, 0, 0, time.UTC)
	codes := func(spoil func(*Test)) (list []string, stop bool) {
		test := good(t)
		test.Points = nil
		spoil(&test)
		found, err := BeforeStart(test, day)
		if err != nil {
			t.Fatal(err)
		}
		for _, d := range found {
			list, stop = append(list, d.Code), stop || d.Stop
		}
		return list, stop
	}
	if list, stop := codes(func(*Test) {}); len(list) != 0 || stop {
		t.Errorf("a good test: %v", list)
	}
	limit := func(v float64) func(*Test) {
		return func(test *Test) { test.Instruments.Reference.Limit = pascals(t, v) }
	}
	for _, c := range []struct {
		code  string
		stop  bool
		spoil func(*Test)
	}{
		// class 1 of 1000 Pa is 10 Pa; a quarter of it is 2.5, which is a limit of 2.17 at k = 2
		{"reference-poor", false, limit(2.3)},
		{"reference-hopeless", true, limit(9)},
		{"reference-unknown", true, func(test *Test) { test.Instruments.Reference.Limit = mill.Setting{} }},
		{"reference-overdue", false, func(test *Test) { test.Instruments.Reference.Due = "2026-08-31" }},
		{"reference-failed", true, func(test *Test) { test.Instruments.Reference.Bench = &mill.Bench{Verdict: "fail"} }},
		{"reference-range", true, func(test *Test) { test.Instruments.Reference.High = pascals(t, 900) }},
		{"count-coarse", false, func(test *Test) { test.Instruments.TestedCountSI = 5 }},
		{"few-points", false, func(test *Test) { test.Plan.Points = test.Plan.Points[:4] }},
		{"no-limit", false, func(test *Test) { test.Limit = "" }},
		{"limit-from-memory", false, func(test *Test) { test.Limit = "ASME B40.100 grade 1A" }},
	} {
		if list, stop := codes(c.spoil); len(list) != 1 || list[0] != c.code || stop != c.stop {
			t.Errorf("want %s: %v, stop %v", c.code, list, stop)
		}
	}
	if list, _ := codes(func(test *Test) { limit(2.1)(test) }); len(list) != 0 {
		t.Errorf("a reference just good enough: %v", list)
	}
}

func TestARecordGivesBackTheErrorsWithTheirSignChanged(t *testing.T) {
	test := good(t)
	test.Instruments.Tested = mill.Instrument{Name: "shop gauge", Serial: "QF-G-1", Measures: mill.MeasuresSetting}
	test.NextDue, test.Seal = "2027-09-01", "abc"
	r := evaluated(t, test)
	text := mill.EncodeInstruments([]mill.Instrument{r.Record()})
	back, err := mill.ParseInstruments(text)
	if err != nil {
		t.Fatalf("%v\n%s", err, text)
	}
	if !reflect.DeepEqual(back[0], r.Record()) {
		t.Errorf("%+v\n%+v", back[0], r.Record())
	}
	if b := back[0].Bench; b.Verdict != "pass" || b.Checked != "2026-09-01" || b.Seal != "abc" || back[0].Due != "2027-09-01" {
		t.Errorf("%+v", b)
	}
	for _, a := range r.Curves[0].At {
		up, ok := back[0].Bench.CorrectionAt(a.IndicatedSI, mill.FromBelow)
		if !ok || math.Abs(up.Add+a.Up.Value) > 1e-6*r.SpanSI || 2*up.Std < a.Up.Expanded()-1e-3 {
			t.Errorf("at %v: %+v, error %+v", a.Nominal, up, a.Up)
		}
		if down, _ := back[0].Bench.CorrectionAt(a.IndicatedSI, mill.FromAbove); a.Down.Known() && math.Abs(down.Add+a.Down.Value) > 1e-6*r.SpanSI {
			t.Errorf("at %v: %+v, error %+v", a.Nominal, down, a.Down)
		}
	}
}

// The reference's own record corrects it, and its doubt takes the limit's place.
func TestTheReferenceIsCorrectedByItsOwnRecord(t *testing.T) {
	b := newBench(t, Transducer, 0, 100)
	b.test.Instruments.Reference.Limit = pascals(t, 50)
	b.test.Instruments.Reference.Bench = &mill.Bench{Verdict: "pass", Points: []mill.BenchPoint{
		{At: pascals(t, 0), Rising: setting(t, "1 Pa"), Uncertainty: setting(t, "0.2 Pa")},
		{At: pascals(t, 100), Rising: setting(t, "3 Pa"), Falling: setting(t, "-3 Pa"), Uncertainty: setting(t, "0.4 Pa")},
	}}
	b.read(0, Up, 0, 0, 0, 0)
	b.read(1, Up, 0, 0, 100, 100)
	at := b.evaluate().Curves[0].At
	near(t, "error at 0", at[0].Up.Value, -1, 1e-12)
	near(t, "its doubt", at[0].Up.System, 0.1, 1e-12)
	near(t, "error at 100", at[1].Up.Value, -3, 1e-12)
	near(t, "its doubt", at[1].Up.System, 0.2, 1e-12)
}

// A slow triangle through a play of 2: the output holds for 2 of input after the
// turn.
func TestTheDeadBandIsToldFromHysteresis(t *testing.T) {
	const play = 2.0
	var trace []Sample
	out := 0.0
	for i := range 400 {
		in := 0.05 * float64(min(i, 400-i))
		out = math.Max(in-play/2, math.Min(in+play/2, out))
		trace = append(trace, Sample{float64(i), in, out})
	}
	r, ok := FindReversal(trace, 1, 0.01)
	if !ok || !r.FromUp || math.Abs(r.InputSI-play) > r.DoubtSI+0.02 {
		t.Fatalf("%+v %v", r, ok)
	}
	if _, ok := FindReversal(trace[:200], 1, 0.01); ok {
		t.Error("a turn where there is none")
	}
	b := newBench(t, Transducer, 0, 5, 10)
	for i, q := range b.test.Plan.Points {
		b.read(i, Up, 0, 0, q.SI, q.SI-1.25)
		if i < 2 {
			b.read(i, Down, 0, 0, q.SI, q.SI+1.25)
		}
	}
	if res := b.evaluate(); res.DeadBand.Known() || res.Hysteresis.Known() {
		t.Error("a dead band that nobody looked for")
	}
	b.test.Reversals = []Reversal{r}
	res := b.evaluate()
	near(t, "falling less rising", res.UpDown.Value, 2.5, 1e-9)
	near(t, "hysteresis proper", res.Hysteresis.Value, 0.5, 0.2)
}

// 43 CFR 3175.135: definitions read; the root sum of squares is from memory.
func TestTheFiguresOfTheFlowRule(t *testing.T) {
	b := newBench(t, Transducer, 0, 50, 100)
	b.test.Plan.Repeats = 3
	down := [][]float64{{0.1, 50.5}, {0.2, 50.4}, {0.1, 50.2}}
	up := [][]float64{{0, 50.1, 100.2}, {0.1, 50.0, 100.5}, {-0.1, 50.3, 100.3}}
	for repeat := range 3 {
		for i, v := range up[repeat] {
			b.read(i, Up, 0, repeat, b.test.Plan.Points[i].SI, v)
		}
		for i, v := range down[repeat] {
			b.read(i, Down, 0, repeat, b.test.Plan.Points[i].SI, v)
		}
	}
	f := b.evaluate().Flow
	near(t, "E", f.Error.Value, 0.005, 1e-9)
	near(t, "H", f.Hysteresis.Value, 0.004, 1e-9)
	near(t, "R", f.Repeatability.Value, 0.003, 1e-9)
	near(t, "combined", f.Combined.Value, math.Sqrt(25+16+9)/1000, 1e-9)
	if f.Pairs != 3 {
		t.Errorf("%d pairs", f.Pairs)
	}
}

// Both mountings of a rig differ by 4 um: that is in the doubt of its errors.
func TestMountingAnewIsInTheDoubt(t *testing.T) {
	b := newBench(t, Transducer, 0, 50, 100)
	b.test.Plan.Runs, b.test.Plan.Repeats = 2, 2
	for run := range 2 {
		for repeat := range 2 {
			for i, q := range b.test.Plan.Points {
				b.read(i, Up, run, repeat, q.SI, q.SI+4*float64(run))
			}
		}
	}
	r := b.evaluate()
	a := r.Curves[0].At[1]
	near(t, "reproducibility", a.Reproducibility.Value, 4, 1e-12)
	near(t, "doubt", a.Up.System, math.Hypot(0.001/math.Sqrt(3), 2/math.Sqrt(3)), 1e-9)
	near(t, "b of ISO 376", r.Force.Points[0].Reproducibility, 100*4.0/52, 1e-9)
}

func TestNothingIsEvaluatedOutOfNothing(t *testing.T) {
	if _, err := Evaluate(Test{}); !errors.Is(err, ErrNoPoints) {
		t.Error(err)
	}
	test := good(t)
	test.Points[3].Reference.SI = math.NaN()
	if _, err := Evaluate(test); !errors.Is(err, estimate.ErrBadValue) {
		t.Error(err)
	}
	test = good(t)
	test.Points[3].Index = 99
	if _, err := Evaluate(test); !errors.Is(err, estimate.ErrBadValue) {
		t.Error(err)
	}
	test = good(t)
	test.Limit = "no such"
	if _, err := Evaluate(test); !errors.Is(err, mill.ErrUnknownName) {
		t.Error(err)
	}
}

func TestWhatWasNotCheckedIsListed(t *testing.T) {
	list := strings.Join(evaluated(t, good(t)).NotChecked, "\n")
	for _, want := range []string{"drifts", "temperature", "dead band", "tilting", "height", "mounting", "zero mark"} {
		if !strings.Contains(list, want) {
			t.Errorf("%s is not in\n%s", want, list)
		}
	}
}

// JIS B 7503 judges how far errors spread within parts of a turn.
func TestErrorsOverPartsOfATurn(t *testing.T) {
	b := newBench(t, Indicator, 0, 100, 200, 300, 400)
	b.test.Instruments.Reference.Limit = mill.Setting{}
	b.test.Plan.Down = false
	b.test.Instruments.Tested.Revolution.SI = 200
	for i, off := range []float64{0, 3, 1, 6, 2} {
		q := b.test.Plan.Points[i].SI
		b.read(i, Up, 0, 0, q, q+off)
	}
	c := b.evaluate().Curves[0]
	near(t, "half a turn", spanOfErrors(c, 100).Value, 5, 1e-9)
	near(t, "a turn", spanOfErrors(c, 200).Value, 5, 1e-9)
	near(t, "all", spanOfErrors(c, math.Inf(1)).Value, 6, 1e-9)
	if spanOfErrors(c, 20).Known() {
		t.Error("errors over a tenth of a turn from points half a turn apart")
	}
}

// A limit of 0.002 mm would make a reference of 2e-6 Pa, and a limit of 3 psi
// lets every indicator pass.
func TestNothingInAnotherQuantityIsCompared(t *testing.T) {
	for name, change := range map[string]func(*Test){
		"reference's limit":  func(x *Test) { x.Instruments.Reference.Limit = setting(t, "0.002 mm") },
		"reference's range":  func(x *Test) { x.Instruments.Reference.High = setting(t, "25 mm") },
		"tested one's limit": func(x *Test) { x.Instruments.Tested.Limit = setting(t, "1.6 N m") },
		"tested one's count": func(x *Test) { x.Instruments.Tested.Division = setting(t, "0.01 mm") },
		"limit of the user's": func(x *Test) {
			x.Limits, x.Limit = []mill.GaugeLimit{{Name: "mine", Error: setting(t, "3 mm")}}, "mine"
		},
		"limit of the program": func(x *Test) { x.Limit = "band indicator" },
		"bench record": func(x *Test) {
			x.Instruments.Reference.Bench = &mill.Bench{Points: []mill.BenchPoint{{At: setting(t, "1 mm"), Rising: setting(t, "0 mm"), Uncertainty: setting(t, "1 um")}}}
		},
	} {
		b := newBench(t, Transducer, 0, 1e5)
		b.read(0, Up, 0, 0, 0, 0)
		b.read(1, Up, 0, 0, 1e5, 1e5)
		b.evaluate()
		change(&b.test)
		if _, err := Evaluate(b.test); !errors.Is(err, ErrKind) {
			t.Errorf("%s: evaluated: %v", name, err)
		}
		if _, err := BeforeStart(b.test, time.Time{}); !errors.Is(err, ErrKind) {
			t.Errorf("%s: started: %v", name, err)
		}
	}
}
