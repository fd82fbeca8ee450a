package acquire

import (
	"errors"
	"strings"
	"testing"
	"testing/synctest"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

func unplug(l *life) { l.c.Close() }

func TestLostPortIsOpenedAgain(t *testing.T) {
	gone := opening + booting + naming + start + samples + "0 lost\n"
	back := opening + "0 here power\n0 restart\n" + naming + start + samples + ending
	for name, test := range map[string]struct {
		change func(*board)
		want   string
		dials  int
	}{
		"at once": {
			want: gone + back, dials: 2,
		},
		"after a while": {
			change: func(b *board) {
				opened := time.Now()
				b.dialled = func(n int) error {
					if n > 1 && time.Since(opened) < 10*time.Second {
						return errNoSuchPort
					}
					return nil
				}
			},
			want: gone + back, dials: 8, // after 0.1, 0.3, 0.7, 1.5, 3.1, 5.1 and 7.1 s
		},
		"and was running all the time": {
			change: func(b *board) { b.bootTime = -1 },
			want: opening + naming + start + samples + "0 lost\n" +
				opening + naming + start + samples + ending, dials: 2,
		},
		"half a line is kept as it came": {
			change: func(b *board) {
				b.atTime = map[time.Duration]func(*life){3 * time.Second: func(l *life) {
					l.raw("val a 12")
					l.c.Close()
				}}
			},
			want: opening + booting + naming + start + samples + "0 refused no-check\n0 lost\n" + back, dials: 2,
		},
		"because the board fell silent and does not answer": {
			change: func(b *board) {
				b.atTime = map[time.Duration]func(*life){3 * time.Second: func(l *life) { l.mute = true }}
				b.heard = func(l *life, c protocol.Command, n int) bool { return l.mute }
			},
			want: opening + booting + naming + start + samples + "0 silent\n0 sent who\n0 sent who\n0 sent who\n0 lost\n" + back, dials: 2,
		},
	} {
		t.Run(name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				b := oneBoard()
				b.atTime = map[time.Duration]func(*life){3 * time.Second: unplug}
				if test.change != nil {
					test.change(b)
				}
				once := b.atTime
				b.atTime = map[time.Duration]func(*life){}
				for after, hook := range once {
					b.atTime[after] = func(l *life) {
						if l.opening == 1 {
							hook(l)
						}
					}
				}
				r := newRig(t, b)
				r.end = 20*time.Second + 50*time.Millisecond
				entries, err := r.run()
				if err != nil {
					t.Fatal(err)
				}
				if got := script(entries); got != test.want || b.dials != test.dials {
					t.Errorf("opened %d times, recorded:\n%swant %d times:\n%s", b.dials, got, test.dials, test.want)
				}
			})
		})
	}
}

// Each outage has its own GiveUpAfter.
func TestTwoOutagesAreNotAddedUp(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := oneBoard()
		b.atTime = map[time.Duration]func(*life){3 * time.Second: unplug}
		lost := time.Now()
		b.dialled = func(n int) error {
			if n > 1 && time.Since(lost) < 15*time.Second {
				return errNoSuchPort
			}
			lost = time.Now().Add(3 * time.Second)
			return nil
		}
		r := newRig(t, b)
		r.end = 2 * time.Minute
		entries, err := r.run()
		if err != nil {
			t.Fatal(err)
		}
		if got := len(texts(entries, recording.LostPort)); got < 5 {
			t.Errorf("lost %d times only", got)
		}
	})
}

func TestLostPortIsGivenUp(t *testing.T) {
	for name, test := range map[string]struct {
		change func(*board)
		want   error
		text   string
	}{
		"that never comes back": {
			change: func(b *board) {
				b.dialled = func(n int) error {
					if n > 1 {
						return errNoSuchPort
					}
					return nil
				}
			},
			want: ErrGaveUp, text: "not running for 20.0 s: no such port",
		},
		"that opens and closes": {
			change: func(b *board) {
				b.atTime = map[time.Duration]func(*life){3 * time.Second: unplug, 500 * time.Millisecond: func(l *life) {
					if l.opening > 1 {
						unplug(l)
					}
				}}
			},
			want: ErrGaveUp, text: "not running for 2",
		},
		"that comes back mute": {
			change: func(b *board) {
				b.heard = func(l *life, c protocol.Command, n int) bool { return l.opening > 1 }
			},
			want: ErrGaveUp, text: "not running for 2",
		},
		"that comes back as another device": {
			change: func(b *board) {
				b.dialled = func(n int) error {
					if n > 1 {
						b.serial = "s2"
					}
					return nil
				}
			},
			want: ErrNotOurs, text: "it was testboard s1, now testboard s2 answers",
		},
		"that comes back with another scale": {
			change: func(b *board) {
				b.dialled = func(n int) error {
					if n > 1 {
						b.channels[0].Mantissa = 2
					}
					return nil
				}
			},
			want: ErrNotOurs, text: "other channels than before",
		},
	} {
		t.Run(name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				b := oneBoard()
				b.atTime = map[time.Duration]func(*life){3 * time.Second: unplug}
				test.change(b)
				r := newRig(t, b)
				begun := time.Now()
				entries, err := r.run()
				var blamed *DeviceError
				if !errors.Is(err, test.want) || !errors.As(err, &blamed) || !strings.Contains(err.Error(), test.text) {
					t.Errorf("error %v, want %v of a device, with %q", err, test.want, test.text)
				}
				if took := time.Since(begun); took > 31*time.Second {
					t.Errorf("given up after %v, not 20 s after the loss at 3 s", took)
				}
				if said := texts(entries, recording.Abandoned); len(said) != 1 {
					t.Errorf("the recording ends with %q, want one reason", said)
				}
			})
		})
	}
}
