package findings

import (
	"math"
	"testing"

	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

func measured(value, random, system float64) estimate.Estimate {
	return estimate.Estimate{Value: value, Random: random, System: system, DoF: math.Inf(1), Method: "made up"}
}

// At infinite degrees of freedom a difference of 1.96 standard deviations has the
// chance 0.05, one of 2.576 the chance 0.01 (JCGM 100:2008 table G.2, last line).
func TestChangeIsJudgedByItsOwnDoubt(t *testing.T) {
	for _, c := range []struct {
		by   float64
		word Significance
	}{{1.9, NoChange}, {2.1, LikelyChange}, {2.7, ClearChange}, {-2.7, ClearChange}} {
		got := change("x", AShare, measured(10, 0.6, 0), measured(10+c.by, 0.8, 0), false)
		if got.Word != c.word || got.By.Value != got.After.Value-10 {
			t.Errorf("a change of %g standard deviations is %q", c.by, got.Word)
		}
	}
}

func TestWhatRepeatsCancelsOnlyWithTheSameInstruments(t *testing.T) {
	before, after := measured(52, 0.5, 3), measured(47, 0.5, 3)
	if got := change("x", ASetting, before, after, true); got.Word != ClearChange {
		t.Errorf("with the same instruments: %q, %v", got.Word, got.By)
	}
	if got := change("x", ASetting, before, after, false); got.Word != NoChange {
		t.Errorf("with others: %q, %v", got.Word, got.By)
	}
}

func TestWhatIsNotKnownIsNotCompared(t *testing.T) {
	got := change("x", AForce, estimate.Unknown("no zero"), measured(1, 1, 0), true)
	if got.Word != NotCompared || got.By.Known() || got.By.Why != "no zero" || !math.IsNaN(got.Chance) {
		t.Errorf("%+v", got)
	}
	c := Compare(&analyze.Result{}, &analyze.Result{})
	for _, x := range c.Changes {
		if x.Word != NotCompared {
			t.Errorf("%s is compared of nothing", x.Name)
		}
	}
}
