package acquire

import (
	"errors"
	"strings"
	"testing"
	"testing/synctest"
	"time"

	"tautramp/protocol"
)

func twoBoards() (a, b *board) {
	return newBoard("s1", testPressure), newBoard("s2", testExtension)
}

// only is what the script says of one device.
func only(device, script string) string {
	kept := ""
	for line := range strings.Lines(script) {
		if strings.HasPrefix(line, device) {
			kept += line
		}
	}
	return kept
}

func TestTwoBoardsStartTogether(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		a, b := twoBoards()
		b.bootTime = 2200 * time.Millisecond
		r := newRig(t, a, b)
		r.end = 6*time.Second + 50*time.Millisecond
		entries, err := r.run()
		if err != nil {
			t.Fatal(err)
		}
		sent := map[int]time.Duration{}
		for _, e := range entries {
			if wordOf(e) == "sent run" {
				sent[e.Device] = e.At
			}
		}
		if sent[0] < b.bootTime || sent[0] != sent[1] {
			t.Errorf("started at %v, want both when the second has said who it is", sent)
		}
		want := "opened\nhere power\nsent who\nhere asked\nchan ?\ndid who\nsent run\ndid run\nval\nsent rest\ndid rest\n"
		for _, d := range []string{"0a", "1b"} {
			lines := ""
			for line := range strings.Lines(strings.ReplaceAll(want, "?", d[1:])) {
				if line == "val\n" {
					continue
				}
				lines += d[:1] + " " + line
			}
			if got := strings.ReplaceAll(only(d[:1], script(entries)), d[:1]+" val\n", ""); got != lines {
				t.Errorf("device %s:\n%swant\n%s", d[:1], got, lines)
			}
		}
	})
}

func TestOneOfTwoBoardsFails(t *testing.T) {
	for name, test := range map[string]struct {
		change func(a, b *board)
		want   error
		blamed int
		runs   int // "run" commands that the first board heard
	}{
		"never answers": {
			change: func(a, b *board) { b.bootTime = time.Hour },
			want:   ErrNoAnswer, blamed: 1, runs: 0,
		},
		"is not there": {
			change: func(a, b *board) { b.dialled = func(int) error { return errNoSuchPort } },
			want:   errNoSuchPort, blamed: 1, runs: 0,
		},
		"goes away for good": {
			change: func(a, b *board) {
				b.atTime = map[time.Duration]func(*life){4 * time.Second: unplug}
				b.dialled = func(n int) error {
					if n > 1 {
						return errNoSuchPort
					}
					return nil
				}
			},
			want: ErrGaveUp, blamed: 1, runs: 1,
		},
		"measures the same as the first": {
			change: func(a, b *board) { b.channels = a.channels },
			want:   ErrNotOurs, blamed: -1, runs: 0,
		},
	} {
		t.Run(name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				a, b := twoBoards()
				test.change(a, b)
				r := newRig(t, a, b)
				_, err := r.run()
				var blamed *DeviceError
				if !errors.Is(err, test.want) || !errors.As(err, &blamed) {
					t.Fatalf("error %v, want %v of a device", err, test.want)
				}
				if test.blamed >= 0 && blamed.Device != test.blamed {
					t.Errorf("device %d is blamed, want %d", blamed.Device, test.blamed)
				}
				if a.count(protocol.Run) != test.runs || a.count(protocol.Rest) < test.runs {
					t.Errorf("the healthy board was started %d times and told to rest %d times, want %d starts",
						a.count(protocol.Run), a.count(protocol.Rest), test.runs)
				}
			})
		})
	}
}

func TestOneOfTwoBoardsIsLostWhileTheOtherBoots(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		a, b := twoBoards()
		a.bootTime = 100 * time.Millisecond
		a.atTime = map[time.Duration]func(*life){time.Second: func(l *life) {
			if l.opening == 1 {
				unplug(l)
			}
		}}
		a.dialled = func(n int) error {
			if n > 1 {
				a.bootTime = 2 * time.Second
			}
			return nil
		}
		b.bootTime = 2 * time.Second
		r := newRig(t, a, b)
		r.end = 8 * time.Second
		entries, err := r.run()
		if err != nil {
			t.Fatal(err)
		}
		for _, e := range entries {
			if wordOf(e) == "sent run" && e.At < 3*time.Second {
				t.Errorf("device %d is started at %v, before the first one was back", e.Device, e.At)
			}
		}
		if a.count(protocol.Run) != 1 || b.count(protocol.Run) != 1 {
			t.Errorf("started %d and %d times, want once each", a.count(protocol.Run), b.count(protocol.Run))
		}
	})
}
