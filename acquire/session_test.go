package acquire

import (
	"bytes"
	"context"
	"errors"
	"io"
	"net"
	"slices"
	"strconv"
	"strings"
	"sync/atomic"
	"testing"
	"testing/synctest"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

func TestOnEntrySeesTheFileInItsOrder(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		a, b := twoBoards()
		r := newRig(t, a, b)
		r.end = 6*time.Second + 50*time.Millisecond
		var seen []recording.Entry
		marks := 0
		r.cfg.OnEntry = func(e recording.Entry) []recording.Event {
			seen = append(seen, e)
			if wordOf(e) != "val" {
				return nil
			}
			marks++
			return []recording.Event{{Kind: recording.Mark, Text: "first"}, {Kind: recording.Mark, Text: "second"}}
		}
		entries, err := r.run()
		if err != nil {
			t.Fatal(err)
		}
		file := entries[:len(entries)-1] // the last is Close's own
		if len(seen) != len(file) {
			t.Fatalf("saw %d entries, the file has %d", len(seen), len(file))
		}
		for i := range file {
			if script(seen[i:i+1]) != script(file[i:i+1]) || seen[i].At != file[i].At || !bytes.Equal(seen[i].Wire, file[i].Wire) {
				t.Fatalf("entry %d: saw %+v, the file has %+v", i, seen[i], file[i])
			}
			if wordOf(file[i]) == "val" && (file[i+1].Event.Text != "first" || file[i+2].Event.Text != "second") {
				t.Fatalf("entry %d is not followed by its two events", i)
			}
		}
		if marks == 0 {
			t.Error("no samples came in")
		}
	})
}

func TestOperatorsWordsAreRecorded(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		r := newRig(t, oneBoard())
		operator := make(chan recording.Event, 1)
		r.cfg.Operator = operator
		ctx, cancel := context.WithCancel(t.Context())
		defer time.AfterFunc(4*time.Second, func() { operator <- recording.Event{Kind: recording.ZeroMark, Text: "slack"} }).Stop()
		defer time.AfterFunc(5*time.Second, func() {
			operator <- recording.Event{Kind: recording.Interrupt}
			cancel()
			close(operator)
		}).Stop()
		if err := Run(ctx, r.cfg); err != nil {
			t.Fatal(err)
		}
		if err := r.cfg.Out.Close(r.cfg.Clock.Now(), r.cfg.Clock.Wall()); err != nil {
			t.Fatal(err)
		}
		rec, err := recording.Read(strings.NewReader(r.file.String()))
		if err != nil {
			t.Fatal(err)
		}
		zero, stopped := texts(rec.Entries, recording.ZeroMark), texts(rec.Entries, recording.Interrupt)
		if !slices.Equal(zero, []string{"slack"}) || len(stopped) != 1 {
			t.Errorf("marks %q, stops %q; want one each", zero, stopped)
		}
	})
}

// What the operator said before the end is recorded, even when the stream had
// no turn to take it.
func TestLastWordsAreTaken(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		r := newRig(t, oneBoard())
		operator := make(chan recording.Event, 2)
		r.cfg.Operator = operator
		s := newSession(t.Context(), r.cfg, newGate(1, measures(protocol.Pressure, protocol.Extension)))
		defer s.waitTicks()
		close(s.items)
		operator <- recording.Event{Kind: recording.Mark}
		operator <- recording.Event{Kind: recording.Interrupt}
		s.consume()
		if len(operator) != 0 {
			t.Errorf("%d events are left", len(operator))
		}
	})
}

func TestEntriesOutOfOrderAreNoSleep(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		r := newRig(t, oneBoard())
		pauses := 0
		r.cfg.OnEntry = func(e recording.Entry) []recording.Event {
			if wordOf(e) == string(recording.Paused) {
				pauses++
			}
			return nil
		}
		s := newSession(t.Context(), r.cfg, newGate(1, measures(protocol.Pressure, protocol.Extension)))
		defer s.waitTicks()
		start := time.Now()
		for _, e := range []struct{ at, wall time.Duration }{
			{1, 1}, {2, 2}, {5, 65}, {4, 4}, {5, 5}, {6, 66}, // seconds; asleep between 2 and 5
		} {
			s.notePause(e.at*time.Second, start.Add(e.wall*time.Second))
		}
		if pauses != 1 {
			t.Errorf("%d pauses, want 1", pauses)
		}
	})
}

// failing is a file that fails at its n-th write.
type failing struct {
	memory
	left int
}

var errDiskFull = errors.New("no space left")

func (f *failing) Write(p []byte) (int, error) {
	if f.left--; f.left < 0 {
		return 0, errDiskFull
	}
	return f.memory.Write(p)
}

func TestFailureOfTheRecordingEndsTheCaptureAtOnce(t *testing.T) {
	for n := 1; n < 12; n++ {
		t.Run("write "+strconv.Itoa(n), func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				a, b := twoBoards()
				r := newRig(t, a, b)
				file := &failing{left: n}
				var err error
				if r.cfg.Out, err = recording.NewWriter(file, r.cfg.Out.Header(), 0); err != nil {
					t.Fatal(err)
				}
				begun := time.Now()
				if err := Run(t.Context(), r.cfg); a.count(protocol.Rest)+b.count(protocol.Rest) != 0 || !errors.Is(err, errDiskFull) {
					t.Fatalf("error %v, want the disk's", err)
				}
				// The n-th block is due n half seconds after the start.
				if took := time.Since(begun); took > time.Duration(n)*500*time.Millisecond+200*time.Millisecond {
					t.Errorf("ended after %v", took)
				}
				rec, err := recording.Read(strings.NewReader(file.String()))
				if err != nil || rec.Outcome != recording.Torn {
					t.Errorf("left behind: %v, %v; want a torn recording", rec, err)
				}
			})
		})
	}
}

// sleepy is a clock whose wall runs on while the machine sleeps.
type sleepy struct {
	Clock
	asleep *atomic.Int64
}

func (s sleepy) Wall() time.Time { return s.Clock.Wall().Add(time.Duration(s.asleep.Load())) }

func TestSleepOfTheComputerIsRecorded(t *testing.T) {
	for name, test := range map[string]struct {
		jump time.Duration
		want []string
	}{
		"an hour asleep":                  {time.Hour, []string{"3600.000"}},
		"the wall clock is put back":      {-3 * time.Second, []string{"-3.000"}},
		"a correction below two seconds":  {1900 * time.Millisecond, nil},
		"a correction of the other sense": {-1900 * time.Millisecond, nil},
	} {
		t.Run(name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				r := newRig(t, oneBoard())
				r.end = 8 * time.Second
				var asleep atomic.Int64
				r.cfg.Clock = sleepy{r.cfg.Clock, &asleep}
				defer time.AfterFunc(5*time.Second, func() { asleep.Store(int64(test.jump)) }).Stop()
				entries, err := r.run()
				if err != nil {
					t.Fatal(err)
				}
				if got := texts(entries, recording.Paused); !slices.Equal(got, test.want) {
					t.Errorf("recorded pauses %q, want %q", got, test.want)
				}
			})
		})
	}
}

func TestSlowDriftOfTheWallClockIsNoSleep(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		r := newRig(t, oneBoard())
		r.end = 60 * time.Second
		var ahead atomic.Int64
		r.cfg.Clock = sleepy{r.cfg.Clock, &ahead}
		stop := time.AfterFunc(0, func() {
			for range 100 {
				time.Sleep(500 * time.Millisecond)
				ahead.Add(int64(100 * time.Millisecond))
			}
		})
		defer stop.Stop()
		entries, err := r.run()
		if err != nil {
			t.Fatal(err)
		}
		if got := texts(entries, recording.Paused); got != nil {
			t.Errorf("recorded pauses %q for a drift", got)
		}
	})
}

func TestTimeEchoesWhileRunning(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := oneBoard()
		b.heard = func(l *life, c protocol.Command, n int) bool {
			return c.Verb == protocol.EchoMe && n == 2 // one is never answered: it is not repeated
		}
		r := newRig(t, b)
		r.end = 100 * time.Second
		entries, err := r.run()
		if err != nil {
			t.Fatal(err)
		}
		echoes := 0
		for _, e := range entries {
			if e.Wire != nil && wordOf(e) == "echo" {
				echoes++
			}
		}
		if b.count(protocol.EchoMe) != 4 || echoes != 3 {
			t.Errorf("asked %d times, answered %d times; want 4 and 3 in 100 s", b.count(protocol.EchoMe), echoes)
		}
	})
}

func TestTooLongLinesAreCutAndCounted(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := oneBoard()
		b.greeting = strings.Repeat("x", 500) + "\nshort\n" + strings.Repeat("y", 119) + "\n\n" + strings.Repeat("z", 121) + "\nend\n"
		r := newRig(t, b)
		r.end = 3 * time.Second
		entries, err := r.run()
		if err != nil {
			t.Fatal(err)
		}
		// 500 - 120 bytes of the first line, 121 - 120 of the last one.
		if got := texts(entries, recording.Discarded); !slices.Equal(got, []string{"380", "1"}) {
			t.Errorf("discarded %q", got)
		}
	})
}

// deaf takes no bytes: its Write hangs until Close, if then.
type deaf struct {
	net.Conn
	never chan struct{}
}

func (d deaf) Write([]byte) (int, error) { <-d.never; return 0, io.ErrClosedPipe }

func TestWriteThatHangsDoesNotHoldTheCapture(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := oneBoard()
		r := newRig(t, b)
		never := make(chan struct{})
		dial := r.cfg.Devices[0].Dial
		r.cfg.Devices[0].Dial = func(ctx context.Context) (io.ReadWriteCloser, error) {
			rwc, err := dial(ctx)
			return deaf{rwc.(net.Conn), never}, err
		}
		begun := time.Now()
		_, err := r.run()
		close(never)
		if !errors.Is(err, ErrNoAnswer) && !errors.Is(err, ErrGaveUp) {
			t.Errorf("error %v", err)
		}
		if took := time.Since(begun); took > 40*time.Second {
			t.Errorf("held for %v", took)
		}
	})
}

func TestWaitsOfAFastClockStayReal(t *testing.T) {
	for factor, want := range map[float64]Config{
		1: {BootWait: 2500 * time.Millisecond, AnswerWait: time.Second, SilentAfter: 3 * time.Second,
			GiveUpAfter: 20 * time.Second, EchoEvery: 30 * time.Second},
		100: {BootWait: 2500 * time.Millisecond, AnswerWait: 100 * time.Second, SilentAfter: 200 * time.Second,
			GiveUpAfter: 200 * time.Second, EchoEvery: 50 * time.Second},
	} {
		got := Config{Clock: NewClock(factor)}
		got.leastWaits()
		if got.BootWait != want.BootWait || got.AnswerWait != want.AnswerWait || got.SilentAfter != want.SilentAfter ||
			got.GiveUpAfter != want.GiveUpAfter || got.EchoEvery != want.EchoEvery {
			t.Errorf("factor %v: waits %+v, want %+v", factor, got, want)
		}
	}
}

func TestRunRefusesAConfigurationThatDoesNotFit(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		for name, change := range map[string]func(*Config){
			"no clock":         func(c *Config) { c.Clock = nil },
			"no recording":     func(c *Config) { c.Out = nil },
			"no devices":       func(c *Config) { c.Devices = nil },
			"too many devices": func(c *Config) { c.Devices = append(c.Devices, c.Devices[0]) },
		} {
			cfg := newRig(t, oneBoard()).cfg
			change(&cfg)
			if Run(t.Context(), cfg) == nil {
				t.Errorf("%s: accepted", name)
			}
		}
	})
}

// A consumer that is too slow holds the readers back and loses nothing.
func TestSlowConsumerLosesNoLine(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := oneBoard()
		b.period = time.Millisecond
		r := newRig(t, b)
		r.end = 5 * time.Second
		last := 0
		r.cfg.OnEntry = func(e recording.Entry) []recording.Event {
			if wordOf(e) == "val" {
				time.Sleep(3 * time.Millisecond)
				rec, _ := protocol.Parse(e.Wire)
				if seq := int(rec.(protocol.Val).Seq); seq != last+1 {
					t.Errorf("sample %d after %d", seq, last)
				}
				last++
			}
			return nil
		}
		if _, err := r.run(); err != nil {
			t.Fatal(err)
		}
		if last < 100 {
			t.Errorf("%d samples only", last)
		}
	})
}
