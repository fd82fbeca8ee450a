package acquire

import (
	"context"
	"path/filepath"
	"strings"
	"testing"
	"testing/synctest"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

func TestTwoBoardsAtAThousandLinesEachLoseNone(t *testing.T) {
	lasting := 20 * time.Second
	if testing.Short() {
		lasting = 2 * time.Second
	}
	synctest.Test(t, func(t *testing.T) {
		a, b := twoBoards()
		a.period, b.period = time.Millisecond, time.Millisecond
		r := newRig(t, a, b)
		r.end = time.Second + lasting
		entries, err := r.run()
		if err != nil {
			t.Fatal(err)
		}
		count := [2]int{}
		for _, e := range entries {
			if rec, _ := protocol.Parse(e.Wire); e.Wire != nil {
				if v, ok := rec.(protocol.Val); ok {
					count[e.Device]++
					if v.Seq != uint16(count[e.Device]) {
						t.Fatalf("device %d: sample %d has number %d", e.Device, count[e.Device], v.Seq)
					}
				}
			}
		}
		if want := int(lasting/time.Millisecond) * 9 / 10; count[0] < want || count[1] < want {
			t.Errorf("%v samples, want at least %d of each board", count, want)
		}
	})
}

// Two boards send as fast as the capture takes it, into a file on disk.
func BenchmarkTwoBoards(b *testing.B) {
	line, err := protocol.Append(nil, protocol.Val{Channel: 'a', Seq: 7, Tick: 123456, Status: protocol.Good, Count: 7240, HasCount: true})
	if err != nil {
		b.Fatal(err)
	}
	const block = 20
	left, right := twoBoards()
	ctx, cancel := context.WithCancel(b.Context())
	defer cancel()
	for _, board := range []*board{left, right} {
		board.bootTime, board.period = 0, time.Hour
		board.heard = func(l *life, c protocol.Command, n int) bool {
			if c.Verb != protocol.Run {
				return false
			}
			l.answer(c)
			for range b.N / block / 2 {
				l.raw(strings.Repeat(string(line), block))
			}
			if board == left {
				time.AfterFunc(100*time.Millisecond, cancel)
			}
			return true
		}
	}
	h := newHeader(left, right)
	out, err := recording.Create(filepath.Join(b.TempDir(), "load.ramp"), h, 0)
	if err != nil {
		b.Fatal(err)
	}
	b.ReportAllocs()
	clock := NewClock(1)
	lines := 0
	first, last := time.Duration(0), time.Duration(0)
	err = Run(ctx, Config{
		Clock: clock, Out: out, BootWait: time.Millisecond,
		Devices: []Device{{"portA", left.dial}, {"portB", right.dial}},
		OnEntry: func(e recording.Entry) []recording.Event {
			if e.Wire != nil && strings.HasPrefix(string(e.Wire), "val") {
				lines++
				last = e.At
				if first == 0 {
					first = e.At
				}
			}
			return nil
		},
	})
	if err != nil {
		b.Fatal(err)
	}
	if err := out.Close(clock.Now(), clock.Wall()); err != nil {
		b.Fatal(err)
	}
	if last > first {
		b.ReportMetric(float64(lines)/(last-first).Seconds(), "lines/s")
	}
}
