package simrig

import (
	"context"
	"errors"
	"io"
	"math"
	"net"
	"sync"
	"testing"
	"testing/synctest"
	"time"

	"tautramp/protocol"
)

// bubbleClock is the time of a synctest bubble.
type bubbleClock struct{ start time.Time }

func (c bubbleClock) Now() time.Duration { return time.Since(c.start) }

func (c bubbleClock) Sleep(ctx context.Context, d time.Duration) error {
	select {
	case <-ctx.Done():
		return ctx.Err()
	case <-time.After(d):
		return nil
	}
}

// host is the other side of a board's line.
type host struct {
	*testing.T
	conn  net.Conn
	clock bubbleClock
	ended chan error // from Serve

	mu   sync.Mutex
	got  []protocol.Record
	at   []time.Duration // when each came in
	bad  int
	read chan struct{} // closed at the end of the stream
}

// connect serves a board on a pipe and listens to it.
func connect(t *testing.T, ctx context.Context, b *Board, clock bubbleClock) *host {
	near, far := net.Pipe()
	h := &host{T: t, conn: near, clock: clock, ended: make(chan error, 1), read: make(chan struct{})}
	go func() { h.ended <- b.Serve(ctx, far, clock) }()
	go h.listen()
	return h
}

func (h *host) listen() {
	defer close(h.read)
	scanner := protocol.NewScanner(h.conn)
	for scanner.Scan() {
		h.mu.Lock()
		if line := scanner.Line(); line.Err != nil {
			h.bad++
		} else {
			h.got, h.at = append(h.got, line.Record), append(h.at, h.clock.Now())
		}
		h.mu.Unlock()
	}
}

func (h *host) send(c protocol.Command) {
	h.Helper()
	if _, err := h.conn.Write(encode(h.T, c)); err != nil {
		h.Fatal(err)
	}
}

// take is what came in since the last call.
func (h *host) take() (list []protocol.Record, at []time.Duration) {
	h.Helper()
	synctest.Wait()
	h.mu.Lock()
	defer h.mu.Unlock()
	if h.bad > 0 {
		h.Errorf("%d lines do not parse", h.bad)
	}
	list, at, h.got, h.at = h.got, h.at, nil, nil
	return list, at
}

// hangUp closes the line and waits for Serve.
func (h *host) hangUp() error {
	h.conn.Close()
	<-h.read
	return <-h.ended
}

func TestServeTalksAndStreamsInTime(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		clock := bubbleClock{time.Now()}
		time.Sleep(3 * time.Second) // a rig may be older than its first connection
		ctx, cancel := context.WithCancel(t.Context())
		b := mustNew(t, t1(t)).Boards()[0]
		h := connect(t, ctx, b, clock)
		time.Sleep(time.Second)
		if list, _ := h.take(); words(list) != "here chan note" {
			t.Errorf("at first: %s", words(list))
		}
		h.send(protocol.Command{Verb: protocol.EchoMe, Token: 1})
		h.send(protocol.Command{Verb: protocol.Run, Token: 2})
		time.Sleep(20 * time.Second)
		list, at := h.take()
		if words(list[:2]) != "echo did" || sequence(t, list) != 0 {
			t.Errorf("answers %s, %d lost", words(list[:2]), sequence(t, list))
		}
		echo, sent := list[0].(protocol.Echo), at[0]
		vals := 0
		for i, r := range list {
			v, ok := r.(protocol.Val)
			if !ok {
				continue
			}
			vals++
			sampled := sent + time.Duration(int32(v.Tick-echo.Tick))*time.Microsecond
			// The indicator's window ends 25 ms after its stamp.
			if late := at[i] - sampled; late < 0 || late > 60*time.Millisecond {
				t.Fatalf("a line of channel %c came %v after its sample", v.Channel, late)
			}
		}
		if vals < 1190 || vals > 1200 {
			t.Errorf("%d samples in 20 s, want 1200", vals)
		}
		cancel()
		if err := h.hangUp(); err != nil {
			t.Errorf("ended by its context, Serve says %v", err)
		}
	})
}

func TestServeAgainAfterALoss(t *testing.T) {
	for name, c := range map[string]struct {
		reset   bool
		running bool
		boot    uint32
	}{
		"the board kept its power": {false, true, 1},
		"opening resets it":        {true, false, 2},
	} {
		t.Run(name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				conf := t1(t)
				conf.Boards = []BoardSpec{{ResetOnOpen: c.reset}}
				b, clock := mustNew(t, conf).Boards()[0], bubbleClock{time.Now()}
				h := connect(t, t.Context(), b, clock)
				time.Sleep(time.Second)
				h.send(protocol.Command{Verb: protocol.Run, Token: 1})
				time.Sleep(5 * time.Second)
				if err := h.hangUp(); !errors.Is(err, ErrLineGone) {
					t.Errorf("after a loss Serve says %v", err)
				}
				time.Sleep(5 * time.Second)
				ctx, cancel := context.WithCancel(t.Context())
				h = connect(t, ctx, b, clock)
				time.Sleep(3 * time.Second)
				h.send(protocol.Command{Verb: protocol.Who, Token: 2})
				time.Sleep(time.Second)
				list, _ := h.take()
				heres := only[protocol.Here](list)
				here := heres[len(heres)-1]
				if here.Running != c.running || here.Boot != c.boot {
					t.Errorf("here %+v", here)
				}
				if c.running {
					beats := only[protocol.Beat](list)
					if len(beats) == 0 || beats[0].Dropped < 280 {
						t.Errorf("5 s of lines went nowhere, beats %+v", beats)
					}
				} else if heres[0].Cause != protocol.CauseReset {
					t.Errorf("boot line %+v", heres[0])
				}
				cancel()
				h.hangUp()
			})
		})
	}
}

func TestBoardIsServedOnce(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b, clock := mustNew(t, t1(t)).Boards()[0], bubbleClock{time.Now()}
		ctx, cancel := context.WithCancel(t.Context())
		h := connect(t, ctx, b, clock)
		time.Sleep(time.Second)
		second, _ := net.Pipe()
		if err := b.Serve(ctx, second, clock); !errors.Is(err, ErrPlugged) {
			t.Errorf("served twice: %v", err)
		}
		cancel()
		h.hangUp()
	})
}

func TestUnreadLineDoesNotStopTheRig(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		conf := quick(t)
		conf.Boards = []BoardSpec{{QueueBytes: 4096}}
		r, clock := mustNew(t, conf), bubbleClock{time.Now()}
		ctx, cancel := context.WithCancel(t.Context())
		near, far := net.Pipe()
		ended := make(chan error, 1)
		go func() { ended <- r.Boards()[0].Serve(ctx, far, clock) }()
		boot := make([]byte, 1)
		if _, err := io.ReadFull(near, boot); err != nil {
			t.Fatal(err)
		}
		near.Write(encode(t, protocol.Command{Verb: protocol.Run, Token: 1}))
		<-r.Done() // though nobody reads
		cancel()
		if err := <-ended; err != nil {
			t.Error(err)
		}
	})
}

// Two boards whose clocks differ by 300 ppm: over 60 s their ticks drift
// apart by 18 ms, whatever they started from, here across a wrap.
func TestTwoBoardsClocksDriftApart(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		conf := t1(t)
		conf.Boards = []BoardSpec{{StartTick: 77}, {TickPPM: 300, StartTick: math.MaxUint32 - 1000}}
		r, clock := mustNew(t, conf), bubbleClock{time.Now()}
		ctx, cancel := context.WithCancel(t.Context())
		hosts := []*host{connect(t, ctx, r.Boards()[0], clock), connect(t, ctx, r.Boards()[1], clock)}
		time.Sleep(time.Second)
		ticks := func() (list [2]uint32) {
			for i, h := range hosts {
				h.take()
				h.send(protocol.Command{Verb: protocol.EchoMe, Token: 1})
				got, _ := h.take()
				list[i] = only[protocol.Echo](got)[0].Tick
			}
			return list
		}
		first := ticks()
		for _, h := range hosts {
			h.send(protocol.Command{Verb: protocol.Run, Token: 2})
		}
		time.Sleep(60 * time.Second)
		var quantities [2]protocol.Quantity
		for i, h := range hosts {
			list, _ := h.take()
			if sequence(t, list) != 0 {
				t.Errorf("board %d lost lines", i)
			}
			h.send(protocol.Command{Verb: protocol.Who, Token: 3})
			list, _ = h.take()
			quantities[i] = only[protocol.Chan](list)[0].Quantity
		}
		last := ticks()
		drift := float64(last[1]-first[1]) - float64(last[0]-first[0])
		near(t, "drift, ticks", drift, 60e6*300e-6, 10)
		if quantities != [2]protocol.Quantity{protocol.Pressure, protocol.Extension} {
			t.Errorf("the boards measure %v", quantities)
		}
		cancel()
		for _, h := range hosts {
			h.hangUp()
		}
	})
}

func TestLoadOfAThousandLinesASecond(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		conf := t1(t)
		conf.Load, conf.Drive.Shape, conf.StrangeS = 1000, Still, -1
		conf.Boards = []BoardSpec{{}, {}}
		r, clock := mustNew(t, conf), bubbleClock{time.Now()}
		ctx, cancel := context.WithCancel(t.Context())
		hosts := []*host{connect(t, ctx, r.Boards()[0], clock), connect(t, ctx, r.Boards()[1], clock)}
		for _, h := range hosts {
			h.send(protocol.Command{Verb: protocol.Run, Token: 1})
		}
		time.Sleep(5 * time.Second)
		for i, h := range hosts {
			list, _ := h.take()
			if n := len(only[protocol.Val](list)); n < 4990 || n > 5000 || sequence(t, list) != 0 {
				t.Errorf("board %d: %d samples in 5 s, %d lost; want 5000, none", i, n, sequence(t, list))
			}
		}
		cancel()
		for _, h := range hosts {
			h.hangUp()
		}
	})
}
