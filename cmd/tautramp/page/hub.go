package page

import (
	"sync"
	"sync/atomic"
)

// topic is one kind of message; of each the newest is kept, and no other.
type topic int

const (
	deskTopic topic = iota // what is going on: changes seldom
	nowTopic               // the status: changes ten times a second
	topics
)

func (t topic) String() string { return [topics]string{"desk", "now"}[t] }

// hub holds the newest message of each topic and wakes the viewers. Publishing
// never waits for one: a viewer that stalls finds the newest when it wakes, and
// what it missed is counted.
type hub struct {
	mu      sync.Mutex
	newest  [topics]message
	viewers map[*viewer]struct{}

	skipped atomic.Int64 // messages that some viewer never saw
	dropped atomic.Int64 // viewers whose line took nothing any more
}

// message is a text and its number, from 1.
type message struct {
	number int64
	text   []byte
}

// viewer is one browser that looks on.
type viewer struct {
	wake chan struct{}
	seen [topics]int64
}

// mostViewers is far above a laptop and the phones of a crew.
const mostViewers = 32

func newHub() *hub { return &hub{viewers: map[*viewer]struct{}{}} }

// publish makes text the newest of its topic; the hub keeps it.
func (h *hub) publish(t topic, text []byte) {
	h.mu.Lock()
	defer h.mu.Unlock()
	h.newest[t] = message{h.newest[t].number + 1, text}
	for v := range h.viewers {
		select {
		case v.wake <- struct{}{}:
		default: // it is awake, or stalled
		}
	}
}

// join adds a viewer, who gets the newest of everything first; nil when there
// are too many.
func (h *hub) join() *viewer {
	h.mu.Lock()
	defer h.mu.Unlock()
	if len(h.viewers) >= mostViewers {
		return nil
	}
	v := &viewer{wake: make(chan struct{}, 1)}
	for t := range v.seen {
		v.seen[t] = max(0, h.newest[t].number-1)
	}
	v.wake <- struct{}{}
	h.viewers[v] = struct{}{}
	return v
}

func (h *hub) leave(v *viewer) {
	h.mu.Lock()
	defer h.mu.Unlock()
	delete(h.viewers, v)
	for t, m := range h.newest {
		h.skipped.Add(m.number - v.seen[t])
	}
}

// next is what a viewer has not seen of a topic; nil when it has seen all.
func (h *hub) next(v *viewer, t topic) []byte {
	h.mu.Lock()
	defer h.mu.Unlock()
	m := h.newest[t]
	if m.number == v.seen[t] {
		return nil
	}
	h.skipped.Add(m.number - v.seen[t] - 1)
	v.seen[t] = m.number
	return m.text
}
