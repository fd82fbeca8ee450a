package acquire

import (
	"context"
	"strconv"
	"sync"
	"time"

	"tautramp/acquire/recording"
)

// Run captures until ctx is cancelled, which is the ordinary end: every device
// is then told to rest, and Run returns nil. It returns early with a
// *DeviceError when a device cannot be captured, and with the recording's own
// error, at once, when that cannot be written. Everything heard up to the end
// is in the recording; Run does not close it.
func Run(ctx context.Context, cfg Config) error {
	if err := cfg.check(); err != nil {
		return err
	}
	s := newSession(ctx, cfg, newGate(len(cfg.Devices), cfg.Fits))
	defer s.waitTicks()
	var links sync.WaitGroup
	for i := range cfg.Devices {
		links.Go(func() { s.failDevice(newLink(s, i).run()) })
	}
	go func() {
		links.Wait()
		close(s.items)
	}()
	s.consume()
	if s.broken != nil {
		return s.broken
	}
	return s.failed
}

// session is one run: the links put what they hear into one bounded stream, and
// consume alone writes it. A slow disk or OnEntry fills the stream; then the
// links wait, their readers wait, and the operating system holds the bytes.
type session struct {
	cfg   Config
	items chan item
	ticks chan struct{}
	gate  *gate

	going   context.Context // ends with the capture: time to tell the devices to rest
	leave   context.CancelFunc
	talking context.Context // outlives going, ends when not even farewells make sense
	hangUp  context.CancelFunc
	ticking sync.WaitGroup

	once   sync.Once
	failed error // of the first device that failed

	// What follows belongs to consume.
	broken   error         // of the recording
	skew     time.Time     // wall clock when the monotonic clock was at 0, as last seen
	lookedAt time.Duration // when that was
}

// item is one entry on its way to the recording, with the wall clock of its
// instant.
type item struct {
	entry recording.Entry
	wall  time.Time
}

const (
	streamLength = 256
	pauseJump    = 2 * time.Second        // of the wall clock: the computer slept
	tickEvery    = 100 * time.Millisecond // real time
)

func newSession(ctx context.Context, cfg Config, g *gate) *session {
	s := &session{
		cfg: cfg, items: make(chan item, streamLength), ticks: make(chan struct{}),
		gate: g,
	}
	s.going, s.leave = context.WithCancel(ctx)
	s.talking, s.hangUp = context.WithCancel(context.WithoutCancel(ctx))
	s.ticking.Go(s.tick)
	return s
}

func (s *session) tick() {
	every := time.Duration(float64(tickEvery) * s.cfg.Clock.Factor())
	for s.cfg.Clock.Sleep(s.talking, every) == nil {
		select {
		case s.ticks <- struct{}{}:
		case <-s.talking.Done():
		}
	}
}

func (s *session) waitTicks() {
	s.leave()
	s.hangUp()
	s.ticking.Wait()
}

// failDevice ends the capture for all when one device's link ended in error.
func (s *session) failDevice(err error) {
	if err != nil {
		s.once.Do(func() { s.failed = err })
		s.leave()
	}
}

// consume writes the stream until every link has ended.
func (s *session) consume() {
	operator := s.cfg.Operator
	for {
		select {
		case it, ok := <-s.items:
			if !ok {
				s.drain(operator)
				return
			}
			s.take(it)
		case ev, ok := <-operator:
			if !ok {
				operator = nil
				continue
			}
			s.take(s.event(-1, ev))
		case <-s.ticks:
			s.onTime()
		}
	}
}

// drain takes what the operator said before the end, such as why it ended.
func (s *session) drain(operator <-chan recording.Event) {
	for {
		select {
		case ev, ok := <-operator:
			if !ok {
				return
			}
			s.take(s.event(-1, ev))
		default:
			return
		}
	}
}

func (s *session) event(device int, ev recording.Event) item {
	e := recording.Entry{Device: device, At: s.cfg.Clock.Now(), HasAt: true, Event: &ev}
	return item{entry: e, wall: s.cfg.Clock.Wall()}
}

func (s *session) take(it item) {
	s.notePause(it.entry.At, it.wall)
	s.record(it.entry)
	s.seal(it.entry.At, it.wall)
}

// onTime keeps the blocks and the watch over the wall clock going when nothing
// comes in.
func (s *session) onTime() {
	at, wall := s.cfg.Clock.Now(), s.cfg.Clock.Wall()
	s.notePause(at, wall)
	s.seal(at, wall)
}

// notePause writes an event when the wall clock jumped against the monotonic
// one since the last look. Two links may be a little out of order: what is not
// newer than the last look says nothing.
func (s *session) notePause(at time.Duration, wall time.Time) {
	if at <= s.lookedAt {
		return
	}
	skew := wall.Add(-at)
	jump := skew.Sub(s.skew)
	first := s.skew.IsZero()
	s.skew, s.lookedAt = skew, at
	if !first && jump.Abs() > pauseJump {
		text := strconv.FormatFloat(jump.Seconds(), 'f', 3, 64)
		s.record(recording.Entry{
			Device: -1, At: at, HasAt: true,
			Event: &recording.Event{Kind: recording.Paused, Text: text},
		})
	}
}

// seal ends the open block when it is time.
func (s *session) seal(at time.Duration, wall time.Time) {
	if s.broken != nil || !s.cfg.Out.Due(at) {
		return
	}
	if err := s.cfg.Out.Tick(at, wall); err != nil {
		s.breakOff(err)
		return
	}
	s.tell(s.show(recording.WallEntry(at, wall)))
}

// record writes one entry, shows it, and writes what the answer to it is.
func (s *session) record(e recording.Entry) { s.tell(s.write(e)) }

func (s *session) tell(events []recording.Event) {
	for len(events) > 0 {
		next := s.event(-1, events[0]).entry
		events = append(events[1:], s.write(next)...)
	}
}

// write returns what OnEntry wants written next; once the recording has failed
// it does nothing. An entry that is refused ends the capture as well: nothing
// may be missing from a recording unseen.
func (s *session) write(e recording.Entry) []recording.Event {
	if s.broken != nil {
		return nil
	}
	if err := s.cfg.Out.Write(e); err != nil {
		s.breakOff(err)
		return nil
	}
	return s.show(e)
}

func (s *session) show(e recording.Entry) []recording.Event {
	if s.cfg.OnEntry == nil {
		return nil
	}
	return s.cfg.OnEntry(e)
}

// breakOff ends the capture without farewells.
func (s *session) breakOff(err error) {
	s.broken = err
	s.hangUp()
	s.leave()
}
