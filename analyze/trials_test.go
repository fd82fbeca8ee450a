package analyze

import (
	"math"
	"math/rand/v2"
	"testing"
)

func TestTrialsBearOutTheIntervals(t *testing.T) {
	b := newBench(41)
	r := analyzed(t, b.measure(cycles(smooth, 4, 20, 880)))
	if err := r.Trials(20000, rand.New(rand.NewPCG(1, 2))); err != nil {
		t.Fatal(err)
	}
	if len(r.Tried) != 5 {
		t.Fatalf("%d figures", len(r.Tried))
	}
	for _, d := range r.Tried {
		lo, hi := d.Own.Interval95()
		// Where what repeats makes the interval both end alike; where scatter of three
		// ramps does, t's tails make that by trials the wider.
		most := 0.08
		if d.Own.Random > 0.2*d.Own.Std() {
			most = 0.5
		}
		if half := (hi - lo) / 2; math.Abs(d.Drawn.Low-lo) > most*half || math.Abs(d.Drawn.High-hi) > most*half {
			t.Errorf("%s: %g to %g by trials, %g to %g", d.Name, d.Drawn.Low, d.Drawn.High, lo, hi)
		}
	}
	first := r.Tried[0].Drawn
	if err := r.Trials(20000, rand.New(rand.NewPCG(1, 2))); err != nil || r.Tried[0].Drawn != first {
		t.Errorf("the same seed gives another result, or %v", err)
	}
	if err := r.Trials(10, rand.New(rand.NewPCG(1, 2))); err == nil {
		t.Error("ten trials are taken for enough")
	}
}

func TestTrialsWarnWhereFewRampsMakeTheIntervalDisagree(t *testing.T) {
	b := newBench(42)
	b.wander, b.plan.Ramps = 0.3, 2 // friction that differs by a third from ramp to ramp
	r := analyzed(t, b.measure(cycles(smooth, 3, 20, 880)))
	if err := r.Trials(20000, rand.New(rand.NewPCG(1, 2))); err != nil {
		t.Fatal(err)
	}
	for _, d := range r.Tried {
		if !d.Agree && !warned(r, "trials-differ") {
			t.Errorf("%s disagrees and nobody says so", d.Name)
		}
	}
}
