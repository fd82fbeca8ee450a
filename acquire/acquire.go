// Package acquire runs a capture: it opens the devices, holds the
// conversation with each (identity, start, watchdog, restart, reopening) and
// writes every line and host event into one recording, in one order. Start
// with Run.
//
// Deliberately absent: serial ports (callers pass a Dial), pairs, stress. The
// words of the wire are package protocol's.
package acquire

import (
	"context"
	"errors"
	"fmt"
	"io"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// Clock is the host's time, passed in so that a rehearsal can run faster than
// the wall and a test by hand.
type Clock interface {
	// Now is the monotonic time since the clock was made, in clock seconds.
	Now() time.Duration
	// Wall is the wall clock now, in clock seconds from the clock's start.
	Wall() time.Time
	// Sleep waits d clock seconds, or returns the context's error.
	Sleep(ctx context.Context, d time.Duration) error
	// Factor is clock seconds per real second.
	Factor() float64
}

// Dial opens one device afresh; ctx is for the opening alone. It is called
// again after a loss. Read blocks
// until a byte, the own Close or a loss. Any error of Read before the own Close
// counts as a loss, and the connection is closed at once.
type Dial func(ctx context.Context) (io.ReadWriteCloser, error)

// Device is one board: its port's name for people, and how to open it.
type Device struct {
	Name string
	Dial Dial
}

// Config is one capture.
type Config struct {
	Devices []Device // as many as the recording's header names, in its order
	Clock   Clock
	Out     *recording.Writer // the caller closes it after Run has returned
	// OnEntry sees every entry in file order, from one goroutine, after it is
	// written, and may keep it. The events it returns are written next, and it
	// sees those too; only the last entry, by Out.Close, it does not see. While it works the capture waits: the lines stay in the
	// operating system's buffers. It may be nil.
	OnEntry func(recording.Entry) []recording.Event
	// Fits looks at what all boards declare before any of them is started; its
	// error ends the capture. nil wants the setting of the header's tensioner and
	// the extension, as a calibration does.
	Fits func(channels []protocol.Chan) error
	// Operator carries marks and the like; nil when nobody can press a key.
	Operator <-chan recording.Event

	// Waits in clock time. In a rehearsal that runs faster than the wall the link
	// and the scheduler are no faster, so each wait is also at least a little
	// real time (see leastWaits).
	BootWait    time.Duration // wait for a board to boot after opening; 0 means 2.5 s
	AnswerWait  time.Duration // wait for an answer before asking again; 0 means 1 s
	SilentAfter time.Duration // no line for this long raises Silent; 0 means 3 s
	GiveUpAfter time.Duration // a lost port not back after this ends the capture; 0 means 20 s
	EchoEvery   time.Duration // a time echo is asked for this often; 0 means 30 s
}

// leastWaits fills in the defaults, and lengthens what would be too short for
// the real link.
func (c *Config) leastWaits() {
	for _, w := range []struct {
		wait        *time.Duration
		usual, real time.Duration
	}{
		{&c.BootWait, 2500 * time.Millisecond, 0},
		{&c.AnswerWait, time.Second, time.Second},
		{&c.SilentAfter, 3 * time.Second, 2 * time.Second},
		{&c.GiveUpAfter, 20 * time.Second, 2 * time.Second},
		{&c.EchoEvery, 30 * time.Second, 500 * time.Millisecond},
	} {
		if *w.wait <= 0 {
			*w.wait = w.usual
		}
		*w.wait = max(*w.wait, time.Duration(float64(w.real)*c.Clock.Factor()))
	}
}

// check fills in the defaults.
func (c *Config) check() error {
	if c.Clock == nil || c.Out == nil {
		return errors.New("start a capture: it needs a clock and a recording")
	}
	if n := len(c.Out.Header().Devices); len(c.Devices) == 0 || len(c.Devices) != n {
		return fmt.Errorf("start a capture: %d boards, but the recording names %d", len(c.Devices), n)
	}
	if c.Fits == nil {
		setting, err := c.Out.Header().SettingQuantity()
		if err != nil {
			return fmt.Errorf("start a capture: %w", err)
		}
		want := []protocol.Quantity{setting, protocol.Extension}
		if c.Out.Header().Presses.As == recording.PressStep {
			want = want[1:] // the presses tell the setting
		}
		c.Fits = measures(want...)
	}
	c.leastWaits()
	return nil
}
