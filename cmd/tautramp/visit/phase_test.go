package visit

import (
	"math"
	"testing"

	"tautramp/analyze"
)

// No word for a rise beside a falling rate, and none for rest beside a moving one.
func TestPhaseAgreesWithTheRate(t *testing.T) {
	signs := map[analyze.PhaseKind][2]float64{ // of the limit per s: least and most
		analyze.Resting: {-0.02, 0.02}, analyze.Holding: {-0.02, 0.02},
		analyze.SlackLift: {-0.002, 9}, analyze.Seating: {-0.002, 9}, analyze.Loading: {-0.002, 9}, analyze.Unloading: {-9, 0.002},
	}
	for name, s := range map[string]*script{
		"smooth":            cycles(1, 8),
		"very fast":         from(5).to(700, 226).rest(4).to(5, 226).rest(6),
		"hand pump":         cycles(0, 8).strokes(860, 16, 0.01, 2).rest(6).to(35, 8).rest(6),
		"sag in a hold":     from(35).rest(10).to(420, 8).to(380, 1.5).to(35, 8).rest(6),
		"starts under load": from(500).to(35, 8).rest(6),
		"second thoughts":   from(35).rest(10).to(700, 8).to(600, 8).to(800, 8).to(300, 8).to(500, 8).to(35, 8),
	} {
		t.Run(name, func(t *testing.T) {
			moving := map[analyze.PhaseKind]int{}
			play(t, header(t), t1(1), s, func(k *tracker, _ *alarms, now float64) {
				rate := k.shownRate() / k.site.limit
				if math.IsNaN(rate) {
					return
				}
				if k.stage == atRest && (k.phase == analyze.Loading || k.phase == analyze.Seating) {
					t.Fatalf("at %.2f s: %q before the rise has begun", now, k.phase)
				}
				if b, ok := signs[k.phase]; ok && (rate < b[0] || rate > b[1]) {
					moving[k.phase]++
					if moving[k.phase] == 1 {
						t.Errorf("at %.2f s: %q at %.1f psi/s", now, k.phase, rate*950)
					}
				}
			})
		})
	}
}

// Inside the loop is where friction holds the band: T-1 falls from 860 psi to
// about 750 before it moves, and rises from 500 by as much.
func TestInsideTheLoopTheStretchDoesNotFollow(t *testing.T) {
	var lastM float64
	var from0 analyze.PhaseKind
	play(t, header(t), t1(1), from(35).rest(10).to(860, 8).to(300, 8).to(700, 8).to(35, 8), func(k *tracker, _ *alarms, now float64) {
		if k.phase == analyze.Inside && from0 != analyze.Inside {
			lastM = k.stretch
		}
		if from0 = k.phase; k.phase == analyze.Inside && math.Abs(k.stretch-lastM) > 3*k.movesM() {
			t.Fatalf("at %.1f s: inside, and the stretch went %.2g m", now, k.stretch-lastM)
		}
	})
}
