package pairing

import (
	"slices"

	"tautramp/protocol"
)

// device follows one device through a recording: who it is, what its channels
// mean, the current stretch of its clock, and what got lost.
type device struct {
	counters Counters
	factor   float64 // clock seconds per real second
	keep     bool    // keep all segments, not only the current one

	here    protocol.Here
	known   bool // here is filled: the tick rate is known
	foreign bool // speaks a later version of the wire: nothing of it is used
	madeUp  bool // has said, once at least, that it measures nothing real
	specs   [letters]*protocol.Chan
	changed []byte // channels that were declared differently later on

	seg      *segment
	segments []*segment
	parts    int
	ended    bool // the next tick starts another segment
	booted   bool // a restart was counted and nothing numbered has come since
	seq      sequence
	saidPast uint32 // lines dropped in earlier boots
	saidBoot uint32 // in this one
}

// identify takes a here. One that nobody asked for, or that differs from the
// one before, is a restart.
func (d *device) identify(r protocol.Here, t stamp) {
	if d.known && isReboot(d.here, r) {
		d.restart()
	}
	d.here, d.known, d.foreign = r, true, r.Version > protocol.Version
	d.madeUp = d.madeUp || r.Simulated
	d.place(t)
}

func isReboot(before, now protocol.Here) bool {
	switch {
	case now.TickHz != before.TickHz || now.Serial != before.Serial || now.Model != before.Model:
		return true
	case now.HasBoot && before.HasBoot:
		return now.Boot != before.Boot
	}
	return now.Cause != protocol.CauseAsked // SPEC 4.8
}

// restart ends the segment. Told twice of one restart, by the device and by the
// host, it counts once: no numbered line stands in between.
func (d *device) restart() {
	if d.seg == nil || d.booted {
		return
	}
	d.ended, d.booted = true, true
	d.counters.Restarts++
	d.seq = sequence{}
	d.saidPast, d.saidBoot = d.saidPast+d.saidBoot, 0
}

// declare takes a channel's declaration.
func (d *device) declare(r protocol.Chan) {
	spec := &d.specs[r.ID-'a']
	if *spec != nil {
		before := **spec
		before.Period = r.Period // paced anew, the counts mean the same
		if before != r && !slices.Contains(d.changed, r.ID) {
			d.changed = append(d.changed, r.ID)
		}
	}
	*spec = &r
}

// place gives a tick its segment and its unwrapped value; later reports that it
// is well ahead of what came before. The segment is nil before the tick rate
// is known.
func (d *device) place(t stamp) (seg *segment, tick int64, later bool) {
	if !d.known {
		return nil, 0, false
	}
	if d.seg != nil && !d.ended {
		switch d.seg.broken(t) {
		case rebooted:
			d.restart()
		case slept:
			d.ended = true
		}
	}
	if d.seg == nil || d.ended {
		d.begin(t)
	}
	later = d.seg.forwardS(t) > disorderS
	return d.seg, d.seg.take(t), later
}

func (d *device) begin(t stamp) {
	first := int64(t.tick)
	next := &segment{device: d.counters.Device, part: d.parts, hz: float64(d.here.TickHz),
		factor: d.factor, first: first, last: first}
	if d.seg != nil && !t.hasAt {
		next.anchor = d.seg.at(d.seg.last) + partGapS
	}
	d.seg, d.ended = next, false
	d.parts++
	if d.keep {
		d.segments = append(d.segments, next)
	}
}

// numbered places a numbered line and counts what is missing before it.
func (d *device) numbered(seq uint16, t stamp) (*segment, int64) {
	seg, tick, later := d.place(t)
	d.booted = false
	d.counters.Lost += d.seq.step(seq, later)
	return seg, tick
}

// sample takes one value. ok is false where it cannot be used: not declared,
// not later than the one before, or of a device that is not understood.
func (d *device) sample(r protocol.Val, t stamp) (s sample, ok bool) {
	d.counters.Samples++
	seg, tick := d.numbered(r.Seq, t)
	spec := d.specs[r.Channel-'a']
	if spec == nil || seg == nil || d.foreign {
		d.counters.Undeclared++
		return sample{}, false
	}
	after := &seg.after[r.Channel-'a']
	if tick < *after {
		d.counters.Backward++
		return sample{}, false
	}
	*after = tick + 1
	switch r.Status {
	case protocol.Low, protocol.High:
		d.counters.Saturated++
	case protocol.Absent, protocol.Fault:
		d.counters.Missing++
	}
	return sample{seg: seg, tick: tick, spec: spec, status: r.Status, count: r.Count}, true
}

// beat takes the device's own count of the lines that it dropped.
func (d *device) beat(r protocol.Beat, t stamp) {
	d.numbered(r.Seq, t)
	d.saidBoot = max(d.saidBoot, r.Dropped)
	d.counters.DeviceSaid = d.saidPast + d.saidBoot
}
