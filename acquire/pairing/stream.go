package pairing

import (
	"math"

	"tautramp/acquire/recording"
)

// Stream gives the readings of every channel, and the button's edges, as lines
// come in, each placed with what is known of its clock at that moment. What it
// gives depends on the header and the entries alone. Make one with NewStream.
type Stream struct {
	in   *intake
	down map[button]edge // edges whose other half has not come
}

type button struct {
	device int
	id     byte
}

// Source names a channel: the index of its device and its letter.
type Source struct {
	Device  int
	Channel byte
}

// Heard is what one entry said. Both Reading.Status and Press.ID are 0 where it
// said nothing of use here.
type Heard struct {
	Source  Source // of Reading
	Reading Reading
	Press   Press
}

// Press is one edge of a button.
type Press struct {
	T    float64 // s since the recording's start
	ID   byte    // '1' to '9'
	Down bool
	// HeldS is, when it comes up, how long it was held by its device's clock, s;
	// NaN where its press is not known.
	HeldS float64
}

// IsLong tells whether the button was held so long that it takes the last press
// back.
func (p Press) IsLong() bool { return !p.Down && p.HeldS >= longPressS }

// NewStream takes the header of the recording whose entries will come.
func NewStream(h recording.Header) *Stream {
	return &Stream{in: newIntake(h, false), down: map[button]edge{}}
}

// Add takes the next entry.
func (s *Stream) Add(e recording.Entry) Heard {
	from, sample, ok := s.in.take(e)
	if ok {
		r := sample.reading()
		return Heard{Source: Source{from.device, from.channel}, Reading: r}
	}
	if s.in.edge.seg == nil {
		return Heard{}
	}
	return Heard{Press: s.press(e.Device, s.in.edge)}
}

func (s *Stream) press(device int, now edge) Press {
	p := Press{T: now.seg.at(now.tick), ID: now.record.ID, Down: now.record.Down, HeldS: math.NaN()}
	key := button{device, now.record.ID}
	if p.Down {
		s.down[key] = now
		return p
	}
	if was, known := s.down[key]; known && was.seg == now.seg {
		p.HeldS = float64(now.tick-was.tick) / now.seg.hz
	}
	delete(s.down, key)
	return p
}

// Channels are the channels declared by now, in the order of devices and
// letters, without readings. Those of a device that is not understood are left
// out.
func (s *Stream) Channels() []Channel {
	var all []Channel
	for i := range s.in.devices {
		d := &s.in.devices[i]
		for c, spec := range d.specs {
			if spec != nil && d.known && !d.foreign {
				all = append(all, s.in.channel(source{i, 'a' + byte(c)}, nil))
			}
		}
	}
	return all
}

// Counters is what went missing so far, by device.
func (s *Stream) Counters() []Counters { return s.in.counters() }

// Simulated tells whether a device has said that what it measures is made up.
func (s *Stream) Simulated() bool { return s.in.simulated() }
