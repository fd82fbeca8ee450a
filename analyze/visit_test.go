package analyze

import (
	"strings"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
)

// What the set says of the visit reaches the result.
func TestVisitReachesTheResult(t *testing.T) {
	set := newBench(41).measure(cycles(smooth, 3, 0, 860))
	set.Simulated, set.Ended = true, "stopped by the operator after 3 of 4 cycles"
	set.Alarms = []pairing.Mark{{T: 812.4, Kind: pairing.Alarm, Text: "limit: the gauge is above it"}}
	r := analyzed(t, set)
	if !r.Simulated || r.Ended != set.Ended {
		t.Errorf("simulated %v, ended %q", r.Simulated, r.Ended)
	}
	if len(r.Warnings) == 0 || r.Warnings[0] != (Warning{"alarm", "Alarm during the visit at 812 s: limit: the gauge is above it"}) {
		t.Errorf("%v", r.Warnings)
	}
}

func TestOverdueCheckIsSaidOnItsDayOnly(t *testing.T) {
	set := newBench(42).measure(cycles(smooth, 3, 0, 860))
	due := time.Date(2026, 5, 1, 0, 0, 0, 0, time.UTC)
	for _, c := range []struct {
		name string
		day  time.Time
		due  string
		want bool
	}{
		{"before it is due", due.AddDate(0, 0, -1), "2026-05-01", false},
		{"on the day", due, "2026-05-01", false},
		{"the day after", due.AddDate(0, 0, 1), "2026-05-01", true},
		{"no day of check given", due.AddDate(9, 0, 0), "", false},
		{"day of measurement not known", time.Time{}, "2026-05-01", false},
	} {
		p := profile(t)
		for i := range p.Instruments {
			p.Instruments[i].Due = ""
			if p.Instruments[i].Measures == mill.MeasuresExtension {
				p.Instruments[i].Due = c.due
			}
		}
		r, err := Analyze(Input{Profile: p, Tensioner: "T-1", Band: "QW-6", Set: set, Day: c.day})
		if err != nil {
			t.Fatal(err)
		}
		if warned(r, "check-overdue") != c.want || (len(r.Setup.Overdue) == 1) != c.want {
			t.Errorf("%s: overdue %v, warnings %v", c.name, r.Setup.Overdue, r.Warnings)
		}
	}
}

// A ramp that stopped at 520 psi says nothing of what lies above.
func TestOnlyRampsThatReachASettingSpeakForIt(t *testing.T) {
	b := newBench(43)
	b.plan = pairing.Plan{Ramps: 3}
	b.wander = 0.05
	h := &path{}
	h.add(0)
	h.hold(3)
	for _, top := range []float64{520, 860, 860} {
		h.begins = append(h.begins, len(h.p))
		h.to(top*psi, 8*psi)
		h.hold(3)
		h.to(0, 8*psi)
		h.hold(3)
	}
	r := analyzed(t, b.measure(h))
	mean := func(d Direction, p float64, ramps []ramp) float64 {
		sum := 0.0
		for _, m := range ramps {
			sum += stressFigure(d, p)(m, r.work.k)
		}
		return sum / float64(len(ramps))
	}
	for _, c := range []struct {
		d    Direction
		psi  float64
		from int
	}{{Rising, 400, 0}, {Rising, 800, 1}, {Falling, 300, 0}, {Falling, 700, 1}} {
		e, err := r.StressAt(c.d, c.psi*psi)
		if err != nil {
			t.Fatal(err)
		}
		near(t, "stress by the ramps that reach it", e.Value, mean(c.d, c.psi*psi, r.work.ramps[c.from:]), 1e-12)
	}
	// Of the mean line, which differs from the mean of the ramps in the second order.
	near(t, "setting for the target", r.AtRising.SettingSI.Value, mean2(r, Rising, 9500*psi), 1e-6)
	if r.AtRising.Budget[1].DoF != 1 {
		t.Errorf("%v degrees of freedom of two ramps", r.AtRising.Budget[1].DoF)
	}
}

// mean2 is the setting by the last two ramps.
func mean2(r *Result, d Direction, stressPa float64) float64 {
	f := settingFigure(d, stressPa)
	return (f(r.work.ramps[1], r.work.k) + f(r.work.ramps[2], r.work.k)) / 2
}

func TestRangeErrorIsReadable(t *testing.T) {
	r := analyzed(t, newBench(44).measure(cycles(smooth, 3, 0, 860)))
	_, err := r.SettingAt(Rising, 13000*psi)
	_, err2 := r.StressAt(Falling, 2000*psi)
	for text, want := range map[string]string{err.Error(): "band stress, rising: 89.6 MPa lies outside", err2.Error(): "setting, falling: 137.9 bar lies outside"} {
		if !strings.Contains(text, want) || strings.Contains(text, "e+0") || strings.Contains(text, "(SI)") {
			t.Errorf("%q", text)
		}
	}
}
