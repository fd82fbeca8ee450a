package pairing

import (
	"fmt"
	"math"
	"sort"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// FromRecording computes everything that a recording says about its pairs. A
// recording from which none can be made is an error that wraps ErrNoSetting,
// ErrNoExtension, ErrNoTime or ErrNoPairs; the set, with its counters, is
// returned beside it wherever the channels could be read.
func FromRecording(rec *recording.Recording) (*Set, error) {
	in := newIntake(rec.Header, true)
	in.foretell(rec.Entries)
	samples := map[source][]sample{}
	for _, e := range rec.Entries {
		if from, s, ok := in.take(e); ok {
			samples[from] = append(samples[from], s)
		}
	}
	chosen, err := in.choose(rec.Header)
	if err != nil {
		return &Set{Counters: in.counters(), Simulated: in.simulated()}, err
	}
	set := &Set{
		Extension: in.channel(chosen.extension, samples),
		Others:    in.others(chosen, samples),
		Marks:     in.marks.placed(),
		Clocks:    in.clocks(),
		Counters:  in.counters(),
		Plan:      Plan{Exercise: rec.Header.Plan.Exercise, Ramps: rec.Header.Plan.Ramps},
		Alarms:    in.telling.alarms, Ended: in.telling.ended, Simulated: in.simulated(),
	}
	if other, ok := in.otherFace(chosen.extension); ok {
		set.BothFaces = true
		set.Extension.meanFaces(in.channel(other, samples), float64(in.devices[other.device].here.TickHz))
	}
	if chosen.stepped {
		set.Stepped, set.StepStd = true, chosen.steps.std
		set.Setting = chosen.steps.channel(chosen.quantity, set.Marks)
		set.Warnings = append(chosen.warnings, in.warnings(set)...)
		set.joinSteps(chosen.steps)
	} else {
		set.Setting = in.channel(chosen.setting, samples)
		set.Warnings = append(chosen.warnings, in.warnings(set)...)
		if err := in.checkTime(chosen); err != nil {
			return set, err
		}
		set.join(in.joiner(chosen))
	}
	if len(set.Pairs) == 0 {
		return set, fmt.Errorf("%w: %d readings of the setting, %d of the extension", ErrNoPairs,
			len(set.Setting.Readings), len(set.Extension.Readings))
	}
	return set, nil
}

// foretell gives each device its first identity and declarations at once, for
// the lines that came before the host had asked.
func (in *intake) foretell(entries []recording.Entry) {
	for _, e := range entries {
		if e.Device < 0 || e.Device >= len(in.devices) || len(e.Wire) < 5 {
			continue
		}
		d := &in.devices[e.Device]
		switch string(e.Wire[:5]) {
		case "here ", "chan ":
		default:
			continue
		}
		record, refused := protocol.Parse(e.Wire)
		if refused != nil {
			continue
		}
		switch r := record.(type) {
		case protocol.Here:
			if !d.known {
				d.here, d.known, d.foreign = r, true, r.Version > protocol.Version
			}
		case protocol.Chan:
			if d.specs[r.ID-'a'] == nil {
				d.specs[r.ID-'a'] = &r
			}
		}
	}
}

// channel maps the samples of one channel. A reading that would not be later
// than the one before it, which only clocks of two parts can make, is left out.
func (in *intake) channel(from source, samples map[source][]sample) Channel {
	spec := in.spec(from)
	c := Channel{Device: from.device, Spec: *spec, CountSI: protocol.LeastSI(*spec),
		PeriodS: float64(spec.Period) / float64(in.devices[from.device].here.TickHz)}
	c.Readings = make([]Reading, 0, len(samples[from]))
	last := math.Inf(-1)
	for _, s := range samples[from] {
		r := s.reading()
		if r.T <= last {
			in.devices[from.device].counters.Backward++
			continue
		}
		last = r.T
		c.Readings = append(c.Readings, r)
	}
	return c
}

func (in *intake) others(chosen choice, samples map[source][]sample) []Channel {
	var out []Channel
	for i := range in.devices {
		for c, spec := range in.devices[i].specs {
			from := source{i, 'a' + byte(c)}
			if spec != nil && from != chosen.setting && from != chosen.extension {
				out = append(out, in.channel(from, samples))
			}
		}
	}
	return out
}

func (in *intake) clocks() []ClockFit {
	var out []ClockFit
	for i := range in.devices {
		for _, s := range in.devices[i].segments {
			out = append(out, s.fit())
		}
	}
	return out
}

// checkTime refuses two devices that no receive times tie together.
func (in *intake) checkTime(c choice) error {
	if c.setting.device == c.extension.device {
		return nil
	}
	for _, from := range []source{c.setting, c.extension} {
		for _, s := range in.devices[from.device].segments {
			if !s.hasAt {
				return fmt.Errorf("%w: the setting and the extension come from two devices, and the lines have no receive times; capture them together, or put both sensors on one device", ErrNoTime)
			}
		}
	}
	return nil
}

func (in *intake) joiner(c choice) *joiner {
	setting, extension := &in.devices[c.setting.device], &in.devices[c.extension.device]
	hz := float64(setting.here.TickHz)
	j := &joiner{maxGap: maxGapS(*in.spec(c.setting), hz)}
	j.timeStd = func(settingPart, extensionPart int) float64 {
		if setting == extension {
			return 1 / hz
		}
		return math.Hypot(setting.std(settingPart), extension.std(extensionPart))
	}
	return j
}

// std is the standard uncertainty of an instant in one part of a device's time,
// s; of the current one where older ones are not kept.
func (d *device) std(part int) float64 {
	seg := d.seg
	if part < len(d.segments) {
		seg = d.segments[part]
	}
	instant, _ := seg.stds()
	return instant
}

// join makes one pair of each good reading of the extension that has a setting.
func (s *Set) join(j *joiner) {
	readings := s.Setting.Readings
	for _, e := range s.Extension.Readings {
		next := sort.Search(len(readings), func(i int) bool { return readings[i].T >= e.T })
		if p, ok := j.pair(readings, next, e); ok {
			s.Pairs = append(s.Pairs, p)
		} else if e.Status.Ok() {
			s.Unpaired++
		}
	}
}
