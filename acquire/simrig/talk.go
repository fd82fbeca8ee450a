package simrig

import "tautramp/protocol"

// Room kept in the queue: for beats, so that a full one still tells what it
// drops, and beyond it for answers, which are never dropped.
const (
	beatRoom   = 2048
	answerRoom = 2 * beatRoom
)

// numbered queues a numbered line, or drops it whole and counts it.
func (b *Board) numbered(r protocol.Record) {
	limit := b.spec.QueueBytes
	if _, beat := r.(protocol.Beat); beat {
		limit += beatRoom
	}
	if !b.queue(r, limit) && b.dropped < 1<<32-1 {
		b.dropped++
	}
}

// unnumbered queues a line that nobody misses when it is dropped.
func (b *Board) unnumbered(r protocol.Record) { b.queue(r, b.spec.QueueBytes) }

// answer queues a line that the host waits for.
func (b *Board) answer(r protocol.Record) { b.queue(r, b.spec.QueueBytes+answerRoom) }

// queue appends a whole line if the line is connected and has room. A record
// that cannot be encoded is dropped like any other: New has tried every form.
func (b *Board) queue(r protocol.Record, limit int) bool {
	if !b.plugged || len(b.out)+protocol.MaxLine > limit {
		return false
	}
	out, err := protocol.Append(b.out, r)
	b.out = out
	b.wake()
	return err == nil
}

func (b *Board) raw(text string) {
	if b.plugged {
		b.out = append(b.out, text...)
		b.wake()
	}
}

func (b *Board) wake() {
	select {
	case b.ready <- struct{}{}:
	default:
	}
}

// receive takes bytes from the host at an instant, and carries out each
// command at its LF.
func (b *Board) receive(chunk []byte, s float64) {
	for _, c := range chunk {
		switch {
		case c == '\n':
			b.obey(s)
			b.command, b.overlong = b.command[:0], 0
		case len(b.command) >= protocol.MaxCommand:
			b.overlong++
		default:
			b.command = append(b.command, c)
		}
	}
}

// obey carries out the line in b.command.
func (b *Board) obey(s float64) {
	line := b.command
	if len(line) == 0 || len(line) == 1 && line[0] == '\r' {
		return
	}
	c, err := protocol.ParseCommand(line)
	switch {
	case err != nil && c.Verb == "":
		b.refuse(uint32(len(line)) + b.overlong + 1)
	case err != nil && !known(c.Verb):
		b.answer(protocol.Wont{Token: c.Token, Verb: string(c.Verb), Why: "unknown"})
	case err != nil:
		b.answer(protocol.Wont{Token: c.Token, Verb: string(c.Verb), Why: "fields"})
	default:
		b.carryOut(c, s)
	}
}

// refuse counts the bytes of a command that gets no answer.
func (b *Board) refuse(bytes uint32) {
	b.refused += min(bytes, 1<<32-1-b.refused)
}

func known(v protocol.Verb) bool {
	switch v {
	case protocol.Who, protocol.Run, protocol.Rest, protocol.Pace, protocol.EchoMe:
		return true
	}
	return false
}

func (b *Board) carryOut(c protocol.Command, s float64) {
	switch c.Verb {
	case protocol.Who:
		b.describe(s, protocol.CauseAsked)
		if c.Bare {
			return
		}
	case protocol.Run:
		b.answer(protocol.Did{Token: c.Token, Verb: c.Verb})
		b.run(s)
		return
	case protocol.Rest:
		b.rest()
	case protocol.Pace:
		if why := b.pace(c, s); why != "" {
			b.answer(protocol.Wont{Token: c.Token, Verb: string(c.Verb), Why: why})
			return
		}
	case protocol.EchoMe:
		b.answer(protocol.Echo{Token: c.Token, Tick: b.tickAt(s)})
		return
	}
	b.answer(protocol.Did{Token: c.Token, Verb: c.Verb})
}

// pace sets a channel's period until the next boot; why it cannot, or "".
func (b *Board) pace(c protocol.Command, s float64) (why string) {
	if float64(c.Period) < leastPeriodS*float64(b.spec.TickHz) {
		return "period"
	}
	for _, ch := range b.channels {
		if ch.spec.ID == c.Channel {
			ch.spec.Period = c.Period
			if b.running {
				b.schedule(ch, s, 0)
			}
			return ""
		}
	}
	return "channel"
}
