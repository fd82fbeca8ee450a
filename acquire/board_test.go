package acquire

import (
	"bufio"
	"context"
	"errors"
	"io"
	"net"
	"strings"
	"sync"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// board is a small scripted device behind a pipe. Its behaviour is changed by
// the hooks; without them it is a healthy board that boots when it is opened.
type board struct {
	serial   string
	channels []protocol.Chan
	noBoot   bool          // it has no memory for a count of boots
	bootTime time.Duration // after opening, until the boot line; negative: opening does not reset it
	period   time.Duration // between samples of each channel; 0 means 100 ms

	// dialled may refuse the n-th opening, counted from 1.
	dialled func(n int) error
	// heard may answer a command instead of the board; n counts the commands
	// of that verb from 1. Not handled: the board answers as it should.
	heard func(l *life, c protocol.Command, n int) (handled bool)
	// atTime runs once per opening, so long after it.
	atTime map[time.Duration]func(l *life)
	// greeting is sent raw as soon as the port is open.
	greeting string

	mu    sync.Mutex
	dials int
	boots uint32
	seen  map[protocol.Verb]int

	asked   time.Time // the command that is not answered yet, or zero
	crowded int       // commands that came too early after it (wire rule 7.1)
}

// life is one opening of the board's port.
type life struct {
	b       *board
	c       net.Conn
	opening int
	running bool
	mute    bool // sends no samples
	seq     uint16
	start   time.Time
}

var testPressure = protocol.Chan{
	ID: 'a', Quantity: protocol.Pressure, Unit: "[psi]", Mantissa: 1, Exponent: -1, ZeroCount: 0,
	Low: 0, High: 15000, Res: 1, Period: 100_000, Shows: protocol.ShowsRounded,
}

var testExtension = protocol.Chan{
	ID: 'b', Quantity: protocol.Extension, Unit: "[in_i]", Mantissa: 5, Exponent: -5, ZeroCount: 0,
	Low: -10000, High: 10000, Res: 1, Period: 100_000, Shows: protocol.ShowsTruncated,
}

func newBoard(serial string, channels ...protocol.Chan) *board {
	return &board{serial: serial, channels: channels, bootTime: 800 * time.Millisecond}
}

func (b *board) dial(context.Context) (io.ReadWriteCloser, error) {
	b.mu.Lock()
	b.dials++
	n := b.dials
	b.mu.Unlock()
	if b.dialled != nil {
		if err := b.dialled(n); err != nil {
			return nil, err
		}
	}
	host, far := net.Pipe()
	l := &life{b: b, c: far, opening: n, start: time.Now()}
	go l.serve()
	return host, nil
}

// serve is the board's only writer.
func (l *life) serve() {
	defer l.c.Close()
	commands := make(chan string)
	go func() {
		defer close(commands)
		for in := bufio.NewScanner(l.c); in.Scan(); {
			commands <- in.Text()
		}
	}()
	l.raw(l.b.greeting)
	var boot <-chan time.Time
	if l.b.bootTime >= 0 {
		boot = time.After(l.b.bootTime)
	} else if l.opening == 1 {
		l.b.boots++
	}
	period := l.b.period
	if period == 0 {
		period = 100 * time.Millisecond
	}
	samples := time.NewTicker(period)
	defer samples.Stop()
	hooks := make(chan func(*life))
	for after, hook := range l.b.atTime {
		timer := time.AfterFunc(after, func() { hooks <- hook })
		defer timer.Stop()
	}
	booted := boot == nil
	for {
		select {
		case <-boot:
			l.reset(protocol.CausePower)
			booted = true
		case <-samples.C:
			l.sample()
		case hook := <-hooks:
			hook(l)
		case text, ok := <-commands:
			if !ok {
				return
			}
			if booted {
				l.obey(text)
			}
		}
	}
}

// reset starts the board again.
func (l *life) reset(why protocol.Cause) {
	l.b.boots++
	l.b.mu.Lock()
	l.b.asked = time.Time{}
	l.b.mu.Unlock()
	l.running = false
	l.send(l.here(why))
}

func (l *life) here(why protocol.Cause) protocol.Here {
	boots := l.b.boots
	if l.b.noBoot {
		boots = 0
	}
	return protocol.Here{
		Version: 1, Model: "testboard", Serial: l.b.serial, Boot: boots, HasBoot: !l.b.noBoot,
		TickHz: 1_000_000, Channels: len(l.b.channels), Up: l.tick(), Running: l.running, Cause: why,
	}
}

func (l *life) tick() uint32 { return uint32(time.Since(l.start).Microseconds()) }

func (l *life) obey(text string) {
	c, bad := protocol.ParseCommand([]byte(text))
	if bad != nil {
		panic("the capture sent a bad command: " + text)
	}
	l.b.mu.Lock()
	if l.b.seen == nil {
		l.b.seen = map[protocol.Verb]int{}
	}
	l.b.seen[c.Verb]++
	n := l.b.seen[c.Verb]
	if time.Since(l.b.asked) < time.Second {
		l.b.crowded++
	}
	l.b.asked = time.Now()
	l.b.mu.Unlock()
	if l.b.heard == nil || !l.b.heard(l, c, n) {
		l.answer(c)
	}
}

func (l *life) answer(c protocol.Command) {
	switch c.Verb {
	case protocol.Who:
		l.send(l.here(protocol.CauseAsked))
		for _, ch := range l.b.channels {
			l.send(ch)
		}
	case protocol.Run:
		l.running = true
	case protocol.Rest:
		l.running = false
	case protocol.EchoMe:
		l.send(protocol.Echo{Token: c.Token, Tick: l.tick()})
		return
	}
	l.send(protocol.Did{Token: c.Token, Verb: c.Verb})
}

func (l *life) sample() {
	if !l.running || l.mute {
		return
	}
	for _, ch := range l.b.channels {
		l.seq++
		l.send(protocol.Val{Channel: ch.ID, Seq: l.seq, Tick: l.tick(), Status: protocol.Good, Count: int32(l.seq), HasCount: true})
	}
}

func (l *life) send(r protocol.Record) {
	switch r.(type) {
	case protocol.Did, protocol.Wont, protocol.Echo:
		l.b.mu.Lock()
		l.b.asked = time.Time{}
		l.b.mu.Unlock()
	}
	line, err := protocol.Append(nil, r)
	if err != nil {
		panic(err)
	}
	l.raw(string(line))
}

// raw ignores an error: the host has hung up, and serve sees that by itself.
func (l *life) raw(text string) {
	if text != "" {
		_, _ = io.WriteString(l.c, text)
	}
}

// count is how often the board heard a verb.
func (b *board) count(v protocol.Verb) int {
	b.mu.Lock()
	defer b.mu.Unlock()
	return b.seen[v]
}

// memory is a recording's file in memory.
type memory struct{ strings.Builder }

func (m *memory) Sync() error  { return nil }
func (m *memory) Close() error { return nil }

// rig is a capture of boards into memory.
type rig struct {
	t      *testing.T
	boards []*board
	file   memory
	cfg    Config
	end    time.Duration // when the capture is cancelled; 0 means never
}

func newHeader(boards ...*board) recording.Header {
	h := recording.Header{
		Program: "test", Started: time.Now(), Source: recording.Live, ClockFactor: 1,
		Tensioner: "T-1", Band: "QW-6", Plan: recording.Plan{Ramps: 1}, Profile: mill.Example(),
	}
	for i := range boards {
		h.Devices = append(h.Devices, "port"+string(rune('A'+i)))
	}
	return h
}

func newRig(t *testing.T, boards ...*board) *rig {
	r := &rig{t: t, boards: boards, cfg: Config{Clock: NewClock(1)}}
	h := newHeader(boards...)
	for i, b := range boards {
		r.cfg.Devices = append(r.cfg.Devices, Device{Name: h.Devices[i], Dial: b.dial})
	}
	var err error
	r.cfg.Out, err = recording.NewWriter(&r.file, h, 0)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// run captures, closes the recording and reads it back.
func (r *rig) run() ([]recording.Entry, error) {
	r.t.Helper()
	ctx, cancel := context.WithCancel(r.t.Context())
	defer cancel()
	if r.end > 0 {
		defer time.AfterFunc(r.end, cancel).Stop()
	}
	failed := Run(ctx, r.cfg)
	if err := r.cfg.Out.Close(r.cfg.Clock.Now(), r.cfg.Clock.Wall()); err != nil && !errors.Is(failed, err) {
		r.t.Fatal(err)
	}
	for i, b := range r.boards {
		if b.crowded > 0 {
			r.t.Errorf("board %d got %d commands while another was not answered", i, b.crowded)
		}
	}
	rec, err := recording.Read(strings.NewReader(r.file.String()))
	if err != nil {
		r.t.Fatal(err)
	}
	return rec.Entries, failed
}

// script is the recording in words: "0 sent who", "0 here power", "0 val". A run
// of samples is one word; wall clock and time echoes are left out.
func script(entries []recording.Entry) string {
	var words []string
	for _, e := range entries {
		word := string(rune('0'+e.Device)) + " " + wordOf(e)
		if e.Device < 0 {
			word = "- " + wordOf(e)
		}
		quiet := strings.HasSuffix(word, "wall") || strings.Contains(word, "echo")
		again := len(words) > 0 && words[len(words)-1] == word && strings.HasSuffix(word, "val")
		if !quiet && !again {
			words = append(words, word)
		}
	}
	return strings.Join(words, "\n") + "\n"
}

func wordOf(e recording.Entry) string {
	if ev := e.Event; ev != nil {
		if ev.Kind == recording.Sent {
			return "sent " + strings.Fields(ev.Text)[0]
		}
		return string(ev.Kind)
	}
	r, bad := protocol.Parse(e.Wire)
	if bad != nil {
		return "refused " + string(bad.Class)
	}
	switch r := r.(type) {
	case protocol.Here:
		return "here " + string(r.Cause)
	case protocol.Did:
		return "did " + string(r.Verb)
	case protocol.Wont:
		return "wont " + r.Verb
	case protocol.Val:
		return "val"
	case protocol.Chan:
		return "chan " + string(r.ID)
	case protocol.Echo:
		return "echo"
	case protocol.Note:
		return "note"
	}
	return "other"
}

// text is every event of a kind, its text.
func texts(entries []recording.Entry, kind recording.EventKind) (all []string) {
	for _, e := range entries {
		if e.Event != nil && e.Event.Kind == kind {
			all = append(all, e.Event.Text)
		}
	}
	return all
}
