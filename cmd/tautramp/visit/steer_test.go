package visit

import (
	"math"
	"slices"
	"strings"
	"testing"

	"tautramp/acquire/recording"
)

// told is what the operator is asked to do in the course of a script, each
// sentence once for each time that it comes up.
func told(t *testing.T, h recording.Header, r *pretend, s *script) (sentences []string, goals []float64) {
	t.Helper()
	play(t, h, r, s, func(k *tracker, _ *alarms, _ float64) {
		if n := k.next(); len(sentences) == 0 || sentences[len(sentences)-1] != n {
			sentences, goals = append(sentences, n), append(goals, k.goalSI()/psiPa)
		}
	})
	return sentences, goals
}

const openValve = "open the valve slowly, all the way until the band is slack, then rest"

func TestNoRampIsToldToPumpAgainAfterHold(t *testing.T) {
	first := []string{nextSlack, "pump up slowly, " + onlyHalf, nextHold, openValve, nextRest}
	for name, c := range map[string]struct {
		ramp *script
		want []string
	}{
		"a leak in the hold":        {cycles(0, 8).to(860, 8).to(800, 0.5), []string{"pump up slowly", nextHold, openValve}},
		"pumped up again and again": {cycles(0, 8).strokes(860, 16, 0.01, 2).to(830, 8).to(850, 8).to(825, 8).to(860, 8), []string{"pump up slowly", nextHold, openValve}},
		"strokes with a deep sag":   {cycles(0, 8).strokes(870, 60, 0.05, 2).rest(8), []string{"pump up slowly", nextHold, openValve}},
		"near the limit":            {cycles(0, 8).strokes(935, 12, 0.02, 2).rest(3), []string{"pump up slowly", nextHold}},
	} {
		t.Run(name, func(t *testing.T) {
			got, _ := told(t, header(t), t1(1), c.ramp)
			if want := append(slices.Clone(first), c.want...); !slices.Equal(got, want) {
				t.Errorf("told\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
			}
		})
	}
	got, _ := told(t, header(t), t1(1), cycles(0, 8).to(860, 8).rest(8).to(500, 8).to(640, 8))
	if n := len(got); n < 2 || got[n-2] != openValve || got[n-1] != "pump up slowly" {
		t.Errorf("after the setting has clearly fallen: told\n%s", strings.Join(got, "\n"))
	}
}

// T-1 reaches 1.15 times 9,500 psi at (2 x 10,925 x 0.3045 + 820) x 1.045 + 210
// over 9.817 in2 = 817 gauge psi; half of the target without friction at 378.
func TestGoalIsTheSettingToHoldAt(t *testing.T) {
	got, goals := told(t, header(t), t1(1), cycles(1, 8))
	for i, want := range []struct {
		next string
		psi  float64
	}{{nextSlack, math.NaN()}, {"pump up slowly, " + onlyHalf, 378}, {nextHold, math.NaN()}, {openValve, math.NaN()}, {nextRest, 817}, {"pump up slowly", 817}, {nextHold, math.NaN()}} {
		if got[i] != want.next || math.IsNaN(goals[i]) != math.IsNaN(want.psi) || math.Abs(goals[i]-want.psi) > 20 {
			t.Errorf("step %d: %q to %.0f psi, want %q to %.0f", i, got[i], goals[i], want.next, want.psi)
		}
	}
	h := header(t)
	h.Parsed.Tensioners[0].SettingLimit.SI = 800 * psiPa
	if _, goals := told(t, h, t1(1), cycles(0, 8).to(500, 8)); math.Abs(goals[5]-0.95*800) > 1e-6 {
		t.Errorf("goal %.1f psi under a limit of 800", goals[5])
	}
	h = header(t)
	h.Parsed.Tensioners[0].Cylinders = 0
	if _, goals := told(t, h, t1(1), cycles(0, 8).to(500, 8)); !math.IsNaN(goals[5]) {
		t.Errorf("goal %.1f psi where the geometry is not known", goals[5])
	}
}

// The figure that is told must be enough to be told "hold".
func TestHoldComesAtTheGoal(t *testing.T) {
	h := header(t)
	h.Plan.Exercise = 0 // nothing is learned of the friction: 1.15 of 672 psi, where T-1 has 1.08 of its target
	for _, c := range []struct {
		h   recording.Header
		psi float64
	}{{header(t), 378}, {h, 775}} {
		top, s := c.psi, from(35).rest(10).to(c.psi, 8).rest(2)
		if p := play(t, c.h, t1(1), s, nil); p.k.next() != nextHold {
			t.Errorf("at %.0f psi: %q", top, p.k.next())
		}
	}
}

func TestSlopeThatDoesNotFitKeepsTheNextRampsToHalf(t *testing.T) {
	r := t1(1)
	r.gain = 0.6
	s := cycles(0, 8).to(200, 8)
	p := play(t, header(t), r, s, nil)
	if got := p.k.next(); got != recheck || math.Abs(p.k.goalSI()/psiPa-378) > 1 {
		t.Errorf("on the next rise: %q to %.0f psi", got, p.k.goalSI()/psiPa)
	}
	r = t1(1)
	r.gain = 0.6
	p = play(t, header(t), r, s.to(400, 8).rest(2), nil)
	if got := p.k.next(); !strings.HasPrefix(got, "do not go higher yet") {
		t.Errorf("at half: %q", got)
	}
	if p = play(t, header(t), r, s.rest(6), nil); p.k.next() != openValve {
		t.Errorf("after the hold: %q", p.k.next())
	}
	// Mended, one ramp to half clears it.
	r = t1(1)
	r.gain = 0.6
	mended := cycles(0, 8).to(400, 8).rest(6).to(35, 8).rest(8)
	end, _ := cycles(0, 8).now()
	p = play(t, header(t), r, mended, func(_ *tracker, _ *alarms, now float64) {
		if now > end-1 {
			r.gain = 1
		}
	})
	if got := p.k.next(); got != nextRest || math.Abs(p.k.goalSI()/psiPa-817) > 20 {
		t.Errorf("mended: %q to %.0f psi", got, p.k.goalSI()/psiPa)
	}
}
