package station_test

import (
	"bytes"
	"context"
	"io"
	"math"
	"net"
	"slices"
	"strings"
	"testing"
	"testing/synctest"
	"time"

	"tautramp/acquire"
	"tautramp/acquire/mill"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
	"tautramp/analyze/gauge"
	"tautramp/cmd/tautramp/station"
)

const psi = 6894.757293168361 // Pa, exact inch, pound and standard gravity

// memory is a recording's file in memory.
type memory struct{ bytes.Buffer }

func (*memory) Sync() error  { return nil }
func (*memory) Close() error { return nil }

// session is one bench test on the simulated bench.
type session struct {
	plan     gauge.Plan
	header   recording.Header
	rig      *simrig.Rig
	summary  station.Summary
	err      error
	statuses []station.Status
	rec      *recording.Recording
}

// builtIn is a plan that the program brings, made for a range.
func builtIn(t *testing.T, name, high string) gauge.Plan {
	t.Helper()
	text, err := gauge.PlanText(name)
	if err != nil {
		t.Fatal(err)
	}
	p, err := gauge.ParsePlan(text)
	if err != nil {
		t.Fatal(err)
	}
	if high == "" {
		return p
	}
	q, err := mill.ParseQuantity(high)
	if err != nil {
		t.Fatal(err)
	}
	if p, err = p.For(mill.Setting{}, mill.Setting{Quantity: q}); err != nil {
		t.Fatal(err)
	}
	return p
}

// onBench is a bench whose operator follows the plan.
func onBench(p gauge.Plan) simrig.BenchConfig {
	c := simrig.BenchConfig{
		Length: !p.ReferenceStreams(), BothRead: p.Kind == gauge.Transducer, Seed: 11,
		LowSI: p.Low.SI, HighSI: p.High.SI, Down: p.Down, Repeats: p.Repeats, Runs: p.Runs, Exercise: p.Exercise,
		Way: simrig.BenchWay(p.Found), WarmUpS: p.WarmUpS, SettleS: p.SettleS, WindowS: p.WindowS, TopHoldS: p.TopHoldS,
	}
	c.Reference.Serial, c.Tested.Serial = "QF-R-0031", "QF-P-1107" // of the example profile
	for _, q := range p.Points {
		c.Points = append(c.Points, q.SI)
	}
	for _, s := range p.AllSeries() {
		c.Tapped = append(c.Tapped, s == gauge.Tapped)
	}
	return c
}

func headerOf(p gauge.Plan, boards int) recording.Header {
	h := recording.Header{Program: "test", Started: time.Now(), Source: recording.Live, ClockFactor: 1, Profile: mill.Example(),
		Bench: &recording.Bench{Plan: string(p.Encode()), Tested: "pressure transducer", Reference: "bench reference"}}
	for i := range boards {
		h.Devices = append(h.Devices, string(rune('A'+i)))
	}
	return h
}

// run runs a whole test in a bubble of pretended time. watch may look at each
// status and end the test by returning false.
func run(t *testing.T, p gauge.Plan, c simrig.BenchConfig, watch func(station.Status) bool) *session {
	t.Helper()
	s := &session{plan: p}
	synctest.Test(t, func(t *testing.T) {
		var err error
		if s.rig, err = simrig.NewBench(c); err != nil {
			t.Fatal(err)
		}
		ctx, cancel := context.WithTimeout(t.Context(), 3*time.Hour)
		defer cancel()
		clock := acquire.NewClock(1)
		s.header = headerOf(p, len(s.rig.Boards()))
		var devices []acquire.Device
		for i, b := range s.rig.Boards() {
			devices = append(devices, acquire.Device{Name: s.header.Devices[i], Dial: func(context.Context) (io.ReadWriteCloser, error) {
				host, far := net.Pipe()
				go b.Serve(ctx, far, clock)
				return host, nil
			}})
		}
		file := &memory{}
		out, err := recording.NewWriter(file, s.header, 0)
		if err != nil {
			t.Fatal(err)
		}
		bench, err := station.New(out.Header())
		if err != nil {
			t.Fatal(err)
		}
		stopped, stop := context.WithCancel(ctx)
		defer stop()
		s.summary, s.err = station.Run(stopped, station.Config{Bench: bench,
			Acquire: acquire.Config{Devices: devices, Clock: clock, Out: out},
			OnStatus: func(st station.Status) {
				s.statuses = append(s.statuses, st)
				if watch != nil && !watch(st) {
					stop()
				}
			}})
		if err := out.Close(clock.Now(), clock.Wall()); err != nil {
			t.Fatal(err)
		}
		if s.rec, err = recording.Read(&file.Buffer); err != nil {
			t.Fatal(err)
		}
	})
	return s
}

// events are the texts of a kind.
func (s *session) events(kind recording.EventKind) (texts []string) {
	for _, e := range s.rec.Entries {
		if e.Event != nil && e.Event.Kind == kind {
			texts = append(texts, e.Event.Text)
		}
	}
	return texts
}

func (s *session) again(t *testing.T) *station.Bench {
	t.Helper()
	b, err := station.Read(s.rec)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// finished wants a test whose plan is done, without alarms and refusals.
func (s *session) finished(t *testing.T) {
	t.Helper()
	if s.err != nil || !s.summary.Finished || s.summary.Alarm != "" || s.summary.Taken != s.summary.Planned {
		t.Fatalf("%v: %+v\nlast: %+v\nrefused: %s", s.err, s.summary, s.statuses[len(s.statuses)-1], strings.Join(s.events(recording.Refused), "\n"))
	}
}

// TestADialIsTestedWithoutAKey runs the ten-mark plan, up and down, untapped
// and tapped, by foot switch alone, and wants at each point what was true.
func TestADialIsTestedWithoutAKey(t *testing.T) {
	if testing.Short() {
		t.Skip("the full run has it")
	}
	p := builtIn(t, "dial", "1000 psi")
	c := onBench(p)
	c.Gauge = simrig.BenchGauge{ZeroSI: 3 * psi, Span: 1.01, BowSI: 4 * psi, LoopSI: 8 * psi, StickSI: 2 * psi, TapSI: 1 * psi}
	s := run(t, p, c, nil)
	s.finished(t)
	for _, kind := range []recording.EventKind{recording.Refused, recording.Again} {
		if texts := s.events(kind); len(texts) > 0 {
			t.Errorf("%s: %q", kind, texts)
		}
	}
	test := s.again(t).Test(s.rec.Seal)
	if len(test.Points) != 38 || len(test.ZeroBefore) != 2 || len(test.ZeroAfter) != 2 {
		t.Fatalf("%d points, %d and %d zeros", len(test.Points), len(test.ZeroBefore), len(test.ZeroAfter))
	}
	var presses []simrig.BenchPress
	for _, press := range s.rig.BenchPresses() {
		if press.TrueSI > 20*psi { // not the zeros
			presses = append(presses, press)
		}
	}
	for i, point := range test.Points {
		// The reference's noise is 0.05 psi, and 40 readings make a point.
		if got, want := point.Reference.SI, presses[i].TrueSI; math.Abs(got-want) > 0.1*psi || point.Reference.N < 35 {
			t.Errorf("point %d: reference %.2f psi of %d, true %.2f", i, got/psi, point.Reference.N, want/psi)
		}
		if point.Indicated.SI != point.Nominal.SI || point.Indicated.N != 0 {
			t.Errorf("point %d: indicated %+v, the mark is %s", i, point.Indicated, point.Nominal)
		}
	}
	if !slices.ContainsFunc(s.statuses, func(st station.Status) bool { return st.Step == station.TopHold && st.WaitS > 50 }) {
		t.Error("the hold at the top was never counted down")
	}
}
