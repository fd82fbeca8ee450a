package pairing

import (
	"fmt"
	"math"
	"sort"

	"tautramp/acquire/recording"
)

const (
	settingsMax = 4096 // readings of the setting that are kept at least
	waitingMax  = 1024 // readings of the extension that wait for a setting at most
)

// Live makes pairs as lines come in. Each pair is made with what is known of
// the clocks at that moment and never changed later; FromRecording, which
// knows all, may place it a little differently, within the time uncertainty.
// Memory is bounded. Make one with NewLive.
type Live struct {
	header   recording.Header
	in       *intake
	chosen   choice
	join     *joiner // nil before both channels are declared
	settings []held  // oldest first
	waiting  []held  // readings of the extension, oldest first
	latest   [2]Reading
	lastT    float64 // of the last pair
	scratch  []Reading
	out      []Pair
}

// held is a reading whose place in time is still open.
type held struct {
	sample
	r Reading
}

// placed is the reading where the clock has it now.
func (h held) placed() Reading {
	h.r.T = h.at()
	return h.r
}

// NewLive needs a header whose tensioner says what it is set by.
func NewLive(h recording.Header) (*Live, error) {
	if _, err := h.SettingQuantity(); err != nil {
		return nil, fmt.Errorf("%w: %w", ErrNoSetting, err)
	}
	return &Live{header: h, in: newIntake(h, false), lastT: math.Inf(-1)}, nil
}

// Add takes the next entry and returns the pairs that it completes, in time
// order; the slice is good until the next call. Samples of a device that has
// not yet said who it is are counted and not used.
func (l *Live) Add(e recording.Entry) []Pair {
	from, s, ok := l.in.take(e)
	if l.in.news {
		l.rechoose()
	}
	if !ok || l.join == nil {
		return nil
	}
	h := held{sample: s, r: s.reading()}
	if l.chosen.stepped {
		if from != l.chosen.extension {
			return nil
		}
		l.latest[1] = h.r
		return l.settleSteps(h)
	}
	switch from {
	case l.chosen.setting:
		l.settings = push(l.settings, h, settingsMax)
		l.latest[0] = h.r
	case l.chosen.extension:
		l.latest[1] = h.r
		if h.r.Status.Ok() {
			l.waiting = push(l.waiting, h, waitingMax)
		}
	default:
		return nil
	}
	return l.settle()
}

// push appends, and now and then forgets all but the newest.
func push(list []held, h held, most int) []held {
	if len(list) >= 2*most {
		list = list[:copy(list, list[len(list)-most:])]
	}
	return append(list, h)
}

// rechoose looks for the two channels among those declared by now.
func (l *Live) rechoose() {
	l.in.news = false
	chosen, err := l.in.choose(l.header)
	if err != nil {
		return
	}
	if l.join != nil && chosen.setting == l.chosen.setting && chosen.extension == l.chosen.extension {
		l.join.maxGap = l.in.joiner(chosen).maxGap // a channel may be paced anew
		return
	}
	next := l.in.joiner(chosen)
	if l.join != nil {
		next.part = l.join.part + 1
	}
	l.chosen, l.join = chosen, next
	l.settings, l.waiting, l.latest = l.settings[:0], l.waiting[:0], [2]Reading{}
}

// settle makes pairs of the waiting readings whose instant the setting has
// reached.
func (l *Live) settle() []Pair {
	l.out = l.out[:0]
	done := 0
	for _, w := range l.waiting {
		r := w.placed()
		if n := len(l.settings); n == 0 || l.settings[n-1].at() < r.T {
			break
		}
		done++
		near, next := l.around(r.T)
		p, ok := l.join.pair(near, next, r)
		if !ok {
			continue
		}
		if p.T <= l.lastT { // the clock's mapping has moved back since
			p.T = math.Nextafter(l.lastT, math.Inf(1))
		}
		l.lastT = p.T
		l.out = append(l.out, p)
	}
	if done > 0 {
		l.waiting = l.waiting[:copy(l.waiting, l.waiting[done:])]
	}
	return l.out
}

// around places the settings close to t, and tells the index of the first at
// or after it.
func (l *Live) around(t float64) (near []Reading, next int) {
	at := sort.Search(len(l.settings), func(i int) bool { return l.settings[i].at() >= t })
	lo, hi := max(at-1, 0), min(at+1, len(l.settings))
	for lo > 0 && l.settings[lo-1].at() >= t-rateWindowS {
		lo--
	}
	for hi < len(l.settings) && l.settings[hi].at() <= t+rateWindowS {
		hi++
	}
	l.scratch = l.scratch[:0]
	for _, h := range l.settings[lo:hi] {
		l.scratch = append(l.scratch, h.placed())
	}
	return l.scratch, at - lo
}

// Latest is the newest reading of each channel, good or not, placed as the
// clocks were known when it came; Status is 0 before there is one.
func (l *Live) Latest() (setting, extension Reading) { return l.latest[0], l.latest[1] }

// Counters is what went missing so far, by device.
func (l *Live) Counters() []Counters { return l.in.counters() }

// Simulated tells whether a device has said that what it measures is made up.
func (l *Live) Simulated() bool { return l.in.simulated() }

// Channels are the two channels that the pairs are made of, as declared by now
// and without readings; ok is false before both are declared.
func (l *Live) Channels() (setting, extension Channel, ok bool) {
	if l.join == nil {
		return Channel{}, Channel{}, false
	}
	extension = l.in.channel(l.chosen.extension, nil)
	if l.chosen.stepped {
		setting = l.chosen.steps.channel(l.chosen.quantity, nil)
		setting.Device, setting.PeriodS = extension.Device, extension.PeriodS
		return setting, extension, true
	}
	return l.in.channel(l.chosen.setting, nil), extension, true
}
