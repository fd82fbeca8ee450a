// Package simrig is a simulated rig: a tensioner with oil or a screw, its band
// and the sensors on it, integrated over time, and boards that speak the device
// side of the wire. Start with New; then Serve each of the Boards, WriteLog
// for the text of a memory card, or Samples for the readings without a wire.
//
// The physics is a force balance and a friction state, stepped in time.
// Deliberately absent: any closed form of the two branches, any splitter or
// estimator, and ports (callers bring streams). What was planted goes to
// tests, by Truth, and never on the wire.
package simrig

import (
	"fmt"
	"io"
	"sync"

	"tautramp/acquire/mill"
)

// Rig is one simulated rig. Its methods may be called from any goroutine.
type Rig struct {
	conf   rehearsal
	boards []*Board
	done   chan struct{}

	mu     sync.Mutex // guards all below and the boards' state
	world  *world     // nil for a bench
	bench  *bench     // nil for a mill
	closed bool       // done is closed
}

// New builds a rig at rest. Its errors are ErrConfig, ErrNotRehearsable,
// ErrOverLimit and mill.ErrUnknownName.
func New(c Config) (*Rig, error) {
	conf, err := resolve(c)
	if err != nil {
		return nil, err
	}
	r := &Rig{conf: conf, done: make(chan struct{}), world: newWorld(conf)}
	for i := range conf.Boards {
		b, err := newBoard(r, i)
		if err != nil {
			return nil, err
		}
		r.boards = append(r.boards, b)
	}
	return r, nil
}

// Boards are the rig's boards, one or two.
func (r *Rig) Boards() []*Board { return append([]*Board(nil), r.boards...) }

// Truth is what was planted.
func (r *Rig) Truth() Truth { return r.conf.truth }

// Tensioner is the one that is rehearsed, as the profile describes it.
func (r *Rig) Tensioner() mill.Tensioner { return r.conf.tensioner }

// Plan is how many cycles the drive has: for exercise, and to the top.
func (r *Rig) Plan() (exercise, ramps int) {
	return cycles(r.conf.Drive.Exercise, 1), cycles(r.conf.Drive.Ramps, 3)
}

// Done is closed when the drive has ended. The boards stream on at rest.
func (r *Rig) Done() <-chan struct{} { return r.done }

// boardRuns starts the drive once every board is running.
func (r *Rig) boardRuns(s float64) {
	for _, b := range r.boards {
		if !b.running {
			return
		}
	}
	if r.bench != nil {
		if r.bench.begin(s) {
			r.boards[0].watchSwitch(s, func(float64) bool { return r.bench.pressed })
		}
		return
	}
	if r.world.drive != nil && !(r.conf.Drive.Repeat && r.world.drive.over()) {
		return
	}
	r.world.start(s)
	for _, b := range r.boards {
		b.plan(s)
	}
	if r.conf.Drive.Presses && r.boards[0].switchOn == nil {
		r.boards[0].watchSwitch(s, func(at float64) bool { return r.world.drive.pressesNow(at - r.world.startS) })
	}
}

// advance brings rig and boards to an instant: every task that falls due on
// the way is fired in its turn. An instant in the past changes nothing.
func (r *Rig) advance(toS float64) {
	for {
		var first *task
		for _, b := range r.boards {
			if t := b.next(); t != nil && (first == nil || t.dueS < first.dueS) {
				first = t
			}
		}
		if first == nil || first.dueS > toS {
			break
		}
		r.pass(first.dueS)
		first.dueS = first.fire(r.look(first.dueS))
	}
	r.pass(toS)
	if r.over() && !r.closed {
		r.closed = true
		close(r.done)
	}
}

// pass lets time go by for what the boards measure.
func (r *Rig) pass(s float64) {
	if r.bench != nil {
		r.bench.advance(s)
		return
	}
	r.world.advance(s)
}

// look is what there is to measure at an instant.
func (r *Rig) look(s float64) view {
	if r.bench != nil {
		return r.bench.at(s)
	}
	return r.world.at(s)
}

// over tells whether the drive, or the operator's work, is done.
func (r *Rig) over() bool {
	if r.bench != nil {
		return r.bench.begun && r.bench.hand.over()
	}
	return r.world.drive != nil && r.world.drive.over()
}

// logTailS is how long a log goes on after its drive has ended, s.
const logTailS = 2

// WriteLog runs the whole drive flat out, without a clock, and writes what one
// board would have put on a memory card. The rig itself is left as it is, so
// the same text comes each time. A rig of two boards or with a drive that
// never ends has no such log: ErrConfig; nor has a bench. One that does not get
// to its end is ErrNoEnd.
func (r *Rig) WriteLog(w io.Writer) error {
	if r.bench != nil || len(r.boards) != 1 || r.conf.Drive.Shape == Still {
		return fmt.Errorf("%w: a log needs a mill, one board and a drive that ends", ErrConfig)
	}
	fresh, err := New(r.conf.given)
	if err != nil {
		return err
	}
	b := fresh.boards[0]
	b.plugged = true
	b.bootLogging(0)
	return fresh.runOut(func() error {
		if _, err := w.Write(b.take(nil)); err != nil {
			return fmt.Errorf("writing the log: %w", err)
		}
		return nil
	})
}

// Moment is one instant of what really happened, for tests.
type Moment struct {
	T          float64 // s into the drive
	PressurePa float64
	PullN      float64 // F, both spans
	ExtensionM float64 // between the clamps, true
	TravelM    float64 // of the wheel; 0 where the band is just taut
	TorqueNM   float64 // of the hand at the screw
	TurnRad    float64 // of the hand
	SqueezeM   float64 // of the springs
}

// Trace runs the drive flat out and tells what really happened, every so many
// seconds. It takes nothing from the boards.
func (r *Rig) Trace(everyS float64) ([]Moment, error) {
	if r.bench != nil || !(everyS >= leastStepS) || r.conf.Drive.Shape == Still {
		return nil, fmt.Errorf("%w: a trace every %g s of drive shape %q", ErrConfig, everyS, r.conf.Drive.Shape)
	}
	return newWorld(r.conf).trace(everyS)
}
