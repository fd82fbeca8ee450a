package findings_test

import (
	"fmt"
	"testing"

	"tautramp/analyze/findings"
)

// TestHealthyRigs counts the healthy rigs that are said to need more than
// watching; -rigs as for TestConfusion, five of them for each.
func TestHealthyRigs(t *testing.T) {
	if testing.Short() {
		t.Skip("runs many simulated rigs")
	}
	rigs := 0
	fmt.Sscan(flagText("rigs"), &rigs)
	if rigs > 0 {
		fmt.Println(runHealthy(t, 5*rigs, streamOf()))
		return
	}
	alarms, line := healthy(t, 8, streamOf())
	// At 1 in 200, eight rigs raise two or more in 1 of 1,400 runs.
	if alarms > 1 {
		t.Error(line)
	}
}

func runHealthy(t *testing.T, rigs int, stream uint64) string {
	t.Helper()
	_, line := healthy(t, rigs, stream)
	return line
}

func healthy(t *testing.T, rigs int, stream uint64) (alarms int, line string) {
	t.Helper()
	watched := 0
	for seed := range rigs {
		s, err := draw(uint64(seed), stream^0x4ea1)
		if err != nil {
			t.Fatal(err)
		}
		rep, err := look(s.c)
		if err != nil {
			t.Fatal(err)
		}
		watch, alarm := false, false
		for _, f := range rep.Findings {
			watch = true
			alarm = alarm || f.Level != findings.Watch
			if flagText("loud") == "true" {
				fmt.Printf("healthy seed %d %s count %g: %s %.3f %s %s\n", seed, s.c.Drive.Shape, s.countM, f.Key, f.Certainty, f.Level, measureOf(rep, f))
			}
		}
		if watch {
			watched++
		}
		if alarm {
			alarms++
		}
	}
	return alarms, fmt.Sprintf("%d healthy rigs: %d named anything, %d anything above watch (%s)", rigs, watched, alarms, share(alarms, rigs))
}

func measureOf(rep *findings.Report, f findings.Finding) string {
	return fmt.Sprintf("%s %.4g +- %.2g", f.Evidence[0].Key, f.Evidence[0].Is.Value, f.Evidence[0].Is.Std())
}
