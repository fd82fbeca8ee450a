package station_test

import (
	"errors"
	"strings"
	"testing"

	"tautramp/acquire/recording"
	"tautramp/cmd/tautramp/station"
)

// Nothing is taken while the tested instrument is not read, by press or by
// rest, and the operator is told.
func TestNothingIsTakenWithoutTheTestedInstrument(t *testing.T) {
	for _, way := range []string{"plateau", "press"} {
		plan := short(t, `kind = "transducer"`, `find = "`+way+`"`, "steps = 4", "steady_percent = 0.05")
		cfg := onBench(plan)
		cfg.Tested.Absent = true
		s := run(t, plan, cfg, func(st station.Status) bool { return st.At.Seconds() < 60 })
		if x := s.again(t).Test(""); len(x.Points)+len(x.ZeroBefore)+len(s.events(recording.Taken)) > 0 {
			t.Errorf("by %s: taken without a reading: %q", way, s.events(recording.Taken))
		}
		told := strings.Join(s.events(recording.Refused), "; ")
		if !strings.Contains(told, "no reading of the tested instrument") {
			t.Errorf("by %s the operator was told: %q", way, told)
		}
	}
}

// Where two channels measure the plan's quantity and no serial number tells,
// the first is not taken for the reference.
func TestTheReferenceIsNotGuessed(t *testing.T) {
	plan := dialPlan(t)
	cfg := onBench(plan)
	cfg.BothRead = true
	cfg.Reference.Serial = "another"
	s := run(t, plan, cfg, func(st station.Status) bool { return st.At.Seconds() < 60 })
	if !errors.Is(s.err, station.ErrNoChannel) || !strings.Contains(s.err.Error(), "which of 1a, 1b is the reference?") {
		t.Errorf("it went on: %v", s.err)
	}
}
