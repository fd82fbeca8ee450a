package main

import (
	"bytes"
	"math"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/recording"
	"tautramp/cmd/tautramp/visit"
)

func testScreen(t *testing.T, columns int) (*screen, *bytes.Buffer) {
	t.Helper()
	profile, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	var out bytes.Buffer
	h := recording.Header{Parsed: profile, Tensioner: "T-1", ClockFactor: 1}
	return newScreen(env{stderr: &out, columns: columns}, h, mill.US), &out
}

// status is 724 psi, 0.00655 in and 9,500 psi of band stress, the invented
// mill's working point.
func status(at time.Duration) visit.Status {
	return visit.Status{At: at, SettingSI: 724 * psi, StretchM: 0.00655 * 0.0254, StressPa: 9500 * psi, RateSI: 8 * psi, Phase: "loading", Cycle: 2, Planned: 4, Next: "pump up slowly", GoalSI: 780 * psi}
}

func TestScreenShowsTheFiguresInTheUnitsOfTheUser(t *testing.T) {
	s, _ := testScreen(t, 0)
	want := "724 gauge psi  9500 band psi  8.0 psi/s  loading  cycle 2 of 4  stretch 0.00655 in"
	if got := s.figures(status(0)); got != want {
		t.Errorf("US\n got %q\nwant %q", got, want)
	}
	s.system = mill.SI
	want = "49.92 gauge bar  65.5 band MPa  0.552 bar/s  loading  cycle 2 of 4  stretch 0.1664 mm"
	if got := s.figures(status(0)); got != want {
		t.Errorf("SI\n got %q\nwant %q", got, want)
	}
}

func TestScreenShowsDashesForWhatIsNotKnown(t *testing.T) {
	s, _ := testScreen(t, 0)
	now := status(0)
	now.StressPa = math.NaN()
	if got := s.figures(now); !strings.Contains(got, "-- band psi") {
		t.Errorf("got %q", got)
	}
}

func TestAnAlarmIsLoudAndStays(t *testing.T) {
	s, out := testScreen(t, 80)
	s.draw(status(0))
	now := status(time.Second)
	now.Alarm, now.AlarmText = visit.OverLimit, "960 psi is over the limit"
	s.draw(now)
	text := out.String()
	if !strings.Contains(text, "\a") || !strings.Contains(text, "*** STOP *** 960 psi is over the limit") {
		t.Errorf("got %q", text)
	}
}

func TestPlainLinesComeNowAndThenButEveryWordOfAdviceComesAtOnce(t *testing.T) {
	s, out := testScreen(t, 0)
	for at := range 30 {
		s.draw(status(time.Duration(at) * 100 * time.Millisecond))
	}
	now := status(3 * time.Second)
	now.Next, now.GoalSI = "hold", math.NaN()
	s.draw(now)
	lines := strings.Split(strings.TrimSpace(out.String()), "\n")
	if len(lines) != 4 || lines[0] != ">> pump up slowly (to about 780 gauge psi; limit 950 gauge psi)" || lines[3] != ">> hold" {
		t.Errorf("%d lines:\n%s", len(lines), out.String())
	}
}

func TestTheRedrawnLineFitsTheTerminal(t *testing.T) {
	for _, columns := range []int{20, 60, 80, 200} {
		s, _ := testScreen(t, columns)
		now := status(0)
		if got := s.paint(now); len(got) >= columns {
			t.Errorf("%d columns of %d", len(got), columns)
		}
		now.Alarm, now.AlarmText = visit.OverLimit, strings.Repeat("far too long ", 30)
		got := strings.TrimSuffix(strings.TrimPrefix(s.paint(now), "\a\x1b[7m"), "\x1b[0m")
		if len(got) >= columns || columns > 30 && !strings.Contains(got, "724 gauge psi") {
			t.Errorf("%d columns: %q", columns, got)
		}
	}
}

func TestEveryKeyIsAnswered(t *testing.T) {
	for reply, want := range map[visit.Reply]string{
		{Kind: visit.ZeroTaken, SettingSI: 34 * psi}:             "key: zero taken, at 34 gauge psi",
		{Kind: visit.ZeroRefused, SettingSI: 724 * psi}:          "key: kept for the result, not used here: the band is not surely slack, at 724 gauge psi",
		{Kind: visit.MarkTaken, SettingSI: 500 * psi, Number: 2}: "key: mark 2 taken, at 500 gauge psi",
	} {
		s, out := testScreen(t, 0)
		now := status(0)
		now.Reply = reply
		s.draw(now)
		if !strings.Contains(out.String(), want+"\n") {
			t.Errorf("want %q in %q", want, out.String())
		}
	}
}
