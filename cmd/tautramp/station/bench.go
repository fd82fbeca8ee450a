package station

import (
	"fmt"
	"math"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/analyze/gauge"
	"tautramp/protocol"
)

// Bench follows one bench test through the entries of its recording, or of
// several that continue one another. Make one with New.
type Bench struct {
	plan   gauge.Plan
	header recording.Header // of the latest recording
	about  recording.Bench  // of the first
	first  recording.Header
	limit  float64

	stream  *pairing.Stream
	factor  float64
	offset  float64 // s, of the latest recording's start since the first one's
	now     float64 // s since the first one's start
	roles   roles
	known   bool
	counts  int   // channels declared when roles were assigned
	why     error // why they are not known
	fault   error
	trails  map[pairing.Source]*trail
	baseSI  float64 // of what leads: what it reads at zero; 0 for a reference
	hasBase bool

	steps    []step
	at       int
	begunAt  float64 // when the step began, s; NaN before its first reading
	swung    bool    // exercise: the top was reached
	approach approach
	crossed  float64 // sweep: when the point was passed, s; NaN before
	toldOff  bool    // the rest here was refused and told so
	turned   bool    // the turn at the top was looked at

	turns  []turn
	points []gauge.Point
	before []gauge.Zero
	after  []gauge.Zero
	done   []int // steps that took something, in order

	down    map[byte]float64
	pending []float64 // times of presses not judged yet
	lastTap float64   // time of the last press that was judged
	gap     *gap
	answer  Answer
	guard   guard
	link    []string
	next    string
	out     []recording.Event
}

// New begins a bench test as a recording's header describes it. The error is
// ErrNotBench or the plan's *mill.ProfileError.
func New(h recording.Header) (*Bench, error) {
	if h.Bench == nil {
		return nil, ErrNotBench
	}
	plan, err := gauge.ParsePlan([]byte(h.Bench.Plan))
	if err != nil {
		return nil, fmt.Errorf("the plan inside the recording: %w", err)
	}
	b := &Bench{plan: plan, about: *h.Bench, first: h, trails: map[pairing.Source]*trail{}, steps: stepsOf(plan),
		down: map[byte]float64{}, lastTap: math.Inf(-1), begunAt: nan(), crossed: nan()}
	if b.limit, err = limitOf(plan, h.Bench.StopAt); err != nil {
		return nil, err
	}
	b.guard = newGuard(b.limit, b.plan.SpanSI())
	b.open(h)
	return b, nil
}

// aboveRange is how far above the range nothing may go where the user set no
// limit, as a share of the span. Judgement: gauges bear more, hands are quick.
const aboveRange = 0.10

func limitOf(p gauge.Plan, stopAt string) (float64, error) {
	if stopAt == "" {
		return p.High.SI + aboveRange*p.SpanSI(), nil
	}
	q, err := mill.ParseQuantity(stopAt, p.Dim())
	if err != nil {
		return 0, err
	}
	return q.SI, nil
}

// open begins to read a recording.
func (b *Bench) open(h recording.Header) {
	b.header, b.stream = h, pairing.NewStream(h)
	b.factor = h.ClockFactor
	if !(b.factor > 0) {
		b.factor = 1
	}
	b.guard.factor = b.factor
	b.roles, b.known, b.counts = roles{}, false, 0
	b.link = make([]string, len(h.Devices))
}

// Add takes the next entry and returns what is to be recorded because of it.
func (b *Bench) Add(e recording.Entry) []recording.Event {
	b.out = nil
	b.now = max(b.now, b.offset+e.At.Seconds())
	if e.Event != nil {
		b.event(e)
	} else if e.Device >= 0 && e.Device < len(b.link) {
		b.link[e.Device] = ""
	}
	heard := b.stream.Add(e)
	b.settleRoles()
	if heard.Press.ID != 0 {
		b.edge(heard.Press)
	}
	if heard.Reading.Status != 0 {
		b.reading(heard)
	}
	b.watchGuard()
	b.judgePending()
	b.prompt()
	return b.out
}

// settleRoles finds the channels once they are declared, and again when more
// are.
func (b *Bench) settleRoles() {
	declared := b.stream.Channels()
	if len(declared) == b.counts {
		return
	}
	b.counts = len(declared)
	b.roles, b.why = assign(b.plan, b.about, b.first.Parsed, declared)
	b.known = b.why == nil
}

// Fault is why the boards do not fit, or nil; it wraps ErrNoChannel.
func (b *Bench) Fault() error { return b.fault }

func (b *Bench) reading(h pairing.Heard) {
	if !b.known {
		b.fault = b.why // all boards have declared what they have before they send readings
		return
	}
	l := b.trails[h.Source]
	if l == nil {
		l = newTrail(2*(b.plan.SettleS+b.plan.WindowS) + 10)
		b.trails[h.Source] = l
	}
	h.Reading.T += b.offset
	was, lastV := l.now()
	broke := l.add(h.Reading, b.now)
	if lead := b.lead(); lead == nil || l != lead {
		return
	}
	if broke && !math.IsNaN(was) {
		b.beginGap(lastV)
	}
	b.guard.reading(h.Reading, b.now)
	if h.Reading.Status.Ok() {
		b.follow()
	}
}

// lead is the trail that the operator steers by: the reference, or the tested
// instrument where the reference is not read.
func (b *Bench) lead() *trail {
	switch {
	case !b.known:
		return nil
	case b.roles.reference != nil:
		return b.trails[*b.roles.reference]
	default:
		return b.trails[*b.roles.tested]
	}
}

// x is what leads, now, from its zero.
func (b *Bench) x() float64 {
	l := b.lead()
	if l == nil {
		return nan()
	}
	_, v := l.now()
	return v - b.baseSI
}

// event takes what the host noticed or did.
func (b *Bench) event(e recording.Entry) {
	switch e.Event.Kind {
	case recording.Mark:
		b.pending = append(b.pending, b.offset+e.At.Seconds())
	case recording.Undo:
		b.undo()
	case recording.LostPort:
		b.setLink(e.Device, linkLost)
	case recording.Silent:
		b.setLink(e.Device, linkSilent)
	case recording.Restarted:
		b.setLink(e.Device, linkRestarted)
	}
}

func (b *Bench) setLink(device int, text string) {
	if device >= 0 && device < len(b.link) {
		b.link[device] = text
	}
}

// edge takes a button's edge. A press counts when the button comes up: only
// then is it known not to be a long one.
func (b *Bench) edge(p pairing.Press) {
	switch {
	case p.Down:
		b.down[p.ID] = p.T + b.offset
	case p.IsLong():
		delete(b.down, p.ID)
		b.undo()
	default:
		if at, ok := b.down[p.ID]; ok && !math.IsNaN(p.HeldS) {
			b.pending = append(b.pending, at)
		}
		delete(b.down, p.ID)
	}
}

func (b *Bench) step() step { return b.steps[b.at] }

// advance goes to another step.
func (b *Bench) advance(to int) {
	b.at, b.begunAt, b.swung, b.crossed, b.toldOff, b.turned = to, nan(), false, nan(), false, false
	if b.step().kind == Done {
		b.say(recording.PlanClosed, "")
	}
}

func (b *Bench) say(kind recording.EventKind, text string) {
	b.out = append(b.out, recording.Event{Kind: kind, Text: text})
}

func (b *Bench) reply(text string, refused bool) {
	b.answer = Answer{Text: text, Refused: refused, At: time.Duration(b.now * float64(time.Second))}
}

// prompt records what the operator is asked to do, when it changes.
func (b *Bench) prompt() {
	if next := b.instruction(); next != b.next {
		b.next = next
		b.say(recording.Prompted, next)
	}
}

// Finished tells whether every step of the plan is done.
func (b *Bench) Finished() bool { return b.step().kind == Done }

// Plan is the plan that is followed.
func (b *Bench) Plan() gauge.Plan { return b.plan }

func (b *Bench) channelOf(s *pairing.Source) (pairing.Channel, bool) {
	if s == nil {
		return pairing.Channel{}, false
	}
	c, ok := b.roles.spec[*s]
	return c, ok
}

func (b *Bench) count(s *pairing.Source) float64 {
	c, ok := b.channelOf(s)
	if !ok {
		return 0
	}
	return protocol.LeastSI(c.Spec)
}
