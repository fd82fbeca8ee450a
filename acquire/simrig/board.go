package simrig

import (
	"fmt"
	"math"

	"tautramp/protocol"
)

const (
	model = "rehearsal"
	never = math.MaxFloat64
	// leastPeriodS is the shortest sample period that a board keeps, s.
	leastPeriodS = 0.001
	// phaseS keeps the channels of a board from sampling at one instant.
	phaseS = 0.0013
)

// task is something that a board does at an instant of the rig's timeline, and
// again at the instant that it returns.
type task struct {
	dueS float64
	fire func(view) float64
}

// Board is the device side of the wire: a state machine that samples the rig,
// answers commands, and drops whole lines when nobody takes them. Serve
// connects it. All its state is guarded by the rig's lock.
type Board struct {
	rig      *Rig
	index    int
	spec     BoardSpec
	serial   string
	channels []*channel
	tasks    []*task                // while running
	presses  []*task                // from the start of the drive
	switchOn func(atS float64) bool // the foot switch; nil: none is watched
	booted   bool
	bootID   uint32
	bootS    float64 // rig's timeline at boot
	bootTick uint32
	running  bool
	seq      uint16
	dropped  uint32
	refused  uint32
	strange  int
	plugged  bool
	out      []byte        // whole lines that wait for the line
	ready    chan struct{} // holds one token while out is not empty
	command  []byte        // bytes since the last LF, at most one more than a command may have
	overlong uint32        // bytes of the open line beyond those
}

func newBoard(r *Rig, index int) (*Board, error) {
	makes := r.conf.channels
	if r.bench != nil {
		makes = r.bench.channels
	}
	channels, err := makes(index)
	if err != nil {
		return nil, err
	}
	spec := r.conf.Boards[index]
	return &Board{
		rig:      r,
		index:    index,
		spec:     spec,
		serial:   fmt.Sprintf("RR-%04d", index+1),
		channels: channels,
		bootID:   spec.Boots,
		ready:    make(chan struct{}, 1),
	}, nil
}

// hz is the true rate of the board's clock.
func (b *Board) hz() float64 { return float64(b.spec.TickHz) * (1 + b.spec.TickPPM*1e-6) }

// ticks since boot at an instant, and back.
func (b *Board) ticks(s float64) int64     { return int64((s - b.bootS) * b.hz()) }
func (b *Board) instant(n int64) float64   { return b.bootS + float64(n)/b.hz() }
func (b *Board) stamp(n int64) uint32      { return b.bootTick + uint32(n) }
func (b *Board) tickAt(s float64) uint32   { return b.stamp(b.ticks(s)) }
func (b *Board) period(c *channel) float64 { return float64(c.spec.Period) / b.hz() }

// boot starts the board afresh and says so.
func (b *Board) boot(s float64, cause protocol.Cause) {
	b.reset(s)
	b.announce(s, cause)
}

// bootLogging is the boot of a board that logs to a card without a host: it
// runs from the boot on (SPEC 10.1).
func (b *Board) bootLogging(s float64) {
	b.reset(s)
	b.run(s)
	b.announce(s, protocol.CausePower)
}

// reset puts the board at rest, numbers and counters at zero, the sample
// periods as built.
func (b *Board) reset(s float64) {
	b.bootTick = 0
	if !b.booted {
		b.bootTick = b.spec.StartTick
	}
	b.booted, b.bootS = true, s
	b.bootID++
	b.seq, b.dropped, b.refused = 0, 0, 0
	b.command, b.overlong = b.command[:0], 0
	b.rest()
	for _, c := range b.channels {
		c.spec.Period = c.builtPeriod
	}
}

// announce says that the board has booted, after an empty line, so that a line
// cut short does not spoil it (SPEC 2.9, 4.7).
func (b *Board) announce(s float64, cause protocol.Cause) {
	b.raw("\n")
	b.describe(s, cause)
	b.answer(protocol.Note{Text: "rehearsal rig: no oil, no band"})
}

// describe sends who this is and what its channels mean.
func (b *Board) describe(s float64, cause protocol.Cause) {
	h := protocol.Here{
		Version: protocol.Version, Model: model, Serial: b.serial,
		TickHz: b.spec.TickHz, Channels: len(b.channels),
		Up: b.tickAt(s), Running: b.running, Cause: cause,
		Simulated: true,
	}
	if !b.spec.NoBootID {
		h.Boot, h.HasBoot = b.bootID, true
	}
	b.answer(h)
	for _, c := range b.channels {
		b.answer(c.spec)
	}
}

// run starts the samples.
func (b *Board) run(s float64) {
	if b.running {
		return
	}
	b.running = true
	for i, c := range b.channels {
		c.task = &task{fire: func(v view) float64 { return b.sample(c, v) }}
		b.schedule(c, s, float64(i)*phaseS)
		b.tasks = append(b.tasks, c.task)
	}
	b.tasks = append(b.tasks, &task{s + 1, b.beat})
	if every := b.rig.conf.StrangeS; every > 0 {
		b.tasks = append(b.tasks, &task{s + every, b.sayStrange})
	}
	b.rig.boardRuns(s)
}

// rest stops them.
func (b *Board) rest() { b.running, b.tasks = false, nil }

// schedule sets a channel's next sample one period from now, and phase later.
func (b *Board) schedule(c *channel, s, phase float64) {
	c.open = false
	c.tick = b.ticks(s) + int64(c.spec.Period) + int64(phase*b.hz())
	c.task.dueS = b.opening(c, s)
}

// opening is when the window of a channel's next sample opens, or its instant
// where it has none.
func (b *Board) opening(c *channel, notBefore float64) float64 {
	return max(notBefore, b.instant(c.tick)-b.window(c)/2)
}

// window is a channel's averaging time; it fits into its period.
func (b *Board) window(c *channel) float64 {
	if c.sum == nil {
		return 0
	}
	return min(c.WindowS, 0.9*b.period(c))
}

// sample is one half of a channel's sampling: it opens the window, or closes
// it and sends the mean with the tick of the window's middle.
func (b *Board) sample(c *channel, v view) float64 {
	now := v.t
	if c.DelayS > 0 {
		v = b.rig.look(now - c.DelayS)
	}
	if w := b.window(c); w > 0 && !c.open {
		c.begin(v)
		return max(now, b.instant(c.tick)+w/2)
	}
	val := protocol.Val{Channel: c.spec.ID, Tick: b.stamp(c.tick)}
	val.Count, val.Status = c.read(v)
	val.HasCount = val.Status != protocol.Absent
	val.Seq = b.number()
	if c.kept != nil {
		*c.kept = append(*c.kept, Sample{T: b.instant(c.tick), Count: val.Count, Status: val.Status})
	} else {
		b.numbered(val)
	}
	period := int64(c.spec.Period)
	if !val.HasCount {
		period = max(period, int64(b.spec.TickHz)) // SPEC 6.5
	}
	c.tick += period
	return b.opening(c, now)
}

func (b *Board) beat(v view) float64 {
	b.numbered(protocol.Beat{Seq: b.number(), Tick: b.tickAt(v.t), Dropped: b.dropped, Refused: b.refused})
	return v.t + 1
}

// sayStrange sends a record of a type that version 1 has not: a reader must
// pass over it.
func (b *Board) sayStrange(v view) float64 {
	words := []string{"lamp", "tilt", "supply"}
	word := words[b.strange%len(words)]
	b.unnumbered(protocol.Unknown{Word: word, Body: fmt.Sprintf("%s %d %08x", word, b.strange, b.tickAt(v.t))})
	b.strange++
	return v.t + b.rig.conf.StrangeS
}

// plan sets the button presses against the start of the drive.
func (b *Board) plan(driveStartS float64) {
	for _, p := range b.rig.conf.Presses {
		if p.Board != b.index {
			continue
		}
		id, down := p.ID, true
		if id == 0 {
			id = '1'
		}
		hold := orElse(p.HoldS, 0.2)
		b.presses = append(b.presses, &task{driveStartS + p.AtS, func(v view) float64 {
			b.numbered(protocol.Button{ID: id, Seq: b.number(), Tick: b.tickAt(v.t), Down: down})
			if !down {
				return never
			}
			down = false
			return v.t + hold
		}})
	}
}

// next is the board's task that is due first, or nil.
func (b *Board) next() *task {
	var first *task
	for _, list := range [][]*task{b.tasks, b.presses} {
		for _, t := range list {
			if first == nil || t.dueS < first.dueS {
				first = t
			}
		}
	}
	return first
}

// number takes the next number, used up whether the line goes out or not.
func (b *Board) number() uint16 {
	n := b.seq
	b.seq++
	return n
}
