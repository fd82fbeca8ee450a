package protocoltest

import (
	"bytes"
	"errors"
	"fmt"

	"tautramp/protocol"
)

// Turn is one line of a conversation, its LF taken off, in the order in which
// the host sent and received.
type Turn struct {
	FromHost bool
	Text     []byte
}

// Conduct checks what SPEC asks of a device over time, which no single line can
// show: that it declares itself, numbers its lines, beats, rests when told to,
// answers each command, and sends no count outside what it declared. The wire
// must have lost nothing. Lines before the first "here" are passed over: a
// bootloader may have sent them. All faults are joined, each with its turn
// and clause; nil means that none was found.
func Conduct(turns []Turn) error {
	var c conduct
	for i, turn := range turns {
		c.turn = i + 1
		if turn.FromHost {
			c.command(turn.Text)
		} else {
			c.record(turn.Text)
		}
	}
	if c.open != nil {
		c.fault("7.2", "%s %02x was never answered", c.open.Verb, c.open.Token)
	}
	if c.greeted && c.owed > 0 {
		c.fault("5.1", "%d chan lines are missing", c.owed)
	}
	return errors.Join(c.faults...)
}

type conduct struct {
	turn   int
	faults []error

	greeted  bool // a here has come
	here     protocol.Here
	owed     int // chan lines still to come after it
	channels map[byte]protocol.Chan
	running  bool
	host     bool // a host has spoken: a logger is alone
	open     *protocol.Command

	next     uint16 // number of the next numbered line
	missing  uint32 // numbers passed over since boot
	refused  uint32
	tick     uint32 // of the last numbered line
	hasTick  bool
	ticks    map[byte]uint32 // of each channel's last sample
	beatTick uint32
	hasBeat  bool
}

func (c *conduct) fault(clause, format string, args ...any) {
	c.faults = append(c.faults, fmt.Errorf("turn %d, clause %s: %s", c.turn, clause, fmt.Sprintf(format, args...)))
}

func (c *conduct) command(text []byte) {
	cmd, bad := protocol.ParseCommand(text)
	switch {
	case bad != nil || cmd.Bare:
		return // no answer is owed, or none that ends
	case c.open != nil:
		c.fault("7.1", "%s is sent before %s is answered", cmd.Verb, c.open.Verb)
	}
	c.host, c.open = true, &cmd
}

func (c *conduct) record(text []byte) {
	if len(bytes.TrimSuffix(text, []byte{'\r'})) == 0 {
		return
	}
	r, bad := protocol.Parse(text)
	if h, ok := r.(protocol.Here); ok {
		c.hello(h)
		return
	}
	if !c.greeted {
		return
	}
	if bad != nil {
		c.fault(bad.Clause, "%v", bad)
		return
	}
	switch r := r.(type) {
	case protocol.Chan:
		c.declare(r)
	case protocol.Val:
		c.numbered(r.Seq, r.Tick)
		c.sample(r)
	case protocol.Button:
		c.numbered(r.Seq, r.Tick)
	case protocol.Beat:
		c.numbered(r.Seq, r.Tick)
		c.beat(r)
	case protocol.Did:
		c.did(r)
	case protocol.Wont:
		c.answer(r.Token, r.Verb)
	case protocol.Echo:
		c.answer(r.Token, string(protocol.EchoMe))
	}
}

// hello takes a here: of a new boot, or the answer to who.
func (c *conduct) hello(h protocol.Here) {
	if c.owed > 0 {
		c.fault("5.1", "%d chan lines are missing", c.owed)
	}
	boot := !c.greeted || h.Cause != protocol.CauseAsked || h.HasBoot && h.Boot != c.here.Boot
	if boot {
		if h.Running && c.host {
			c.fault("4.7", "a device that has booted is at rest")
		}
		if h.HasBoot && c.here.HasBoot && h.Boot <= c.here.Boot {
			c.fault("4.8", "boot id %08x after %08x", h.Boot, c.here.Boot)
		}
		*c = conduct{turn: c.turn, faults: c.faults, host: c.host}
	} else if h.Running != c.running {
		c.fault("5.1", "here says running: %t", h.Running)
	}
	c.greeted, c.here, c.owed, c.running = true, h, h.Channels, h.Running
	c.channels = map[byte]protocol.Chan{}
	if c.ticks == nil {
		c.ticks = map[byte]uint32{}
	}
}

func (c *conduct) declare(ch protocol.Chan) {
	if c.owed == 0 {
		c.fault("5.1", "more than %d chan lines", c.here.Channels)
		return
	}
	if _, twice := c.channels[ch.ID]; twice {
		c.fault("5.2", "channel %c twice", ch.ID)
	}
	c.owed--
	c.channels[ch.ID] = ch
}

// numbered checks what val, btn and beat share.
func (c *conduct) numbered(seq uint16, tick uint32) {
	if c.owed > 0 {
		c.fault("5.1", "a numbered line while %d chan lines are missing", c.owed)
	}
	if gap := seq - c.next; gap < 1<<15 {
		c.missing += uint32(gap)
	} else {
		c.fault("4.4", "number %04x after %04x", seq, c.next-1)
	}
	c.next = seq + 1
	if back := int32(c.tick - tick); c.hasTick && back >= int32(c.here.TickHz) {
		c.fault("4.3", "tick %08x is a second or more before the line before it", tick)
	}
	c.tick, c.hasTick = tick, true
	if silence := int32(tick - c.beatTick); c.running && c.hasBeat && silence > c.beatTicks() {
		c.fault("4.6", "%d ticks without a beat", silence)
		c.hasBeat = false
	}
}

// beatTicks is one second, and a twentieth for the device's own scheduling.
func (c *conduct) beatTicks() int32 { return int32(c.here.TickHz + c.here.TickHz/20) }

func (c *conduct) sample(v protocol.Val) {
	ch, ok := c.channels[v.Channel]
	switch {
	case !c.running:
		c.fault("7.6", "a sample while at rest")
	case !ok:
		c.fault("5.2", "channel %c is not declared", v.Channel)
		return
	}
	if last, ok := c.ticks[v.Channel]; ok && int32(v.Tick-last) <= 0 {
		c.fault("4.3", "tick %08x of channel %c does not rise", v.Tick, v.Channel)
	}
	c.ticks[v.Channel] = v.Tick
	inside := v.Count > ch.Low && v.Count < ch.High
	if v.Status == protocol.Good && !inside || v.Status == protocol.Low && v.Count != ch.Low ||
		v.Status == protocol.High && v.Count != ch.High {
		c.fault("6.5", "status %c with count %d, range %d to %d", v.Status, v.Count, ch.Low, ch.High)
	}
}

func (c *conduct) beat(b protocol.Beat) {
	if b.Dropped != c.missing {
		c.fault("4.5", "the beat says %d lines dropped, %d numbers are missing", b.Dropped, c.missing)
	}
	if b.Refused < c.refused {
		c.fault("5.5", "refused bytes fell from %d to %d", c.refused, b.Refused)
	}
	c.refused, c.beatTick, c.hasBeat = b.Refused, b.Tick, true
}

func (c *conduct) did(d protocol.Did) {
	c.answer(d.Token, string(d.Verb))
	switch d.Verb {
	case protocol.Run:
		if !c.running {
			c.running, c.hasBeat = true, false
		}
	case protocol.Rest:
		c.running = false
	case protocol.Who:
		if c.here.Cause != protocol.CauseAsked || c.owed > 0 {
			c.fault("7.4", "who is done before here and its %d chan lines", c.here.Channels)
		}
	}
}

func (c *conduct) answer(token byte, verb string) {
	switch {
	case c.open == nil:
		c.fault("7.2", "an answer to %s %02x, which nobody asked", verb, token)
	case c.open.Token != token || string(c.open.Verb) != verb:
		c.fault("7.2", "an answer to %s %02x instead of %s %02x", verb, token, c.open.Verb, c.open.Token)
	}
	c.open = nil
}
