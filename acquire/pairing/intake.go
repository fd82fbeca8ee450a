package pairing

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// sample is one value before its tick and its count are turned into SI.
type sample struct {
	seg    *segment
	tick   int64
	spec   *protocol.Chan
	status protocol.Status
	count  int32
}

func (s sample) at() float64 { return s.seg.at(s.tick) }

// reading turns a sample into SI. A display that cuts its digits off reads
// towards zero (SPEC 6.4): half a step away from zero is the middle of what it
// stands for.
func (s sample) reading() Reading {
	r := Reading{T: s.at(), Value: math.NaN(), Status: s.status, Part: s.seg.part}
	switch s.status {
	case protocol.Good, protocol.Low, protocol.High:
		r.Value = protocol.ToSI(*s.spec, s.count)
	}
	if s.spec.Shows == protocol.ShowsTruncated && s.status == protocol.Good && s.count != s.spec.ZeroCount {
		zero := protocol.ToSI(*s.spec, s.spec.ZeroCount)
		r.Value += math.Copysign(protocol.LeastSI(*s.spec)/2, r.Value-zero)
	}
	return r
}

// edge is one edge of a button.
type edge struct {
	record protocol.Button
	seg    *segment
	tick   int64
}

// source names a channel.
type source struct {
	device  int
	channel byte
}

// intake reads the entries of a recording, one after the other.
type intake struct {
	devices []device
	marks   *marks // nil: not kept
	telling telling
	plan    recording.Plan
	keep    bool // all of the recording: segments, and what the host tells
	news    bool // a declaration came; whoever acts on it clears it
	edge    edge // the button's edge in the last entry; seg is nil where it held none
}

func newIntake(h recording.Header, keep bool) *intake {
	in := &intake{devices: make([]device, len(h.Devices)), plan: h.Plan, keep: keep}
	factor := h.ClockFactor
	if !(factor > 0) {
		factor = 1
	}
	for i := range in.devices {
		in.devices[i] = device{counters: Counters{Device: i}, factor: factor, keep: keep}
	}
	if keep || h.Presses.As != "" {
		in.marks = &marks{presses: h.Presses}
	}
	return in
}

// take reads one entry; ok is true where it held a usable sample.
func (in *intake) take(e recording.Entry) (from source, s sample, ok bool) {
	in.edge = edge{}
	if e.Event != nil {
		in.event(e)
		return source{}, sample{}, false
	}
	if e.Device < 0 || e.Device >= len(in.devices) || isEmpty(e.Wire) {
		return source{}, sample{}, false
	}
	d := &in.devices[e.Device]
	record, refused := protocol.Parse(e.Wire)
	if refused != nil {
		d.counters.Rejected++
		return source{}, sample{}, false
	}
	d.counters.Lines++
	t := stamp{at: e.At, hasAt: e.HasAt}
	switch r := record.(type) {
	case protocol.Val:
		t.tick = r.Tick
		s, ok = d.sample(r, t)
		return source{e.Device, r.Channel}, s, ok
	case protocol.Beat:
		t.tick = r.Tick
		d.beat(r, t)
	case protocol.Button:
		t.tick = r.Tick
		seg, tick := d.numbered(r.Seq, t)
		in.edge = edge{r, seg, tick}
		in.marks.button(r, seg, tick)
	case protocol.Here:
		t.tick = r.Up
		d.identify(r, t)
		in.news = true
	case protocol.Chan:
		d.declare(r)
		in.news = true
	case protocol.Echo:
		t.tick = r.Tick
		d.place(t)
	}
	return source{}, sample{}, false
}

// isEmpty reports a line without a byte, which is neither a record nor an error
// (SPEC 2.9).
func isEmpty(wire []byte) bool { return len(wire) == 0 || len(wire) == 1 && wire[0] == '\r' }

func (in *intake) event(e recording.Entry) {
	switch e.Event.Kind {
	case recording.Restarted:
		if e.Device >= 0 && e.Device < len(in.devices) {
			in.devices[e.Device].restart()
		}
	case recording.Paused:
		if pausedS(e.Event.Text) > pauseS {
			for i := range in.devices {
				in.devices[i].ended = in.devices[i].seg != nil
			}
		}
	default:
		in.marks.event(e)
		if in.keep {
			in.telling.event(e, in.plan)
		}
	}
}

// pausedS is the length of a pause in seconds. A text that is no number counts
// as a long one: nothing is then compared across it.
func pausedS(text string) float64 {
	s, err := strconv.ParseFloat(strings.TrimSuffix(strings.TrimSpace(text), "s"), 64)
	if err != nil {
		return math.Inf(1)
	}
	return math.Abs(s)
}

// candidates lists the declared channels of a quantity in (device, channel)
// order, of devices whose tick rate is known.
func (in *intake) candidates(q protocol.Quantity) []source {
	var found []source
	for i := range in.devices {
		for c, spec := range in.devices[i].specs {
			if d := &in.devices[i]; spec != nil && spec.Quantity == q && d.known && !d.foreign {
				found = append(found, source{i, 'a' + byte(c)})
			}
		}
	}
	return found
}

func (in *intake) spec(from source) *protocol.Chan {
	return in.devices[from.device].specs[from.channel-'a']
}

func (in *intake) counters() []Counters {
	all := make([]Counters, len(in.devices))
	for i := range in.devices {
		all[i] = in.devices[i].counters
	}
	return all
}

// simulated tells whether any device said that what it measures is made up:
// one is enough to make a rehearsal of the whole.
func (in *intake) simulated() bool {
	return slices.ContainsFunc(in.devices, func(d device) bool { return d.madeUp })
}
