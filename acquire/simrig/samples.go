package simrig

import (
	"fmt"
	"math"

	"tautramp/protocol"
)

// Samples is what one channel of the rig measured in a whole drive.
type Samples struct {
	Board   int // index
	Spec    protocol.Chan
	TickHz  uint32
	Samples []Sample
}

// Sample is one reading as the wire would carry it, at its true instant.
type Sample struct {
	T      float64 // s on the rig's timeline; on a board's clock it is T plus what the clock is off
	Count  int32   // meaningless unless Status has one
	Status protocol.Status
}

// Samples runs the whole drive flat out, without a clock or a line, and hands
// out what each channel measured, in the order of boards and channels: the
// same counts as WriteLog's, for a fraction of the time. The rig itself is left as it
// is. A drive that never ends is ErrConfig, one that does not get to its end
// ErrNoEnd.
func (r *Rig) Samples() ([]Samples, error) {
	if r.bench != nil || r.conf.Drive.Shape == Still {
		return nil, fmt.Errorf("%w: a bench, or a drive that never ends, has no end of its samples", ErrConfig)
	}
	fresh, err := New(r.conf.given)
	if err != nil {
		return nil, err
	}
	var list []Samples
	for i, b := range fresh.boards {
		b.reset(0)
		for _, c := range b.channels {
			kept := make([]Sample, 0, int(c.PerSecond*expectS))
			c.kept = &kept
			list = append(list, Samples{Board: i, Spec: c.spec, TickHz: b.spec.TickHz})
		}
	}
	for _, b := range fresh.boards {
		b.run(0)
	}
	if err := fresh.runOut(func() error { return nil }); err != nil {
		return nil, err
	}
	n := 0
	for _, b := range fresh.boards {
		for _, c := range b.channels {
			list[n].Samples = *c.kept
			n++
		}
	}
	return list, nil
}

// expectS is for how many seconds of samples room is made at once.
const expectS = 1000

// defaultMostS is how long a drive may take that is run flat out, s: a visit
// takes a quarter of an hour, a patient one with long holds an hour or two. The
// samples of one that never ends would fill the memory.
const defaultMostS = 4 * 3600

// inTime is whether a drive may still be on, so many seconds after its start.
func (r *rehearsal) inTime(s float64) error {
	most := orElse(r.Drive.MostS, defaultMostS)
	if s < most {
		return nil
	}
	return fmt.Errorf("%w: of shape %q it is not over after %.3g h of the rig's time; let less oil leak or sag back between strokes, or ramp faster",
		ErrNoEnd, r.Drive.Shape, most/3600)
}

// runOut runs a rig that has been started to the end of its drive and a little
// on, and calls each after every second.
func (r *Rig) runOut(each func() error) error {
	end := math.Inf(1)
	for s := 0.0; s < end; s++ {
		if err := r.conf.inTime(s); err != nil {
			return err
		}
		r.advance(s)
		if math.IsInf(end, 1) && r.world.drive.over() {
			end = s + logTailS
		}
		if err := each(); err != nil {
			return err
		}
	}
	return nil
}
