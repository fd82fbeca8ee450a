package report

import (
	"bytes"
	"encoding/json"
	"math"
	"math/rand/v2"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
	"tautramp/analyze/gauge"
)

func quantity(t testing.TB, text string) mill.Setting {
	t.Helper()
	q, err := mill.ParseQuantity(text)
	if err != nil {
		t.Fatal(err)
	}
	return mill.Setting{Quantity: q}
}

// dialTest is an invented shop gauge of 1,500 psi against the bench reference:
// half a per cent too high at the top, 6 psi apart at the middle, and a pointer
// that a tap moves by 3 psi.
func dialTest(t testing.TB) gauge.Test {
	t.Helper()
	text, err := gauge.PlanText("dial")
	if err != nil {
		t.Fatal(err)
	}
	plan, err := gauge.ParsePlan(text)
	if err != nil {
		t.Fatal(err)
	}
	if plan, err = plan.For(mill.Setting{}, quantity(t, "1500 psi")); err != nil {
		t.Fatal(err)
	}
	profile, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	reference, _ := profile.FindInstrument(mill.MeasuresReference, mill.DimPressure, "QF-R-0031")
	test := gauge.Test{
		Plan: plan, Limits: profile.GaugeLimits, Limit: "EN 837-1 class 1.6", Seal: strings.Repeat("3f", 32), NextDue: "2027-09-14",
		Instruments: gauge.Instruments{
			Tested:    mill.Instrument{Name: "head rig gauge", Serial: "QF-G-0007", Measures: mill.MeasuresSetting},
			Reference: reference, TestedCountSI: 4 * psi, ReferenceCountSI: 0.05 * psi,
		},
		Conditions: gauge.Conditions{
			Day: "2026-09-14", Place: "Brindlewick Saw & Mill Service, bench", By: "the second shift", Medium: "oil",
			Temperature: estimate.Estimate{Value: 22.4, System: 0.3, DoF: math.Inf(1), Method: "board"}, Program: "tautramp 0.1",
		},
	}
	rng := rand.New(rand.NewPCG(14, 9))
	level := func(p float64) gauge.Level { return gauge.Level{SI: p * psi, Spread: 0.1 * psi, N: 100} }
	for _, target := range plan.Targets() {
		z := target.Nominal.SI / (1500 * psi)
		off := 7.5*z + 1.2*rng.NormFloat64()
		if target.Direction == gauge.Down {
			off += 6 * 4 * z * (1 - z)
		}
		if target.Series == gauge.Untapped {
			off -= 3
		}
		mark := target.Nominal.SI / psi
		test.Points = append(test.Points, gauge.Point{Target: target, Reference: level(mark - off), Indicated: gauge.Level{SI: mark * psi}})
	}
	for _, s := range plan.Series {
		test.ZeroBefore = append(test.ZeroBefore, gauge.Zero{Series: s, Reference: level(0.1)})
		test.ZeroAfter = append(test.ZeroAfter, gauge.Zero{Series: s, Reference: level(-0.9)})
	}
	return test
}

func benchResult(t testing.TB, test gauge.Test) *gauge.Result {
	t.Helper()
	r, err := gauge.Evaluate(test)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func benchMeta() Meta {
	return Meta{
		File: "/somewhere/bench-QF-G-0007.ramp", Seal: strings.Repeat("3f", 32), Outcome: "complete", Program: "tautramp 0.1", Recorder: "tautramp 0.1",
		Started: time.Date(2026, 9, 14, 9, 30, 0, 0, time.UTC), ClockFactor: 1,
	}
}

// indicatorTest is an invented indicator on a micrometer head, never read twice.
func indicatorTest(t testing.TB) gauge.Test {
	t.Helper()
	text, _ := gauge.PlanText("indicator")
	plan, err := gauge.ParsePlan(text)
	if err != nil {
		t.Fatal(err)
	}
	plan.Repeats = 1
	test := gauge.Test{Plan: plan, Instruments: gauge.Instruments{TestedCountSI: 1e-6}}
	test.Instruments.Reference.Limit = quantity(t, "0.0005 mm")
	test.Conditions = gauge.Conditions{Day: "2026-09-14", Simulated: true}
	for i, target := range plan.Targets() {
		off := 1e-6 * float64(i%3-1)
		test.Points = append(test.Points, gauge.Point{
			Target: target, Reference: gauge.Level{SI: target.Nominal.SI}, Indicated: gauge.Level{SI: target.Nominal.SI + off, N: 10},
		})
	}
	return test
}

func benchWriters(m Meta) map[string]func(*bytes.Buffer, *gauge.Result) error {
	return map[string]func(*bytes.Buffer, *gauge.Result) error{
		"bench.txt":  func(b *bytes.Buffer, r *gauge.Result) error { return BenchText(b, r, m) },
		"bench.csv":  func(b *bytes.Buffer, r *gauge.Result) error { return BenchCSV(b, r, m) },
		"bench.json": func(b *bytes.Buffer, r *gauge.Result) error { return BenchJSON(b, r, m) },
		"bench.html": func(b *bytes.Buffer, r *gauge.Result) error { return BenchHTML(b, r, m) },
		"bench.svg":  func(b *bytes.Buffer, r *gauge.Result) error { return BenchSVG(b, r) },
	}
}

func TestABenchReportIsAsLastLookedAt(t *testing.T) {
	if !exactHere() {
		t.Skip("pages and pictures are compared on linux/amd64 only")
	}
	r := benchResult(t, dialTest(t))
	for name, write := range benchWriters(benchMeta()) {
		got := written(t, func(b *bytes.Buffer) error { return write(b, r) })
		if head, rest, ok := bytes.Cut(got, []byte("<style>")); ok { // shared with the other sheet, and looked at there
			_, rest, _ = bytes.Cut(rest, []byte("</style>"))
			got = append(head, rest...)
		}
		sameBytes(t, name, got)
	}
}

func benchDecoded(t *testing.T, r *gauge.Result, m Meta) map[string]any {
	t.Helper()
	var value map[string]any
	if err := json.Unmarshal(written(t, func(b *bytes.Buffer) error { return BenchJSON(b, r, m) }), &value); err != nil {
		t.Fatal(err)
	}
	return value
}

func TestBenchJSONFollowsItsSchema(t *testing.T) {
	var root map[string]any
	if err := json.Unmarshal(BenchSchema(), &root); err != nil {
		t.Fatal(err)
	}
	c := checker{root["$defs"].(map[string]any)}
	half := dialTest(t)
	half.Points, half.ZeroAfter, half.Limit = half.Points[:7], nil, ""
	for name, r := range map[string]*gauge.Result{
		"dial": benchResult(t, dialTest(t)), "indicator": benchResult(t, indicatorTest(t)), "half": benchResult(t, half),
	} {
		if err := c.check(name, root, benchDecoded(t, r, benchMeta())); err != nil {
			t.Error(err)
		}
		if err := c.check(name, root, benchDecoded(t, r, Meta{})); err != nil {
			t.Error(err)
		}
	}
}

// A limit from memory is marked wherever it is printed.
func TestALimitFromMemoryIsMarkedEverywhere(t *testing.T) {
	test := dialTest(t)
	test.Limit = "ASME B40.100 grade 1A"
	r := benchResult(t, test)
	for name, write := range benchWriters(benchMeta()) {
		text := strings.Join(strings.Fields(string(written(t, func(b *bytes.Buffer) error { return write(b, r) }))), " ")
		marked := strings.Contains(text, "FROM MEMORY") || strings.Contains(text, `"from_memory": true`) ||
			strings.Contains(text, "limit from memory") && strings.Contains(text, "ASME B40.100 grade 1A,true")
		if !marked {
			t.Errorf("%s asserts the limit", name)
		}
	}
}

func TestABenchReportNeverSaysMoreThanIsKnown(t *testing.T) {
	half := dialTest(t)
	half.Points, half.ZeroAfter = half.Points[:7], nil
	for name, c := range map[string]struct {
		test gauge.Test
		says []string
	}{
		"half":      {half, []string{"NO VERDICT", "31 of the plan", "not read both"}},
		"rehearsal": {indicatorTest(t), []string{"REHEARSAL", "judgement", "um"}},
		"passed":    {dialTest(t), []string{"PASS", "not confirmed in a copy of the standard"}},
	} {
		r := benchResult(t, c.test)
		for writer, write := range benchWriters(benchMeta()) {
			text := string(written(t, func(b *bytes.Buffer) error { return write(b, r) }))
			if strings.Contains(text, "NaN") || strings.Contains(text, "Inf") {
				t.Errorf("%s: %s writes what is no number", name, writer)
			}
			if strings.Contains(text, "/somewhere") {
				t.Errorf("%s: %s tells a folder", name, writer)
			}
			for _, say := range c.says {
				if flat := strings.Join(strings.Fields(text), " "); writer == "bench.txt" && !strings.Contains(flat, say) {
					t.Errorf("%s: %q is not in\n%s", name, say, text)
				}
			}
		}
	}
}

func TestBenchTextFitsATerminal(t *testing.T) {
	for _, test := range []gauge.Test{dialTest(t), indicatorTest(t)} {
		text := string(written(t, func(b *bytes.Buffer) error { return BenchText(b, benchResult(t, test), benchMeta()) }))
		for _, line := range strings.Split(text, "\n") {
			if len([]rune(line)) > columns {
				t.Errorf("%d columns: %s", len([]rune(line)), line)
			}
		}
	}
}
