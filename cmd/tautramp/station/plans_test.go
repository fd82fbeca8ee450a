package station_test

import (
	"math"
	"reflect"
	"strings"
	"testing"

	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
	"tautramp/analyze/gauge"
	"tautramp/cmd/tautramp/station"
)

// short is a plan of its own for what a built-in one would take long for.
func short(t *testing.T, lines ...string) gauge.Plan {
	t.Helper()
	text := "name = \"short\"\nrange_high = \"1000 psi\"\nsettle_seconds = 3\nwindow_seconds = 1\n" + strings.Join(lines, "\n")
	p, err := gauge.ParsePlan([]byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func dialPlan(t *testing.T, lines ...string) gauge.Plan {
	return short(t, append([]string{`kind = "dial"`, "steps = 10", `first_point = "first step"`}, lines...)...)
}

// Every kind of plan runs to its end with nobody at a key, and what is read
// back from the file is what was taken live.
func TestEveryPlanRunsToItsEnd(t *testing.T) {
	sweep := short(t, `kind = "transducer"`, `find = "sweep"`, "steps = 5", "exercise_cycles = 1", "top_hold_seconds = 5")
	for name, c := range map[string]struct {
		plan   gauge.Plan
		points int
		error  float64 // SI, that the instrument has at its end
		within float64
		change func(*simrig.BenchConfig)
	}{
		"transducer": {builtIn(t, "transducer", "1000 psi"), 22, 10 * psi, 0.1 * psi, nil},
		"two boards": {builtIn(t, "transducer", "1000 psi"), 22, 10 * psi, 0.1 * psi, func(c *simrig.BenchConfig) { c.Boards = []simrig.BoardSpec{{}, {TickPPM: 300}} }},
		"sweep":      {sweep, 11, 10 * psi, 1 * psi, nil},
		"indicator":  {builtIn(t, "indicator", ""), 82, 10e-6, 0.6e-6, nil},
		"rig":        {builtIn(t, "rig", ""), 34, 4e-6, 0.6e-6, nil},
	} {
		t.Run(name, func(t *testing.T) {
			if testing.Short() && name != "sweep" {
				t.Skip("the full run has it")
			}
			cfg := onBench(c.plan)
			cfg.Gauge = simrig.BenchGauge{Span: 1.01, LagS: -1}
			if c.change != nil {
				c.change(&cfg)
			}
			s := run(t, c.plan, cfg, nil)
			s.finished(t)
			if refused := s.events(recording.Refused); len(refused) > 0 {
				t.Errorf("refused: %q", refused)
			}
			b := s.again(t)
			test := b.Test(s.rec.Seal)
			if len(test.Points) != c.points {
				t.Errorf("%d points, want %d", len(test.Points), c.points)
			}
			if live := s.statuses[len(s.statuses)-1].Points; !reflect.DeepEqual(live, test.Points) {
				t.Error("the points read back are not those taken live")
			}
			// 1 % of span is planted; one count of the display is all that hides it.
			for _, p := range test.Points {
				zero := test.ZeroBefore[0]
				shown := p.Indicated.SI - p.Reference.SI
				if !c.plan.ReferenceStreams() {
					shown -= zero.Indicated.SI
				}
				want := c.error * p.Reference.SI / c.plan.High.SI
				if math.Abs(shown-want) > c.within {
					t.Errorf("%s %s: error %.4g, planted %.4g", p.Direction, p.Nominal, shown, want)
				}
			}
			if !test.Conditions.Simulated || !test.Conditions.Temperature.Known() || test.Instruments.TestedCountSI == 0 {
				t.Errorf("conditions %+v, instruments %+v", test.Conditions, test.Instruments)
			}
		})
	}
}

// An operator makes every mistake once: each is refused with a reason that says
// what to do, and the test is whole all the same.
func TestMistakesAreRefusedAndExplained(t *testing.T) {
	p := dialPlan(t, `directions = "up"`)
	for slip, says := range map[simrig.Slip]string{
		simrig.SlipEarly: "too early: held for",
		simrig.SlipLate:  "not at rest",
		simrig.SlipTwice: "pressed twice: counted once",
		simrig.SlipSide:  "come to from above: it had gone",
	} {
		t.Run(string(slip), func(t *testing.T) {
			c := onBench(p)
			c.Slips = []simrig.Slip{slip}
			s := run(t, p, c, nil)
			s.finished(t)
			refused := s.events(recording.Refused)
			if len(refused) != 1 || !strings.Contains(refused[0], says) {
				t.Errorf("refused: %q, want one with %q", refused, says)
			}
			if n := len(s.again(t).Test("").Points); n != 10 {
				t.Errorf("%d points", n)
			}
		})
	}
}

// A press that a long one takes back is no point; the next press is.
func TestALongPressTakesTheLastOneBack(t *testing.T) {
	p := dialPlan(t, `directions = "up"`)
	c := onBench(p)
	c.Slips = []simrig.Slip{simrig.SlipUndo}
	s := run(t, p, c, nil)
	s.finished(t)
	if n := len(s.events(recording.Taken)); n != 10+1+2 {
		t.Errorf("taken: %q", s.events(recording.Taken))
	}
	test := s.again(t).Test("")
	if len(test.Points) != 10 {
		t.Errorf("%d points", len(test.Points))
	}
	for i, point := range test.Points {
		if point.Index != i {
			t.Errorf("point %d is of mark %d", i, point.Index)
		}
	}
}

// The limit stops the operator, and is in the file.
func TestTheLimitIsGuarded(t *testing.T) {
	p := dialPlan(t, `directions = "up"`)
	c := onBench(p)
	c.Gauge = simrig.BenchGauge{Span: 0.8} // reads so low that its top mark lies beyond the limit
	s := run(t, p, c, func(st station.Status) bool { return st.Alarm == station.NoAlarm })
	last := s.statuses[len(s.statuses)-1]
	if s.summary.Alarm == "" || last.Alarm != station.OverLimit || !strings.HasPrefix(last.Next, "STOP") {
		t.Fatalf("no alarm: %+v", s.summary)
	}
	if alarms := s.events(recording.Alarm); len(alarms) != 1 || !strings.Contains(alarms[0], "the limit is 1100") {
		t.Errorf("recorded: %q", alarms)
	}
}

// A sweep that is too fast takes no point.
func TestAFastSweepIsRefused(t *testing.T) {
	p := short(t, `kind = "transducer"`, `find = "sweep"`, "steps = 5")
	c := onBench(p)
	c.WindowS = 0.25 // the operator takes the window for a quarter of what it is
	s := run(t, p, c, func(st station.Status) bool { return !st.Answer.Refused })
	if refused := s.events(recording.Refused); len(refused) == 0 || !strings.Contains(refused[0], "too fast") {
		t.Errorf("refused: %q", refused)
	}
}
