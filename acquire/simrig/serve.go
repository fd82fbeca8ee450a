package simrig

import (
	"context"
	"errors"
	"fmt"
	"io"
	"time"

	"tautramp/protocol"
)

// Clock is the time that a rig lives in. A scaled clock scales everything: the
// physics, the boards' ticks and their waiting.
type Clock interface {
	// Now is the time since the clock was made.
	Now() time.Duration
	// Sleep waits d of this clock, or returns the context's error.
	Sleep(ctx context.Context, d time.Duration) error
}

// A connected board looks at its clock at least this often, and no more often.
const (
	leastNap = time.Millisecond
	longNap  = 20 * time.Millisecond
)

// What ends a Serve.
var (
	ErrLineGone = errors.New("the line to the board is gone") // from the other side
	ErrPlugged  = errors.New("the board is connected already")
)

// Serve connects the board to a line until the context is done (nil) or the
// line goes (ErrLineGone), and closes the line. Another Serve at the same time
// is ErrPlugged. All boards of a rig take the
// same clock. The board boots when it is served the first time; served again
// it goes on as it was, its lines of the meantime dropped and counted, or
// boots if it resets on opening.
func (b *Board) Serve(ctx context.Context, line io.ReadWriteCloser, clock Clock) error {
	defer line.Close()
	if err := b.plug(clock); err != nil {
		return err
	}
	defer b.unplug()
	inner, cancel := context.WithCancelCause(ctx)
	ended := make(chan struct{}, 2)
	go func() { cancel(b.listen(line, clock)); ended <- struct{}{} }()
	go func() { cancel(b.speak(inner, line)); ended <- struct{}{} }()
	err := b.live(inner, clock)
	line.Close() // frees a blocked Read and Write
	cancel(err)
	<-ended
	<-ended
	if ctx.Err() != nil {
		return nil
	}
	return fmt.Errorf("%w: %w", ErrLineGone, context.Cause(inner))
}

// Reboot boots the board now, whether it is connected or not.
func (b *Board) Reboot(cause protocol.Cause, clock Clock) {
	b.rig.mu.Lock()
	defer b.rig.mu.Unlock()
	b.boot(b.enter(clock), cause)
}

// enter brings the rig to the present and returns it. The rig is locked.
func (b *Board) enter(clock Clock) float64 {
	s := clock.Now().Seconds()
	b.rig.advance(s)
	return s
}

func (b *Board) plug(clock Clock) error {
	b.rig.mu.Lock()
	defer b.rig.mu.Unlock()
	if b.plugged {
		return ErrPlugged
	}
	s := b.enter(clock)
	b.plugged, b.command, b.overlong = true, b.command[:0], 0
	switch {
	case !b.booted:
		b.boot(s, protocol.CausePower)
	case b.spec.ResetOnOpen:
		b.boot(s, protocol.CauseReset)
	}
	return nil
}

// unplug loses what still waits for the line.
func (b *Board) unplug() {
	b.rig.mu.Lock()
	defer b.rig.mu.Unlock()
	b.plugged = false
	b.take(nil)
}

// take hands out the lines that wait and goes on with an empty buffer, which
// may be nil. The rig is locked.
func (b *Board) take(empty []byte) []byte {
	out := b.out
	b.out = empty[:0]
	return out
}

// live lets time pass for the rig until the context is done.
func (b *Board) live(ctx context.Context, clock Clock) error {
	for {
		if err := clock.Sleep(ctx, b.pass(clock)); err != nil {
			return err
		}
	}
}

// pass brings the rig to the present and says how long the board has nothing
// to do.
func (b *Board) pass(clock Clock) time.Duration {
	b.rig.mu.Lock()
	defer b.rig.mu.Unlock()
	s := b.enter(clock)
	nap := longNap
	if t := b.next(); t != nil && t.dueS-s < longNap.Seconds() {
		nap = time.Duration((t.dueS - s) * float64(time.Second))
	}
	return max(nap, leastNap)
}

// listen takes commands until the line ends.
func (b *Board) listen(line io.Reader, clock Clock) error {
	buf := make([]byte, 512)
	for {
		n, err := line.Read(buf)
		if n > 0 {
			b.rig.mu.Lock()
			b.receive(buf[:n], b.enter(clock))
			b.rig.mu.Unlock()
		}
		if err != nil {
			return err
		}
	}
}

// speak sends what waits until the line ends.
func (b *Board) speak(ctx context.Context, line io.Writer) error {
	var sent []byte
	for {
		select {
		case <-ctx.Done():
			return ctx.Err()
		case <-b.ready:
		}
		b.rig.mu.Lock()
		sent = b.take(sent)
		b.rig.mu.Unlock()
		if err := writeAll(line, sent); err != nil {
			return err
		}
	}
}

func writeAll(w io.Writer, p []byte) error {
	for len(p) > 0 {
		n, err := w.Write(p)
		if err != nil {
			return err
		}
		if n == 0 {
			return io.ErrShortWrite
		}
		p = p[n:]
	}
	return nil
}
