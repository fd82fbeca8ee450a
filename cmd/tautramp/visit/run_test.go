package visit

import (
	"bytes"
	"context"
	"errors"
	"io"
	"net"
	"strings"
	"testing"
	"testing/synctest"
	"time"

	"tautramp/acquire"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
	"tautramp/protocol"
)

// fastClock is a clock of which only the factor matters.
type fastClock struct{ acquire.Clock }

func (fastClock) Factor() float64 { return 40 }

type memory struct{ bytes.Buffer }

func (*memory) Sync() error  { return nil }
func (*memory) Close() error { return nil }

// brisk is a drive that ramps at 20 psi/s.
func brisk(ramps int) simrig.Drive {
	exercise := 1
	if ramps == 0 {
		exercise, ramps = -1, 1
	}
	return simrig.Drive{RatePaS: 20 * psiPa, Exercise: exercise, Ramps: ramps, RestS: 6, HoldLowS: 7}
}

// rehearse runs a visit on a simulated rig, all in memory and in no time: a
// pipe for each board.
func rehearse(t *testing.T, ctx context.Context, cfg Config, rig simrig.Config) (Summary, *recording.Recording, error) {
	t.Helper()
	var sum Summary
	var rec *recording.Recording
	var failed error
	synctest.Test(t, func(t *testing.T) {
		clock := acquire.NewClock(1)
		rig.SlackTimeS = 3
		rig.Profile, rig.Tensioner, rig.Band, rig.Seed = cfg.Header.Parsed, "T-1", "QW-6", 1
		r, err := simrig.New(rig)
		if err != nil {
			t.Fatal(err)
		}
		over, stop := context.WithCancel(context.Background())
		h := cfg.Header
		h.Started, h.Program, h.Plan, h.Devices = clock.Wall(), "test", cfg.Plan, nil
		cfg.Acquire.Devices = nil
		for i, b := range r.Boards() {
			name := "pipe" + string(rune('1'+i))
			h.Devices = append(h.Devices, name)
			cfg.Acquire.Devices = append(cfg.Acquire.Devices, acquire.Device{Name: name, Dial: func(context.Context) (io.ReadWriteCloser, error) {
				host, device := net.Pipe()
				go b.Serve(over, device, clock)
				return host, nil
			}})
		}
		file := &memory{}
		out, err := recording.NewWriter(file, h, time.Second)
		if err != nil {
			t.Fatal(err)
		}
		cfg.Header, cfg.Acquire.Out, cfg.Acquire.Clock = h, out, clock
		sum, failed = Run(ctx, cfg)
		stop()
		if err := out.Close(clock.Now(), clock.Wall()); err != nil {
			t.Fatal(err)
		}
		synctest.Wait()
		if rec, err = recording.Read(bytes.NewReader(file.Bytes())); err != nil {
			t.Fatal(err)
		}
	})
	return sum, rec, failed
}

func kinds(rec *recording.Recording) string {
	var words []string
	for _, e := range rec.Entries {
		if e.Event == nil {
			continue
		}
		switch e.Event.Kind {
		case recording.CycleEnd, recording.PlanClosed, recording.Interrupt:
			words = append(words, string(e.Event.Kind)+e.Event.Text)
		case recording.Alarm:
			kind, _, _ := strings.Cut(e.Event.Text, ":")
			words = append(words, "alarm-"+kind)
		}
	}
	return strings.Join(words, " ")
}

func TestRehearsedVisitEndsByItself(t *testing.T) {
	for name, boards := range map[string][]simrig.BoardSpec{
		"one board":  nil,
		"two boards": {{TickPPM: 150}, {TickPPM: -150}},
	} {
		t.Run(name, func(t *testing.T) {
			if testing.Short() && boards == nil {
				t.Skip("the long run; two boards do it all")
			}
			cfg := config(t)
			cfg.Plan = recording.Plan{Exercise: 1, Ramps: 1}
			sum, rec, err := rehearse(t, context.Background(), cfg, simrig.Config{Boards: boards, Drive: brisk(1)})
			if err != nil {
				t.Fatal(err)
			}
			if got := kinds(rec); got != "cycle1 cycle2 complete" {
				t.Errorf("recorded %q", got)
			}
			if sum.Cycles != 2 || !sum.Closed || sum.Alarm != "" || rec.Outcome != recording.Complete {
				t.Errorf("summary %+v, %s", sum, rec.Outcome)
			}
			set, err := pairing.FromRecording(rec)
			if err != nil || len(set.Pairs) < 1000 {
				t.Fatalf("%v; %d pairs", err, len(set.Pairs))
			}
			for _, c := range set.Counters {
				if c.Lost != 0 || c.Rejected != 0 {
					t.Errorf("counters %+v", c)
				}
			}
		})
	}
}

func TestRehearsedHandPumpAndStairs(t *testing.T) {
	if testing.Short() {
		t.Skip("the long run")
	}
	for _, shape := range []simrig.Shape{simrig.Strokes, simrig.Stairs} {
		cfg := config(t)
		cfg.Plan = recording.Plan{Exercise: 1, Ramps: 2}
		sum, rec, err := rehearse(t, context.Background(), cfg, simrig.Config{Drive: simrig.Drive{Shape: shape, Exercise: 1, Ramps: 2}})
		if err != nil || sum.Cycles != 3 || !sum.Closed || sum.Alarm != "" {
			t.Errorf("%s: %v, %+v, recorded %q", shape, err, sum, kinds(rec))
		}
	}
}

func TestRehearsedSlipOfTheRigStops(t *testing.T) {
	cfg := config(t)
	cfg.Plan = recording.Plan{Ramps: 1}
	// The mount lets go at about 500 psi and shows 0.1 mm too little from then on.
	rig := simrig.Config{Drive: brisk(0), Stretch: simrig.Stretch{SlipM: -1e-4, SlipAtS: 32}}
	sum, rec, err := rehearse(t, context.Background(), cfg, rig)
	if err != nil || !strings.Contains(sum.Alarm, "does not follow") || !strings.Contains(kinds(rec), "alarm-under-reading") {
		t.Errorf("%v, %+v, recorded %q", err, sum, kinds(rec))
	}
}

func TestRehearsedIndicatorThatFallsOutStops(t *testing.T) {
	if testing.Short() {
		t.Skip("the long run; TestSensorThatVanishesWhileTheSettingRises is the short one")
	}
	cfg := config(t)
	cfg.Plan = recording.Plan{Ramps: 1}
	rig := simrig.Config{Drive: brisk(0), Indicator: simrig.Sensor{AbsentAtS: 25, AbsentForS: 5}}
	sum, rec, err := rehearse(t, context.Background(), cfg, rig)
	if err != nil || !strings.Contains(sum.Alarm, "no reading of the stretch") || kinds(rec) != "alarm-no reading cycle1 complete" {
		t.Errorf("%v, %+v, recorded %q", err, sum, kinds(rec))
	}
}

func TestOperatorEndsAVisit(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cfg := config(t)
	seen := 0
	cfg.OnStatus = func(Status) {
		if seen++; seen == 100 {
			cancel()
		}
	}
	sum, rec, err := rehearse(t, ctx, cfg, simrig.Config{})
	if err != nil || kinds(rec) != "stopped" || sum.Reason != "stopped by the operator" || rec.Outcome != recording.Complete {
		t.Errorf("%v, %+v, recorded %q, %s", err, sum, kinds(rec), rec.Outcome)
	}
	// The board was told to rest: its answer is the last thing it says.
	last := ""
	for _, e := range rec.Entries {
		if e.Event == nil {
			last = string(e.Wire)
		}
	}
	if r, bad := protocol.Parse([]byte(last)); bad != nil || r != (protocol.Did{Token: r.(protocol.Did).Token, Verb: protocol.Rest}) {
		t.Errorf("last line %q", last)
	}
}

func TestOperatorsEventsArePassedOn(t *testing.T) {
	operator := make(chan recording.Event, 2)
	operator <- recording.Event{Kind: recording.Mark, Text: "pump squeals"}
	operator <- recording.Event{Kind: recording.ZeroMark}
	close(operator)
	ctx, cancel := context.WithCancel(context.Background())
	cfg := config(t)
	cfg.Acquire.Operator = operator
	seen := 0
	cfg.OnStatus = func(Status) {
		if seen++; seen == 50 {
			cancel()
		}
	}
	_, rec, err := rehearse(t, ctx, cfg, simrig.Config{})
	if err != nil {
		t.Fatal(err)
	}
	var marks []string
	for _, e := range rec.Entries {
		if e.Event != nil && (e.Event.Kind == recording.Mark || e.Event.Kind == recording.ZeroMark) {
			marks = append(marks, e.Event.Text)
		}
	}
	if len(marks) != 2 || marks[0] != "pump squeals" {
		t.Errorf("marks %q", marks)
	}
}

func TestCaptureThatFailsIsSummedUp(t *testing.T) {
	cfg := config(t)
	h := cfg.Header
	h.Program = "test"
	out, err := recording.NewWriter(&memory{}, h, time.Second)
	if err != nil {
		t.Fatal(err)
	}
	gone := errors.New("no such port")
	cfg.Acquire = acquire.Config{Out: out, Clock: acquire.NewClock(1000), Devices: []acquire.Device{{Name: "port", Dial: func(context.Context) (io.ReadWriteCloser, error) { return nil, gone }}}}
	sum, err := Run(context.Background(), cfg)
	if err == nil || sum.Reason != "the capture failed" {
		t.Errorf("%v, %+v", err, sum)
	}
}
