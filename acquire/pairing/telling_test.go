package pairing

import (
	"reflect"
	"testing"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

func TestHowTheVisitEnded(t *testing.T) {
	const s = time.Second
	closed := func(n string) recording.Entry { return event(-1, 5*s, recording.CycleEnd, n) }
	stopped, complete := event(-1, 9*s, recording.Interrupt, ""), event(-1, 8*s, recording.PlanClosed, "")
	for _, c := range []struct {
		name   string
		events []recording.Entry
		ramps  int
		want   string
	}{
		{"a card", nil, 3, ""},
		{"before the first cycle", []recording.Entry{stopped}, 3, "stopped by the operator after 0 of 4 cycles"},
		{"in the second", []recording.Entry{closed("1"), stopped}, 3, "stopped by the operator after 1 of 4 cycles"},
		{"without a number of ramps", []recording.Entry{closed("1"), closed("2"), stopped}, 0, "stopped by the operator after 2 cycles"},
		{"one, without a number of ramps", []recording.Entry{closed("1"), stopped}, 0, "stopped by the operator after 1 cycle"},
		{"the port went", []recording.Entry{closed("2"), event(0, 9*s, recording.Abandoned, "no answer")}, 3, "given up by the program after 2 of 4 cycles: no answer"},
		{"as planned", []recording.Entry{closed("4"), complete}, 3, "all planned cycles were closed"},
		{"stopped when all was done", []recording.Entry{closed("4"), complete, stopped}, 3, "all planned cycles were closed"},
	} {
		h := header(t, 1)
		h.Plan.Ramps = c.ramps
		if got := build(t, h, append(oneBoard(t, 5).lines, c.events...)).Ended; got != c.want {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
}

func TestAlarmsOfTheVisitAreKept(t *testing.T) {
	set := build(t, header(t, 1), append(oneBoard(t, 5).lines,
		event(-1, 12*time.Second, recording.Alarm, "limit: above the limit"),
		event(-1, 13*time.Second, recording.Undo, ""))) // takes back a mark, never an alarm
	if want := []Mark{{T: 12, Kind: Alarm, Text: "limit: above the limit"}}; !reflect.DeepEqual(set.Alarms, want) || len(set.Marks) != 0 {
		t.Errorf("alarms %v, marks %v", set.Alarms, set.Marks)
	}
}

// SPEC 5.1: what a device with sim=1 measures is a rehearsal, at any clock.
func TestOneSimulatedDeviceMakesARehearsal(t *testing.T) {
	for _, simulated := range []bool{false, true} {
		entries, _, _ := twoBoards(t, 1, 10, 0.011, 0.097)
		for i := range entries {
			if r, _ := protocol.Parse(entries[i].Wire); r != nil && entries[i].Device == 1 {
				if here, ok := r.(protocol.Here); ok {
					here.Simulated = simulated
					entries[i].Wire = wire(t, here)
				}
			}
		}
		if set := build(t, header(t, 2), entries); set.Simulated != simulated {
			t.Errorf("device says %v, set says %v", simulated, set.Simulated)
		}
		live, err := NewLive(header(t, 2))
		if err != nil {
			t.Fatal(err)
		}
		for _, e := range entries {
			live.Add(e)
		}
		if live.Simulated() != simulated {
			t.Errorf("live: device says %v, live says %v", simulated, live.Simulated())
		}
	}
}
