package analyze_test

import (
	"bytes"
	"math"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// rehearsed runs a simulated rig flat out and pairs what its memory card says.
func rehearsed(t testing.TB, c simrig.Config) (*analyze.Result, simrig.Truth) {
	t.Helper()
	set, p, truth := rehearsedSet(t, c)
	r, err := analyze.Analyze(analyze.Input{Profile: p, Tensioner: "T-1", Band: "QW-6", Set: set})
	if err != nil {
		t.Fatal(err)
	}
	return r, truth
}

func rehearsedSet(t testing.TB, c simrig.Config) (*pairing.Set, *mill.Profile, simrig.Truth) {
	t.Helper()
	p, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	c.Profile, c.Tensioner, c.Band = p, "T-1", "QW-6"
	rig, err := simrig.New(c)
	if err != nil {
		t.Fatal(err)
	}
	var log bytes.Buffer
	if err := rig.WriteLog(&log); err != nil {
		t.Fatal(err)
	}
	rec := &recording.Recording{Header: recording.Header{
		Source: recording.Imported, Devices: []string{"card"}, Tensioner: "T-1", Band: "QW-6", ClockFactor: 1,
		Started: time.Date(2026, 9, 1, 8, 0, 0, 0, time.UTC), Parsed: p, Plan: recording.Plan{Exercise: 1, Ramps: 3},
	}}
	for line := range strings.Lines(log.String()) {
		rec.Entries = append(rec.Entries, recording.Entry{Wire: []byte(strings.TrimRight(line, "\r\n"))})
	}
	set, err := pairing.FromRecording(rec)
	if err != nil {
		t.Fatal(err)
	}
	return set, p, rig.Truth()
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance*math.Abs(want)) {
		t.Errorf("%s = %.6g, want %.6g within %.2g", what, got, want, tolerance)
	}
}

func holds(t *testing.T, what string, e estimate.Estimate, truth float64) {
	t.Helper()
	if lo, hi := e.Interval95(); !(lo <= truth && truth <= hi) {
		t.Errorf("%s: %.6g lies outside %.6g to %.6g", what, truth, lo, hi)
	}
}

const psi = 6894.757293168361 // Pa

func TestRehearsalRigByEveryWayOfPumping(t *testing.T) {
	if testing.Short() {
		t.Skip("integrates whole visits")
	}
	for _, shape := range []simrig.Shape{simrig.Smooth, simrig.Strokes, simrig.Stairs} {
		t.Run(string(shape), func(t *testing.T) {
			r, truth := rehearsed(t, simrig.Config{Seed: 5, Drive: simrig.Drive{Shape: shape}})
			// The invented T-1 with QW-6: 724 and 621 psi for 9,500 psi.
			near(t, "rising setting, psi", r.AtRising.TrueSI.Value/psi, 724, 0.01)
			near(t, "falling setting, psi", r.AtFalling.TrueSI.Value/psi, 621, 0.01)
			holds(t, "rising setting", r.AtRising.TrueSI, truth.RisingPa(9500*psi))
			holds(t, "falling setting", r.AtFalling.TrueSI, truth.FallingPa(9500*psi))
			lo, hi := r.AtRising.NextSI.RandomInterval95()
			if half := (hi - lo) / 2; half > 0.015*r.AtRising.NextSI.Value {
				t.Errorf("random part of the interval is %.2g of the setting", half/r.AtRising.NextSI.Value)
			}
			near(t, "F0", r.Friction.F0N.Value, truth.F0N, 0.05)
			near(t, "mu", r.Friction.Mu.Value, truth.Mu, 0.05)
			near(t, "A*", r.Friction.AreaM2.Value, truth.AreaM2, 0.01)
			holds(t, "W", r.Friction.WeightN, truth.WeightN)
			for _, w := range r.Warnings {
				if w.Code != "one-face" && w.Code != "instrument-uncorrected" { // both are true of the example mill
					t.Errorf("warning of a healthy rig: %+v", w)
				}
			}
		})
	}
}

// The rig's own low end, about 35 psi, with an indicator of 0.0005 in: a still
// stretch cannot be told from friction there, and the slack lift gives the zero
// all the same. The operator's marks are taken beside it, and one on a loaded band
// is none.
func TestCoarseIndicatorHasItsZeroFromTheSlackLift(t *testing.T) {
	if testing.Short() {
		t.Skip("integrates whole visits")
	}
	coarse := simrig.Sensor{Count: simrig.Count{Unit: "[in_i]", Mantissa: 5, Exponent: -4}}
	set, p, truth := rehearsedSet(t, simrig.Config{Seed: 5, Indicator: coarse})
	result := func() *analyze.Result {
		r, err := analyze.Analyze(analyze.Input{Profile: p, Tensioner: "T-1", Band: "QW-6", Set: set})
		if err != nil {
			t.Fatal(err)
		}
		holds(t, "rising setting", r.AtRising.TrueSI, truth.RisingPa(9500*psi))
		holds(t, "falling setting", r.AtFalling.TrueSI, truth.FallingPa(9500*psi))
		return r
	}
	r := result()
	if from := r.Cycles[1].ZeroFrom; from != "slack lift" {
		t.Errorf("zero from %q without a mark", from)
	}
	set.Marks = []pairing.Mark{{T: 7, Kind: pairing.Zero}, {T: r.Points[r.Cycles[2].First].T, Kind: pairing.Zero}}
	if r = result(); r.Marks.Given != 2 || r.Marks.Loaded != 0 || r.Marks.Unread != 0 {
		t.Errorf("marks %+v of a slack band", r.Marks)
	}
	set.Marks = []pairing.Mark{{T: r.Points[r.Cycles[1].Peak].T, Kind: pairing.Zero}, {T: 1e6, Kind: pairing.Zero}}
	r = result()
	if want := (analyze.ZeroMarks{Given: 2, Loaded: 1, Unread: 1}); r.Marks != want {
		t.Errorf("marks %+v, want %+v", r.Marks, want)
	}
	if text := warning(r, "zero-mark-unused"); !strings.Contains(text, "1 of 2 zero marks not used: the stretch stood higher") {
		t.Errorf("%q", text)
	}
}

func warning(r *analyze.Result, code string) string {
	for _, w := range r.Warnings {
		if w.Code == code {
			return w.Text
		}
	}
	return ""
}

func TestFrictionLawOfTheRigMovesTheResult(t *testing.T) {
	if testing.Short() {
		t.Skip("integrates whole visits")
	}
	plain, _ := rehearsed(t, simrig.Config{Seed: 6})
	slow, _ := rehearsed(t, simrig.Config{Seed: 6, Law: simrig.Law{Kind: simrig.Stribeck}})
	if slow.Friction.F0N.Value < 1.05*plain.Friction.F0N.Value || slow.AtRising.TrueSI.Value < 1.005*plain.AtRising.TrueSI.Value {
		t.Errorf("friction that is larger at a creep: F0 %.0f N and %.0f N", slow.Friction.F0N.Value, plain.Friction.F0N.Value)
	}
	constant, truth := rehearsed(t, simrig.Config{Seed: 6, Law: simrig.Law{Kind: simrig.ConstantOnly}})
	if mu := constant.Friction.Mu.Value; math.Abs(mu) > 0.001 {
		t.Errorf("mu %.4f of constant friction alone", mu)
	}
	near(t, "F0 of constant friction alone", constant.Friction.F0N.Value, truth.F0N, 0.05)
}
