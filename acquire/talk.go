package acquire

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

const (
	tries         = 3 // of every command that must be answered
	farewellTries = 2
	whyBusy       = "busy" // wire rule 5.7
	forever       = time.Duration(math.MaxInt64)
)

func never() bool { return false }

// talk leads the conversation over one connection until it ends; it does not
// return nil.
func (l *link) talk(ctx context.Context) error {
	// Opening may have reset the board, and a board that boots must not be
	// spoken to: some boot loaders would take it for a new program.
	err := l.await(ctx, l.now()+l.s.cfg.BootWait, func() bool { return l.device.bootLine })
	if err != nil && !errors.Is(err, errLate) && !errors.Is(err, errRestarted) {
		return err
	}
	for {
		err := l.begin(ctx)
		if err == nil {
			err = l.watch(ctx)
		}
		if !errors.Is(err, errRestarted) {
			return err
		}
		if err := l.settle(ctx); err != nil {
			return err
		}
	}
}

// settle listens for a while after a device has started again, longer each
// time, and gives up on one that starts over and over.
func (l *link) settle(ctx context.Context) error {
	if err := l.overdue(nil); err != nil {
		return err
	}
	until := l.now() + l.backOff()
	for {
		err := l.await(ctx, until, never)
		if errors.Is(err, errLate) {
			return nil
		}
		if !errors.Is(err, errRestarted) {
			return err
		}
	}
}

// begin asks who the device is, waits for the other devices, and starts it.
func (l *link) begin(ctx context.Context) error {
	if err := l.identify(ctx); err != nil {
		return err
	}
	if err := l.s.gate.arrive(l.index, l.device.channels); err != nil {
		return err
	}
	if err := l.await(ctx, forever, l.s.gate.passed); err != nil {
		return err
	}
	if err := l.ask(ctx, protocol.Run, tries); err != nil {
		return l.unanswered(err, protocol.Run)
	}
	l.device.running = true
	l.outage = outage{}
	return nil
}

func (l *link) identify(ctx context.Context) error {
	err := l.ask(ctx, protocol.Who, tries)
	here := l.asking.here
	switch {
	case here != nil && here.Version != protocol.Version:
		return fmt.Errorf("%w: it speaks version %d of the wire, this program version %d",
			ErrNotOurs, here.Version, protocol.Version)
	case errors.Is(err, errLate) && l.asking.done && here != nil:
		return fmt.Errorf("%w: it says that it has %d channels, but declares %d",
			ErrNotOurs, here.Channels, len(l.asking.channels))
	case errors.Is(err, errLate) && !l.device.known && l.asking.refusal == "":
		return fmt.Errorf("%w: %s", ErrNoAnswer, l.hearing.hint())
	case err != nil:
		return l.unanswered(err, protocol.Who)
	}
	return l.accept(*here, l.asking.channels)
}

// hint says what is likely wrong with a device that never said who it is.
func (h *hearing) hint() string {
	switch {
	case h.bytes == 0:
		return "nothing was heard; check its power, its cable and the port's name"
	case h.good == 0:
		return fmt.Sprintf("%d bytes were heard, but no line of ours; check the speed (baud), "+
			"and whether another board is on this port", h.bytes)
	}
	return fmt.Sprintf("%d good lines were heard, but no answer; check the wire that carries "+
		"commands to the board", h.good)
}

// accept takes the identity, which must not change during a capture.
func (l *link) accept(h protocol.Here, channels []protocol.Chan) error {
	d := &l.device
	if d.known && (h.Model != d.model || h.Serial != d.serial) {
		return fmt.Errorf("%w: it was %s %s, now %s %s answers on its port; start a new capture",
			ErrNotOurs, d.model, d.serial, h.Model, h.Serial)
	}
	if d.known && !slices.Equal(channels, d.channels) {
		return fmt.Errorf("%w: it came back with other channels than before; start a new capture", ErrNotOurs)
	}
	d.known, d.model, d.serial = true, h.Model, h.Serial
	d.channels = slices.Clone(channels)
	return nil
}

// unanswered turns the failure of a command by a known device into what becomes
// of the connection.
func (l *link) unanswered(err error, verb protocol.Verb) error {
	switch {
	case !errors.Is(err, errLate):
		return err
	case l.asking.refusal != "":
		return fmt.Errorf("%w: %s: %s", ErrRefused, verb, l.asking.refusal)
	}
	return &lostError{fmt.Errorf("it does not answer %q", verb)}
}

// watch listens to a running device until something is wrong with it.
func (l *link) watch(ctx context.Context) error {
	echoAt := l.now()
	for {
		quietAt := l.hearing.goodAt + l.s.cfg.SilentAfter
		var err error
		switch now := l.now(); {
		case now >= quietAt:
			err = l.silent(ctx)
		case now >= echoAt:
			// A round trip bounds the delay of the link. Nobody waits for it.
			echoAt = now + l.s.cfg.EchoEvery
			err = l.ask(ctx, protocol.EchoMe, 1)
		default:
			err = l.await(ctx, min(quietAt, echoAt), never)
		}
		if err != nil && !errors.Is(err, errLate) {
			return err
		}
	}
}

// silent asks a device that has said nothing for too long who it is.
func (l *link) silent(ctx context.Context) error {
	since := l.hearing.goodAt
	quiet := l.now() - since
	l.event(recording.Silent, fmt.Sprintf("%.1f s", quiet.Seconds()))
	err := l.ask(ctx, protocol.Who, tries)
	switch {
	case errors.Is(err, errLate) && l.hearing.goodAt > since:
		return nil // it speaks again, whether it heard us or not
	case errors.Is(err, errLate):
		return &lostError{fmt.Errorf("no line since %.1f s, and no answer", l.realS(l.now()-since))}
	case err == nil && !l.device.running:
		return errRestarted
	}
	return err
}

// farewell tells a device to rest and records what it says until it does.
func (l *link) farewell(ctx context.Context) {
	if !l.device.known || ctx.Err() != nil {
		return
	}
	// Neither a command cut short by the end nor an unanswered farewell changes
	// what was captured.
	if l.asking.verb != "" {
		_ = l.await(ctx, l.asking.until, l.asking.complete)
	}
	_ = l.ask(ctx, protocol.Rest, farewellTries)
}

// ask sends a command, again after AnswerWait, and waits for its answer; the
// error after the last try is errLate. A refusal ends it at once with errLate
// too, but for a device that is only busy: that is asked again.
func (l *link) ask(ctx context.Context, verb protocol.Verb, tries int) error {
	a := &l.asking
	*a = asking{verb: verb, first: a.token + 1, token: a.token}
	err := errLate
	for try := 0; try < tries && errors.Is(err, errLate); try++ {
		a.token++
		if err := l.send(protocol.Command{Verb: verb, Token: a.token}); err != nil {
			return err
		}
		a.until = l.now() + l.s.cfg.AnswerWait
		err = l.await(ctx, a.until, a.complete)
		if err == nil && a.refused() {
			err = errLate
			break
		}
	}
	if ctx.Err() == nil {
		a.verb = ""
	}
	return err
}

func (l *link) send(c protocol.Command) error {
	line, err := protocol.AppendCommand(nil, c)
	if err != nil {
		return err
	}
	l.event(recording.Sent, string(line[:len(line)-1]))
	if err := l.conn.send(line); err != nil {
		return &lostError{err}
	}
	return nil
}

// refused reports whether the device will not do it, now or later.
func (a *asking) refused() bool { return a.refusal != "" && a.refusal != whyBusy }

// complete reports whether the command is answered whole, or refused.
func (a *asking) complete() bool {
	if a.refused() {
		return true
	}
	if a.verb != protocol.Who {
		return a.done
	}
	if a.here != nil && a.here.Version != protocol.Version {
		return true // what follows may mean anything
	}
	return a.done && a.here != nil && len(a.channels) == a.here.Channels
}
