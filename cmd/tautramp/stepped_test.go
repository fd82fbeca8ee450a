package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
)

// steppedRehearsal is a rig whose operator goes up and down a staircase of 60
// psi and presses on every step; the transducer is there, and is not asked.
func steppedRehearsal(t *testing.T, steps int, presses recording.Presses) string {
	t.Helper()
	profile, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	rig, err := simrig.New(simrig.Config{Profile: profile, Tensioner: "T-1", Band: "QW-6", Seed: 3,
		Drive: simrig.Drive{Shape: simrig.Stairs, LowPa: 20 * psi, TopPa: 860 * psi, Steps: steps, Exercise: -1, Presses: true}})
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	log, ramp := filepath.Join(dir, "card.txt"), filepath.Join(dir, "card.ramp")
	f, err := os.Create(log)
	if err != nil {
		t.Fatal(err)
	}
	if err := rig.WriteLog(f); err != nil {
		t.Fatal(err)
	}
	if err := f.Close(); err != nil {
		t.Fatal(err)
	}
	_, err = importFile(t.Context(), log, ramp, recording.Header{
		Program: "test", Started: time.Date(2026, 6, 1, 8, 0, 0, 0, time.UTC), Source: recording.Imported, ClockFactor: 1,
		Devices: []string{"card.txt"}, Tensioner: "T-1", Band: "QW-6", Presses: presses, Profile: mill.Example(),
	})
	if err != nil {
		t.Fatal(err)
	}
	return ramp
}

// TestASteppedSettingGivesTheTrueSettings wants what was planted from presses
// alone: 724 psi rising and 621 falling for 9,500 psi of band stress, the
// invented demo mill's.
func TestASteppedSettingGivesTheTrueSettings(t *testing.T) {
	presses, err := steppedPresses(stepFlags{step: "40 psi", from: "20 psi", top: "860 psi", doubt: "1 psi"}, mill.Tensioner{SetBy: mill.SetByPressure}, recording.Plan{})
	if err != nil {
		t.Fatal(err)
	}
	ramp := steppedRehearsal(t, 21, presses)
	res, _, err := computeResult(ramp, mill.Pressure{})
	if err != nil {
		t.Fatal(err)
	}
	within(t, "rising setting", res.AtRising.TrueSI, 724*psi, 0.01)
	within(t, "falling setting", res.AtFalling.TrueSI, 621*psi, 0.01)
}

// Exercise goes to about half, so its steps do too: else every later press
// would stand for another step.
func TestStepsOfExerciseGoHalfwayUp(t *testing.T) {
	flags := stepFlags{step: "2 lbf ft", top: "10 lbf ft"}
	screw := mill.Tensioner{SetBy: mill.SetByTorque}
	p, err := steppedPresses(flags, screw, recording.Plan{Exercise: 2, Ramps: 1})
	if err != nil {
		t.Fatal(err)
	}
	want := "0 2 4 2 0 2 4 2 0 2 4 6 8 10 8 6 4 2"
	if got := strings.ReplaceAll(strings.Join(p.Marks, " "), " lbf ft", ""); got != want {
		t.Errorf("presses at %s, want %s", got, want)
	}
	if p, err = steppedPresses(flags, screw, recording.Plan{Exercise: 1}); err != nil || len(p.Marks) < 4+10*10 {
		t.Errorf("without an end: %d presses, %v", len(p.Marks), err)
	}
}

// TestDialMarksStandWhereTheyWerePressed wants each declared mark of the mill's
// own dial at a press, with the transducer's setting beside it.
func TestDialMarksStandWhereTheyWerePressed(t *testing.T) {
	marks := recording.Presses{As: recording.PressDial, Marks: []string{"20 psi"}}
	for _, way := range [][2]int{{80, 60}, {800, -60}} {
		for v := way[0]; v >= 80 && v <= 860; v += way[1] {
			marks.Marks = append(marks.Marks, quantityText(float64(v), "psi"))
		}
	}
	rec, err := recording.ReadFile(steppedRehearsal(t, 14, marks))
	if err != nil {
		t.Fatal(err)
	}
	set, err := pairing.FromRecording(rec)
	if err != nil {
		t.Fatal(err)
	}
	n := 0
	for _, m := range set.Marks {
		q, err := mill.ParseQuantity(m.Declared, mill.DimPressure)
		if m.As != recording.PressDial || err != nil {
			t.Fatalf("mark %+v: %v", m, err)
		}
		for _, p := range set.Pairs {
			if p.T >= m.T {
				if d := (p.Setting - q.SI) / psi; d < -6 || d > 6 { // 1 psi of noise, and the last touch of a stroke
					t.Errorf("at the press for %s the transducer shows %.1f psi", m.Declared, p.Setting/psi)
				}
				n++
				break
			}
		}
	}
	if n < 3*28 {
		t.Errorf("%d marks have a setting", n)
	}
}
