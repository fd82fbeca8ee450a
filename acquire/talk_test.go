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

const (
	opening = "0 opened\n"
	booting = "0 here power\n"
	naming  = "0 sent who\n0 here asked\n0 chan a\n0 chan b\n0 did who\n"
	start   = "0 sent run\n0 did run\n"
	samples = "0 val\n"
	ending  = "0 sent rest\n0 did rest\n"
)

func oneBoard() *board { return newBoard("s1", testPressure, testExtension) }

func TestConversationWithOneBoard(t *testing.T) {
	first := func(verb protocol.Verb, do func(l *life, c protocol.Command)) func(*life, protocol.Command, int) bool {
		return func(l *life, c protocol.Command, n int) bool {
			if c.Verb != verb || n > 1 {
				return false
			}
			do(l, c)
			return true
		}
	}
	silent := func(*life, protocol.Command) {}
	for name, test := range map[string]struct {
		change func(*board)
		end    time.Duration // 0 means 6 s
		want   string
	}{
		"boots when opened": {
			want: opening + booting + naming + start + samples + ending,
		},
		"does not boot when opened": {
			change: func(b *board) { b.bootTime = -1 },
			want:   opening + naming + start + samples + ending,
		},
		"boots later than we wait: the first question is lost": {
			change: func(b *board) { b.bootTime = 3 * time.Second },
			want:   opening + "0 sent who\n" + booting + naming + start + samples + ending,
		},
		"sends garbage before its boot line": {
			change: func(b *board) { b.greeting = "\x00\xff~~\nboot 1.0\r\n" },
			want:   opening + "0 refused bad-byte\n0 refused no-check\n" + booting + naming + start + samples + ending,
		},
		"does not hear the first question": {
			change: func(b *board) { b.heard = first(protocol.Who, silent) },
			want:   opening + booting + "0 sent who\n" + naming + start + samples + ending,
		},
		"does not hear the first start": {
			change: func(b *board) { b.heard = first(protocol.Run, silent) },
			want:   opening + booting + naming + "0 sent run\n" + start + samples + ending,
		},
		"refuses the first start": {
			change: func(b *board) {
				b.heard = first(protocol.Run, func(l *life, c protocol.Command) {
					l.send(protocol.Wont{Token: c.Token, Verb: string(c.Verb), Why: "busy"})
				})
			},
			want: opening + booting + naming + "0 sent run\n0 wont run\n" + start + samples + ending,
		},
		"answers the first start with another token": {
			change: func(b *board) {
				b.heard = first(protocol.Run, func(l *life, c protocol.Command) {
					l.send(protocol.Did{Token: c.Token + 100, Verb: c.Verb})
				})
			},
			want: opening + booting + naming + "0 sent run\n0 did run\n" + start + samples + ending,
		},
		"a channel's declaration is lost on the way": {
			change: func(b *board) {
				b.heard = first(protocol.Who, func(l *life, c protocol.Command) {
					l.send(l.here(protocol.CauseAsked))
					l.send(testPressure)
					l.send(protocol.Did{Token: c.Token, Verb: c.Verb})
				})
			},
			want: opening + booting + "0 sent who\n0 here asked\n0 chan a\n0 did who\n" + naming + start + samples + ending,
		},
		"answers the first question late, and then both": {
			change: func(b *board) {
				b.heard = func(l *life, c protocol.Command, n int) bool {
					if c.Verb == protocol.Who && n == 1 {
						time.Sleep(1530 * time.Millisecond)
					}
					return false
				}
			},
			want: opening + booting + "0 sent who\n" + naming + "0 sent run\n0 here asked\n0 chan a\n0 chan b\n0 did who\n0 did run\n" +
				samples + ending,
		},
		"starts again in the middle": {
			change: func(b *board) {
				b.atTime = map[time.Duration]func(*life){3 * time.Second: func(l *life) { l.reset(protocol.CauseWatchdog) }}
			},
			want: opening + booting + naming + start + samples + "0 here watchdog\n0 restart\n" +
				naming + start + samples + ending,
		},
		"starts again in the middle, and its boot line is lost": {
			change: func(b *board) {
				b.atTime = map[time.Duration]func(*life){3 * time.Second: func(l *life) { l.b.boots++; l.running = false }}
			},
			end: 10 * time.Second,
			want: opening + booting + naming + start + samples + "0 silent\n0 sent who\n0 here asked\n0 restart\n" +
				"0 chan a\n0 chan b\n0 did who\n" + naming + start + samples + ending,
		},
		"pauses and speaks again": {
			change: func(b *board) {
				b.atTime = map[time.Duration]func(*life){
					3 * time.Second: func(l *life) { l.mute = true },
					7 * time.Second: func(l *life) { l.mute = false },
				}
			},
			end:  8 * time.Second,
			want: opening + booting + naming + start + samples + "0 silent\n" + naming + samples + ending,
		},
		"starts again unheard, and keeps no count of its boots": {
			change: func(b *board) {
				b.noBoot = true
				b.atTime = map[time.Duration]func(*life){3 * time.Second: func(l *life) { l.running = false }}
			},
			end: 10 * time.Second,
			want: opening + booting + naming + start + samples + "0 silent\n0 sent who\n0 here asked\n0 restart\n" +
				"0 chan a\n0 chan b\n0 did who\n" + naming + start + samples + ending,
		},
		"pauses, speaks again, and hears nothing": {
			change: func(b *board) {
				b.atTime = map[time.Duration]func(*life){
					3 * time.Second:         func(l *life) { l.mute = true },
					6500 * time.Millisecond: func(l *life) { l.mute = false },
				}
				b.heard = func(l *life, c protocol.Command, n int) bool { return c.Verb != protocol.Run && n > 1 }
			},
			end: 12 * time.Second,
			want: opening + booting + naming + start + samples + "0 silent\n0 sent who\n" + samples + "0 sent who\n" + samples +
				"0 sent who\n" + samples + "0 sent rest\n0 did rest\n",
		},
		"boots while it is asked for the first time": {
			change: func(b *board) {
				b.bootTime = -1
				b.heard = first(protocol.Who, func(l *life, c protocol.Command) {
					l.send(l.here(protocol.CauseAsked))
					l.send(testPressure)
					l.reset(protocol.CausePower)
					l.send(testPressure)
					l.send(testExtension)
				})
			},
			want: opening + "0 sent who\n0 here asked\n0 chan a\n0 here power\n0 chan a\n0 chan b\n" + naming + start + samples + ending,
		},
		"does not answer the farewell": {
			change: func(b *board) {
				b.heard = func(l *life, c protocol.Command, n int) bool { return c.Verb == protocol.Rest }
			},
			want: opening + booting + naming + start + samples + "0 sent rest\n0 val\n0 sent rest\n0 val\n",
		},
		"is told the end while it is asked": {
			change: func(b *board) {
				b.period = 10 * time.Second
				b.heard = func(l *life, c protocol.Command, n int) bool {
					if c.Verb == protocol.Run {
						time.Sleep(480 * time.Millisecond)
					}
					return false
				}
			},
			end:  time.Second,
			want: opening + booting + naming + start + ending,
		},
		"is told the end before it has said who it is": {
			end:  time.Second,
			want: opening + booting + naming + start + samples + ending,
		},
		"is told the end while it boots": {
			end:  500 * time.Millisecond,
			want: opening,
		},
	} {
		t.Run(name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				b := oneBoard()
				if test.change != nil {
					test.change(b)
				}
				r := newRig(t, b)
				r.end = test.end
				if r.end == 0 {
					r.end = 6 * time.Second
				}
				r.end += 50 * time.Millisecond // between two samples
				entries, err := r.run()
				if err != nil {
					t.Fatal(err)
				}
				if got := script(entries); got != test.want {
					t.Errorf("recorded:\n%swant:\n%s", got, test.want)
				}
			})
		})
	}
}

func TestCaptureRefusesADevice(t *testing.T) {
	for name, test := range map[string]struct {
		change func(*board)
		want   error
		text   string // in the error
	}{
		"that says nothing": {
			change: func(b *board) { b.bootTime = time.Hour },
			want:   ErrNoAnswer, text: "nothing was heard",
		},
		"that says other things": {
			change: func(b *board) { b.bootTime, b.greeting = time.Hour, "temp=21\r\ntemp=21\r\n" },
			want:   ErrNoAnswer, text: "18 bytes were heard, but no line of ours; check the speed",
		},
		"that speaks, but does not hear": {
			change: func(b *board) {
				b.heard = func(*life, protocol.Command, int) bool { return true }
			},
			want: ErrNoAnswer, text: "1 good lines were heard, but no answer",
		},
		"that boots over and over": {
			change: func(b *board) {
				b.bootTime = 100 * time.Millisecond
				b.heard = func(l *life, c protocol.Command, n int) bool { l.reset(protocol.CauseBrown); return true }
			},
			want: ErrNoAnswer, text: "good lines were heard, but no answer",
		},
		"that boots whenever it is started": {
			change: func(b *board) {
				b.heard = func(l *life, c protocol.Command, n int) bool {
					if c.Verb == protocol.Run {
						l.reset(protocol.CauseBrown)
					}
					return c.Verb == protocol.Run
				}
			},
			want: ErrGaveUp, text: "not running for 2",
		},
		"that speaks another version": {
			change: func(b *board) {
				b.heard = func(l *life, c protocol.Command, n int) bool {
					h := l.here(protocol.CauseAsked)
					h.Version = 2
					l.send(h)
					return true
				}
			},
			want: ErrNotOurs, text: "version 2 of the wire",
		},
		"that lacks the extension": {
			change: func(b *board) { b.channels = b.channels[:1] },
			want:   ErrNotOurs, text: "no channel measures the stretch (extension); the boards declare pressure",
		},
		"that has no channels": {
			change: func(b *board) { b.channels = nil },
			want:   ErrNotOurs, text: "the boards declare none",
		},
		"that never declares all its channels": {
			change: func(b *board) {
				b.heard = func(l *life, c protocol.Command, n int) bool {
					l.send(l.here(protocol.CauseAsked))
					l.send(testPressure)
					l.send(protocol.Did{Token: c.Token, Verb: c.Verb})
					return true
				}
			},
			want: ErrNotOurs, text: "2 channels, but declares 1",
		},
		"that refuses to start": {
			change: func(b *board) {
				b.heard = func(l *life, c protocol.Command, n int) bool {
					if c.Verb == protocol.Run {
						l.send(protocol.Wont{Token: c.Token, Verb: "run", Why: "faulty"})
					}
					return c.Verb == protocol.Run
				}
			},
			want: ErrRefused, text: "run: faulty",
		},
		"whose port is not there": {
			change: func(b *board) { b.dialled = func(int) error { return errNoSuchPort } },
			want:   errNoSuchPort, text: "no such port",
		},
	} {
		t.Run(name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				b := oneBoard()
				test.change(b)
				r := newRig(t, b)
				entries, err := r.run()
				var blamed *DeviceError
				if !errors.As(err, &blamed) || blamed.Device != 0 || blamed.Name != "portA" {
					t.Fatalf("error %v, want a DeviceError of device 0 on portA", err)
				}
				if !errors.Is(err, test.want) || !strings.Contains(err.Error(), test.text) {
					t.Errorf("error %v, want %v with %q", err, test.want, test.text)
				}
				if said := texts(entries, recording.Abandoned); len(said) != 1 {
					t.Errorf("the recording ends with %q, want one reason", said)
				}
			})
		})
	}
}

// Nobody waits for an answer that has come. A board that is busy is asked again
// (see "refuses the first start").
func TestRefusalEndsTheAskingAtOnce(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := oneBoard()
		var refused time.Time
		b.heard = func(l *life, c protocol.Command, n int) bool {
			if c.Verb == protocol.Run {
				refused = time.Now()
				l.send(protocol.Wont{Token: c.Token, Verb: "run", Why: "fault"})
			}
			return c.Verb == protocol.Run
		}
		_, err := newRig(t, b).run()
		if took := time.Since(refused); !errors.Is(err, ErrRefused) || b.count(protocol.Run) != 1 || took > 500*time.Millisecond {
			t.Errorf("error %v after %v, asked %d times", err, took, b.count(protocol.Run))
		}
	})
}

// On a clock that runs 15 times as fast, people still wait in their own seconds.
func TestMessagesTellSecondsOfTheWall(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := oneBoard()
		b.bootTime = -1
		b.atTime = map[time.Duration]func(*life){3 * time.Second: unplug}
		b.dialled = func(n int) error {
			if n > 1 {
				return errNoSuchPort
			}
			return nil
		}
		r := newRig(t, b)
		r.cfg.Clock, r.cfg.GiveUpAfter = NewClock(15), 300*time.Second
		if _, err := r.run(); err == nil || !strings.Contains(err.Error(), "not running for 20.0 s: no such port") {
			t.Errorf("error %v", err)
		}
	})
}

var errNoSuchPort = errors.New("no such port")
